"""A bracelet drawn as it looks when tied: once, for the screen and for paper."""

from dataclasses import dataclass


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


@dataclass(frozen=True)
class Drawing:
    """Shapes in drawing order on a ground of `width` by `height`; y grows downwards."""

    width: float
    height: float
    shapes: tuple[Shape, ...]
