"""The square code on a tag: small enough for a tag, coarse enough for a plain label printer.

References
----------
ISO/IEC 18004, Information technology: QR code bar code symbology specification (side of
17 + 4 x version modules; quiet zone of 4 modules on every side).
"""

from dataclasses import dataclass
from functools import lru_cache

from reportlab.lib.colors import black, white

from planner.sheets.code_masks import symbol_of
from planner.sheets.paper import millimetres
from planner.sheets.pen import Pen

QUIET_MODULES = 4
# Four dots of a 203 dpi printer, as a whole number of its dots.
MODULE_PT = 4 * 72 / 203
LEAST_SIDE_PT = millimetres(12)
_MOST_MODULES = 17 + 4 * 10  # version 10


class CodeTextError(ValueError):
    """A text too long, or empty, for a code on a tag."""


@dataclass(frozen=True)
class Code:
    """A code as runs of dark modules.

    Parameters
    ----------
    modules
        Modules along one side, without the quiet zone.
    runs
        (column, row from the top, length) of each run of dark modules in a row.
    """

    modules: int
    runs: tuple[tuple[int, int, int], ...]

    @property
    def module_pt(self) -> float:
        """Side of one module [pt]; larger than MODULE_PT only to reach the least width."""
        return max(MODULE_PT, LEAST_SIDE_PT / self.modules)

    @property
    def side_pt(self) -> float:
        """Side with the quiet zone [pt]."""
        return (self.modules + 2 * QUIET_MODULES) * self.module_pt


@lru_cache(maxsize=2048)
def code_for(text: str) -> Code:
    """Encode a text.

    Raises
    ------
    CodeTextError
        When the text is empty or needs a larger code than a tag has room for.
    """
    if not text:
        raise CodeTextError("A tag's code needs a text: the address of the bracelet's page.")
    try:
        symbol = symbol_of(text)
    except ValueError as reason:
        raise CodeTextError(f"This text does not fit a code: {text[:40]!r}.") from reason
    if len(symbol) > _MOST_MODULES:
        raise CodeTextError(
            f"The address of a bracelet's page is too long for a tag ({len(text)} characters): "
            "use a shorter site address."
        )
    rows = [bytes(row) for row in symbol.astype("uint8")]
    return Code(len(rows), tuple(_runs(rows)))


def code_side(text: str) -> float:
    """Side of a text's code with the quiet zone [pt], without making it where that can be told.

    Raises
    ------
    CodeTextError
        As `code_for`.

    Notes
    -----
    Text with small letters of the Latin alphabet is written byte by byte, and then its length
    alone decides how large the code is (ISO/IEC 18004, data modes). A sheet of ten thousand tags
    is arranged before it is drawn, and making a code takes as long as drawing half a tag.
    """
    if text.isascii() and any(letter.islower() for letter in text):
        try:
            return code_for("a" * len(text)).side_pt
        except CodeTextError:
            pass  # told with the text itself
    return code_for(text).side_pt


def _runs(rows: list[bytes]) -> list[tuple[int, int, int]]:
    """Gather neighbouring dark modules of each row."""
    found = []
    for row_number, row in enumerate(rows):
        end = 0
        while (column := row.find(1, end)) >= 0:
            end = row.find(0, column)
            end = end if end >= 0 else len(row)
            found.append((column, row_number, end - column))
    return found


@lru_cache(maxsize=2048)
def _path_of(code: Code) -> str:
    """Write a code as one PDF path in modules, y downwards: whole numbers, made once."""
    rectangles = (f"{column} {row} {length} 1 re" for column, row, length in code.runs)
    return " ".join((*rectangles, "f"))


def draw_code(pen: Pen, code: Code, right: float, top: float) -> None:
    """Draw a code with its white quiet zone, its upper right corner at (right, top)."""
    canvas, module, side = pen.canvas, code.module_pt, code.side_pt
    left = right - side
    canvas.setFillColor(white)
    canvas.rect(left, top - side, side, side, stroke=0, fill=1)
    canvas.saveState()
    quiet = QUIET_MODULES * module
    canvas.transform(module, 0, 0, -module, left + quiet, top - quiet)
    canvas.setFillColor(black)
    canvas.addLiteral(_path_of(code))
    canvas.restoreState()
