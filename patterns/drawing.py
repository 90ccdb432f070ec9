"""A bracelet drawn as it looks when tied: once, for the screen and for paper."""

from collections.abc import Mapping
from typing import Literal

from patterns.colours import channels
from patterns.grid import GridPattern, band_rows
from patterns.knots import DiagonalPattern
from patterns.shapes import (
    LOOSE_END,
    MARGIN,
    THREAD_WIDTH,
    Block,
    Drawing,
    DrawingError,
    Line,
    Square,
    turned,
)
from patterns.techniques import Pattern
from patterns.tying import TiedKnot, tie_rows

Layout = Literal["vertical", "horizontal"]
MAX_DRAWN_ROWS = 2000
# A column of a grid is 2.5 thread diameters wide and a row 2 high; a unit is sqrt(2) of them.
COLUMN_WIDTH = 2.5 * THREAD_WIDTH
GRID_ROW_HEIGHT = 2 * THREAD_WIDTH


def draw_band(
    pattern: Pattern,
    rows: int,
    colours: Mapping[str, str],
    *,
    layout: Layout = "vertical",
) -> Drawing:
    """Draw so many rows of a pattern.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows to draw, 1 to 2000; more than needed for a picture is only slower.
    colours
        "#rrggbb" for every slot of the pattern.
    layout
        "vertical" starts at the top; "horizontal" starts at the left, the band turned by a
        quarter (not flipped: slants stay true), so that strand 1 lies lowest.

    Returns
    -------
    The drawing; its unit is half the diagonal of a knot, sqrt(2) thread diameters.

    Raises
    ------
    DrawingError
        When the rows are out of range or a slot has no colour.
    ColourError
        When a colour is not written as #rrggbb.

    Notes
    -----
    Diagonal: a row is one unit high and a strand one unit wide: the knot in row r on positions
    p and p + 1 has its centre at (p, r), so the band measures N by R + 1 units. Grid: upright
    cells of 2.5 by 2 thread diameters, the base strands hanging out at both ends.
    """
    if not 1 <= rows <= MAX_DRAWN_ROWS:
        raise DrawingError(f"Draw 1 to {MAX_DRAWN_ROWS} rows, not {rows}.")
    chosen = slot_colours(pattern, colours)
    if isinstance(pattern, GridPattern):
        drawing = _draw_grid(pattern, rows, chosen)
    else:
        drawing = _draw_diagonal(pattern, rows, chosen)
    return turned(drawing) if layout == "horizontal" else drawing


def slot_colours(pattern: Pattern, colours: Mapping[str, str]) -> dict[str, str]:
    """Return the colour of every slot of a pattern, checked, in small letters.

    Raises
    ------
    DrawingError
        When a slot has no colour.
    ColourError
        When a colour is not written as #rrggbb.
    """
    for slot in pattern.used_slots:
        if slot not in colours:
            raise DrawingError(f"Slot {slot} has no colour. Choose one.")
        channels(colours[slot])
    return {slot: colours[slot].lower() for slot in pattern.used_slots}


def _draw_grid(pattern: GridPattern, rows: int, colours: Mapping[str, str]) -> Drawing:
    top = LOOSE_END + MARGIN
    blocks = [
        Block(
            MARGIN + column * COLUMN_WIDTH,
            top + row * GRID_ROW_HEIGHT,
            COLUMN_WIDTH,
            GRID_ROW_HEIGHT,
            colours[slot],
            slot,
        )
        for row, cells in enumerate(band_rows(pattern, rows))
        for column, slot in enumerate(cells)
    ]
    height = rows * GRID_ROW_HEIGHT + 2 * top
    centres = [MARGIN + (column + 0.5) * COLUMN_WIDTH for column in range(pattern.columns)]
    base_strands = [
        Line(
            x,
            MARGIN,
            x,
            height - MARGIN,
            THREAD_WIDTH,
            colours[pattern.background],
            pattern.background,
        )
        for x in centres
    ]
    width = pattern.columns * COLUMN_WIDTH + 2 * MARGIN
    return Drawing(width=width, height=height, shapes=(*base_strands, *blocks))


def _draw_diagonal(pattern: DiagonalPattern, rows: int, colours: Mapping[str, str]) -> Drawing:
    strand_colours = ["", *(colours[slot] for slot in pattern.slots)]  # strands count from 1
    lines, squares = _draw_rows(pattern, rows, strand_colours)
    return Drawing(
        width=pattern.strands + 2 * MARGIN,
        height=rows + 1 + 2 * (LOOSE_END + MARGIN),
        shapes=(*lines, *squares),
    )


def _draw_rows(
    pattern: DiagonalPattern, rows: int, strand_colours: list[str]
) -> tuple[list[Line], list[Square]]:
    """Draw the squares, and a line wherever a strand runs from one square to a later one."""
    lines: list[Line] = []
    squares: list[Square] = []
    order = list(range(1, pattern.strands + 1))
    bare_since = [-LOOSE_END] * pattern.strands
    for row, tied_row in enumerate(tie_rows(pattern, rows), start=1):
        for knot in tied_row:
            slot = pattern.slots[knot.tying - 1]
            squares.append(_square(knot, row, strand_colours[knot.tying], slot))
            for position in (knot.left - 1, knot.left):
                if row - bare_since[position] > 1:
                    lines.append(_thread(pattern, order, strand_colours, position, bare_since, row))
                bare_since[position] = row
            order[knot.left - 1 : knot.left + 1] = _after(knot)
    end = rows + 1 + LOOSE_END
    lines.extend(
        _thread(pattern, order, strand_colours, position, bare_since, end)
        for position in range(pattern.strands)
    )
    return lines, squares


def _after(knot: TiedKnot) -> tuple[int, int]:
    """Return the strands at the two positions once the knot is tied."""
    tying_ends_left = knot.knot.left_ties != knot.knot.swaps
    return (knot.tying, knot.base) if tying_ends_left else (knot.base, knot.tying)


def _square(knot: TiedKnot, row: int, colour: str, slot: str) -> Square:
    return Square(knot.left + MARGIN, row + LOOSE_END + MARGIN, 1.0, colour, slot)


def _thread(
    pattern: DiagonalPattern,
    order: list[int],
    strand_colours: list[str],
    position: int,
    bare_since: list[float],
    until: float,
) -> Line:
    """Draw the strand at a position from the centre line of one row to that of another."""
    strand = order[position]
    x = position + 0.5 + MARGIN
    top = LOOSE_END + MARGIN
    return Line(
        x,
        bare_since[position] + top,
        x,
        until + top,
        THREAD_WIDTH,
        strand_colours[strand],
        pattern.slots[strand - 1],
    )
