"""A bracelet drawn as it looks when tied: once, for the screen and for paper."""

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from math import sqrt
from typing import Literal, TypeVar
from xml.sax.saxutils import escape, quoteattr

from patterns.colours import channels, working_colours
from patterns.knots import DiagonalPattern, TiedKnot, tie_rows

__all__ = ["Drawing", "Line", "Shape", "Square", "draw_band", "to_svg", "working_colours"]

Layout = Literal["vertical", "horizontal"]
MAX_DRAWN_ROWS = 2000
# A strand takes one unit of the width, and a unit is sqrt(2) thread diameters.
THREAD_WIDTH = 1 / sqrt(2)
OUTLINE_WIDTH = 0.12
LOOSE_END = 2.0
MARGIN = 0.25
_NOT_IN_XML = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


class DrawingError(ValueError):
    """A band that cannot be drawn."""


@dataclass(frozen=True)
class Square:
    """A knot: a square standing on a corner, `half` a diagonal from its centre to each tip."""

    cx: float
    cy: float
    half: float
    colour: str
    slot: str


@dataclass(frozen=True)
class Line:
    """A bare run of thread, drawn under the squares."""

    x1: float
    y1: float
    x2: float
    y2: float
    width: float
    colour: str
    slot: str


Shape = Square | Line
ShapeKind = TypeVar("ShapeKind", Square, Line)


@dataclass(frozen=True)
class Drawing:
    """Shapes in drawing order on a ground of `width` by `height`; y grows downwards.

    Every shape is filled with its colour and outlined `OUTLINE_WIDTH` thick in
    `working_colours(colour)`, so that white thread shows on paper and the picture reads in
    black and white.
    """

    width: float
    height: float
    shapes: tuple[Shape, ...]


def draw_band(
    pattern: DiagonalPattern,
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
    A row is one unit high and a strand one unit wide: the knot in row r on positions p and
    p + 1 has its centre at (p, r), so the band measures N by R + 1 units.
    """
    if not 1 <= rows <= MAX_DRAWN_ROWS:
        raise DrawingError(f"Draw 1 to {MAX_DRAWN_ROWS} rows, not {rows}.")
    strand_colours = _strand_colours(pattern, colours)
    lines, squares = _draw_rows(pattern, rows, strand_colours)
    drawing = Drawing(
        width=pattern.strands + 2 * MARGIN,
        height=rows + 1 + 2 * (LOOSE_END + MARGIN),
        shapes=(*lines, *squares),
    )
    return _turned(drawing) if layout == "horizontal" else drawing


def _strand_colours(pattern: DiagonalPattern, colours: Mapping[str, str]) -> list[str]:
    """Colours by strand; index 0 is unused."""
    for slot in pattern.slots:
        if slot not in colours:
            raise DrawingError(f"Slot {slot} has no colour. Choose one.")
        channels(colours[slot])
    return ["", *(colours[slot].lower() for slot in pattern.slots)]


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


def _turned(drawing: Drawing) -> Drawing:
    """Turn by a quarter to the left, so that the start lies at the left."""
    return Drawing(
        width=drawing.height,
        height=drawing.width,
        shapes=tuple(_turned_shape(shape, drawing.width) for shape in drawing.shapes),
    )


def _turned_shape(shape: Shape, width: float) -> Shape:
    if isinstance(shape, Square):
        return Square(shape.cy, width - shape.cx, shape.half, shape.colour, shape.slot)
    return Line(
        shape.y1,
        width - shape.x1,
        shape.y2,
        width - shape.x2,
        shape.width,
        shape.colour,
        shape.slot,
    )


def to_svg(
    drawing: Drawing,
    *,
    title: str,
    height_px: float | None = None,
    width_px: float | None = None,
) -> str:
    """Write a drawing as one SVG element.

    Parameters
    ----------
    drawing
        The drawing.
    title
        What it shows, for people who do not see it.
    height_px, width_px
        One of the two sizes [px]; the other follows. With neither, the picture fills its box.

    Returns
    -------
    `<svg>...</svg>` with presentation attributes only, which a strict content policy allows.

    Notes
    -----
    The squares of one colour are one path: a long band stays small. Lines come first, as a
    wide stroke in the outline's tone under a narrower one in the colour.
    """
    words = _NOT_IN_XML.sub("", title)
    parts = [
        '<svg xmlns="http://www.w3.org/2000/svg" role="img"'
        f" aria-label={quoteattr(words)}{_size(drawing, height_px, width_px)}"
        f' viewBox="0 0 {_short(drawing.width)} {_short(drawing.height)}">',
        f"<title>{escape(words)}</title>",
    ]
    lines = [shape for shape in drawing.shapes if isinstance(shape, Line)]
    squares = [shape for shape in drawing.shapes if isinstance(shape, Square)]
    for colour, same_colour in _by_colour(lines).items():
        parts.extend(_line_paths(colour, same_colour))
    for colour, knots in _by_colour(squares).items():
        parts.append(_square_path(colour, knots))
    return "".join([*parts, "</svg>"])


def _size(drawing: Drawing, height_px: float | None, width_px: float | None) -> str:
    if height_px is not None:
        width_px = height_px * drawing.width / drawing.height
    elif width_px is not None:
        height_px = width_px * drawing.height / drawing.width
    else:
        return ""
    return f' width="{_short(width_px)}" height="{_short(height_px)}"'


def _by_colour(shapes: Iterable[ShapeKind]) -> dict[str, list[ShapeKind]]:
    grouped: dict[str, list[ShapeKind]] = {}
    for shape in shapes:
        grouped.setdefault(shape.colour, []).append(shape)
    return grouped


def _line_paths(colour: str, lines: list[Line]) -> list[str]:
    path = "".join(
        f"M{_short(line.x1)} {_short(line.y1)}L{_short(line.x2)} {_short(line.y2)}"
        for line in lines
    )
    width = lines[0].width
    strokes = (
        (working_colours(colour), width + OUTLINE_WIDTH),
        (colour, width - OUTLINE_WIDTH),
    )
    return [
        f'<path d="{path}" fill="none" stroke="{tone}" stroke-width="{_short(stroke)}"/>'
        for tone, stroke in strokes
    ]


def _square_path(colour: str, squares: list[Square]) -> str:
    path = "".join(_square_outline(square) for square in squares)
    return (
        f'<path d="{path}" fill="{colour}" stroke="{working_colours(colour)}"'
        f' stroke-width="{_short(OUTLINE_WIDTH)}" stroke-linejoin="round"/>'
    )


def _square_outline(square: Square) -> str:
    half = _short(square.half)
    top = f"M{_short(square.cx)} {_short(square.cy - square.half)}"
    return f"{top}l{half} {half}-{half} {half}-{half}-{half}z"


def _short(number: float) -> str:
    """Write a coordinate with at most two places and no trailing zeros."""
    return f"{number:.2f}".rstrip("0").rstrip(".")
