"""Which bracelets are cut from which dye lot of the shelf.

Lengths are cells (see `planner.cutting.knapsack`). Bracelets that need the same pieces are one
*kind* with a count, so that five hundred bracelets cost little more than fifty.
"""

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from planner.cutting.bounds import usable_lengths
from planner.cutting.filling import Filling, Supply, fill_all
from planner.cutting.knapsack import Filler, Fullest, LongestFirst, Pattern

TARGETS = 8
TOP_UPS = 6
_PACKERS: tuple[Filler, ...] = (Fullest(), LongestFirst())


class ShortestFirst(Filler):
    """Take as many as can be, shortest first."""

    def fill(self, lengths: Sequence[int], counts: Sequence[int], capacity: int) -> Pattern:
        pattern: Pattern = []
        for index, (length, count) in enumerate(zip(lengths, counts, strict=True)):
            taken = min(count, capacity // length)
            if not taken:
                break
            pattern.append((index, taken))
            capacity -= taken * length
        return pattern


@dataclass(frozen=True)
class Kind:
    """Bracelets that need the same pieces of a shade.

    Parameters
    ----------
    pieces
        The pieces of one, longest first [cells].
    """

    pieces: tuple[int, ...]

    @property
    def total(self) -> int:
        """All pieces of one together [cells]."""
        return sum(self.pieces)

    @property
    def longest(self) -> int:
        """The longest piece [cells]; 0 where nothing is needed."""
        return self.pieces[0] if self.pieces else 0


@dataclass
class LotFilling:
    """A lot of the shelf, the bracelets cut from it so far and how.

    Parameters
    ----------
    supplies
        Its stock.
    deadline
        Reading of the monotonic clock after which quick rules only are used [s].
    """

    supplies: tuple[Supply, ...]
    deadline: float
    chosen: Counter[Kind] = field(default_factory=Counter)
    fillings: list[Filling] = field(default_factory=list)

    @property
    def longest(self) -> int:
        """The longest stock piece [cells]."""
        return max((supply.size for supply in self.supplies), default=0)

    @property
    def size(self) -> int:
        """All its stock together [cells]."""
        return sum(supply.size * supply.count for supply in self.supplies)

    @property
    def used(self) -> int:
        """What is cut from it [cells]."""
        return sum(kind.total * count for kind, count in self.chosen.items())

    def add(self, more: Counter[Kind]) -> bool:
        """Cut more bracelets from this lot, all of them or none; say whether they fit."""
        wanted = self.chosen + more
        fillings = self._pack(pieces_of(wanted))
        if fillings is None:
            return False
        self.chosen, self.fillings = wanted, fillings
        return True

    def _pack(self, demand: Counter[int]) -> list[Filling] | None:
        if sum(length * count for length, count in demand.items()) > self.size:
            return None
        if max(demand, default=0) > self.longest:
            return None
        orders = [self.supplies, self.supplies[::-1]] if len(self.supplies) > 1 else [self.supplies]
        for filler in _PACKERS:
            for order in orders:
                fillings = fill_all(demand, order, [], filler, self.deadline)
                if fillings is not None:
                    return fillings
        return None


def pieces_of(kinds: Counter[Kind]) -> Counter[int]:
    """Count the pieces of bracelets by length.

    Parameters
    ----------
    kinds
        The bracelets.

    Returns
    -------
    Counter
        Length [cells] to count.
    """
    pieces: Counter[int] = Counter()
    for kind, count in kinds.items():
        for length in kind.pieces:
            pieces[length] += count
    return pieces


def most_from_lot(kinds: Counter[Kind], supplies: Sequence[Supply]) -> int:
    """Bound how much whole bracelets can take from a lot.

    Parameters
    ----------
    kinds
        The bracelets wanted.
    supplies
        The stock of the lot.

    Returns
    -------
    int
        The largest sum of bracelets' totals within what single pieces can use of the stock [cells].
    """
    longest = max((supply.size for supply in supplies), default=0)
    fitting = Counter({kind: count for kind, count in kinds.items() if kind.longest <= longest})
    totals: Counter[int] = Counter()
    for kind, count in fitting.items():
        totals[kind.total] += count
    usable = usable_lengths(pieces_of(fitting), [supply.size for supply in supplies])
    room = sum(usable[supply.size] * supply.count for supply in supplies)
    return usable_lengths(totals, [room])[room]


def place_first(kinds: Counter[Kind], lots: Sequence[LotFilling]) -> Counter[Kind]:
    """Place bracelets that the shelf alone can serve, each into the smallest lot that takes it.

    Parameters
    ----------
    kinds
        The bracelets.
    lots
        The lots, smallest first; they are filled.

    Returns
    -------
    Counter
        The bracelets for which no place was found.
    """
    unplaced: Counter[Kind] = Counter()
    for kind in sorted(kinds, key=lambda kind: (-kind.longest, -kind.total, kind.pieces)):
        left = kinds[kind]
        for lot in lots:
            while left and lot.add(Counter({kind: 1})):
                left -= 1
        if left:
            unplaced[kind] = left
    return unplaced


def fill_lot(kinds: Counter[Kind], lot: LotFilling, choosers: Sequence[Filler]) -> Counter[Kind]:
    """Cut as much of the bracelets from a lot as can be found.

    Parameters
    ----------
    kinds
        The bracelets wanted.
    lot
        The lot; it is filled.
    choosers
        Ways to choose the bracelets by their totals; the one that uses most of the lot is kept.

    Returns
    -------
    Counter
        The bracelets that remain.

    Notes
    -----
    The totals are a knapsack problem on what is usable of the lot; a choice whose pieces then do
    not fit is tried again with a little less. What room is left is topped up one bracelet at a time.
    """
    fitting = Counter({kind: count for kind, count in kinds.items() if kind.longest <= lot.longest})
    room = most_from_lot(fitting + lot.chosen, lot.supplies) - lot.used
    best, best_taken = lot, Counter[Kind]()
    for chooser in choosers:
        trial = replace(lot)
        taken = _add_chosen(fitting, trial, room, chooser)
        taken += _top_up(fitting - taken, trial)
        if trial.used > best.used:
            best, best_taken = trial, taken
        if best.used - lot.used >= room:
            break
    lot.chosen, lot.fillings = best.chosen, best.fillings
    return kinds - best_taken


def _top_up(left: Counter[Kind], lot: LotFilling) -> Counter[Kind]:
    added: Counter[Kind] = Counter()
    failures = 0
    for kind in sorted(left, key=lambda kind: (-kind.total, kind.pieces)):
        while added[kind] < left[kind] and kind.total <= lot.size - lot.used:
            if not lot.add(Counter({kind: 1})):
                failures += 1
                break
            added[kind] += 1
        if failures == TOP_UPS:
            break
    return added


def _add_chosen(
    fitting: Counter[Kind], lot: LotFilling, room: int, chooser: Filler
) -> Counter[Kind]:
    if lot.add(fitting):
        return fitting
    shrink = 1
    for _ in range(TARGETS):
        chosen = _choose(fitting, room, chooser)
        if not chosen:
            break
        if lot.add(chosen):
            return chosen
        total = sum(kind.total * count for kind, count in chosen.items())
        room = total - max(1, total * shrink // 256)
        shrink *= 2
    return Counter()


def _choose(kinds: Counter[Kind], room: int, chooser: Filler) -> Counter[Kind]:
    by_total: dict[int, list[Kind]] = {}
    for kind in sorted(kinds, key=lambda kind: kind.pieces):
        if 0 < kind.total <= room:
            by_total.setdefault(kind.total, []).append(kind)
    totals = sorted(by_total)
    if not totals:
        return Counter()
    counts = [sum(kinds[kind] for kind in by_total[total]) for total in totals]
    chosen: Counter[Kind] = Counter()
    for index, wanted in chooser.fill(totals, counts, room):
        for kind in by_total[totals[index]]:
            taken = min(wanted, kinds[kind])
            if taken:
                chosen[kind] = taken
                wanted -= taken
    return chosen
