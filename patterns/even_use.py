"""Even use: at knots between two strands of one colour, choose who ties so that none is greedy."""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from itertools import product
from math import ceil
from random import Random

from patterns.geometry import MAX_ROWS, Gauge
from patterns.knots import MAX_REPEAT_ROWS, DiagonalPattern, Knot
from patterns.tying import colour_order, count_strands

MOST_EVALUATIONS = 8_000
# Up to so many choices all of them are tried: 4 knots for each of 6 places.
MOST_CHOICES_TRIED = 4**6
# The search ends so near to what no choice can better.
GOOD_ENOUGH = 0.005
_SHAKEN_KNOTS = 3
_KNOTS = tuple(Knot)
Place = tuple[int, int]
Key = tuple[float, float]


@dataclass(frozen=True)
class KnotChange:
    """A knot that is another one now; row and place counted from 1."""

    row: int
    place: int
    before: Knot
    after: Knot


@dataclass(frozen=True)
class EvenUse:
    """What the search found.

    Parameters
    ----------
    pattern
        The pattern with the choices made; its repeat may be several of the old ones.
    repeats
        How many of the old repeats the new one holds.
    changes
        The knots that changed, row by row.
    free_knots
        The knots there were to choose.
    bound_mm
        No choice at these knots makes the longest strand shorter [mm].
    evaluations
        Choices that were looked at.
    tried_all
        Whether these were all the choices there are.
    """

    pattern: DiagonalPattern
    repeats: int
    changes: tuple[KnotChange, ...]
    free_knots: int
    bound_mm: float
    evaluations: int
    tried_all: bool


def unrolled(pattern: DiagonalPattern, repeats: int) -> DiagonalPattern:
    """Return the pattern with so many repeats written out as one."""
    return replace(pattern, rows=pattern.rows * repeats)


def free_places(pattern: DiagonalPattern) -> tuple[Place, ...]:
    """Return the knots that any of the four may stand for, row and place counted from 0.

    Notes
    -----
    A knot between two strands of one colour shows that colour whoever ties, and leaves the
    colours standing as they were. It is free where this holds each time it is tied: looked at
    until the colours are back, or over as many rows as the longest bracelet has. What is chosen
    at one free knot does not make another one less free, since colours stand the same.
    """
    colours = list(pattern.slots)
    free = {(number, place) for number, row in enumerate(pattern.rows) for place in range(len(row))}
    for _ in range(ceil(MAX_ROWS / len(pattern.rows))):
        for number, row in enumerate(pattern.rows):
            for place, knot in enumerate(row):
                left = 2 * place + number % 2
                if colours[left] != colours[left + 1]:
                    free.discard((number, place))
                    if knot.swaps:
                        colours[left], colours[left + 1] = colours[left + 1], colours[left]
        if tuple(colours) == pattern.slots:
            break
    return tuple(sorted(free))


def least_possible_mm(pattern: DiagonalPattern, rows: int, gauge: Gauge) -> float:
    """Return what the longest strand takes at least, whatever the free knots [mm].

    Notes
    -----
    Colours stand the same whatever is chosen, so all the strands of one colour together always
    take the same thread; its longest strand takes no less than their mean.
    """
    by_slot: dict[str, list[float]] = {}
    for count in count_strands(pattern, rows):
        length_mm = (
            count.tied * gauge.knotting_mm + count.base * gauge.base_mm + count.idle * gauge.idle_mm
        )
        by_slot.setdefault(count.slot, []).append(length_mm)
    return max(sum(lengths) / len(lengths) for lengths in by_slot.values())


class _Band:
    """A band of `rows` rows, looked at as one walk through its repeat.

    `cost[r][s]` is the thread [mm] that the strand at position s, from 0, has taken when it comes
    to row r of the repeat, and `standing[r]` which of them stands where. So a change at one knot
    is worked out from two strands, without walking the rest again.
    """

    def __init__(self, pattern: DiagonalPattern, rows: int, gauge: Gauge) -> None:
        self.knots = [list(row) for row in pattern.rows]
        self.whole, self.rest = divmod(rows, len(self.knots))
        self.strands = pattern.strands
        self.tied_mm, self.base_mm, self.idle_mm = (
            gauge.knotting_mm,
            gauge.base_mm,
            gauge.idle_mm,
        )
        self.evaluations = 0
        self.walk()

    def walk(self) -> None:
        """Walk one repeat with the knots as they are now."""
        standing = list(range(self.strands))
        cost = [0.0] * self.strands
        self.standing, self.cost = [standing[:]], [cost[:]]
        for number, row in enumerate(self.knots):
            for place in {0, self.strands - 1} - _busy(len(row), number):
                cost[standing[place]] += self.idle_mm
            for place, knot in enumerate(row):
                left = 2 * place + number % 2
                first, second = standing[left], standing[left + 1]
                cost[first] += self.tied_mm if knot.left_ties else self.base_mm
                cost[second] += self.base_mm if knot.left_ties else self.tied_mm
                if knot.swaps:
                    standing[left], standing[left + 1] = second, first
            self.standing.append(standing[:])
            self.cost.append(cost[:])
        self.end = [0] * self.strands
        for position, strand in enumerate(standing):
            self.end[strand] = position

    def key(self) -> Key:
        """Return the longest strand [mm], then how uneven all are: their sum of squares."""
        return self._key(self.cost[-1], self.cost[self.rest], self.end)

    def key_with(self, place: Place, knot: Knot) -> Key:
        """Return the key with another knot at one place."""
        repeat, tail, end = self.cost[-1][:], self.cost[self.rest][:], self.end[:]
        for strand, other, more_mm in self._paths(place, knot):
            repeat[strand] = self.cost[-1][other] + more_mm
            end[strand] = self.end[other]
            if place[0] < self.rest:
                tail[strand] = self.cost[self.rest][other] + more_mm
        return self._key(repeat, tail, end)

    def _paths(self, place: Place, knot: Knot) -> list[tuple[int, int, float]]:
        """Return for both strands of a knot whose path each takes from there, were the knot
        another one, and the thread it has more than that strand has now [mm].

        Where one of the two knots swaps and the other does not, each goes on as the other did.
        """
        row, number = place
        left = 2 * number + row % 2
        first, second = self.standing[row][left], self.standing[row][left + 1]
        if knot.swaps == self.knots[row][number].swaps:
            paths = ((first, first), (second, second))
        else:
            paths = ((first, second), (second, first))
        ties = (self.tied_mm, self.base_mm) if knot.left_ties else (self.base_mm, self.tied_mm)
        before, after = self.cost[row], self.cost[row + 1]
        return [
            (strand, other, before[strand] + knot_mm - after[other])
            for (strand, other), knot_mm in zip(paths, ties, strict=True)
        ]

    def _key(self, repeat: list[float], tail: list[float], end: list[int]) -> Key:
        self.evaluations += 1
        longest = squares = 0.0
        for strand in range(self.strands):
            position, length_mm = strand, 0.0
            for _ in range(self.whole):
                length_mm += repeat[position]
                position = end[position]
            length_mm += tail[position]
            longest = max(longest, length_mm)
            squares += length_mm * length_mm
        # Rounded, so that the order of adding up does not count as an improvement.
        return round(longest, 6), round(squares, 3)

    def put(self, place: Place, knot: Knot) -> None:
        """Put another knot at a place: from there on only its two strands are told anew."""
        row, number = place
        (first, path, more_mm), (second, other_path, other_more_mm) = self._paths(place, knot)
        self.knots[row][number] = knot
        for cost in self.cost[row + 1 :]:
            taken_mm = cost[path] + more_mm, cost[other_path] + other_more_mm
            cost[first], cost[second] = taken_mm
        if path != first:
            for standing in self.standing[row + 1 :]:
                one, two = standing.index(first), standing.index(second)
                standing[one], standing[two] = second, first
            self.end[first], self.end[second] = self.end[second], self.end[first]


def _busy(knots: int, row: int) -> set[int]:
    first = row % 2
    return set(range(first, first + 2 * knots))


def even_use(
    pattern: DiagonalPattern,
    rows: int,
    gauge: Gauge,
    *,
    repeats: int = 1,
    most_evaluations: int = MOST_EVALUATIONS,
) -> EvenUse:
    """Choose the free knots so that the longest strand is short, then all of them even.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole bracelet.
    gauge
        The maker's gauge.
    repeats
        Repeats to write out as one, so that each may choose otherwise.
    most_evaluations
        Choices to look at; the search ends there, wherever it is.

    Returns
    -------
    The best that was found; the same one for the same input. At worst the pattern as it was.

    Notes
    -----
    Few choices are tried one by one. Otherwise each free knot in turn takes the knot that is
    best with all others as they are, again and again until none helps; then a few are shaken,
    always the same ones, and so on. At the end a knot that makes no difference is put back.
    """
    written_out = unrolled(pattern, repeats)
    places = free_places(written_out)
    band = _Band(written_out, rows, gauge)
    bound_mm = least_possible_mm(pattern, rows, gauge)
    tried_all = 4 ** len(places) <= min(MOST_CHOICES_TRIED, most_evaluations)
    if tried_all:
        _try_all(band, places)
    else:
        _search(band, places, most_evaluations, bound_mm * (1 + GOOD_ENOUGH))
    _put_back(band, places, written_out)
    best = replace(written_out, rows=tuple(tuple(row) for row in band.knots))
    return EvenUse(
        pattern=best,
        repeats=repeats,
        changes=tuple(_changes(written_out, best)),
        free_knots=len(places),
        bound_mm=bound_mm,
        evaluations=band.evaluations,
        tried_all=tried_all,
    )


def _try_all(band: _Band, places: tuple[Place, ...]) -> None:
    best = (band.key(), tuple(band.knots[row][place] for row, place in places))
    for choice in product(_KNOTS, repeat=len(places)):
        for (row, place), knot in zip(places, choice, strict=True):
            band.knots[row][place] = knot
        band.walk()
        best = min(best, (band.key(), choice), key=lambda found: found[0])
    for (row, place), knot in zip(places, best[1], strict=True):
        band.knots[row][place] = knot
    band.walk()


def _search(band: _Band, places: tuple[Place, ...], most: int, good_mm: float) -> None:
    """Improve knot by knot; then shake a few knots and improve again, while there is a point."""
    random = Random(1)
    _improve(band, places, most)
    best, knots = band.key(), [row[:] for row in band.knots]
    while band.evaluations < most and best[0] > good_mm:
        for place in random.sample(places, min(_SHAKEN_KNOTS, len(places))):
            band.put(place, random.choice(_KNOTS))
        _improve(band, places, most)
        if (key := band.key()) < best:
            best, knots = key, [row[:] for row in band.knots]
        else:
            band.knots = [row[:] for row in knots]
            band.walk()
    band.knots = knots
    band.walk()


def _improve(band: _Band, places: tuple[Place, ...], most: int) -> None:
    best = band.key()
    improved = True
    while improved:
        improved = False
        for place in places:
            if band.evaluations >= most:
                return
            others = [knot for knot in _KNOTS if knot is not band.knots[place[0]][place[1]]]
            key, knot = min((band.key_with(place, knot), knot) for knot in others)
            if key < best:
                band.put(place, knot)
                best, improved = key, True


def _put_back(band: _Band, places: tuple[Place, ...], original: DiagonalPattern) -> None:
    for row, place in places:
        knot = original.rows[row][place]
        if band.knots[row][place] is not knot and band.key_with((row, place), knot) <= band.key():
            band.put((row, place), knot)


def _changes(before: DiagonalPattern, after: DiagonalPattern) -> Iterator[KnotChange]:
    for number, (old_row, new_row) in enumerate(zip(before.rows, after.rows, strict=True), 1):
        for place, (old, new) in enumerate(zip(old_row, new_row, strict=True), 1):
            if old is not new:
                yield KnotChange(number, place, old, new)


def repeats_to_write_out(pattern: DiagonalPattern) -> Iterator[int]:
    """Yield how many repeats may be written out as one: most first, 1 last.

    Notes
    -----
    Up to the colour repeat, and as many rows as a repeat may have. Its divisors come as well,
    since a bracelet of whole repeats ends elsewhere when the repeat is longer.
    """
    order = colour_order(pattern)
    most = MAX_REPEAT_ROWS // len(pattern.rows)
    for repeats in range(min(order, most), 0, -1):
        if order % repeats == 0:
            yield repeats
