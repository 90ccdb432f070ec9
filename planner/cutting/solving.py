"""Cutting plans by filling, next to a proven bound."""

import time
from collections.abc import Iterator, Sequence
from dataclasses import replace
from decimal import Decimal

from planner.cutting.bounds import Bounds
from planner.cutting.filling import Filling, SoldAs, Supply, fill_all, hold_long_pieces
from planner.cutting.knapsack import CorrectedValues, Filler, Fullest, LongestFirst, MostValuable
from planner.cutting.problem import Cut, CuttingError, Problem, Result
from planner.cutting.tail import with_cheaper_tail
from planner.cutting.task import Plan, Task

POWERS = (1.03, 1.1, 1.3)
WORK_LIMIT = 500_000_000
"""Table cells the learning passes may fill, about a second: work, not time, so that plans repeat."""
LEARNING_PASSES = 1_000


def solve(
    problem: Problem,
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
    keep_length_mm: int = 300,
    work_limit: int = WORK_LIMIT,
) -> Result:
    """Find what to buy and how to cut it: least money first, then least waste.

    Parameters
    ----------
    problem
        The pieces, the shelf and the put-ups.
    time_limit_s
        After this long the best plan so far is finished and returned [s].
    seed
        Seed of the passes that use random weights.
    keep_length_mm
        What is left of a stock piece is waste when shorter than this [mm].
    work_limit
        Table cells that the passes with random weights may fill.

    Returns
    -------
    Result
        ``"optimal"`` only when the cost equals the proven bound. The same problem, seed and
        software give the same plan, unless the time limit cuts the search short.

    Raises
    ------
    CuttingError
        When a piece fits into nothing, when the stock is short and nothing can be bought, or when
        no plan was found.

    Notes
    -----
    One stock piece is filled at a time, shortest of the shelf first, then new ones. The first pass
    fills each as full as can be; where it misses the bound, passes with other values of a piece and
    other orders follow, then passes that learn from their own waste.
    """
    started = time.monotonic()
    task = Task.of(problem, started + max(0.0, time_limit_s), seed, keep_length_mm)
    task.check_lengths()
    best, bounds = _search(task, work_limit)
    return Result(
        status="optimal" if best.cost == bounds.cost else "feasible",
        cost=task.money.amount(best.cost),
        bought=best.bought,
        lower_bound=task.money.amount(bounds.cost),
        bought_lower_bound=bounds.bought,
        cuts=tuple(_cuts(best.fillings, task.cell_mm)),
        seconds=time.monotonic() - started,
    )


def lower_bounds(problem: Problem) -> tuple[Decimal, int]:
    """Prove what no plan can undercut.

    Parameters
    ----------
    problem
        The pieces, the shelf and the put-ups.

    Returns
    -------
    tuple of (Decimal, int)
        The least cost and the fewest put-ups to buy.
    """
    task = Task.of(problem, time.monotonic(), 0, 0)
    if not task.demand:
        return task.money.amount(0), 0
    bounds = task.length_bounds().combined(task.rounded_bounds())
    return task.money.amount(bounds.cost), bounds.bought


def _search(task: Task, work_limit: int) -> tuple[Plan, Bounds]:
    """Run one pass after the other until the bound is reached."""
    bounds = task.length_bounds()
    best: Plan | None = None
    for number, fillings in enumerate(_passes(task, bounds, work_limit)):
        if fillings is not None:
            plan = task.plan(fillings)
            if best is None or plan.rank < best.rank:
                best = with_cheaper_tail(task, plan)
        if number == 0 and (best is None or best.cost > bounds.cost):
            bounds = bounds.combined(task.rounded_bounds())
        if not bounds.possible or (best is not None and best.cost == bounds.cost):
            break
    if best is None:
        raise CuttingError(_no_plan(bounds))
    return best, bounds


def _no_plan(bounds: Bounds) -> str:
    if not bounds.possible:
        return "The stock is too short for the pieces, and nothing that helps can be bought."
    return (
        "No way was found to cut all pieces from the stock, and nothing that helps can be bought."
    )


def _passes(task: Task, bounds: Bounds, work_limit: int) -> Iterator[list[Filling] | None]:
    """Run the passes, most promising first; the learning passes come last."""
    shelf = hold_long_pieces(task.demand, task.shelf, _longest_sold(task))
    if shelf is None:
        return
    routes = list(_routes(task, shelf, bounds))
    alone: list[_Route] = [(shelf, [item]) for item in task.sold] if len(task.sold) > 1 else []
    routes += [route for route in alone if _may_do_alone(task, route[1][0], bounds)]
    longest = max(task.demand, default=1)
    fillers: list[Filler] = [Fullest(), LongestFirst()]
    fillers += [MostValuable(longest, power) for power in POWERS]
    for filler in fillers:
        # The longest-first rule is quick, and no plan may be dearer than it is with any put-up.
        for supplies, sold in routes + alone if isinstance(filler, LongestFirst) else routes:
            yield _run(task, supplies, sold, filler)
            if time.monotonic() > task.deadline and filler is not fillers[0]:
                return
    yield from _learning_passes(task, routes, work_limit)


def _longest_sold(task: Task) -> int:
    # Where nothing can be bought every piece must come from the shelf, and none is special.
    return max((item.size for item in task.sold), default=max(task.demand, default=0))


_Route = tuple[list[Supply], list[SoldAs]]


def _routes(task: Task, shelf: list[Supply], bounds: Bounds) -> Iterator[_Route]:
    """Give the orders in which stock is opened, with the put-ups to buy when it runs out."""
    target = [
        Supply(item.length_mm, item.size, count, index)
        for index, (item, count) in enumerate(zip(task.sold, bounds.purchase, strict=True))
        if count
    ]
    several = len(task.sold) > 1
    orders = [shelf, shelf[::-1]] if len(shelf) > 1 else [shelf]
    for order in orders:
        yield order + target, task.sold
        if several:
            yield order, task.sold
    if shelf and target:
        yield target + shelf, task.sold


def _may_do_alone(task: Task, item: SoldAs, bounds: Bounds) -> bool:
    """Whether buying this put-up only can come near the bound: a fifth above it and one more."""
    need = sum(length * count for length, count in task.demand.items())
    need -= sum(supply.size * supply.count for supply in task.shelf)
    return item.size > 0 and (need / item.size - 1) * item.price <= 1.2 * bounds.cost


def _run(
    task: Task, supplies: list[Supply], sold: list[SoldAs], filler: Filler
) -> list[Filling] | None:
    fillings = fill_all(task.demand, supplies, sold, filler, task.deadline)
    if fillings is None or sold is task.sold:
        return fillings
    index = task.sold.index(sold[0])
    return [item if item.put_up is None else replace(item, put_up=index) for item in fillings]


def _learning_passes(
    task: Task, routes: Sequence[_Route], work_limit: int
) -> Iterator[list[Filling] | None]:
    filler = CorrectedValues(task.demand, task.seed)
    for number in range(LEARNING_PASSES):
        if filler.work > work_limit or time.monotonic() > task.deadline:
            return
        filler.start_pass()
        supplies, sold = routes[number % len(routes)]
        yield _run(task, supplies, sold, filler)


def _cuts(fillings: list[Filling], cell_mm: int) -> Iterator[Cut]:
    for filling in sorted(fillings, key=lambda item: item.put_up is not None):
        pieces = tuple(
            length * cell_mm
            for length, count in sorted(filling.pieces, reverse=True)
            for _ in range(count)
        )
        new = filling.put_up is not None
        cut = Cut(filling.length_mm, new, pieces, filling.length_mm - sum(pieces))
        for _ in range(filling.repeats):
            yield cut
