"""What can be made from what lies on the shelf, without buying: as many, or as much, as possible."""

import time
from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from math import gcd

from planner.cutting.exact import fillings_of
from planner.cutting.filling import Filling, Supply
from planner.cutting.flow_model import Pool
from planner.cutting.from_scraps_model import (
    Place,
    ScrapsAnswer,
    ScrapsTask,
    best_by_arcs,
    best_by_length,
    worth,
)
from planner.cutting.from_scraps_problem import Makeable, ScrapsProblem, ScrapsResult
from planner.cutting.highs import NEVER, Limits
from planner.cutting.lot_choice import Kind, LotFilling, most_from_lot
from planner.cutting.lot_naming import Naming
from planner.cutting.lot_plans import FromLot, LotPlan
from planner.cutting.lot_problem import Group, Opened
from planner.cutting.lot_task import LotTask, supplies_of
from planner.cutting.lots import tidied_plan
from planner.cutting.problem import Money

LENGTH_SHARE = 0.3
"""Share of the time left for the bound by length alone."""


def make_from_scraps(
    problem: ScrapsProblem,
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
    keep_length_mm: int = 300,
    stop: Callable[[], bool] = NEVER,
) -> ScrapsResult:
    """Find what to make of the shelf.

    Parameters
    ----------
    problem
        What might be made, and the thread.
    time_limit_s
        After this long the best plan so far is returned [s].
    seed
        Seed of the searches.
    keep_length_mm
        What is left of an opened piece is waste when shorter than this [mm].
    stop
        Asked now and then; where it says True, the best plan so far is returned.

    Returns
    -------
    ScrapsResult
        ``"optimal"`` only where its value equals the proven bound.

    Raises
    ------
    CuttingError
        When keys of lots or stock pieces stand twice.

    Notes
    -----
    1. Bracelets are added one after the other while they fit, in several orders: by value for
       length, shortest first, dearest first.
    2. A bound by length: an integer programme over how many bracelets of each kind take each shade
       from which lot, where a lot holds only what whole bracelets could fill.
    3. Where they differ, the same programme with every stock piece's ways to be cut (arcs).
    """
    started = time.monotonic()
    limits = Limits(started + max(0.0, time_limit_s), seed, stop)
    scraps = _Scraps.of(problem, limits, keep_length_mm)
    best = max(scraps.greedy(), key=lambda plan: worth(scraps.task, plan.made))
    best, upper_bound = scraps.searched(best)
    value = worth(scraps.task, best.made)
    made = zip(problem.kinds, best.made, strict=True)
    return ScrapsResult(
        status="optimal" if value >= upper_bound else "feasible",
        value=scraps.money.amount(value),
        upper_bound=scraps.money.amount(max(value, upper_bound)),
        made=tuple((kind.key, count) for kind, count in made if count),
        opened=scraps.named(best),
        seconds=time.monotonic() - started,
    )


@dataclass
class _Made:
    """How many of each kind, and for every place the bracelets and how they are cut."""

    made: list[int]
    places: dict[Place, FromLot] = field(default_factory=dict)


@dataclass
class _Scraps:
    problem: ScrapsProblem
    task: ScrapsTask
    cells_mm: dict[str, int]
    supplies: dict[Place, tuple[Supply, ...]]
    money: Money
    limits: Limits
    keep_length_mm: int

    @classmethod
    def of(cls, problem: ScrapsProblem, limits: Limits, keep_length_mm: int) -> "_Scraps":
        shades = {shade: None for kind in problem.kinds for shade in _used(kind)}
        cells_mm = {shade: _cell_mm(problem.kinds, shade) for shade in shades}
        supplies = {
            (shade, index): supplies_of(lot, cells_mm[shade])
            for shade in shades
            for index, lot in enumerate(problem.shelf.get(shade, ()))
        }
        kinds = tuple(_in_cells(kind, cells_mm) for kind in problem.kinds)
        money = Money.of([kind.value for kind in problem.kinds])
        task = ScrapsTask(
            kinds,
            tuple(money.units(kind.value) for kind in problem.kinds),
            tuple(kind.most for kind in problem.kinds),
            {place: Pool(_counts(found)) for place, found in supplies.items() if found},
            {
                place: most_from_lot(_wanted(problem, kinds, place[0]), found)
                for place, found in supplies.items()
                if found
            },
        )
        return cls(problem, task, cells_mm, supplies, money, limits, keep_length_mm)

    def greedy(self) -> list[_Made]:
        """Add bracelets while they fit, in several orders of the kinds."""
        indexes = range(len(self.task.kinds))
        total = [sum(kind.total for kind in kinds.values()) for kinds in self.task.kinds]
        orders = [
            sorted(indexes, key=lambda i: (-self.task.values[i] / total[i], i)),
            sorted(indexes, key=lambda i: (total[i], i)),
            sorted(indexes, key=lambda i: (-self.task.values[i], total[i], i)),
        ]
        made: list[_Made] = []
        for order in orders:
            if made and self.limits.are_over:
                break
            made.append(self._added(order))
        return made

    def _added(self, order: Sequence[int]) -> _Made:
        lots = {
            place: LotFilling(self.supplies[place], self.limits.deadline)
            for place in self.task.pools
        }
        plan = _Made([0] * len(self.task.kinds))
        for index in order:
            while plan.made[index] < self.task.most[index] and not self.limits.are_over:
                if not self._add_one(index, lots):
                    break
                plan.made[index] += 1
        for place, filling in lots.items():
            if filling.chosen:
                lot = self.problem.shelf[place[0]][place[1]]
                plan.places[place] = FromLot(lot, filling.chosen, filling.fillings)
        return plan

    def _add_one(self, index: int, lots: dict[Place, LotFilling]) -> bool:
        """Add a bracelet: each shade from the lot with least room that takes it; all or nothing."""
        before: list[tuple[LotFilling, Counter[Kind], list[Filling]]] = []
        for shade, kind in self.task.kinds[index].items():
            fitting = self.task.places_for(index, shade)
            for place in sorted(fitting, key=lambda place: lots[place].size - lots[place].used):
                one = lots[place]
                was = one, one.chosen, one.fillings
                if one.add(Counter({kind: 1})):
                    before.append(was)
                    break
            else:
                for one, chosen, fillings in before:
                    one.chosen, one.fillings = chosen, fillings
                return False
        return True

    def searched(self, best: _Made) -> tuple[_Made, int]:
        """Bound the value, and search for more where the bound leaves room."""
        upper_bound = sum(
            value * most for value, most in zip(self.task.values, self.task.most, strict=True)
        )
        value = worth(self.task, best.made)
        if value < upper_bound and not self.limits.are_over:
            share = self.limits.at_most(LENGTH_SHARE * self.limits.left_s)
            upper_bound = best_by_length(self.task, share, upper_bound)
        if value >= upper_bound or self.limits.are_over:
            return best, upper_bound
        answer = best_by_arcs(self.task, self.limits, value + 1, upper_bound)
        if answer is None:
            return best, upper_bound
        if answer.made:
            best = self._made_of(answer)
        return best, max(answer.upper_bound, worth(self.task, best.made))

    def _made_of(self, answer: ScrapsAnswer) -> _Made:
        plan = _Made(list(answer.made))
        for place, pool in answer.plans.items():
            shade = place[0]
            chosen: Counter[Kind] = Counter()
            for index, count in enumerate(pool.made):
                if count:
                    chosen[self.task.kinds[index][shade]] += count
            if chosen:
                task = self._shade_task(shade)
                part = task.part(chosen, self.supplies[place], ())
                lot = self.problem.shelf[shade][place[1]]
                plan.places[place] = FromLot(lot, chosen, list(fillings_of(part, pool)))
        return plan

    def _shade_task(self, shade: str) -> LotTask:
        lots = [
            (lot, self.supplies[shade, index])
            for index, lot in enumerate(self.problem.shelf.get(shade, ()))
        ]
        cell_mm = self.cells_mm[shade]
        return LotTask(Counter(), lots, {}, cell_mm, self.money, self.limits, self.keep_length_mm)

    def named(self, plan: _Made) -> dict[str, tuple[Opened, ...]]:
        """Name the pieces: of every shade which bracelet each is for."""
        opened = {}
        for shade in self.cells_mm:
            groups = [
                Group(f"{kind.key}#{number}", kind.pieces_mm[shade])
                for kind, count in zip(self.problem.kinds, plan.made, strict=True)
                for number in range(1, count + 1)
                if kind.pieces_mm.get(shade)
            ]
            parts = [part for place, part in plan.places.items() if place[0] == shade]
            if groups:
                task = self._shade_task(shade)
                whole = tidied_plan(task, LotPlan(parts, [], Counter()))
                opened[shade] = Naming(task, groups, ()).of(whole)[0]
        return opened


def _used(kind: Makeable) -> list[str]:
    return [shade for shade, pieces in kind.pieces_mm.items() if pieces]


def _cell_mm(kinds: Sequence[Makeable], shade: str) -> int:
    return gcd(*(length for kind in kinds for length in kind.pieces_mm.get(shade, ()))) or 1


def _in_cells(kind: Makeable, cells_mm: dict[str, int]) -> dict[str, Kind]:
    return {
        shade: Kind(
            tuple(sorted((mm // cells_mm[shade] for mm in kind.pieces_mm[shade]), reverse=True))
        )
        for shade in _used(kind)
    }


def _wanted(problem: ScrapsProblem, kinds: Sequence[dict[str, Kind]], shade: str) -> Counter[Kind]:
    wanted: Counter[Kind] = Counter()
    for kind, in_cells in zip(problem.kinds, kinds, strict=True):
        if shade in in_cells and kind.most:
            wanted[in_cells[shade]] += kind.most
    return wanted


def _counts(supplies: Sequence[Supply]) -> dict[int, int]:
    counts: Counter[int] = Counter()
    for supply in supplies:
        if supply.size:
            counts[supply.size] += supply.count
    return dict(counts)


def scraps_words(result: ScrapsResult, *, of_money: bool, money: Callable[[Decimal], str]) -> str:
    """Say what can be made and what is proven of it.

    Parameters
    ----------
    result
        The answer.
    of_money
        Whether value is money.
    money
        Writes an amount.

    Returns
    -------
    str
        Such as “12 bracelets; more is impossible.”
    """
    count = result.count
    words = f"{count} bracelet{'' if count == 1 else 's'}"
    if of_money:
        words += f" for {money(result.value)}"
    if result.status == "optimal":
        return f"{words}; more is impossible."
    most = money(result.upper_bound) if of_money else str(int(result.upper_bound))
    return f"{words}; at most {most}; not settled in {max(1, round(result.seconds))} s."
