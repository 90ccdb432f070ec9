"""A skein or remnant drawn as a bar to scale: a segment a piece, what is left hatched.

All coordinates are points, lengths of thread are whole millimetres.
"""

from collections.abc import Callable
from dataclasses import dataclass

from reportlab.lib.colors import HexColor

from planner.sheets.contents import SheetCut, StockCut
from planner.sheets.fonts import STRONG, width_of
from planner.sheets.pen import INK, WHITE, Pen, thread_colour

BAR_PT = 15.0
BAR_STEP_PT = 19.0
_THREAD_PT = 3.6
_LABEL_PT = 8.0
_LONGEST_ROW_MM = 10_000
_MOST_ROWS = 12


@dataclass(frozen=True)
class Segment:
    """A part of a bar in one of its rows; `cut` is None for what is left."""

    row: int
    start_mm: int
    end_mm: int
    cut: SheetCut | None
    labelled: bool


def row_length_mm(longest_mm: int) -> int:
    """Choose the length that the full width stands for, on the whole sheet [mm].

    Parameters
    ----------
    longest_mm
        The longest skein or remnant on the sheet [mm].

    Notes
    -----
    Up to 10 m a bar is one row; a longer thread continues in rows below, at most twelve.
    """
    return max(1, min(longest_mm, _LONGEST_ROW_MM), -(-longest_mm // _MOST_ROWS))


def rows_of(stock: StockCut, row_mm: int) -> int:
    """Count the rows that a bar takes."""
    drawn_mm = sum(cut.cut_mm for cut in stock.cuts) + max(stock.left_mm, 0)
    return max(1, -(-max(stock.reckoned_mm, drawn_mm) // row_mm))


def segments_of(stock: StockCut, row_mm: int) -> list[Segment]:
    """Cut a bar into segments, and those at the end of rows; the largest part has the label."""
    found: list[Segment] = []
    place = 0
    parts: list[tuple[int, SheetCut | None]] = [(cut.cut_mm, cut) for cut in stock.cuts]
    for length, cut in [*parts, (stock.left_mm, None)]:
        pieces = _split(place, place + length, row_mm)
        largest = max(pieces, key=lambda piece: piece[2] - piece[1], default=None)
        found += [
            Segment(row, start, end, cut, (row, start, end) == largest)
            for row, start, end in pieces
        ]
        place += length
    return found


def _split(start_mm: int, end_mm: int, row_mm: int) -> list[tuple[int, int, int]]:
    """Split a stretch at the row ends into (row, start in row, end in row)."""
    found = []
    while start_mm < end_mm:
        row, within = divmod(start_mm, row_mm)
        length = min(end_mm - start_mm, row_mm - within)
        found.append((row, within, within + length))
        start_mm += length
    return found


def hatch_gap(goes_back: bool) -> float:
    """Choose a wide hatch for what goes back, a narrow one for waste [pt]."""
    return 6.0 if goes_back else 2.6


def draw_bar(
    pen: Pen,
    stock: StockCut,
    colour: str,
    x: float,
    top: float,
    width: float,
    row_mm: int,
    label: Callable[[SheetCut], str],
) -> None:
    """Draw a bar with its upper left corner at (x, top); `width` stands for `row_mm`."""
    canvas, scale = pen.canvas, width / row_mm
    for segment in segments_of(stock, row_mm):
        left = x + segment.start_mm * scale
        long = (segment.end_mm - segment.start_mm) * scale
        foot = top - segment.row * BAR_STEP_PT - BAR_PT
        canvas.setFillColor(HexColor(WHITE))
        canvas.rect(left, foot, long, BAR_PT, stroke=0, fill=1)
        if segment.cut is None:
            pen.hatch(left, foot, long, BAR_PT, hatch_gap(stock.goes_back))
        else:
            canvas.setFillColor(thread_colour(colour))
            canvas.rect(left, foot, long, _THREAD_PT, stroke=0, fill=1)
        canvas.setStrokeColor(HexColor(INK))
        canvas.setLineWidth(0.5)
        canvas.rect(left, foot, long, BAR_PT, stroke=1, fill=0)
        if segment.cut is not None and segment.labelled:
            _draw_label(pen, label(segment.cut), left, long, foot)


def _draw_label(pen: Pen, label: str, left: float, long: float, foot: float) -> None:
    """Write a number where it fits; the list of cuts has it in any case."""
    for size in (_LABEL_PT, 6.5, 5.5):
        if width_of(label, STRONG, size) + 2 <= long:
            base = foot + _THREAD_PT + (BAR_PT - _THREAD_PT - size * 0.66) / 2
            pen.text(left + long / 2, base, label, size, font=STRONG, align="centre")
            return
