"""Cutting plans that keep every group's pieces of a shade in one dye lot."""

import time
from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from planner.cutting.bounds import Bounds, with_fewest
from planner.cutting.exact import fillings_of
from planner.cutting.filling import Supply
from planner.cutting.flow_model import Pool, PoolPlan, Wanted, cheapest_flow
from planner.cutting.highs import NEVER, Limits
from planner.cutting.lot_choice import Kind
from planner.cutting.lot_naming import Naming
from planner.cutting.lot_plans import FromLot, FromSupplier, LotPlan, plans
from planner.cutting.lot_problem import Group, Lot, LotResult, Offer
from planner.cutting.lot_task import LotTask
from planner.cutting.problem import CuttingError
from planner.cutting.solving import settled
from planner.cutting.task import Plan
from planner.cutting.tidy import tidied

SHARE_OF_A_STEP = 0.4
"""Share of the time left that each step beyond filling may take."""
MOST_ARCS = 20_000
"""Larger models over several lots are not tried."""


def solve_with_lots(
    groups: Sequence[Group],
    lots: Sequence[Lot],
    offers: Sequence[Offer],
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
    keep_length_mm: int = 300,
    stop: Callable[[], bool] = NEVER,
) -> LotResult:
    """Find what to buy and how to cut it, with every group's pieces from one dye lot.

    Parameters
    ----------
    groups
        What each bracelet, or each matched set, needs.
    lots
        The shelf.
    offers
        What can be bought; the new thread of each supplier is a lot of its own.
    time_limit_s
        After this long quick rules finish the plan [s].
    seed
        Seed of the searches.
    keep_length_mm
        What is left of an opened piece is waste when shorter than this [mm].
    stop
        Asked now and then; where it says True, the best plan so far is finished and returned.

    Returns
    -------
    LotResult
        The cheapest plan found; of the plans looked at, the one that uses most of the shelf among
        equally cheap ones, cut with the least waste.

    Raises
    ------
    CuttingError
        When keys stand twice or there is more than the limits allow; never for want of thread.

    Notes
    -----
    1. Lots of the shelf are filled with whole groups, smallest lot first and largest lot first; the
       rest is cut from new thread of one supplier, or of the mix that the bound asks for. Using no
       shelf at all is compared, so that a remnant never costs one more put-up.
    2. Where that misses the bound, the problem with all thread thrown together is solved: its
       bound holds with lots too, and its cost shows what keeping them apart costs.
    3. Then the purchase is settled by the full search, and at last groups are spread over lots and
       suppliers by an integer programme.
    """
    started = time.monotonic()
    limits = Limits(started + max(0.0, time_limit_s), seed, stop)
    task = LotTask.of(groups, lots, offers, limits, keep_length_mm)
    search = _Search.begin(task)
    search.run()
    plan = tidied_plan(task, search.best)
    proven = search.is_closed and all(task.fits_nowhere(kind) for kind in plan.unplaced)
    cost, bought, bound = search.without_lots()
    opened, unplaced = Naming(task, groups, offers).of(plan)
    return LotResult(
        status="optimal" if proven else "feasible",
        cost=task.money.amount(plan.cost),
        bought=_bought(task, plan, offers),
        lower_bound=task.money.amount(search.bounds.cost),
        bought_lower_bound=with_fewest(search.bounds, task.sold).bought,
        opened=opened,
        unplaced=unplaced,
        seconds=time.monotonic() - started,
        waste_mm=sum(one.left_mm for one in opened if one.left_mm < keep_length_mm),
        cost_without_lots=task.money.amount(cost),
        bought_without_lots=bought,
        lower_bound_without_lots=task.money.amount(bound),
    )


def _bought(task: LotTask, plan: LotPlan, offers: Sequence[Offer]) -> tuple[tuple[str, int], ...]:
    counts: Counter[int] = Counter()
    for part in plan.new:
        for item, count in zip(task.suppliers[part.supplier], part.plan.bought, strict=True):
            counts[item.number] += count
    return tuple((offer.key, counts[i]) for i, offer in enumerate(offers) if counts[i])


@dataclass
class _Search:
    """The best plan of a shade and what is proven, while the gap is closed."""

    task: LotTask
    best: LotPlan
    bounds: Bounds
    pooled: tuple[Plan, Bounds] | None = None

    @classmethod
    def begin(cls, task: LotTask) -> "_Search":
        """Run the quick ways until the bound is reached."""
        bounds = task.bounds(task.kinds)
        best: LotPlan | None = None
        for plan in plans(task):
            if best is None or plan.rank < best.rank:
                best = plan
            if best.cost == bounds.cost and not best.unplaced:
                break
        assert best is not None, "every shade has a way"
        if best.unplaced:
            bounds = task.bounds(task.kinds - best.unplaced)
        return cls(task, best, bounds)

    @property
    def is_closed(self) -> bool:
        return self.best.cost <= self.bounds.cost

    @property
    def placed(self) -> Counter[Kind]:
        return self.task.kinds - self.best.unplaced

    def run(self) -> None:
        """Take one step after the other until the gap is closed or the time is up."""
        if not self.is_closed:
            self._prove(self.task.bounds(self.placed, rounded=True))
        for step in (self._pool, self._settle_purchase, self._spread):
            if self.is_closed or self.task.limits.are_over:
                break
            step()
        if self.pooled is None and self._lots_may_cost():
            self._pool()

    def without_lots(self) -> tuple[int, int, int]:
        """Cost, put-ups bought and a bound were all thread one lot, as far as it is known."""
        cost, bound = self.best.cost, self.bounds.cost
        bought = sum(sum(part.plan.bought) for part in self.best.new)
        if self.pooled is not None:
            plan, bounds = self.pooled
            bound = bounds.cost
            if plan.cost < cost:
                cost, bought = plan.cost, sum(plan.bought)
        return cost, bought, min(bound, cost)

    def _lots_may_cost(self) -> bool:
        """Whether the plan costs more than length alone demands of all thread together."""
        if self.task.limits.are_over:
            return False
        pooled = self.task.pooled(self.placed, self.task.limits)
        return self.best.cost > pooled.length_bounds().cost

    def _limits(self) -> Limits:
        return self.task.limits.at_most(SHARE_OF_A_STEP * self.task.limits.left_s)

    def _prove(self, bounds: Bounds) -> None:
        if bounds.possible:
            self.bounds = self.bounds.combined(bounds)

    def _pool(self) -> None:
        """Throw all thread together: what is proven then holds with lots too."""
        try:
            self.pooled = settled(self.task.pooled(self.placed, self._limits()))
        except CuttingError:
            return
        self._prove(self.pooled[1])

    def _settle_purchase(self) -> None:
        """Search the purchase again with all means; the shelf is used as it is."""
        new = []
        for part in self.best.new:
            sold = self.task.suppliers[part.supplier]
            plan, _ = settled(self.task.part(part.kinds, (), sold, self._limits()))
            new.append(replace(part, plan=min(plan, part.plan, key=lambda plan: plan.rank)))
        self.best = replace(self.best, new=new)

    def _spread(self) -> None:
        """Spread groups over lots and suppliers anew, exactly."""
        task, placed = self.task, self.placed
        kinds = sorted(placed, key=lambda kind: kind.pieces)
        wanted = [Wanted(Counter(kind.pieces), placed[kind]) for kind in kinds]
        lots = [(lot, supplies) for lot, supplies in task.lots if supplies]
        pools = [Pool(_counts(supplies)) for _, supplies in lots]
        pools += [Pool({}, tuple(sold)) for sold in task.suppliers.values()]
        if len(pools) < 2 or not placed:
            return
        limits = task.limits.at_most(0.7 * task.limits.left_s)
        found = cheapest_flow(
            wanted, pools, self.bounds.cost, self.best.cost - 1, limits, most_arcs=MOST_ARCS
        )
        if found.pools:
            plan = self._plan_of(kinds, found.pools)
            self.best = min(self.best, plan, key=lambda plan: plan.rank)
        if found.verdict != "unknown":
            self.bounds = replace(self.bounds, cost=self.best.cost)

    def _plan_of(self, kinds: Sequence[Kind], pools: Sequence[PoolPlan]) -> LotPlan:
        lots = [(lot, supplies) for lot, supplies in self.task.lots if supplies]
        shelf = []
        for (lot, supplies), pool in zip(lots, pools, strict=False):
            made = _made(kinds, pool)
            part = self.task.part(made, supplies, ())
            shelf.append(FromLot(lot, made, list(fillings_of(part, pool))))
        new = []
        for (supplier, sold), pool in zip(
            self.task.suppliers.items(), pools[len(lots) :], strict=True
        ):
            made = _made(kinds, pool)
            part = self.task.part(made, (), sold)
            new.append(FromSupplier(supplier, made, part.plan(list(fillings_of(part, pool)))))
        return LotPlan(
            [part for part in shelf if part.kinds],
            [part for part in new if part.kinds],
            self.best.unplaced,
        )


def _made(kinds: Sequence[Kind], pool: PoolPlan) -> Counter[Kind]:
    return +Counter(dict(zip(kinds, pool.made, strict=True)))


def _counts(supplies: Sequence[Supply]) -> dict[int, int]:
    counts: Counter[int] = Counter()
    for supply in supplies:
        counts[supply.size] += supply.count
    return dict(counts)


def tidied_plan(task: LotTask, plan: LotPlan) -> LotPlan:
    """Waste less in each lot, with its groups as they are.

    Parameters
    ----------
    task
        The shade.
    plan
        A plan for it.

    Returns
    -------
    LotPlan
        The same groups from the same lots and suppliers.
    """
    supplies_of = {lot.key: supplies for lot, supplies in task.lots}
    shelf = []
    for part in plan.shelf:
        sub = task.part(part.kinds, supplies_of[part.lot.key], ())
        better, _ = tidied(sub, sub.plan(part.fillings))
        shelf.append(replace(part, fillings=better.fillings))
    new = []
    for bought in plan.new:
        sub = task.part(bought.kinds, (), task.suppliers[bought.supplier])
        better, _ = tidied(sub, bought.plan)
        new.append(replace(bought, plan=better))
    return replace(plan, shelf=shelf, new=new)
