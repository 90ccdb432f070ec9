"""The shapes that drawings are made of, for the screen and for paper."""

from dataclasses import dataclass
from math import sqrt
from typing import Literal, TypeVar

# A strand of a diagonal pattern takes one unit of the width: sqrt(2) thread diameters.
THREAD_WIDTH = 1 / sqrt(2)
OUTLINE_WIDTH = 0.12
LOOSE_END = 2.0
MARGIN = 0.25


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

    @property
    def corners(self) -> tuple[tuple[float, float], ...]:
        """Left, top, right and bottom tip."""
        return (
            (self.cx - self.half, self.cy),
            (self.cx, self.cy - self.half),
            (self.cx + self.half, self.cy),
            (self.cx, self.cy + self.half),
        )


@dataclass(frozen=True)
class Block:
    """A cell of a grid: an upright knot, `x` and `y` its upper left corner."""

    x: float
    y: float
    width: float
    height: float
    colour: str
    slot: str

    @property
    def corners(self) -> tuple[tuple[float, float], ...]:
        """Upper left, upper right, lower right and lower left."""
        right, bottom = self.x + self.width, self.y + self.height
        return (self.x, self.y), (right, self.y), (right, bottom), (self.x, bottom)


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


@dataclass(frozen=True)
class Stroke:
    """A line through several points, each (x, y)."""

    points: tuple[tuple[float, float], ...]
    width: float
    colour: str


@dataclass(frozen=True)
class Label:
    """One line of text, `y` its base line; without a colour it is written in the page's ink."""

    x: float
    y: float
    text: str
    size: float
    anchor: Literal["start", "middle", "end"] = "start"
    colour: str | None = None


Knotted = Square | Block
Shape = Knotted | Line
ShapeKind = TypeVar("ShapeKind", Knotted, Line, Stroke)


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


@dataclass(frozen=True)
class Chart:
    """A working chart on a ground of `width` by `height`; y grows downwards.

    Parameters
    ----------
    threads
        Runs of thread between the knots, drawn first and outlined as knots are.
    knots
        The knots or cells.
    ways
        What is drawn over the knots, in a colour that stands out from theirs.
    labels
        Letters, numbers and words.
    """

    width: float
    height: float
    threads: tuple[Stroke, ...]
    knots: tuple[Knotted, ...]
    ways: tuple[Stroke, ...]
    labels: tuple[Label, ...]


def turned(drawing: Drawing) -> Drawing:
    """Turn by a quarter to the left, so that the start lies at the left."""
    return Drawing(
        width=drawing.height,
        height=drawing.width,
        shapes=tuple(_turned_shape(shape, drawing.width) for shape in drawing.shapes),
    )


def _turned_shape(shape: Shape, width: float) -> Shape:
    if isinstance(shape, Square):
        return Square(shape.cy, width - shape.cx, shape.half, shape.colour, shape.slot)
    if isinstance(shape, Block):
        return Block(
            shape.y,
            width - shape.x - shape.width,
            shape.height,
            shape.width,
            shape.colour,
            shape.slot,
        )
    return Line(
        shape.y1,
        width - shape.x1,
        shape.y2,
        width - shape.x2,
        shape.width,
        shape.colour,
        shape.slot,
    )
