"""Who ties what over a whole bracelet, and where the strands stand afterwards."""

from collections.abc import Iterator
from dataclasses import dataclass
from math import lcm
from typing import NamedTuple

from patterns.knots import DiagonalPattern, Knot


class TiedKnot(NamedTuple):
    """A knot in its place: `left` is the left position of the two, all counted from 1."""

    left: int
    knot: Knot
    tying: int
    base: int


@dataclass(frozen=True)
class StrandCount:
    """What one strand does over a number of rows.

    Parameters
    ----------
    strand
        Its position at the start, from 1, left to right.
    slot
        Its colour slot.
    tied
        Knots it ties.
    base
        Knots it is the base strand in.
    idle
        Rows it sits out at an edge.
    """

    strand: int
    slot: str
    tied: int
    base: int
    idle: int


def tie_rows(pattern: DiagonalPattern, rows: int) -> Iterator[list[TiedKnot]]:
    """Tie the band row by row, the rows of the repeat taken in turn.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Number of rows, 0 or more.

    Yields
    ------
    The knots of each row, left to right.
    """
    order = list(range(1, pattern.strands + 1))
    yield from _tie_rows_on(pattern, rows, order)


def order_after(pattern: DiagonalPattern, rows: int) -> tuple[int, ...]:
    """Return which strand stands at each position after a number of rows."""
    order = list(range(1, pattern.strands + 1))
    for _ in _tie_rows_on(pattern, rows, order):
        pass
    return tuple(order)


def _tie_rows_on(pattern: DiagonalPattern, rows: int, order: list[int]) -> Iterator[list[TiedKnot]]:
    """Tie on `order` itself, so that the caller sees where the strands end up."""
    if rows < 0:
        raise ValueError("The number of rows cannot be negative.")
    repeat = [_steps(row, number) for number, row in enumerate(pattern.rows)]
    for row in range(rows):
        tied_row = []
        for left, knot, left_ties, swaps in repeat[row % len(repeat)]:
            first, second = order[left - 1], order[left]
            if swaps:
                order[left - 1], order[left] = second, first
            tying, base = (first, second) if left_ties else (second, first)
            tied_row.append(TiedKnot(left, knot, tying, base))
        yield tied_row


def _steps(row: tuple[Knot, ...], number: int) -> list[tuple[int, Knot, bool, bool]]:
    """Look each knot up once a repeat instead of once a row: the walk is the hot loop."""
    return [
        (2 * place + 1 + number % 2, knot, knot.left_ties, knot.swaps)
        for place, knot in enumerate(row)
    ]


def count_strands(pattern: DiagonalPattern, rows: int) -> tuple[StrandCount, ...]:
    """Count for every strand the knots it ties, is base in, and the rows it sits out.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole bracelet, 0 or more.

    Returns
    -------
    One count a strand, in the order of the start.

    Notes
    -----
    Every row of the bracelet is walked: strands change places from repeat to repeat, so
    one repeat must not be scaled up. A strand takes part in at most one knot a row, so
    idle = rows - tied - base.
    """
    tied = [0] * (pattern.strands + 1)
    base = [0] * (pattern.strands + 1)
    for row in tie_rows(pattern, rows):
        for knot in row:
            tied[knot.tying] += 1
            base[knot.base] += 1
    return tuple(
        StrandCount(strand, slot, tied[strand], base[strand], rows - tied[strand] - base[strand])
        for strand, slot in enumerate(pattern.slots, start=1)
    )


def permutation(pattern: DiagonalPattern) -> tuple[int, ...]:
    """Return which strand (from 1) stands at each position after one repeat."""
    return order_after(pattern, len(pattern.rows))


def order_of_repeat(pattern: DiagonalPattern) -> int:
    """Return after how many repeats every strand is back in its place.

    Notes
    -----
    The order of the repeat's permutation: the least common multiple of its cycle lengths.
    """
    return lcm(*(len(cycle) for cycle in _cycles(permutation(pattern))))


def colour_order(pattern: DiagonalPattern) -> int:
    """Return after how many repeats every position shows its first slot again.

    Notes
    -----
    Along a cycle of the permutation the slots shift by one place a repeat; they are back
    after the smallest period of the slots read along that cycle. All cycles are back
    together after the least common multiple of these periods.
    """
    return lcm(
        *(
            _period([pattern.slots[strand - 1] for strand in cycle])
            for cycle in _cycles(permutation(pattern))
        )
    )


def _cycles(arrangement: tuple[int, ...]) -> list[list[int]]:
    cycles = []
    seen: set[int] = set()
    for start in range(1, len(arrangement) + 1):
        cycle = []
        place = start
        while place not in seen:
            seen.add(place)
            cycle.append(place)
            place = arrangement[place - 1]
        if cycle:
            cycles.append(cycle)
    return cycles


def _period(word: list[str]) -> int:
    return next(shift for shift in range(1, len(word) + 1) if word[shift:] + word[:shift] == word)


def mirrored(pattern: DiagonalPattern) -> DiagonalPattern:
    """Return the pattern whose band is the mirror image, left for right.

    Parameters
    ----------
    pattern
        The pattern.

    Returns
    -------
    A pattern with the same name and finish.

    Notes
    -----
    Strand i becomes strand N + 1 - i, f and b change places, so do fb and bf, and each row
    is read from the other end. With N odd the mirror image of row 1 leaves the *first*
    strand out, which only an even row may do; so the image starts at row 2, with the
    strands as they stand after row 1, and row 1 becomes the last row of its repeat.
    """
    skipped = pattern.strands % 2
    rows = pattern.rows[skipped:] + pattern.rows[:skipped]
    order = order_after(pattern, skipped)
    return DiagonalPattern(
        name=pattern.name,
        slots=tuple(pattern.slots[strand - 1] for strand in reversed(order)),
        rows=tuple(tuple(knot.mirrored for knot in reversed(row)) for row in rows),
        finish=pattern.finish,
    )
