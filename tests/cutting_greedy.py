"""Plans of references, and two greedy rules written apart from the project's own solver."""

from bisect import bisect_left, insort
from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from decimal import Decimal

from planner.cutting import Problem, PutUp


@dataclass(frozen=True)
class ReferenceCut:
    """A stock piece that is opened; `put_up` is None on the shelf, else which one is bought."""

    length_mm: int
    put_up: int | None
    pieces_mm: tuple[int, ...]

    @property
    def left_mm(self) -> int:
        return self.length_mm - sum(self.pieces_mm)


@dataclass(frozen=True)
class ReferencePlan:
    """What a reference found, and whether it says that nothing costs less."""

    cost: Decimal
    proven: bool
    cuts: tuple[ReferenceCut, ...]

    @property
    def bought(self) -> int:
        return sum(cut.put_up is not None for cut in self.cuts)


@dataclass
class Bin:
    length_mm: int
    put_up: int | None
    free_mm: int
    pieces_mm: list[int] = field(default_factory=list)

    def take(self, length_mm: int) -> None:
        self.free_mm -= length_mm
        self.pieces_mm.append(length_mm)


def greedy_plan(problem: Problem, *, best_fit: bool) -> ReferencePlan | None:
    """First-fit or best-fit decreasing: longest piece first, remnants shortest first, then new.

    First fit takes the first stock piece with room, best fit the one with the least room that is
    enough. Of several put-ups each is tried alone and the cheapest plan is kept. None where a piece
    fits nowhere.
    """
    rule = _best_fit if best_fit else _first_fit
    choices: list[int | None] = [*range(len(problem.buy))] or [None]
    plans = [_plan(problem, rule, put_up) for put_up in choices]
    return min((plan for plan in plans if plan), key=lambda plan: plan.cost, default=None)


def cost_of(problem: Problem, opened: Counter[int]) -> Decimal:
    """What the packs cost that hold so many of each put-up."""
    return sum(
        (
            packs_for(problem.buy[index], count) * problem.buy[index].price
            for index, count in opened.items()
        ),
        Decimal(0),
    )


def packs_for(put_up: PutUp, count: int) -> int:
    """The fewest packs with so many put-ups: at least the minimum, in steps."""
    if not count:
        return 0
    packs = max(-(-count // put_up.pack_size), put_up.minimum_packs)
    return -(-packs // put_up.pack_step) * put_up.pack_step


Rule = Callable[[list[int], list[Bin], Callable[[], Bin | None]], bool]


def _plan(problem: Problem, rule: Rule, put_up: int | None) -> ReferencePlan | None:
    lengths = sorted(stock.length_mm for stock in problem.stock for _ in range(stock.count))
    bins = [Bin(length, None, length) for length in lengths]

    def buy() -> Bin | None:
        if put_up is None:
            return None
        reckoned_mm = problem.buy[put_up].reckoned_mm
        return Bin(reckoned_mm, put_up, reckoned_mm)

    if not rule(_longest_first(problem), bins, buy):
        return None
    cuts = tuple(
        ReferenceCut(one.length_mm, one.put_up, tuple(one.pieces_mm))
        for one in bins
        if one.pieces_mm
    )
    bought = Counter(cut.put_up for cut in cuts if cut.put_up is not None)
    return ReferencePlan(cost_of(problem, bought), False, cuts)


def _longest_first(problem: Problem) -> list[int]:
    return sorted((d.length_mm for d in problem.demand for _ in range(d.count)), reverse=True)


def _first_fit(pieces: list[int], bins: list[Bin], buy: Callable[[], Bin | None]) -> bool:
    place, before = 0, None
    for length in pieces:
        if length != before:  # what had no room for this length still has none for the next alike
            place, before = 0, length
        while place < len(bins) and bins[place].free_mm < length:
            place += 1
        if place == len(bins) and not _open(bins, buy, length):
            return False
        bins[place].take(length)
    return True


def _best_fit(pieces: list[int], bins: list[Bin], buy: Callable[[], Bin | None]) -> bool:
    room = sorted((one.free_mm, number) for number, one in enumerate(bins))
    for length in pieces:
        place = bisect_left(room, (length, 0))
        if place < len(room):
            _, number = room.pop(place)
        elif _open(bins, buy, length):
            number = len(bins) - 1
        else:
            return False
        bins[number].take(length)
        insort(room, (bins[number].free_mm, number))
    return True


def _open(bins: list[Bin], buy: Callable[[], Bin | None], length_mm: int) -> bool:
    new = buy()
    if new is None or new.free_mm < length_mm:
        return False
    bins.append(new)
    return True


def faults(problem: Problem, cuts: tuple[ReferenceCut, ...], cost: Decimal) -> Iterator[str]:
    """Say what is wrong with a plan: pieces, stock, lengths or the sum."""
    wanted = Counter({d.length_mm: 0 for d in problem.demand})
    for piece in problem.demand:
        wanted[piece.length_mm] += piece.count
    if Counter(length for cut in cuts for length in cut.pieces_mm) != +wanted:
        yield "cuts other pieces than are wanted"
    shelf: Counter[int] = Counter()
    for stock in problem.stock:
        shelf[stock.length_mm] += stock.count
    if Counter(cut.length_mm for cut in cuts if cut.put_up is None) - shelf:
        yield "cuts stock that is not on the shelf"
    new = [cut for cut in cuts if cut.put_up is not None]
    if any(cut.length_mm != problem.buy[cut.put_up or 0].reckoned_mm for cut in new):
        yield "cuts a put-up of another length"
    if any(cut.left_mm < 0 for cut in cuts):
        yield "cuts more from a stock piece than it holds"
    if cost != cost_of(problem, Counter(cut.put_up or 0 for cut in new)):
        yield "costs something else than its put-ups"
