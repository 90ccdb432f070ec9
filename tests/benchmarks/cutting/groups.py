"""The problems of the benchmark, group by group; the same seed gives the same problems."""

import json
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from decimal import Decimal
from functools import partial
from pathlib import Path
from random import Random
from typing import Any

from planner.cutting import Demand, Problem, PutUp, StockPiece
from tests.cutting_samples import MOST_REMNANTS, folded_starts, realistic_shade, triplets

PUBLISHED = Path(__file__).parents[2] / "data" / "cutting_problems.json"
TRIPLET_BINS = (8, 20, 40, 83, 167)
REALISTIC, FOLDED = "realistic shades, 350 to 1600 mm", "folded starts, 1200 to 3300 mm"
PARTS = ("published", "triplets", "realistic", "folded")


@dataclass(frozen=True)
class Sample:
    """A problem and its least cost, where that is known beforehand."""

    problem: Problem
    optimum: Decimal | None = None


@dataclass(frozen=True)
class Group:
    """Problems of one kind; `make` draws one, and `published` are there without drawing."""

    part: str
    title: str
    make: Callable[[Random], Sample] | None = None

    def samples(self, count: int, seed: int) -> list[Sample]:
        if self.make is None:
            return [_published(row) for row in json.loads(PUBLISHED.read_text())["problems"]]
        return [self.make(Random(f"{seed} {self.title} {number}")) for number in range(count)]


def groups() -> Iterator[Group]:
    yield Group("published", "published problems")
    for bins in TRIPLET_BINS:
        yield Group("triplets", f"triplets, {bins} bins", partial(_triplets, bins=bins))
    for part, words, sample in (
        ("realistic", REALISTIC, realistic_shade),
        ("folded", FOLDED, folded_starts),
    ):
        for remnants, shelf in ((0, "no remnants"), (MOST_REMNANTS, "with remnants")):
            for step_mm in (10, 1):
                make = partial(_shade, sample=sample, most=remnants, step_mm=step_mm)
                yield Group(part, f"{words}, {shelf}, steps of {step_mm} mm", make)


def _published(row: dict[str, Any]) -> Sample:
    problem = Problem(
        tuple(Demand(part["length_mm"], part["count"]) for part in row["demand"]),
        tuple(StockPiece(part["length_mm"], part["count"]) for part in row["stock"]),
        tuple(PutUp(part["length_mm"], Decimal(part["price"])) for part in row["buy"]),
    )
    by_length_opened = "length of stock opened" in row["objective"]
    return Sample(problem, None if by_length_opened else Decimal(row["optimum"]))


def _triplets(random: Random, *, bins: int) -> Sample:
    return Sample(triplets(random, bins), Decimal(bins))


def _shade(random: Random, *, sample: Callable[..., Problem], most: int, step_mm: int) -> Sample:
    remnants = random.randint(1, most) if most else 0
    return Sample(sample(random, remnants=remnants, step_mm=step_mm))
