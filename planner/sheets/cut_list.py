"""The list of cuts under a bar, in two columns. All coordinates are points."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass

from inventory.measures import format_number
from planner.sheets.contents import ShadeCuts
from planner.sheets.cut_rows import CutRow, number_ranges
from planner.sheets.fonts import REGULAR, STRONG, printable, width_of, wrapped
from planner.sheets.pages import SIDE_PT
from planner.sheets.pen import INK, QUIET, RULE, Pen

LINE_PT = 15.0
_NO_BREAK = "\u00a0"
_COLUMNS = 2
_COLUMN_GAP = 18.0
_CUT_PT = 35.0
_TIMES_PT = 25.0
_LEFT_INSET_PT = 14.0
# A longer list of cuts is continued in a block of its own, so that every block fits a page.
_MOST_LINES = 36
_MOST_LINES_OF_A_ROW = 36
_MOST_LINES_KEPT = 6


@dataclass(frozen=True)
class Columns:
    """Columns of a list, from its left edge: where units end, where words begin.

    Parameters
    ----------
    unit
        Of the lengths.
    cut, fold
        Where whole numbers end; `fold` is None where nothing of the shade is folded.
    times, tags, strands
        Left edges.
    width
        Of one of the lists side by side.
    """

    unit: str
    cut: float
    times: float
    tags: float
    strands: float
    fold: float | None
    width: float

    @property
    def tags_room(self) -> float:
        """Room for tag numbers [pt]."""
        return self.strands - self.tags - 4

    @property
    def strands_room(self) -> float:
        """Room for strands [pt]."""
        return (self.width if self.fold is None else self.fold - 24) - self.strands


@dataclass(frozen=True)
class Line:
    """A line of the list; what is not there is empty.

    Parameters
    ----------
    cut, times, tags, strands, fold
        What stands in each column.
    begins
        Whether it begins a row, which has a box to tick.
    left
        What is left, in place of all columns.
    hatch
        Distance of the hatch's lines before what is left, or None [pt].
    strong
        Whether what is left is to be kept.
    """

    cut: str = ""
    times: str = ""
    tags: str = ""
    strands: str = ""
    fold: str = ""
    begins: bool = False
    left: str = ""
    hatch: float | None = None
    strong: bool = False


def columns_for(unit: str, shade: ShadeCuts, body: float) -> Columns:
    """Place the columns; behind inches is more room: " 13/16" is longer than ".5".

    Parameters
    ----------
    unit
        Of the lengths.
    shade
        Whose cuts they are: where none is folded there is no column for folds.
    body
        Width of all lists together [pt].

    Returns
    -------
    Columns
        The same for every list of the shade, so that they align.
    """
    width = (body - _COLUMN_GAP * (_COLUMNS - 1)) / _COLUMNS
    is_imperial = unit in ("in", "ft", "yd")
    tail, tags_room = (35.0, 42.0) if is_imperial else (12.0, 58.0)
    folded = any(cut.fold_mm is not None for stock in shade.stock for cut in stock.cuts)
    tags = _CUT_PT + tail + _TIMES_PT
    return Columns(
        unit=unit,
        cut=_CUT_PT,
        times=_CUT_PT + tail + 3,
        tags=tags,
        strands=tags + tags_room,
        fold=width - (tail - 1) if folded else None,
        width=width,
    )


def lines_of(rows: Iterable[CutRow], unit: str, columns: Columns) -> Iterator[Line]:
    """Break rows into lines, so that no tag and no strand is cut off.

    Parameters
    ----------
    rows
        The rows, longest first.
    unit
        Of the lengths.
    columns
        The room there is.
    """
    for row in rows:
        tags = _wrapped(number_ranges(row.tags), STRONG, 11, columns.tags_room)
        strands = _wrapped(row.strands, REGULAR, 11, columns.strands_room)
        yield Line(
            cut=format_number(row.cut_mm, unit),
            times=f"\u00d7 {row.from_each}" if row.from_each else "",
            tags=tags[0],
            strands=strands[0],
            fold=format_number(row.fold_mm, unit) if row.fold_mm is not None else "",
            begins=True,
        )
        for place in range(1, max(len(tags), len(strands))):
            yield Line(
                tags=tags[place] if place < len(tags) else "",
                strands=strands[place] if place < len(strands) else "",
            )


def _wrapped(text: str, font: str, size: float, room: float) -> list[str]:
    """Break between pieces, never within "4 + 57"."""
    kept = text.replace(" + ", f"{_NO_BREAK}+{_NO_BREAK}")
    lines = wrapped(kept, font, size, room, _MOST_LINES_OF_A_ROW) or [""]
    return [line.replace(_NO_BREAK, " ") for line in lines]


def left_lines(
    words: str, goes_back: bool, hatch: float | None, columns: Columns
) -> Iterator[Line]:
    """Say what is left of a skein, in as many lines as it takes.

    Parameters
    ----------
    words
        What is left, and what becomes of it.
    goes_back
        Whether it is kept.
    hatch
        Distance of the hatch's lines before it, or None where nothing is left [pt].
    columns
        The room there is.
    """
    font = STRONG if goes_back else REGULAR
    for place, line in enumerate(_wrapped(words, font, 11, columns.width - _LEFT_INSET_PT)):
        yield Line(left=line, hatch=None if place else hatch, strong=goes_back)


def in_blocks(lines: Sequence[Line]) -> Iterator[list[Line]]:
    """Cut a long list into parts that fit a page.

    Parameters
    ----------
    lines
        All lines of a stack.
    """
    for start in range(0, len(lines), _MOST_LINES):
        yield list(lines[start : start + _MOST_LINES])


def list_height(lines: Sequence[Line]) -> float:
    """Tell how high a list is in its columns [pt]."""
    return _lines_a_column(lines) * LINE_PT


def _lines_a_column(lines: Sequence[Line]) -> int:
    """Half of them, and the end of a row that would be broken there, unless it is very long."""
    half = -(-len(lines) // _COLUMNS)
    ends = (
        place
        for place in range(half, min(len(lines), half + _MOST_LINES_KEPT))
        if lines[place].begins or lines[place].left
    )
    return next(ends, half)


def draw_list_head(pen: Pen, columns: Columns, y: float) -> None:
    """Say once above a shade's lists what stands in their columns.

    Parameters
    ----------
    pen
        Draws.
    columns
        Where they are.
    y
        The base line.
    """
    unit = printable(columns.unit)
    for column in range(_COLUMNS):
        x = SIDE_PT + column * (columns.width + _COLUMN_GAP)
        pen.text(x + columns.times - 4, y, f"cut, {unit}", 7.5, colour=QUIET, align="right")
        pen.text(x + columns.tags, y, "tags", 7.5, colour=QUIET)
        pen.text(x + columns.strands, y, "strands", 7.5, colour=QUIET)
        if columns.fold is not None:
            right = x + columns.width
            pen.text(right, y, f"fold, {unit}", 7.5, colour=QUIET, align="right")


def draw_list(pen: Pen, lines: Sequence[Line], columns: Columns, top: float) -> None:
    """Draw lines down the first column, then down the second.

    Parameters
    ----------
    pen
        Draws.
    lines
        What to draw.
    columns
        Where.
    top
        Upper edge of the first line.
    """
    a_column = _lines_a_column(lines)
    for place, line in enumerate(lines):
        column, row = divmod(place, a_column)
        x = SIDE_PT + column * (columns.width + _COLUMN_GAP)
        base = top - row * LINE_PT - 12
        if line.left:
            _draw_left(pen, line, columns, x, base)
        else:
            _draw_line(pen, line, columns, x, base)


def _draw_line(pen: Pen, line: Line, columns: Columns, x: float, base: float) -> None:
    if line.begins:
        pen.rule(x, base + 11, columns.width, RULE, 0.3)
        pen.tick_box(x, base - 1, 9)
    if line.cut:
        # A length that goes on is told again, but quietly: its stop is set already.
        font, colour = (STRONG, INK) if line.times else (REGULAR, QUIET)
        pen.figure(x + columns.cut, base, line.cut, 12.5, font=font, colour=colour)
    size = 9.5 if width_of(line.times, REGULAR, 9.5) < _TIMES_PT else 6.5
    pen.text(x + columns.times, base, line.times, size, colour=QUIET)
    pen.text(x + columns.tags, base, line.tags, 11, font=STRONG)
    pen.text(x + columns.strands, base, line.strands, 11)
    if line.fold and columns.fold is not None:
        pen.figure(x + columns.fold, base, line.fold, 11)


def _draw_left(pen: Pen, line: Line, columns: Columns, x: float, base: float) -> None:
    pen.rule(x, base + 11, columns.width, RULE, 0.3)
    if line.hatch is not None:
        pen.hatch(x, base - 1, 9, 9, line.hatch)
    font = STRONG if line.strong else REGULAR
    pen.text(x + _LEFT_INSET_PT, base, line.left, 11, font=font)
