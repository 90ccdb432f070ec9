"""Families drawn by strands that tie one knot after another: their colours run in lines.

A band is folded into panels, and in every panel the lines run side by side. All lines move at
once, a gap a row, to and fro as a *swing* tells. So a family is a fold, a swing and colours.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from patterns.knots import Knot, knots_in_row

Rows = tuple[tuple[Knot, ...], ...]


@dataclass(frozen=True)
class Gap:
    """The place between two neighbouring strands, where knots are tied.

    Parameters
    ----------
    level
        How far it lies from the first side of its panel; odd where its left strand is odd.
    slope
        1 where levels rise to the right, -1 where they fall, 0 where two panels meet.
    wall
        On which side of the gap a strand stands that keeps its place, and only is base.
    """

    level: int
    slope: Literal[-1, 0, 1]
    wall: Literal["", "left", "right"] = ""


@dataclass(frozen=True)
class Lines:
    """Knots, and which line each of them belongs to.

    Parameters
    ----------
    rows
        The knots of the repeat.
    numbers
        For each knot the number of its line, from 0; lines that follow each other do so on the
        band as well.
    count
        Number of lines that can have colours of their own.
    """

    rows: Rows
    numbers: tuple[tuple[int, ...], ...]
    count: int


def folded(strands: int, panels: Literal[1, 2, 4]) -> tuple[Gap, ...]:
    """Return the gaps of a band, left to right, folded into panels of equal width.

    Parameters
    ----------
    strands
        Number of strands N, at least two a panel.
    panels
        1, 2 or 4.

    Notes
    -----
    Folded once, the right half mirrors the left: gap p has the level of gap N - p. With N even
    the halves meet in gap N/2. With N odd the strand in the middle is a wall, and the levels of
    the right half are greater by one, because its knots come one row later. Folded twice, the
    left half is folded in the same way: at a gap if it has an even number of strands, else at a
    strand.
    """
    if panels == 1:
        return tuple(Gap(gap, 1) for gap in range(1, strands))
    half = strands // 2
    left = _slope(half) if panels == 2 else _hill(half)
    if strands % 2:
        left = (*left[:-1], Gap(left[-1].level, left[-1].slope, "right"))
        middle: tuple[Gap, ...] = ()
    else:
        middle = (Gap(left[-1].level, 0),)
        left = left[:-1]
    return (*left, *middle, *(_mirrored(gap, strands % 2) for gap in reversed(left)))


def _slope(half: int) -> tuple[Gap, ...]:
    return tuple(Gap(gap, 1) for gap in range(1, half + 1))


def _hill(half: int) -> tuple[Gap, ...]:
    """Rise and fall, over the strands of half a band and the gap behind them."""
    top, is_odd = divmod(half, 2)
    rise = [Gap(gap, 1) for gap in range(1, top + 1)]
    fall = [Gap(2 * (top + is_odd) - gap, -1) for gap in range(top + 1, half + 1)]
    if is_odd:
        rise[-1] = Gap(rise[-1].level, 1, "right")
        fall[0] = Gap(fall[0].level, -1, "left")
    else:
        rise[-1] = Gap(rise[-1].level, 0)
    return (*rise, *fall)


def _mirrored(gap: Gap, later: int) -> Gap:
    slopes: dict[int, Literal[-1, 0, 1]] = {-1: 1, 0: 0, 1: -1}
    walls: dict[str, Literal["", "left", "right"]] = {"": "", "left": "right", "right": "left"}
    return Gap(gap.level + later, slopes[gap.slope], walls[gap.wall])


def steady_lines(gaps: Sequence[Gap], panel_strands: int) -> Lines:
    """Return lines that always run on in the direction in which the levels rise.

    Parameters
    ----------
    gaps
        The folded band.
    panel_strands
        Strands that move in one panel; after as many lines the first strand ties again.
    """
    rows = tuple(
        tuple(_knot(gap, 1, 1) for gap in gaps[row % 2 :: 2]) for row in (0, 1)
    )
    numbers = tuple(
        tuple((row + 1 - gap.level) // 2 % panel_strands for gap in gaps[row % 2 :: 2])
        for row in range(2 * panel_strands)
    )
    return Lines(rows, numbers, panel_strands)


def swinging_lines(gaps: Sequence[Gap], swing: Sequence[int]) -> Lines:
    """Return lines that move to and fro.

    Parameters
    ----------
    gaps
        The folded band.
    swing
        For each row of the repeat how far the lines have moved; neighbours, and the last and the
        first, differ by one.

    Notes
    -----
    Where the swing turns, the strand that ties goes back to where it came from, and so does its
    base strand: every strand retraces its way, and after the repeat stands in its first place.
    A knot at level q belongs to the line q - swing.
    """
    rows, ways = [], []
    for row, moved in enumerate(swing):
        came = moved - swing[row - 1]
        goes = swing[(row + 1) % len(swing)] - moved
        tied = gaps[row % 2 :: 2]
        rows.append(tuple(_knot(gap, came, goes) for gap in tied))
        ways.append(tuple(gap.level - moved for gap in tied))
    ranks = {way: rank for rank, way in enumerate(sorted({w for row in ways for w in row}))}
    last = len(ranks) - 1
    numbers = tuple(tuple(last - ranks[way] for way in row) for row in ways)
    return Lines(tuple(rows), numbers, len(ranks))


def _knot(gap: Gap, came: int, goes: int) -> Knot:
    """Came and goes: 1 up the levels, -1 down."""
    if gap.wall:
        return Knot.FB if gap.wall == "right" else Knot.BF
    if gap.slope == 0:
        return Knot.F if came == goes else Knot.FB
    if came == gap.slope:
        return Knot.F if goes == gap.slope else Knot.FB
    return Knot.BF if goes == gap.slope else Knot.B


def slots_for(lines: Lines, colours: Sequence[str], strands: int) -> tuple[str, ...]:
    """Return the slots with which every line shows its colour.

    Parameters
    ----------
    lines
        The lines.
    colours
        A slot for each line.
    strands
        Number of strands.

    Notes
    -----
    A strand takes the colour of the first knot that it ties. One that never ties does not show;
    it takes that of its neighbour, so that it asks for no shade of its own.
    """
    slots = [""] * strands
    order = list(range(strands))
    for row, numbers in enumerate(lines.numbers):
        knots = lines.rows[row % len(lines.rows)]
        for place, (knot, number) in enumerate(zip(knots, numbers, strict=True)):
            left = 2 * place + row % 2
            tying = order[left if knot.left_ties else left + 1]
            slots[tying] = slots[tying] or colours[number]
            if knot.swaps:
                order[left : left + 2] = order[left + 1], order[left]
    for place, slot in enumerate(slots):
        neighbours = [*reversed(slots[:place]), *slots[place + 1 :]]
        slots[place] = slot or next(filter(None, neighbours))
    return tuple(slots)


def all_f_swing(strands: int) -> Lines:
    """Return the lines of one panel that swing over the whole width."""
    return swinging_lines(folded(strands, 1), to_and_fro(strands))


def to_and_fro(reach: int) -> tuple[int, ...]:
    """Return a swing that begins far out, comes back, and goes out again."""
    return (*range(reach, 0, -1), *range(reach))


def whole_rows(strands: int, count: int) -> list[int]:
    """Return the number of knots of each of the first rows."""
    return [knots_in_row(strands, row) for row in range(1, count + 1)]
