"""What is proven, against solvers of others and on the problems that bracelets make.

Seconds are printed by tests/benchmarks/benchmark_cutting.py; here the limit is wide, so that a slow
machine proves as much as a quick one.
"""

from collections.abc import Callable, Iterator
from decimal import Decimal
from math import ceil, floor
from random import Random
from typing import Any

import pytest
from ortools.linear_solver import pywraplp

from planner.cutting import Problem, PutUp, Result, solve
from planner.cutting.highs import Limits
from planner.cutting.linear import linear_bound
from planner.cutting.packs import SoldAs
from tests.cutting_greedy import greedy_plan
from tests.cutting_reference import cp_sat_plan
from tests.cutting_samples import (
    folded_starts,
    realistic_shade,
    small_with_remnants,
    triplets,
)
from tests.unit.planner.cutting.cutting_helpers import (
    as_problem,
    check_plan,
    make_problem,
    published_problems,
)

PATIENT_S = 60
FAR_AWAY = Limits(deadline=float("inf"))


def all_patterns(demand: dict[int, int], capacity: int) -> Iterator[dict[int, int]]:
    """Every filling of the capacity, no length more often than it is wanted."""
    if not demand:
        yield {}
        return
    (length, count), *others = demand.items()
    for taken in range(min(count, capacity // length) + 1):
        for more in all_patterns(dict(others), capacity - taken * length):
            yield {length: taken, **more}


def capped_linear_bound(demand: dict[int, int], capacity: int) -> float:
    """The linear programme over all patterns, solved by GLOP (OR-Tools)."""
    solver = pywraplp.Solver.CreateSolver("GLOP")
    patterns = list(all_patterns(demand, capacity))
    used = [solver.NumVar(0, solver.infinity(), f"p{i}") for i in range(len(patterns))]
    for length, count in demand.items():
        solver.Add(sum(p.get(length, 0) * x for p, x in zip(patterns, used, strict=True)) >= count)
    solver.Minimize(sum(used))
    assert solver.Solve() == pywraplp.Solver.OPTIMAL
    return float(solver.Objective().Value())


def small_stock_problem(seed: int) -> tuple[dict[int, int], int]:
    random = Random(seed)
    lengths = random.sample(range(12, 61), random.randint(2, 6))
    return {length: random.randint(1, 12) for length in lengths}, random.randint(61, 130)


@pytest.mark.parametrize("part", range(10))
def test_optimum_is_at_most_one_above_the_capped_linear_bound(part: int) -> None:
    """On 500 problems; the conjecture is Scheithauer & Terno's, EJOR 84 (1995) 562-571."""
    for seed in range(50 * part, 50 * part + 50):
        demand, capacity = small_stock_problem(seed)
        bound = capped_linear_bound(demand, capacity)
        result = solve(make_problem(demand, {}, {capacity: "1"}), time_limit_s=PATIENT_S)
        assert result.status == "optimal", seed
        assert ceil(bound - 1e-6) <= result.bought <= ceil(bound - 1e-6) + 1, seed
        assert result.lower_bound == result.cost == result.bought


def test_column_generation_finds_the_capped_linear_bound() -> None:
    for seed in range(100):
        demand, capacity = small_stock_problem(seed)
        found = linear_bound(demand, {}, [SoldAs(capacity, capacity, 1)], FAR_AWAY)
        assert found is not None
        assert found.value == pytest.approx(capped_linear_bound(demand, capacity), abs=1e-6)
        assert found.bounds.cost == ceil(found.value - 1e-4)


WITH_A_BOUND = [
    row for row in published_problems().values() if row["lp_bound"] and not row["stock"]
]


@pytest.mark.parametrize("row", WITH_A_BOUND, ids=lambda row: row["id"])
def test_linear_bound_is_the_published_one(row: dict[str, Any]) -> None:
    """The bounds stand beside the problems, with their sources; patterns capped at the demand.

    Of the two problems without the integer round-up property the classical bound is 2.
    """
    problem = as_problem(row)
    sold = [
        SoldAs(p.length_mm, p.length_mm, int(p.price), number=n) for n, p in enumerate(problem.buy)
    ]
    demand = {d.length_mm: d.count for d in problem.demand}
    found = linear_bound(demand, {}, sold, FAR_AWAY)
    assert found is not None
    assert found.value == pytest.approx(row["lp_bound"], abs=1e-5)
    assert found.bounds.cost <= row["optimum"]


@pytest.mark.parametrize("part", range(10))
def test_cost_agrees_with_cp_sat_where_remnants_and_packs_are_about(part: int) -> None:
    compared = 0
    for seed in range(20 * part, 20 * part + 20):
        problem = small_with_remnants(Random(seed))
        reference = cp_sat_plan(problem, PATIENT_S)
        assert reference is not None, seed
        assert reference.proven, seed
        result = solve(problem, time_limit_s=PATIENT_S)
        check_plan(problem, result)
        assert (result.cost, result.status) == (reference.cost, "optimal"), seed
        compared += 1
    assert compared == 20


@pytest.mark.parametrize("bins", [8, 20, 40, 60])
def test_triplets_fill_every_bin_exactly(bins: int) -> None:
    problem = triplets(Random(bins), bins)
    result = solve(problem, time_limit_s=PATIENT_S)
    check_plan(problem, result)
    assert (result.bought, result.status, result.waste_mm) == (bins, "optimal", 0)
    ffd = greedy_plan(problem, best_fit=False)
    assert ffd is not None
    assert ffd.bought > bins


Sample = Callable[..., Problem]


def solved(sample: Sample, count: int, step_mm: int) -> list[Result]:
    results = []
    for seed in range(count):
        problem = sample(Random(seed), step_mm=step_mm)
        result = solve(problem, time_limit_s=PATIENT_S)
        check_plan(problem, result)
        for best_fit in (False, True):
            greedy = greedy_plan(problem, best_fit=best_fit)
            assert greedy is None or result.cost <= greedy.cost, seed
        assert result.bought - result.bought_lower_bound <= 1, seed
        results.append(result)
    return results


@pytest.mark.parametrize(
    ("sample", "step_mm", "count"),
    [(realistic_shade, 10, 100), (folded_starts, 10, 100), (folded_starts, 1, 50)],
)
def test_shades_as_bracelets_make_them_are_proven(sample: Sample, step_mm: int, count: int) -> None:
    results = solved(sample, count, step_mm)
    share = 0.99 if sample is realistic_shade else 0.95
    proven = sum(result.status == "optimal" for result in results)
    assert proven >= floor(share * count)


def test_same_problem_and_seed_give_the_same_plan() -> None:
    problem = folded_starts(Random(53), step_mm=1)  # one that needs the exact search
    first = solve(problem, time_limit_s=PATIENT_S, seed=3)
    again = solve(problem, time_limit_s=PATIENT_S, seed=3)
    assert first.cost == again.cost
    assert first.lower_bound == again.lower_bound


def test_no_time_still_gives_a_plan_no_dearer_than_first_fit_decreasing() -> None:
    for seed in range(30):
        problem = realistic_shade(Random(seed))
        result = solve(problem, time_limit_s=0)
        check_plan(problem, result)
        ffd = greedy_plan(problem, best_fit=False)
        assert ffd is not None
        assert result.cost <= ffd.cost


def test_stop_ends_the_search_with_a_plan() -> None:
    asked = 0

    def stop() -> bool:
        nonlocal asked
        asked += 1
        return True

    problem = triplets(Random(1), 60)
    result = solve(problem, time_limit_s=PATIENT_S, stop=stop)
    check_plan(problem, result)
    assert asked
    assert result.status == "feasible"
    assert result.lower_bound <= 60


def test_packs_short_measure_and_lots_are_told_in_the_cuts() -> None:
    put_up = PutUp(8000, Decimal("9.00"), pack_size=12, short_measure_share=Decimal("0.02"))
    assert put_up.reckoned_mm == 7840
    demand = make_problem({3920: 4}).demand
    result = solve(Problem(demand, (), (put_up,)))
    assert (result.bought, result.purchase, result.cost) == (12, (12,), 9)
    assert [(cut.length_mm, cut.put_up) for cut in result.cuts] == [(7840, 0)] * 2
