"""Published and constructed cutting problems; the sources stand in the data file beside each."""

from decimal import Decimal

import pytest

from planner.cutting import solve
from tests.unit.planner.cutting.cutting_helpers import (
    as_problem,
    check_plan,
    first_fit_decreasing_cost,
    published_problems,
)

PUBLISHED = published_problems()


def optimal_cost(name: str) -> Decimal:
    """The least money: the data's optimum, where its objective is not another one."""
    if name == "remnants_zero_waste_mm":
        return Decimal(8000)  # that objective is the length opened; one new piece of 8000 at 8000
    return Decimal(PUBLISHED[name]["optimum"])


@pytest.mark.parametrize("name", sorted(PUBLISHED))
def test_published_problem_is_solved_to_its_proven_optimum(name: str) -> None:
    problem = as_problem(PUBLISHED[name])
    result = solve(problem, time_limit_s=60)
    check_plan(problem, result)
    assert result.cost == optimal_cost(name)
    assert result.lower_bound == optimal_cost(name)
    assert result.status == "optimal"


def test_remnants_problem_opens_the_least_length() -> None:
    row = PUBLISHED["remnants_zero_waste_mm"]
    result = solve(as_problem(row))
    assert sum(cut.length_mm for cut in result.cuts) == row["optimum"] == 15345
    assert [cut.left_mm for cut in result.cuts] == [0] * 5


@pytest.mark.parametrize("name", ["triplet_constructed_24_1", "triplet_constructed_30_2"])
def test_triplets_need_more_than_first_fit_decreasing(name: str) -> None:
    # Falkenauer's construction, J. Heuristics 2 (1996) 5-30: first-fit decreasing misses n / 3.
    problem = as_problem(PUBLISHED[name])
    ffd = first_fit_decreasing_cost(problem, problem.buy[0])
    assert ffd is not None
    assert solve(problem, time_limit_s=60).cost < ffd
