"""One pass over a problem: open one stock piece after the other and fill it.

Lengths are cells (see `planner.cutting.knapsack`), except where the name ends in ``_mm``.
"""

import time
from bisect import bisect_left, insort
from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace

from planner.cutting.knapsack import Filler, LongestFirst, Pattern
from planner.cutting.packs import SoldAs

Pieces = tuple[tuple[int, int], ...]
"""Pairs of (length, count)."""


@dataclass(frozen=True)
class Supply:
    """Stock pieces alike, to be opened in turn.

    Parameters
    ----------
    length_mm
        Length of each [mm].
    size
        Length of each [cells].
    count
        How many.
    put_up
        Index of the put-up when they have to be bought, else None.
    held
        Pieces already assigned to each.
    """

    length_mm: int
    size: int
    count: int
    put_up: int | None = None
    held: Pieces = ()

    @property
    def free(self) -> int:
        """What is not assigned yet [cells]."""
        return self.size - sum(length * count for length, count in self.held)


@dataclass(frozen=True)
class Filling:
    """Stock pieces that are cut alike.

    Parameters
    ----------
    length_mm
        Length of each [mm].
    put_up
        Index of the put-up when they have to be bought, else None.
    pieces
        What is cut from each [cells].
    repeats
        How many are cut so.
    """

    length_mm: int
    put_up: int | None
    pieces: Pieces
    repeats: int

    @property
    def used(self) -> int:
        """What is cut from each [cells]."""
        return sum(length * count for length, count in self.pieces)


@dataclass
class Remaining:
    """What is still to cut: distinct lengths, ascending, and their counts."""

    lengths: list[int]
    counts: list[int]
    total: int = field(init=False)

    def __post_init__(self) -> None:
        self.total = sum(a * b for a, b in zip(self.lengths, self.counts, strict=True))

    @classmethod
    def of(cls, demand: dict[int, int]) -> "Remaining":
        """Start with a demand of length [cells] to count."""
        lengths = sorted(length for length, count in demand.items() if count)
        return cls(lengths, [demand[length] for length in lengths])

    def pattern(self, filler: Filler, capacity: int) -> Pattern:
        """Fill one stock piece; everything, when everything fits."""
        if self.total <= capacity:
            return list(enumerate(self.counts))
        if not self.lengths or self.lengths[0] > capacity:
            return []
        return filler.fill(self.lengths, self.counts, capacity)

    def used(self, pattern: Pattern) -> int:
        """Give the length of a pattern [cells]."""
        return sum(self.lengths[index] * taken for index, taken in pattern)

    def repeats(self, pattern: Pattern, most: int) -> int:
        """Say how often to repeat a pattern: while the demand is at least twice it."""
        fits = min(self.counts[index] // taken for index, taken in pattern)
        return min(most, max(1, fits - 1))

    def pieces(self, pattern: Pattern) -> Pieces:
        """Give a pattern as lengths and counts, longest first."""
        return tuple((self.lengths[index], taken) for index, taken in sorted(pattern, reverse=True))

    def take(self, pattern: Pattern, repeats: int) -> None:
        """Take a pattern out of what is still to cut."""
        self.total -= self.used(pattern) * repeats
        for index, taken in sorted(pattern, reverse=True):
            self.counts[index] -= taken * repeats
            if not self.counts[index]:
                del self.counts[index], self.lengths[index]


def fill_all(
    demand: dict[int, int],
    supplies: Sequence[Supply],
    sold: Sequence[SoldAs],
    filler: Filler,
    deadline: float,
) -> list[Filling] | None:
    """Cut everything, from the supplies in their order, then from put-ups bought as needed.

    Parameters
    ----------
    demand
        Length [cells] to count.
    supplies
        Stock pieces in the order in which they are opened.
    sold
        Put-ups to buy when the supplies do not suffice.
    filler
        How one stock piece is filled.
    deadline
        Reading of the monotonic clock after which the longest-first rule finishes the pass [s].

    Returns
    -------
    list of Filling or None
        None when something does not fit into anything.
    """
    remaining = Remaining.of(_without_held(demand, supplies))
    fillings: list[Filling] = []
    for supply in supplies:
        fillings.extend(_fill_supply(remaining, supply, filler, deadline))
    while remaining.lengths:
        filling = _fill_new(remaining, sold, _in_time(filler, deadline))
        if filling is None:
            return None
        fillings.append(filling)
    return fillings


def hold_long_pieces(
    demand: dict[int, int], supplies: Sequence[Supply], longest_sold: int
) -> list[Supply] | None:
    """Assign the pieces that no put-up holds to the shelf, each where it fits best.

    Parameters
    ----------
    demand
        Length [cells] to count.
    supplies
        The shelf.
    longest_sold
        The longest put-up [cells].

    Returns
    -------
    list of Supply or None
        The shelf with these pieces held; None when best fit finds no place for one.
    """
    long_pieces = [
        length
        for length in sorted(demand, reverse=True)
        if length > longest_sold
        for _ in range(demand[length])
    ]
    if not long_pieces:
        return list(supplies)
    free = sorted(
        (supply.size, index, number)
        for index, supply in enumerate(supplies)
        for number in range(supply.count)
    )
    held: dict[tuple[int, int], list[int]] = {}
    for length in long_pieces:
        place = bisect_left(free, (length, -1, -1))
        if place == len(free):
            return None
        size, index, number = free.pop(place)
        held.setdefault((index, number), []).append(length)
        insort(free, (size - length, index, number))
    return list(_with_held(supplies, held))


def _with_held(
    supplies: Sequence[Supply], held: dict[tuple[int, int], list[int]]
) -> Iterator[Supply]:
    holding: dict[int, list[Pieces]] = {}
    for (index, _), lengths in sorted(held.items()):
        holding.setdefault(index, []).append(tuple(sorted(Counter(lengths).items())))
    for index, supply in enumerate(supplies):
        for pieces in holding.get(index, []):
            yield replace(supply, count=1, held=pieces)
        rest = supply.count - len(holding.get(index, []))
        if rest:
            yield replace(supply, count=rest)


def _without_held(demand: dict[int, int], supplies: Sequence[Supply]) -> dict[int, int]:
    left = dict(demand)
    for supply in supplies:
        for length, count in supply.held:
            left[length] -= count * supply.count
    return left


def _in_time(filler: Filler, deadline: float) -> Filler:
    return filler if time.monotonic() < deadline else LongestFirst()


def _fill_supply(
    remaining: Remaining, supply: Supply, filler: Filler, deadline: float
) -> Iterator[Filling]:
    left = supply.count
    while left:
        now = _in_time(filler, deadline)
        pattern = remaining.pattern(now, supply.free)
        if not pattern:
            break
        repeats = remaining.repeats(pattern, left)
        now.learn(remaining.lengths, remaining.counts, supply.free, pattern)
        pieces = _joined(supply.held, remaining.pieces(pattern))
        remaining.take(pattern, repeats)
        left -= repeats
        yield Filling(supply.length_mm, supply.put_up, pieces, repeats)
    if left and supply.held:
        yield Filling(supply.length_mm, supply.put_up, supply.held, left)


def _joined(first: Pieces, second: Pieces) -> Pieces:
    counts = dict(first)
    for length, count in second:
        counts[length] = counts.get(length, 0) + count
    return tuple(sorted(counts.items(), reverse=True))


def _fill_new(remaining: Remaining, sold: Sequence[SoldAs], filler: Filler) -> Filling | None:
    """Buy the put-up of lowest price per length used; at the end the cheapest that holds all."""
    patterns = {
        index: pattern
        for index, put_up in enumerate(sold)
        if (pattern := remaining.pattern(filler, put_up.size))
    }
    if not patterns:
        return None
    holds_all = [index for index in patterns if sold[index].size >= remaining.total]
    if holds_all:
        chosen = min(holds_all, key=lambda index: (sold[index].price_each, sold[index].size, index))
    else:
        used = {index: remaining.used(pattern) for index, pattern in patterns.items()}
        chosen = min(patterns, key=lambda i: (sold[i].price_each / used[i], -used[i], i))
    pattern = patterns[chosen]
    repeats = remaining.repeats(pattern, remaining.total)
    filler.learn(remaining.lengths, remaining.counts, sold[chosen].size, pattern)
    pieces = remaining.pieces(pattern)
    remaining.take(pattern, repeats)
    return Filling(sold[chosen].length_mm, chosen, pieces, repeats)
