"""The last resort where filling misses its bound: the linear bound, then an exact search."""

from collections import Counter
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, field, replace
from math import gcd

from planner.cutting.bounds import Bounds
from planner.cutting.filling import Filling
from planner.cutting.flow_graph import counted
from planner.cutting.flow_model import Pool, PoolPlan, Wanted, cheapest_flow
from planner.cutting.linear import Column, linear_bound
from planner.cutting.pattern_model import (
    MOST_PATTERNS,
    QUICK_PATTERNS,
    PatternPlan,
    cheapest_by_patterns,
)
from planner.cutting.task import Plan, Task

LINEAR_SHARE = 0.4
"""Share of the time left that the linear bound may take."""
SEARCH_SHARE = 0.3
"""The same for every search; HiGHS looks at the clock seldom, so a search may take longer."""
MOST_ARCS = 12_000
"""Of larger models HiGHS runs on for seconds after its time is up (measured)."""
PATTERN_SHARES = (0.003, 0.01, 0.03, 0.1, 0.3, 1.0)


def proven_or_cheaper(
    task: Task,
    best: Plan | None,
    bounds: Bounds,
    learn: Callable[[Plan, Bounds], Plan],
) -> tuple[Plan | None, Bounds]:
    """Close the gap between a plan and its bound from both sides.

    Parameters
    ----------
    task
        The problem.
    best
        The plan so far; None where none was found.
    bounds
        What is proven so far.
    learn
        Looks for a cheaper plan by longer filling: tried between the quick searches and the long
        ones, since each finds what the other does not (measured).

    Returns
    -------
    tuple of (Plan or None, Bounds)
        A plan that is no dearer, and bounds that are no weaker.
    """
    gap = _Gap(task, best, bounds)
    gap.bound_linearly()
    gap.search_patterns(QUICK_PATTERNS)
    if gap.best is not None and not gap.is_closed:
        gap.best = learn(gap.best, gap.bounds)
    gap.search_patterns(MOST_PATTERNS)
    if not gap.is_closed:
        gap.search_arcs()
    return gap.best, gap.bounds


@dataclass
class _Gap:
    """What is known of a problem, while it is closed from both sides."""

    task: Task
    best: Plan | None
    bounds: Bounds
    weights: dict[int, int] = field(default_factory=dict)

    @property
    def is_closed(self) -> bool:
        return self.best is not None and self.best.cost <= self.bounds.cost

    @property
    def most(self) -> int:
        """The dearest cost of a better plan."""
        if self.best is None:
            pieces = sum(self.task.demand.values())
            return sum(item.cost_of(item.bought_for(pieces)) for item in self.task.sold)
        unit = gcd(*(item.bundle_price for item in self.task.sold)) or 1
        return (self.best.cost - 1) // unit * unit

    def offer(self, fillings: Iterable[Filling]) -> None:
        plan = self.task.plan(list(fillings))
        if self.best is None or plan.rank < self.best.rank:
            self.best = plan

    def bound_linearly(self) -> None:
        task = self.task
        found = linear_bound(
            task.demand,
            task.shelf_counts(),
            task.sold,
            task.limits.at_most(LINEAR_SHARE * task.limits.left_s),
            enough=self.best.cost if self.best else None,
            start=list(_columns(task, self.best)) if self.best else [],
        )
        if found is not None:
            self.bounds = self.bounds.combined(found.bounds)
            self.weights = found.weights if found.value is not None else {}

    def search_patterns(self, most_patterns: int) -> None:
        """First the patterns that spend little of the gap, at last all that a better plan can use."""
        for share in PATTERN_SHARES:
            if self.best is None or self.is_closed or not self.weights:
                return
            found = cheapest_by_patterns(
                self.task.demand,
                self.task.shelf_counts(),
                self.task.sold,
                self.weights,
                self.most,
                self.task.limits.at_most(SEARCH_SHARE * self.task.limits.left_s),
                share=share,
                most_patterns=most_patterns,
            )
            if found is None:
                return
            if found.opened:
                self.offer(_trimmed(self.task, found))
            elif found.verdict == "impossible":
                self.bounds = replace(self.bounds, cost=self.best.cost)
            if found.verdict == "optimal" and share >= 1 and self.best is not None:
                self.bounds = replace(self.bounds, cost=self.best.cost)

    def search_arcs(self) -> None:
        wanted = [Wanted({length: 1}, count) for length, count in self.task.demand.items()]
        pool = Pool(self.task.shelf_counts(), tuple(self.task.sold))
        limits = self.task.limits.at_most(SEARCH_SHARE * self.task.limits.left_s)
        found = cheapest_flow(
            wanted, [pool], self.bounds.cost, self.most, limits, most_arcs=MOST_ARCS
        )
        if found.pools:
            self.offer(fillings_of(self.task, found.pools[0]))
        if found.verdict == "impossible" and self.best is None:
            self.bounds = replace(self.bounds, possible=False)
        elif found.verdict != "unknown" and self.best is not None:
            self.bounds = replace(self.bounds, cost=self.best.cost)


def _columns(task: Task, plan: Plan) -> Iterator[Column]:
    for filling in plan.fillings:
        yield Column(filling.length_mm // task.cell_mm, filling.put_up, filling.pieces)


def _trimmed(task: Task, plan: PatternPlan) -> Iterator[Filling]:
    """Leave out what the patterns hold beyond the demand."""
    left = dict(task.demand)
    single = [column for column, count in plan.opened for _ in range(count)]
    from_shelf = [column for column in single if column.put_up is None]
    bought = [(column, column.put_up) for column in single if column.put_up is not None]
    pool = PoolPlan(
        (),
        tuple((column.size, tuple(_taken(left, column))) for column in from_shelf),
        tuple((put_up, tuple(_taken(left, column))) for column, put_up in bought),
    )
    return fillings_of(task, pool)


def _taken(left: dict[int, int], column: Column) -> Iterator[int]:
    for length, count in column.pieces:
        taken = min(count, left[length])
        left[length] -= taken
        yield from [length] * taken


def fillings_of(task: Task, pool: PoolPlan) -> Iterator[Filling]:
    """Turn paths into fillings.

    Parameters
    ----------
    task
        The problem of the pool alone.
    pool
        The paths.

    Yields
    ------
    Filling
        Of shelf pieces of one size in cells, each is opened once.
    """
    counts: Counter[Filling] = Counter()
    lengths_mm = {
        size: [s.length_mm for s in task.shelf if s.size == size for _ in range(s.count)]
        for size in {supply.size for supply in task.shelf}
    }
    for size, pieces in pool.from_shelf:
        counts[Filling(lengths_mm[size].pop(0), None, counted(pieces), 1)] += 1
    for index, pieces in pool.bought:
        counts[Filling(task.sold[index].length_mm, index, counted(pieces), 1)] += 1
    for filling, repeats in counts.items():
        if filling.pieces:
            yield replace(filling, repeats=repeats)
