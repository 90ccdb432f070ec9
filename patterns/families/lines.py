"""Families drawn by strands that tie one knot after another: their colours run in lines.

A band is folded into panels, and in every panel the lines run side by side. All lines move at
once, a gap a row, to and fro as a *swing* tells. So a family is a fold, a swing and colours.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

from patterns.knots import Knot

Panels = Literal[1, 2, 4]
Rows = tuple[tuple[Knot, ...], ...]


@dataclass(frozen=True)
class Gap:
    """The place between two neighbouring strands, where knots are tied.

    Parameters
    ----------
    level
        How far it lies from the first side of its panel.
    slope
        1 where levels rise to the right, -1 where they fall, 0 where two panels meet.
    later
        By how many rows its panel lags behind the first.
    wall
        On which side of the gap a strand stands that keeps its place, and only is base.
    """

    level: int
    slope: Literal[-1, 0, 1]
    later: int = 0
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


def folded(strands: int, panels: Panels) -> tuple[Gap, ...]:
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
    the halves meet in gap N/2. With N odd the strand in the middle is a wall, and the right half
    lags by a row, because gaps p and N - p are never tied in the same row. Folded twice, the
    left half of N//2 strands is folded in the same way.
    """
    if panels == 1:
        return tuple(Gap(gap, 1) for gap in range(1, strands))
    half = strands // 2
    left = _slope(half) if panels == 2 else _hill(half)
    if strands % 2:
        left = (*left[:-1], replace(left[-1], wall="right"))
        return (*left, *(_mirrored(gap, 1) for gap in reversed(left)))
    middle = replace(left[-1], slope=0)
    return (*left[:-1], middle, *(_mirrored(gap, 0) for gap in reversed(left[:-1])))


def _slope(half: int) -> tuple[Gap, ...]:
    return tuple(Gap(gap, 1) for gap in range(1, half + 1))


def _hill(half: int) -> tuple[Gap, ...]:
    """Rise and fall over the strands of half a band, down to level 0 in the gap behind them."""
    top, lag = divmod(half, 2)
    rise = _slope(top)
    fall = [Gap(top - step, -1, lag) for step in range(top + 1)]
    if lag:
        rise = (*rise[:-1], replace(rise[-1], wall="right"))
        return (*rise, replace(fall[0], wall="left"), *fall[1:])
    return (*rise[:-1], Gap(top, 0), *fall[1:])


def _mirrored(gap: Gap, lag: int) -> Gap:
    slopes: dict[int, Literal[-1, 0, 1]] = {-1: 1, 0: 0, 1: -1}
    walls: dict[str, Literal["", "left", "right"]] = {"": "", "left": "right", "right": "left"}
    return Gap(gap.level, slopes[gap.slope], gap.later + lag, walls[gap.wall])


def steady_lines(gaps: Sequence[Gap], panel_strands: int) -> Lines:
    """Return lines that always run on in the direction in which the levels rise.

    Parameters
    ----------
    gaps
        The folded band.
    panel_strands
        Strands that move in one panel; after as many lines the first strand ties again.
    """
    rows = tuple(tuple(_knot(gap, 1, 1) for gap in gaps[row % 2 :: 2]) for row in (0, 1))
    numbers = tuple(
        tuple((row + 1 - gap.later - gap.level) // 2 % panel_strands for gap in gaps[row % 2 :: 2])
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
    A knot at level q belongs to the line q - swing, the swing of its panel's row.
    """
    rows, ways = [], []
    for row in range(len(swing)):
        tied = gaps[row % 2 :: 2]
        rows.append(tuple(_swung_knot(gap, swing, row) for gap in tied))
        ways.append(tuple(gap.level - swing[row - gap.later] for gap in tied))
    nearest_first = sorted({way for row in ways for way in row}, reverse=True)
    number = {way: place for place, way in enumerate(nearest_first)}
    numbers = tuple(tuple(number[way] for way in row) for row in ways)
    return Lines(tuple(rows), numbers, len(number))


def _swung_knot(gap: Gap, swing: Sequence[int], row: int) -> Knot:
    before, now, after = (swing[(row - gap.later + step) % len(swing)] for step in (-1, 0, 1))
    return _knot(gap, now - before, after - now)


def _knot(gap: Gap, came: int, goes: int) -> Knot:
    """Came and goes: 1 up the levels, -1 down."""
    if gap.wall:
        return Knot.FB if gap.wall == "right" else Knot.BF
    if gap.slope == 0:
        return Knot.F if came == goes else Knot.FB
    if came == gap.slope:
        return Knot.F if goes == gap.slope else Knot.FB
    return Knot.BF if goes == gap.slope else Knot.B


def plaited_lines(strands: int) -> Lines:
    """Return the lines of a plait: every strand goes on to the other edge, and comes back.

    Notes
    -----
    Left of the middle the strand from the left ties, right of it the one from the right. The
    strand that ties gap p in row r has left the left edge r - p rows after row 1, or, on its
    way back, r + p - 2 N.
    """
    middle = strands // 2
    gaps = range(1, strands)
    rows = tuple(
        tuple(Knot.F if gap <= middle else Knot.B for gap in gaps[row % 2 :: 2]) for row in (0, 1)
    )
    numbers = tuple(
        tuple(
            (row + 1 + (-gap if gap <= middle else gap)) // 2 % strands
            for gap in gaps[row % 2 :: 2]
        )
        for row in range(2 * strands)
    )
    return Lines(rows, numbers, strands)


def standing_lines(strands: int) -> Lines:
    """Return lines that run straight down, one for each strand but the last, which never ties."""
    gaps = range(1, strands)
    rows = tuple(tuple(Knot.FB for _ in gaps[row % 2 :: 2]) for row in (0, 1))
    numbers = tuple(tuple(gap - 1 for gap in gaps[row % 2 :: 2]) for row in (0, 1))
    return Lines(rows, numbers, strands - 1)


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
    A strand takes the colour of the knots that it ties. One that never ties shows at most along
    an edge; it takes the colour of the knots that are tied on it nearest to an edge.
    """
    slots = [""] * strands
    round_it: list[tuple[int, str]] = [(strands, "")] * strands
    order = list(range(strands))
    for row, numbers in enumerate(lines.numbers):
        knots = lines.rows[row % len(lines.rows)]
        for place, (knot, number) in enumerate(zip(knots, numbers, strict=True)):
            left = 2 * place + row % 2
            pair = order[left], order[left + 1]
            tying, base = pair if knot.left_ties else pair[::-1]
            slots[tying] = colours[number]
            round_it[base] = min(round_it[base], (min(left, strands - 2 - left), colours[number]))
            if knot.swaps:
                order[left : left + 2] = reversed(pair)
    return tuple(slot or nearest for slot, (_, nearest) in zip(slots, round_it, strict=True))


def to_and_fro(reach: int) -> tuple[int, ...]:
    """Return a swing that begins far out, comes back, and goes out again."""
    return (*range(reach, 0, -1), *range(reach))


def rounded(reach: int) -> tuple[int, ...]:
    """Return a swing that goes to and fro one step before each turn, so that turns look round."""
    rest = max(1, reach // 5)
    return (
        *range(reach, 0, -1),
        *(0, 1) * rest,
        *range(reach),
        *(reach, reach - 1) * rest,
    )
