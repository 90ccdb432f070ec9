"""What the benchmark tells: sums, shares and ratios, worked by hand, and what it finds wrong."""

import argparse
from decimal import Decimal
from typing import Any

import pytest

from planner.cutting import Problem, PutUp
from tests.benchmarks.benchmark_cutting import at_least, words_of
from tests.benchmarks.cutting.solvers import length_bound, solver_named
from tests.benchmarks.cutting.table import Answers, contradictions, lines
from tests.unit.planner.cutting.cutting_helpers import make_problem


def row(cost: int | None, *, waste_mm: int = 0, **others: Any) -> dict[str, Any]:
    usual = {"seconds": 1.0, "pieces": 5, "optimum": None, "peak_mb": 40, "proven": False}
    if cost is None:
        return usual | {"cost": None} | others
    found = {"cost": str(cost), "skeins": cost, "waste_mm": waste_mm, "faults": []}
    return usual | found | others


OURS = Answers("ours", [row(4, waste_mm=10, proven=True), row(6, waste_mm=10, seconds=3.0)])
THEIRS = Answers("theirs", [row(5, waste_mm=40, seconds=4.0), row(None, seconds=9.0)], "killed")


def test_a_line_tells_sums_shares_and_ratios() -> None:
    title, _, *others = lines("Shades", [OURS, THEIRS], OURS)
    ours, theirs, words = (line.split() for line in others)
    assert title == "\nShades: 2 problems, 10 pieces"
    assert ours == [
        "ours",
        "2/2",
        "100%",
        "50%",
        "10",
        "20",
        "2.000",
        "3.00",
        "40",
        "|",
        "1.000",
        "1.000",
        "1.00",
    ]
    assert theirs == [
        "theirs",
        "1/2",
        "0%",
        "0%",
        "5",
        "40",
        "6.500",
        "9.00",
        "40",
        "|",
        "1.250",
        "4.000",
        "4.00",
    ]
    assert words == ["theirs", "broke", "off:", "killed"]


@pytest.mark.parametrize(
    ("answers", "words"),
    [
        ([OURS, Answers("theirs", [row(3)])], "ours says that 4 is the least, but 3 is possible"),
        ([Answers("ours", [row(4, optimum="5")])], "costs 4, less than the known optimum 5"),
        (
            [Answers("ours", [row(4, proven=True, optimum="3")])],
            "4 is the least, but 3 is possible",
        ),
        ([Answers("ours", [row(4, faults=["cuts too much"])])], "ours cuts too much"),
    ],
)
def test_a_contradiction_is_told(answers: list[Answers], words: str) -> None:
    assert [line for line in contradictions("Shades", answers) if words in line]
    assert list(contradictions("Shades", [OURS, THEIRS])) == []


@pytest.mark.parametrize(
    ("problem", "bound"),
    [
        (make_problem({6: 3}, {}, {10: "2"}), 4),
        (make_problem({6: 3}, {18: 1}, {10: "2"}), 0),
        (make_problem({4: 20, 3: 10, 2: 20}, {}, {5: "6", 6: "7", 9: "10"}), Decimal(1500) / 9),
        (Problem(make_problem({6: 3}).demand, (), (PutUp(10, Decimal(6), pack_size=3),)), 4),
    ],
)
def test_bound_on_total_length(problem: Problem, bound: Decimal) -> None:
    assert length_bound(problem) == pytest.approx(bound)


@pytest.mark.parametrize("name", ["cp-sat", "arc-flow"])
def test_a_solver_without_time_takes_the_first_fit_plan(name: str) -> None:
    problem = make_problem({6: 3, 5: 2}, {7: 1}, {10: "2"})
    plan, greedy = (solver_named(one)(problem, 0, 0) for one in (name, "ffd"))
    assert plan is not None
    assert greedy is not None
    assert plan.cost <= greedy.cost


def test_a_group_that_nobody_finished_is_told() -> None:
    broken = Answers("ours", [], "killed")
    assert list(lines("Shades", [broken], broken))[-1] == "    ours broke off: killed"
    assert list(contradictions("Shades", [broken])) == []


def test_unknown_words_and_numbers_are_refused() -> None:
    assert words_of("a, b", ("a", "b")) == ["a", "b"]
    with pytest.raises(argparse.ArgumentTypeError, match="'c' is none of a, b"):
        words_of("a,c", ("a", "b"))
    assert at_least("3", 1, int) == 3
    for text in ("0", "many", "-1", "nan", "inf"):
        with pytest.raises(argparse.ArgumentTypeError, match="must be a number from 1 on"):
            at_least(text, 1, float)
