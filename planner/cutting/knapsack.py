"""Ways to fill one stock piece from what is still to cut.

All lengths here are *cells*: millimetres divided by the greatest common divisor of the pieces, so
that the tables stay small. A way to fill takes the lengths still wanted (ascending, distinct),
their counts and the capacity, and returns a pattern: pairs of (index, how many). It is never empty
while the shortest piece fits.
"""

import random
from abc import ABC, abstractmethod
from bisect import bisect_right
from collections.abc import Callable, Iterator, Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import numpy as np

Pattern = list[tuple[int, int]]

SUM_CELLS = 200_000
"""Largest capacity whose reachable sums are searched; beyond it long pieces go in first."""
VALUE_CELLS = 20_000
"""The same for the table of values, which costs far more a cell."""
PASSES_BETWEEN_FRESH_STARTS = 10
"""Luck is heavy-tailed: many short runs find a tight packing sooner than one long run (measured)."""
STEP_WORK = 3_000
"""What starting one step of that table costs, in cells (measured)."""


class Filler(ABC):
    """A way to fill one stock piece, which may learn from every filling that is kept."""

    @abstractmethod
    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        """Choose the pieces for one stock piece."""

    def learn(  # noqa: B027 (most ways to fill learn nothing)
        self, lengths: Sequence[int], counts: Sequence[int], capacity: int, pattern: Pattern
    ) -> None:
        """Hear which pattern was kept."""


class LongestFirst(Filler):
    """Take the longest piece that still fits, again and again.

    Notes
    -----
    Filling one stock piece after the other this way is first-fit decreasing with the stock in that
    order (a piece that first-fit puts into bin k did not fit into the bins before it).
    """

    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        pattern: Pattern = []
        index = bisect_right(lengths, capacity) - 1
        while index >= 0:
            taken = min(counts[index], capacity // lengths[index])
            pattern.append((index, taken))
            capacity -= taken * lengths[index]
            index = bisect_right(lengths, capacity, hi=index) - 1
        return pattern


class Fullest(Filler):
    """Fill as full as can be; of equally full patterns take the one with the longest pieces.

    Notes
    -----
    The reachable sums are the bits of one whole number: a piece of length l turns the set R into
    R | R << l. This is the knapsack of value l^p with p = 1, solved some ten times faster than by
    a table of values.
    """

    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        return _after_long_pieces(lengths, counts, capacity, SUM_CELLS, self._fill_exactly)

    @staticmethod
    def _fill_exactly(lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        sums = list(reachable_sums(lengths, counts, capacity))
        rest = sums[-1].bit_length() - 1
        pattern: Pattern = []
        for index in range(len(sums) - 2, -1, -1):
            length, without = lengths[index], sums[index]
            taken = min(counts[index], rest // length)
            while not without >> (rest - taken * length) & 1:
                taken -= 1
            if taken:
                pattern.append((index, taken))
                rest -= taken * length
        return pattern


class MostValuable(Filler):
    """Fill for the greatest value, where a piece is worth (length / longest) ** power.

    Parameters
    ----------
    longest
        The longest piece of the problem [cells].
    power
        Above 1 long pieces, which are hard to place later, are preferred to a fuller filling.
    """

    def __init__(self, longest: int, power: float) -> None:
        self.longest = longest
        self.power = power

    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        def fill_exactly(lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
            values = [(length / self.longest) ** self.power for length in lengths]
            return most_valuable(lengths, counts, values, capacity)

        return _after_long_pieces(lengths, counts, capacity, VALUE_CELLS, fill_exactly)


class CorrectedValues(Filler):
    """Fill for the greatest value, where lengths that came out wastefully gain value.

    Parameters
    ----------
    demand
        Length [cells] to count, the whole problem.
    seed
        Seed of the random weights.

    Attributes
    ----------
    work
        Table cells filled so far: a measure of effort that is the same on every machine.

    Notes
    -----
    After a filling of capacity C that uses U, each length l in it gets the value
    (g v + (C / U) (l / longest)^p) / (g + 1), with g random and larger for a length that is still
    plentiful. One object is used for many passes over the problem, so that it learns; now
    and then it starts afresh.

    References
    ----------
    G. Belov and G. Scheithauer, "Setup and open-stacks minimization in one-dimensional stock
    cutting", INFORMS Journal on Computing 19 (2007), section on sequential value correction
    (citation from memory).
    """

    def __init__(self, demand: dict[int, int], seed: int) -> None:
        self.demand = demand
        self.longest = max(demand)
        self.random = random.Random(seed)
        self.power = 1.03
        self.values: dict[int, float] = {}
        self.passes = 0
        self.work = 0

    def start_pass(self) -> None:
        """Choose how much long pieces are preferred in the next pass; forget now and then."""
        self.power = self.random.uniform(1.0, 1.25)
        if self.passes % PASSES_BETWEEN_FRESH_STARTS == 0:
            self.values = {length: (length / self.longest) ** self.power for length in self.demand}
        self.passes += 1

    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        def fill_exactly(lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
            values = [self.values[length] for length in lengths]
            steps = sum(
                min(count, capacity // length).bit_length()
                for length, count in zip(lengths, counts, strict=True)
            )
            self.work += steps * (capacity + STEP_WORK)
            return most_valuable(lengths, counts, values, capacity)

        return _after_long_pieces(lengths, counts, capacity, VALUE_CELLS, fill_exactly)

    def learn(
        self, lengths: Sequence[int], counts: Sequence[int], capacity: int, pattern: Pattern
    ) -> None:
        used = sum(lengths[index] * taken for index, taken in pattern)
        for index, taken in pattern:
            length = lengths[index]
            plenty = (self.demand[length] + counts[index]) / taken
            inertia = self.random.uniform(1.0, 1.5) * plenty
            wanted = capacity / used * (length / self.longest) ** self.power
            self.values[length] = (inertia * self.values[length] + wanted) / (inertia + 1)


def reachable_sums(lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Iterator[int]:
    """Find the sums that the first pieces, and one length more each time, can make.

    Parameters
    ----------
    lengths
        Distinct lengths, ascending [cells].
    counts
        How many there are of each.
    capacity
        The largest sum of interest [cells].

    Yields
    ------
    int
        The sums of no length, of the first, of the first two and so on: bit s is set when s can be
        made. Lengths beyond the capacity are left out.

    Notes
    -----
    A count is split into 1, 2, 4, ... and a rest, so that a length costs log2(count) shifts.
    """
    mask = (1 << (capacity + 1)) - 1
    reached = 1
    yield reached
    for length, count in zip(lengths, counts, strict=True):
        if length > capacity:
            break
        for multiple in _split(min(count, capacity // length)):
            reached |= reached << (length * multiple)
        reached &= mask
        yield reached


def most_valuable(
    lengths: Sequence[int], counts: Sequence[int], values: Sequence[float], capacity: int
) -> Pattern:
    """Solve the bounded knapsack problem.

    Parameters
    ----------
    lengths
        Distinct lengths, ascending [cells].
    counts
        How many there are of each.
    values
        What one of each is worth.
    capacity
        The stock piece [cells].

    Returns
    -------
    list of (int, int)
        The pattern of greatest value.

    Notes
    -----
    best[s] = max(best[s], best[s - k l] + k v) over the parts k of each count (1, 2, 4, ..., rest).

    References
    ----------
    S. Martello and P. Toth, Knapsack Problems (1990), section 3 (bounded knapsack; from memory).
    """
    import numpy as np  # here, because start-up of every command would pay for it

    best = np.zeros(capacity + 1)
    steps = []
    for index, (length, count, value) in enumerate(zip(lengths, counts, values, strict=True)):
        for multiple in _split(min(count, capacity // length)):
            weight = length * multiple
            without_it = best[weight:]
            with_it = best[: capacity + 1 - weight] + multiple * value
            taken = with_it > without_it
            np.maximum(without_it, with_it, out=without_it)
            steps.append((index, multiple, weight, taken))
    rest = int(best.argmax())
    chosen: dict[int, int] = {}
    for index, multiple, weight, taken in reversed(steps):
        if rest >= weight and taken[rest - weight]:
            chosen[index] = chosen.get(index, 0) + multiple
            rest -= weight
    return list(chosen.items())


def best_patterns(
    lengths: Sequence[int],
    counts: Sequence[int],
    weights: Sequence[int],
    capacities: Sequence[int],
) -> dict[int, tuple[int, Pattern]]:
    """Solve the bounded knapsack problem in whole numbers for several capacities at once.

    Parameters
    ----------
    lengths
        Distinct lengths, ascending [cells].
    counts
        How many there are of each.
    weights
        What one of each weighs.
    capacities
        The stock pieces [cells].

    Returns
    -------
    dict
        For each capacity the largest weight and a pattern that has it.
    """
    import numpy as np

    largest = max(capacities, default=0)
    best = np.zeros(largest + 1, dtype=np.int64)
    steps = []
    for index, (length, count, weight) in enumerate(zip(lengths, counts, weights, strict=True)):
        if not weight:
            continue
        for multiple in _split(min(count, largest // length)):
            shift = length * multiple
            without_it = best[shift:]
            with_it = best[: largest + 1 - shift] + multiple * weight
            taken = with_it > without_it
            np.maximum(without_it, with_it, out=without_it)
            steps.append((index, multiple, shift, taken))
    found = {}
    for capacity in capacities:
        rest = capacity
        chosen: dict[int, int] = {}
        for index, multiple, shift, taken in reversed(steps):
            if rest >= shift and taken[rest - shift]:
                chosen[index] = chosen.get(index, 0) + multiple
                rest -= shift
        found[capacity] = int(best[capacity]), sorted(chosen.items())
    return found


def value_tables(
    lengths: Sequence[int], counts: Sequence[int], weights: Sequence[int], capacity: int
) -> list["np.ndarray"]:
    """Give the most that can be held by the first lengths alone, for every capacity.

    Parameters
    ----------
    lengths
        Distinct lengths, ascending [cells].
    counts
        How many there are of each.
    weights
        What one of each weighs.
    capacity
        The longest stock piece [cells].

    Returns
    -------
    list of numpy.ndarray
        ``tables[k][c]`` is the largest weight of the first k lengths within c cells; k from 0.
    """
    import numpy as np

    best = np.zeros(capacity + 1, dtype=np.int64)
    tables = [best.copy()]
    for length, count, weight in zip(lengths, counts, weights, strict=True):
        for multiple in _split(min(count, capacity // length)):
            shift = length * multiple
            with_it = best[: capacity + 1 - shift] + multiple * weight
            np.maximum(best[shift:], with_it, out=best[shift:])
        tables.append(best.copy())
    return tables


def _after_long_pieces(
    lengths: Sequence[int],
    counts: Sequence[int],
    capacity: int,
    cells: int,
    fill_exactly: Callable[[Sequence[int], Sequence[int], int], Pattern],
) -> Pattern:
    """Put in the longest pieces until the capacity fits the table; what is left decides the waste."""
    if capacity <= cells:
        return fill_exactly(lengths, counts, capacity)
    chosen: dict[int, int] = {}
    left = list(counts)
    for index in range(bisect_right(lengths, capacity) - 1, -1, -1):
        length = lengths[index]
        wanted = -((cells - capacity) // length)
        taken = max(0, min(left[index], wanted, capacity // length))
        if taken:
            chosen[index] = taken
            left[index] -= taken
            capacity -= taken * length
    if capacity <= cells:
        for index, taken in fill_exactly(lengths, left, capacity):
            chosen[index] = chosen.get(index, 0) + taken
    return list(chosen.items())


def _split(count: int) -> list[int]:
    parts = []
    part = 1
    while count > 0:
        parts.append(min(part, count))
        count -= part
        part *= 2
    return parts
