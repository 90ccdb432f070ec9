"""Plans for a shade: which groups come from which lot of the shelf, and which are bought where."""

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field

from planner.cutting.filling import Filling
from planner.cutting.knapsack import Filler, Fullest
from planner.cutting.lot_choice import (
    Kind,
    LotFilling,
    ShortestFirst,
    fill_lot,
    pieces_of,
    place_first,
)
from planner.cutting.lot_problem import Lot
from planner.cutting.lot_task import LotTask, bounds_of_need
from planner.cutting.solving import settled
from planner.cutting.supplies import bought_supplies
from planner.cutting.task import Plan

WORK_LIMIT = 10_000_000
"""Table cells the learning passes may fill for one purchase, so that many shades stay quick."""


@dataclass(frozen=True)
class FromLot:
    """What is cut from a lot of the shelf."""

    lot: Lot
    kinds: Counter[Kind]
    fillings: list[Filling]


@dataclass(frozen=True)
class FromSupplier:
    """What is cut from the new thread of one supplier."""

    supplier: str
    kinds: Counter[Kind]
    plan: Plan


@dataclass(frozen=True)
class LotPlan:
    """A plan for a shade; groups that are in no part have no thread."""

    shelf: list[FromLot]
    new: list[FromSupplier]
    unplaced: Counter[Kind]

    @property
    def cost(self) -> int:
        """What the new thread costs [smallest units of money]."""
        return sum(part.plan.cost for part in self.new)

    @property
    def rank(self) -> tuple[int, int, int, int]:
        """Most groups placed, then least money, then most of the shelf, then fewest to handle."""
        fillings = [filling for part in self.shelf for filling in part.fillings]
        used = sum(filling.used * filling.repeats for filling in fillings)
        opened = sum(filling.repeats for filling in fillings)
        opened += sum(part.plan.opened for part in self.new)
        return self.unplaced.total(), self.cost, -used, opened


@dataclass(frozen=True)
class _Way:
    """A way to use the shelf: which lots first, and how groups are chosen for one."""

    largest_lot_first: bool
    choosers: tuple[Filler, ...]


_WAYS = (
    _Way(False, (Fullest(), ShortestFirst())),
    _Way(True, (Fullest(), ShortestFirst())),
    _Way(False, ()),
)
_WAYS_WITHOUT_BUYING = (
    _Way(False, (Fullest(),)),
    _Way(True, (Fullest(),)),
    _Way(False, (ShortestFirst(),)),
    _Way(True, (ShortestFirst(),)),
)


@dataclass
class _Shelf:
    """How the shelf is used, and what it leaves to others."""

    lots: list[tuple[Lot, LotFilling]]
    to_buy: Counter[Kind] = field(default_factory=Counter)
    too_long: Counter[Kind] = field(default_factory=Counter)

    @property
    def parts(self) -> list[FromLot]:
        return [FromLot(lot, one.chosen, one.fillings) for lot, one in self.lots if one.chosen]


def plans(task: LotTask) -> Iterator[LotPlan]:
    """Compare ways to use the shelf and the suppliers, quickly.

    Parameters
    ----------
    task
        The shade.

    Yields
    ------
    LotPlan
        At least one; the most promising first.
    """
    if not task.suppliers:
        for way in _WAYS_WITHOUT_BUYING:
            shelf = _use_shelf(task, way, None)
            yield LotPlan(shelf.parts, [], shelf.too_long + shelf.to_buy)
        return
    best: tuple[int, int] | None = None
    for way in _WAYS:
        for least, supplier, shelf in _choices(task, way):
            if best is not None and (task.limits.are_over or (0, least) > best):
                continue
            plan = _bought(task, supplier, shelf)
            best = min(best or plan.rank[:2], plan.rank[:2])
            yield plan
        if len(task.suppliers) > 1 and not task.limits.are_over:
            yield from _mixed(task, way)


def _choices(task: LotTask, way: _Way) -> list[tuple[int, str, _Shelf]]:
    """Give the suppliers with the shelf as used beside them, by the least that they must cost."""
    shelves: dict[int, _Shelf] = {}
    choices = []
    for supplier, sold in task.suppliers.items():
        longest = task.longest_sold(supplier)
        if longest not in shelves:
            shelves[longest] = _use_shelf(task, way, longest)
        shelf = shelves[longest]
        need = sum(kind.total * count for kind, count in shelf.to_buy.items())
        bounds = bounds_of_need(need, pieces_of(shelf.to_buy), sold)
        choices.append((bounds.cost, supplier, shelf))
    return sorted(choices, key=lambda choice: choice[0])


def _use_shelf(task: LotTask, way: _Way, longest_sold: int | None) -> _Shelf:
    lots = [(lot, LotFilling(supplies, task.limits.deadline)) for lot, supplies in task.lots]
    smallest_first = sorted(lots, key=lambda pair: pair[1].size)
    left = task.kinds
    too_long: Counter[Kind] = Counter()
    if longest_sold is not None:
        only_here = Counter({kind: left[kind] for kind in left if kind.longest > longest_sold})
        too_long = place_first(only_here, [filling for _, filling in smallest_first])
        left = left - only_here
    for _, filling in smallest_first[::-1] if way.largest_lot_first else smallest_first:
        if task.limits.are_over:
            break
        left = fill_lot(left, filling, way.choosers)
    return _Shelf(lots, left, too_long)


def _bought(task: LotTask, supplier: str, shelf: _Shelf) -> LotPlan:
    """Cut from new thread what the shelf does not serve; what is too long, from whoever has it."""
    new = [FromSupplier(supplier, shelf.to_buy, quick_plan(task, supplier, shelf.to_buy))]
    unplaced: Counter[Kind] = Counter()
    longer = sorted(
        (other for other in task.suppliers if other != supplier),
        key=lambda other: min(item.price_each / item.size for item in task.suppliers[other]),
    )
    elsewhere: dict[str, Counter[Kind]] = {}
    for kind, count in shelf.too_long.items():
        other = next((one for one in longer if kind.longest <= task.longest_sold(one)), None)
        if other is None:
            unplaced[kind] = count
        else:
            elsewhere.setdefault(other, Counter())[kind] = count
    new += [
        FromSupplier(one, kinds, quick_plan(task, one, kinds)) for one, kinds in elsewhere.items()
    ]
    return LotPlan(shelf.parts, [part for part in new if part.kinds], unplaced)


def quick_plan(task: LotTask, supplier: str, kinds: Counter[Kind]) -> Plan:
    """Cut groups from new thread of one supplier, by filling alone.

    Parameters
    ----------
    task
        The shade.
    supplier
        Who sells it.
    kinds
        The groups; each fits into a put-up of the supplier.

    Returns
    -------
    Plan
        Put-ups count in the order of the supplier's.
    """
    part = task.part(kinds, (), task.suppliers[supplier])
    return settled(part, work_limit=WORK_LIMIT, thorough=False)[0]


def _mixed(task: LotTask, way: _Way) -> Iterator[LotPlan]:
    """Where the cheapest purchase is a mix: a fixed number from the others, the rest from one."""
    longest = max(task.longest_sold(supplier) for supplier in task.suppliers)
    shelf = _use_shelf(task, way, longest)
    need = sum(kind.total * count for kind, count in shelf.to_buy.items())
    bounds = bounds_of_need(need, pieces_of(shelf.to_buy), task.sold)
    counts = {
        item.number: count for item, count in zip(task.sold, bounds.purchase, strict=False) if count
    }
    buying = [s for s, sold in task.suppliers.items() if any(x.number in counts for x in sold)]
    if len(buying) < 2 or shelf.too_long:
        return
    for main in buying:
        left, new = shelf.to_buy, []
        for other in buying:
            if other != main:
                sold = task.suppliers[other]
                supplies = bought_supplies(sold, [counts.get(x.number, 0) for x in sold])
                filling = LotFilling(tuple(supplies), task.limits.deadline)
                left = fill_lot(left, filling, way.choosers or (Fullest(),))
                plan = task.part(filling.chosen, (), sold).plan(filling.fillings)
                new.append(FromSupplier(other, filling.chosen, plan))
        if all(kind.longest <= task.longest_sold(main) for kind in left):
            new.append(FromSupplier(main, left, quick_plan(task, main, left)))
            yield LotPlan(shelf.parts, [part for part in new if part.kinds], Counter())
