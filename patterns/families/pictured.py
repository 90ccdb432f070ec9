"""Families that draw a picture on strands that keep their places.

Strands of the ground and of the figure stand in turn, so every knot lies between one of each:
whichever ties, returning, shows its colour. So any picture of two kinds of knots can be tied.
"""

from collections.abc import Callable
from math import ceil, cos, pi

from patterns.knots import Knot, knots_in_row

Rows = tuple[tuple[Knot, ...], ...]
# Takes a knot's middle, from the left edge, and its row, both from 1: is it part of the figure?
Figure = Callable[[int, int], bool]


def in_turn(strands: int, colours: tuple[str, ...]) -> tuple[str, ...]:
    """The first colour on every second strand, from strand 1; the others in turn between them."""
    figure = colours[1:] or colours
    return tuple(
        colours[0] if place % 2 == 0 else figure[place // 2 % len(figure)]
        for place in range(strands)
    )


def rows_of(strands: int, row_count: int, figure: Figure) -> Rows:
    """Tie a figure, whose strands stand at the odd positions, counted from 0."""
    return tuple(
        tuple(
            _knot(2 * place + (row - 1) % 2, figure(2 * place + (row - 1) % 2 + 1, row))
            for place in range(knots_in_row(strands, row))
        )
        for row in range(1, row_count + 1)
    )


def _knot(left: int, is_figure: bool) -> Knot:
    """The left strand of the pair ties where it is of the kind that is to show."""
    left_is_figure = left % 2 == 1
    return Knot.FB if left_is_figure == is_figure else Knot.BF


def bars(strands: int) -> Rows:
    """Bars across the band, three rows of each kind."""
    return rows_of(strands, 6, lambda middle, row: (row - 1) % 6 >= 3)


def checks(strands: int) -> Rows:
    """Squares of two colours in turn, each standing on a corner as the knots do."""
    side = max(2, strands // 7)

    def figure(middle: int, row: int) -> bool:
        down, across = (row + middle) // 2, (row - middle) // 2  # along the two slants
        return (down // side + across // side) % 2 == 0

    return rows_of(strands, 2 * side, figure)


def ladder(strands: int) -> Rows:
    """Two rails along the edges and rungs between them."""
    rail = max(1, strands // 6)

    def figure(middle: int, row: int) -> bool:
        return middle <= rail or middle >= strands - rail or row in (1, 2)

    return rows_of(strands, 8, figure)


def crosses(strands: int) -> Rows:
    """One cross below the other, from edge to edge; an odd strand stays beside them.

    Both slants of a cross lie on knots only where its middle lies between two strands.
    """
    width = strands - strands % 2
    height = width

    def figure(middle: int, row: int) -> bool:
        aside, down = abs(2 * middle - width), abs(2 * row - height - 1)
        return abs(aside - down) <= 2

    return rows_of(strands, height, figure)


def wave(strands: int) -> Rows:
    """A broad line that swings from edge to edge, rounded at its turns."""
    period = 2 * _even(strands)
    breadth = max(1.6, strands / 8)

    def figure(middle: int, row: int) -> bool:
        centre = strands / 2 - (strands / 2 - breadth) * cos(2 * pi * (row - 1) / period)
        return abs(middle - centre) <= breadth

    return rows_of(strands, period, figure)


def hearts(strands: int) -> Rows:
    """One heart below the other: two humps, and sides that close to a point."""
    half = strands / 2 - 1
    lobe = half / 2
    height = _even(ceil(half + lobe) + 3)

    def figure(middle: int, row: int) -> bool:
        across, down = abs(middle - strands / 2), row - 2
        if down < lobe:
            hump = lobe - (lobe - down) ** 2 / (2 * lobe)
            return down >= 0 and abs(across - lobe) <= hump + 0.5
        return across <= half + lobe - down

    return rows_of(strands, height, figure)


def _even(number: int) -> int:
    return number + number % 2
