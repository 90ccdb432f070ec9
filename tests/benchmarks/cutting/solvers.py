"""The solvers of the benchmark behind one call; what they need is imported before the clock runs."""

from collections.abc import Callable
from decimal import Decimal
from functools import partial

from planner.cutting import CuttingError, Problem, solve
from tests.cutting_greedy import ReferenceCut, ReferencePlan, greedy_plan

THIS = "this"
NAMES = {
    THIS: "this solver",
    "ffd": "first-fit decreasing",
    "bfd": "best-fit decreasing",
    "cp-sat": "CP-SAT",
    "arc-flow": "HiGHS, plain arc-flow",
}
Solver = Callable[[Problem, float, int], ReferencePlan | None]


def solver_named(name: str) -> Solver:
    if name == "cp-sat":
        from tests.cutting_reference import cp_sat_plan

        return partial(_or_first_fit, solver=cp_sat_plan)
    if name == "arc-flow":
        from tests.benchmarks.cutting.arc_flow import arc_flow_plan

        return partial(_or_first_fit, solver=arc_flow_plan)
    if name == THIS:
        import highspy  # noqa: F401  (this solver imports it where it first needs it)

        return _this
    return partial(_greedy, best_fit=name == "bfd")


def _or_first_fit(
    problem: Problem, time_limit_s: float, seed: int, *, solver: Solver
) -> ReferencePlan | None:
    """Without a cheaper plan in time, anybody would take the one of first-fit decreasing."""
    plan, greedy = solver(problem, time_limit_s, seed), greedy_plan(problem, best_fit=False)
    if greedy is None or (plan is not None and (plan.proven or plan.cost <= greedy.cost)):
        return plan  # a wrong proof is kept, so that it shows
    return greedy


def _this(problem: Problem, time_limit_s: float, seed: int) -> ReferencePlan | None:
    try:
        result = solve(problem, time_limit_s=time_limit_s, seed=seed)
    except CuttingError:
        return None
    cuts = tuple(ReferenceCut(cut.length_mm, cut.put_up, cut.pieces_mm) for cut in result.cuts)
    return ReferencePlan(result.cost, result.status == "optimal", cuts)


def _greedy(
    problem: Problem, _time_limit_s: float, _seed: int, *, best_fit: bool
) -> ReferencePlan | None:
    """A greedy plan that meets the bound on total length is proven by that."""
    plan = greedy_plan(problem, best_fit=best_fit)
    if plan is None or plan.cost > length_bound(problem):
        return plan
    return ReferencePlan(plan.cost, True, plan.cuts)


def length_bound(problem: Problem) -> Decimal:
    """The missing length at the best price per mm; of one put-up only whole ones can be bought."""
    need_mm = sum(d.length_mm * d.count for d in problem.demand)
    missing_mm = max(0, need_mm - sum(s.length_mm * s.count for s in problem.stock))
    if not missing_mm or not problem.buy:
        return Decimal(0)
    if len(problem.buy) == 1:
        put_up = problem.buy[0]
        return -(-missing_mm // put_up.reckoned_mm) * put_up.price / put_up.pack_size
    return missing_mm * min(p.price / (p.reckoned_mm * p.pack_size) for p in problem.buy)
