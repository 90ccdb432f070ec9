"""What a plan says of itself is what was proven, no more."""

from dataclasses import dataclass
from decimal import Decimal

import pytest

from planner.planning.wording import bought_words, proof_of_plan, proof_of_shade


@dataclass(frozen=True)
class Shade:
    bought: int
    bought_lower_bound: int
    cost: Decimal
    lower_bound: Decimal
    unplaced: tuple[int, ...] = ()
    status: str = "optimal"
    solving_seconds: float = 0.0


@pytest.mark.parametrize(
    ("bought", "bound", "cost", "lower", "sentence"),
    [
        (0, 0, "0", "0", "the shelf has enough"),
        (1, 1, "1", "1", "the shelf alone is not enough"),
        (3, 3, "3", "3", "fewer is impossible"),
        (3, 2, "3", "3", "cheaper is impossible"),
        (3, 3, "4", "3", "fewer is impossible, but cheaper might be found; not settled"),
        (3, 2, "3", "2", "at least 2; not settled"),
    ],
)
def test_proof_of_shade_says_what_the_bound_proves(
    bought: int, bound: int, cost: str, lower: str, sentence: str
) -> None:
    assert proof_of_shade(Shade(bought, bound, Decimal(cost), Decimal(lower))) == sentence


def test_proof_of_shade_without_thread_says_so() -> None:
    shade = Shade(0, 0, Decimal(0), Decimal(0), unplaced=(4,))
    assert "not enough thread" in proof_of_shade(shade)


@pytest.mark.parametrize(
    ("seconds", "words"), [(10.02, "in 10 s"), (2.6, "in 3 s"), (0.04, "in 1 s")]
)
def test_proof_of_shade_says_how_long_it_was_tried(seconds: float, words: str) -> None:
    """Rounded to whole seconds, and never "in 0 s"."""
    shade = Shade(8, 7, Decimal(8), Decimal(7), status="feasible", solving_seconds=seconds)
    assert proof_of_shade(shade) == f"at least 7; not settled {words}"


@pytest.mark.parametrize("status", ["stopped", "failed"])
def test_proof_of_shade_without_a_plan_claims_nothing(status: str) -> None:
    shade = Shade(0, 0, Decimal(0), Decimal(0), unplaced=(1, 2), status=status)
    assert proof_of_shade(shade).startswith("not worked out")


def test_proof_of_plan_with_shades_missing_is_not_whole() -> None:
    done = Shade(3, 3, Decimal(3), Decimal(3))
    missing = Shade(0, 0, Decimal(0), Decimal(0), unplaced=(1,), status="stopped")
    assert proof_of_plan(done, [done, missing]) == (
        "This is not the whole purchase: 1 of 2 shades was not worked out."
    )
    assert "2 of 3 shades were not" in proof_of_plan(done, [done, missing, missing])
    assert "no shade was worked out" in proof_of_plan(missing, [missing, missing])


def test_proof_of_plan_claims_nothing_above_the_bound() -> None:
    open_shade = Shade(3, 2, Decimal(3), Decimal(2))
    proven = Shade(3, 3, Decimal(3), Decimal(3))
    assert "Not proven" in proof_of_plan(open_shade, [open_shade])
    assert proof_of_plan(proven, [proven]) == "Cheaper is impossible."


def test_bought_words_call_skeins_only_what_is_called_so() -> None:
    assert bought_words(1, ["8 m skein"]) == "1 skein"
    assert bought_words(2, ["8 m Skein", "skein"]) == "2 skeins"
    assert bought_words(3, ["8 m skein", "40 m hank"]) == "3 put-ups"
