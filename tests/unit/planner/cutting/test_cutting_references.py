"""The references themselves: held to the published optima, and their plans checked piece by piece."""

from dataclasses import replace
from decimal import Decimal
from random import Random

import pytest

from planner.cutting import Problem, PutUp
from tests.benchmarks.cutting.arc_flow import arc_flow_plan
from tests.cutting_greedy import ReferenceCut, faults, greedy_plan, packs_for
from tests.cutting_reference import cp_sat_plan
from tests.cutting_samples import realistic_shade, small_with_remnants
from tests.unit.planner.cutting.cutting_helpers import (
    as_problem,
    first_fit_decreasing_cost,
    make_problem,
    published_problems,
)

PUBLISHED = published_problems()
OPTIMA = {name: Decimal(row["optimum"]) for name, row in PUBLISHED.items()}
OPTIMA["remnants_zero_waste_mm"] = Decimal(8000)  # by money: one new piece of 8000 at 8000
SMALL = ["puchinger10", "gg61_multi", "nonirup16", "nonirup132", "triplet_constructed_24_1"]
PATIENT_S = 60


@pytest.mark.parametrize("name", sorted(PUBLISHED))
def test_arc_flow_proves_the_published_optimum(name: str) -> None:
    problem = as_problem(PUBLISHED[name])
    plan = arc_flow_plan(problem, PATIENT_S)
    assert plan is not None
    assert (plan.cost, plan.proven) == (OPTIMA[name], True)
    assert list(faults(problem, plan.cuts, plan.cost)) == []


def test_arc_flow_agrees_with_cp_sat_where_remnants_are_about() -> None:
    compared = 0
    for seed in range(40):
        problem = small_with_remnants(Random(seed))
        if any(sold.pack_size * sold.minimum_packs > 1 for sold in problem.buy):
            continue
        plan, other = arc_flow_plan(problem, PATIENT_S), cp_sat_plan(problem, PATIENT_S)
        assert plan is not None
        assert other is not None
        assert (plan.proven, other.proven) == (True, True), seed
        assert plan.cost == other.cost, seed
        assert list(faults(problem, plan.cuts, plan.cost)) == []
        compared += 1
    assert compared >= 10


@pytest.mark.parametrize("name", [*SMALL, "remnants_zero_waste_mm"])
def test_cp_sat_proves_the_published_optimum(name: str) -> None:
    problem = as_problem(PUBLISHED[name])
    plan = cp_sat_plan(problem, PATIENT_S)
    assert plan is not None
    assert (plan.cost, plan.proven) == (OPTIMA[name], True)
    assert list(faults(problem, plan.cuts, plan.cost)) == []


@pytest.mark.parametrize("best_fit", [False, True])
def test_greedy_rules_cut_every_piece_and_never_undercut_the_optimum(best_fit: bool) -> None:
    for name, row in PUBLISHED.items():
        problem = as_problem(row)
        plan = greedy_plan(problem, best_fit=best_fit)
        assert plan is not None
        assert list(faults(problem, plan.cuts, plan.cost)) == []
        assert plan.cost >= OPTIMA[name]


@pytest.mark.parametrize(("best_fit", "cuts"), [(False, [(2,), (8,)]), (True, [(8, 2)])])
def test_first_and_best_fit_choose_differently(best_fit: bool, cuts: list[tuple[int, ...]]) -> None:
    # By hand: 8 opens a new 10 and leaves 2 there; then 2 goes to the remnant of 7, or fits exactly.
    plan = greedy_plan(make_problem({8: 1, 2: 1}, {7: 1}, {10: "1"}), best_fit=best_fit)
    assert plan is not None
    assert [cut.pieces_mm for cut in plan.cuts] == cuts


def naive_best_fit(problem: Problem) -> int:
    reckoned_mm = problem.buy[0].reckoned_mm
    room, bought = [stock.length_mm for stock in problem.stock], 0
    for length in sorted(d.length_mm for d in problem.demand for _ in range(d.count))[::-1]:
        enough = [free for free in room if free >= length] or [reckoned_mm]
        if max(room, default=0) < length:
            room.append(reckoned_mm)
            bought += 1
        room.remove(min(enough))
        room.append(min(enough) - length)
    return bought


def test_greedy_rules_agree_with_naive_ones() -> None:
    """Those look at every stock piece for every piece; these skip what cannot have room."""
    for seed in range(20):
        problem = realistic_shade(Random(seed), step_mm=1)
        put_up = PutUp(problem.buy[0].reckoned_mm, Decimal(1))
        first, best = (greedy_plan(problem, best_fit=best_fit) for best_fit in (False, True))
        assert first is not None
        assert best is not None
        assert first.bought == first_fit_decreasing_cost(problem, put_up), seed
        assert best.bought == naive_best_fit(problem), seed


def test_greedy_rule_says_where_a_piece_fits_nowhere() -> None:
    assert greedy_plan(make_problem({11: 1}, {7: 1}, {10: "1"}), best_fit=False) is None
    assert greedy_plan(make_problem({8: 1}, {7: 1}), best_fit=True) is None


def test_packs_are_taken_in_steps_and_at_least_the_minimum() -> None:
    box = PutUp(8000, Decimal(1), pack_size=12, minimum_packs=3, pack_step=2)
    assert [packs_for(box, count) for count in (0, 1, 36, 48, 49)] == [0, 4, 4, 4, 6]


@pytest.mark.parametrize(
    ("change", "fault"),
    [
        ({"pieces_mm": (8,)}, "cuts other pieces than are wanted"),
        ({"put_up": None}, "cuts stock that is not on the shelf"),
        ({"length_mm": 11}, "cuts a put-up of another length"),
        ({"pieces_mm": (8, 2, 2)}, "cuts more from a stock piece than it holds"),
        ({"put_up": None}, "costs something else than its put-ups"),
    ],
)
def test_a_wrong_plan_is_found_out(change: dict[str, object], fault: str) -> None:
    problem = make_problem({8: 1, 2: 1}, {}, {10: "1"})
    right = ReferenceCut(10, 0, (8, 2))
    assert list(faults(problem, (right,), Decimal(1))) == []
    assert fault in list(faults(problem, (replace(right, **change),), Decimal(1)))
