"""Cutting plans: quick filling first, then bounds and searches until the plan is proven."""

import time
from collections import deque
from collections.abc import Callable, Iterator
from dataclasses import replace
from decimal import Decimal
from functools import partial

from planner.cutting.bounds import Bounds, with_fewest
from planner.cutting.exact import proven_or_cheaper
from planner.cutting.filling import Filling, Supply, fill_all, hold_long_pieces
from planner.cutting.highs import NEVER, Limits
from planner.cutting.knapsack import CorrectedValues, Filler, Fullest, LongestFirst, MostValuable
from planner.cutting.packs import SoldAs
from planner.cutting.problem import Cut, CuttingError, Problem, Result
from planner.cutting.purchase import purchases_between
from planner.cutting.supplies import bought_supplies
from planner.cutting.tail import with_cheaper_tail
from planner.cutting.task import Plan, Task
from planner.cutting.tidy import tidied

POWERS = (1.03, 1.1, 1.3)
WORK_LIMIT = 1_000_000_000
"""Table cells the learning passes may fill, about two seconds: work, not time, so that plans repeat."""
FIRST_WORK_LIMIT = 50_000_000
"""The same before the linear bound and the exact search are tried."""
SEARCH_SHARE = 0.9
"""Share of the time for the search; the rest is for what runs on a little, and for tidying."""
LEARNING_PASSES = 1_000
MOST_PURCHASES = 40


def solve(
    problem: Problem,
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
    keep_length_mm: int = 300,
    work_limit: int = WORK_LIMIT,
    stop: Callable[[], bool] = NEVER,
) -> Result:
    """Find what to buy and how to cut it.

    In this order: least money; least waste below the keep length; fewest pieces on the shelf
    afterwards, so that leftovers are few and long; fewest stock pieces to handle.

    Parameters
    ----------
    problem
        The pieces, the shelf and the put-ups.
    time_limit_s
        After this long the best plan so far is finished and returned [s].
    seed
        Seed of the searches.
    keep_length_mm
        What is left of a stock piece is waste when shorter than this [mm].
    work_limit
        Table cells that the passes with random weights may fill.
    stop
        Asked now and then; where it says True, the best plan so far is finished and returned.

    Returns
    -------
    Result
        ``"optimal"`` only when the cost equals the proven bound. The same problem, seed and
        software give the same plan, unless the time limit or a stop cuts the search short.

    Raises
    ------
    CuttingError
        When a piece fits into nothing, when the stock is short and nothing can be bought, or when
        no plan was found.

    Notes
    -----
    1. One stock piece is filled at a time, shortest of the shelf first, then new ones: as full as
       can be, longest first, for the greatest value.
    2. Where that misses the bound on total length, purchases in the gap are tried, then passes
       that learn from their own waste.
    3. Then the linear bound by column generation, and an exact search (an integer programme over
       arcs, or over the patterns found) for a plan that costs less.
    4. At last, with the cost settled, waste, leftovers and stock pieces opened are brought down.
    """
    started = time.monotonic()
    limits = Limits(started + max(0.0, time_limit_s), seed, stop)
    task = Task.of(problem, limits.at_most(SEARCH_SHARE * time_limit_s), keep_length_mm)
    task.check_lengths()
    best, bounds = settled(task, work_limit=work_limit)
    best, tidiest = tidied(replace(task, limits=limits), best)
    purchase = [0] * len(problem.buy)
    for item, count in zip(task.sold, best.bought, strict=True):
        purchase[item.number] = count
    return Result(
        status="optimal" if best.cost == bounds.cost else "feasible",
        cost=task.money.amount(best.cost),
        bought=sum(purchase),
        lower_bound=task.money.amount(bounds.cost),
        bought_lower_bound=bounds.bought,
        cuts=tuple(_cuts(task, best.fillings, problem)),
        seconds=time.monotonic() - started,
        purchase=tuple(purchase),
        waste_mm=best.waste_mm,
        leftovers=best.leftovers,
        tidiest=tidiest,
    )


def lower_bounds(problem: Problem) -> tuple[Decimal, int]:
    """Prove quickly what no plan can undercut.

    Parameters
    ----------
    problem
        The pieces, the shelf and the put-ups.

    Returns
    -------
    tuple of (Decimal, int)
        The least cost and the fewest put-ups to buy, by total length and rounded weights.
    """
    task = Task.of(problem, Limits(time.monotonic()), 0)
    if not task.demand:
        return task.money.amount(0), 0
    bounds = task.length_bounds().combined(task.rounded_bounds())
    return task.money.amount(bounds.cost), bounds.bought


def settled(
    task: Task, *, work_limit: int = WORK_LIMIT, thorough: bool = True
) -> tuple[Plan, Bounds]:
    """Run one pass after the other until the bound is reached.

    Parameters
    ----------
    task
        The problem.
    work_limit
        Table cells that the passes with random weights may fill.
    thorough
        Whether, where filling misses the bound, the linear bound and the exact search follow.

    Returns
    -------
    tuple of (Plan, Bounds)
        The best plan found and what is proven.

    Raises
    ------
    CuttingError
        When no plan exists, or none was found.
    """
    bounds = task.length_bounds()
    best: Plan | None = None
    for number, fillings in enumerate(_passes(task, bounds, min(work_limit, FIRST_WORK_LIMIT))):
        best = _better(task, best, fillings)
        if number == 0 and (best is None or best.cost > bounds.cost):
            bounds = bounds.combined(task.rounded_bounds())
        if not bounds.possible or (best is not None and best.cost == bounds.cost):
            break
    if thorough and bounds.possible and (best is None or best.cost > bounds.cost):
        learn = partial(_learned, task, work_limit=work_limit)
        best, bounds = proven_or_cheaper(task, best, bounds, learn)
    if best is None:
        raise CuttingError(_no_plan(bounds))
    return best, with_fewest(bounds, task.sold)


def _learned(task: Task, best: Plan, bounds: Bounds, *, work_limit: int) -> Plan:
    for fillings in _learning_passes(task, bounds, work_limit, task.limits.seed + 1):
        best = _better(task, best, fillings) or best
        if best.cost == bounds.cost:
            break
    return best


def _better(task: Task, best: Plan | None, fillings: list[Filling] | None) -> Plan | None:
    if fillings is None:
        return best
    plan = task.plan(fillings)
    return with_cheaper_tail(task, plan) if best is None or plan.rank < best.rank else best


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
    routes = _all_routes(task, shelf, bounds)
    alone: list[_Route] = [(shelf, [item]) for item in task.sold] if len(task.sold) > 1 else []
    longest = max(task.demand, default=1)
    fillers: list[Filler] = [Fullest(), LongestFirst()]
    fillers += [MostValuable(longest, power) for power in POWERS]
    for filler in fillers:
        # The longest-first rule is quick, and no plan may be dearer than it is with any put-up.
        for supplies, sold in routes + alone if isinstance(filler, LongestFirst) else routes:
            yield _run(task, supplies, sold, filler)
            if task.limits.are_over and filler is not fillers[0]:
                return
    yield from _purchased_passes(task, shelf, bounds)
    yield from _learning_passes(task, bounds, work_limit, task.limits.seed)


def _purchased_passes(
    task: Task, shelf: list[Supply], bounds: Bounds
) -> Iterator[list[Filling] | None]:
    """Where put-ups differ or come in packs: try the cheapest purchases one by one."""
    if len(task.sold) == 1 and task.sold[0].is_single:
        return
    sizes = [item.size for item in task.sold]
    need = task.need - sum(supply.size * supply.count for supply in task.shelf)
    dearest = 2 * bounds.cost + max((item.bundle_price for item in task.sold), default=0)
    for counts in purchases_between(
        task.sold, sizes, max(0, need), bounds.cost, dearest, MOST_PURCHASES
    ):
        supplies = [*shelf, *bought_supplies(task.sold, counts)]
        for filler in (Fullest(), LongestFirst()):
            if task.limits.are_over:
                return
            yield fill_all(task.demand, supplies, [], filler, task.deadline)


def _longest_sold(task: Task) -> int:
    # Where nothing can be bought every piece must come from the shelf, and none is special.
    return max((item.size for item in task.sold), default=max(task.demand, default=0))


_Route = tuple[list[Supply], list[SoldAs]]


def _all_routes(task: Task, shelf: list[Supply], bounds: Bounds) -> list[_Route]:
    routes = list(_routes(task, shelf, bounds))
    alone = [item for item in task.sold if _may_do_alone(task, item, bounds)]
    return routes + ([(shelf, [item]) for item in alone] if len(task.sold) > 1 else [])


def _routes(task: Task, shelf: list[Supply], bounds: Bounds) -> Iterator[_Route]:
    """Give the orders in which stock is opened, with the put-ups to buy when it runs out."""
    target = bought_supplies(task.sold, bounds.purchase)
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
    need = task.need - sum(supply.size * supply.count for supply in task.shelf)
    return item.size > 0 and (need / item.size - 1) * item.price_each <= 1.2 * bounds.cost


def _run(
    task: Task, supplies: list[Supply], sold: list[SoldAs], filler: Filler
) -> list[Filling] | None:
    fillings = fill_all(task.demand, supplies, sold, filler, task.deadline)
    if fillings is None or sold is task.sold:
        return fillings
    index = task.sold.index(sold[0])
    return [item if item.put_up is None else replace(item, put_up=index) for item in fillings]


def _learning_passes(
    task: Task, bounds: Bounds, work_limit: int, seed: int
) -> Iterator[list[Filling] | None]:
    shelf = hold_long_pieces(task.demand, task.shelf, _longest_sold(task))
    if shelf is None or not task.demand:
        return
    routes = _all_routes(task, shelf, bounds)
    filler = CorrectedValues(task.demand, seed)
    for number in range(LEARNING_PASSES):
        if filler.work > work_limit or task.limits.are_over:
            return
        filler.start_pass()
        supplies, sold = routes[number % len(routes)]
        yield _run(task, supplies, sold, filler)


def _cuts(task: Task, fillings: list[Filling], problem: Problem) -> Iterator[Cut]:
    lots = _lots_by_length(problem)
    for filling in sorted(fillings, key=lambda item: item.put_up is not None):
        pieces = tuple(
            length * task.cell_mm
            for length, count in sorted(filling.pieces, reverse=True)
            for _ in range(count)
        )
        left_mm = filling.length_mm - sum(pieces)
        put_up = None if filling.put_up is None else task.sold[filling.put_up].number
        for _ in range(filling.repeats):
            lot = "" if put_up is not None else lots[filling.length_mm].popleft()
            yield Cut(filling.length_mm, put_up is not None, pieces, left_mm, lot, put_up)


def _lots_by_length(problem: Problem) -> dict[int, deque[str]]:
    lots: dict[int, deque[str]] = {}
    for stock in problem.stock:
        lots.setdefault(stock.length_mm, deque()).extend([stock.lot] * stock.count)
    return lots
