"""The table of a group, solver beside solver, and what contradicts itself in it."""

import statistics
from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

Row = dict[str, Any]
HEAD = (
    f"{'':22}{'plans':>8}{'cheapest':>9}{'proven':>8}{'skeins':>8}{'waste mm':>10}"
    f"{'median s':>10}{'worst s':>9}{'peak MB':>9}  |{'skeins':>7}{'waste':>9}{'seconds':>9}"
)


@dataclass(frozen=True)
class Answers:
    """What one solver said to the problems of a group, in their order; `words` when it broke off."""

    name: str
    rows: list[Row]
    words: str = ""

    @property
    def plans(self) -> dict[int, Row]:
        return {number: row for number, row in enumerate(self.rows) if row["cost"] is not None}


def lines(title: str, answers: list[Answers], base: Answers | None) -> Iterator[str]:
    """Sums are over the plans a solver has; ratios over the problems where both have one."""
    longest = max((one.rows for one in answers), key=len)
    pieces = sum(row["pieces"] for row in longest)
    yield f"\n{title}: {len(longest)} problems, {pieces} pieces"
    yield HEAD
    least = cheapest(answers)
    for one in answers:
        yield _line(one, max(1, len(longest)), least) + (_ratios(one, base) if base else "")
        if one.words:
            yield f"    {one.name} broke off: {one.words}"


def cheapest(answers: list[Answers]) -> dict[int, Decimal]:
    """The least cost of each problem in this run, or what is known about it beforehand."""
    least: dict[int, Decimal] = {}
    for one in answers:
        for number, row in one.plans.items():
            costs = [Decimal(row["cost"]), *([Decimal(row["optimum"])] if row["optimum"] else [])]
            least[number] = min([*costs, least.get(number, costs[0])])
    return least


def contradictions(title: str, answers: list[Answers]) -> Iterator[str]:
    """Plans that are none, proofs that another plan disproves, costs below a known optimum."""
    least = cheapest(answers)
    for one in answers:
        for number, row in one.plans.items():
            where = f"{title}, problem {number + 1}: {one.name}"
            yield from (f"{where} {fault}" for fault in row["faults"])
            cost = Decimal(row["cost"])
            if row["proven"] and cost > least[number]:
                yield f"{where} says that {cost} is the least, but {least[number]} is possible"
            if row["optimum"] and cost < Decimal(row["optimum"]):
                yield f"{where} costs {cost}, less than the known optimum {row['optimum']}"


def _line(one: Answers, problems: int, least: dict[int, Decimal]) -> str:
    plans = one.plans
    best = sum(Decimal(row["cost"]) == least[number] for number, row in plans.items())
    proven = sum(row["proven"] for row in plans.values())
    skeins = sum(row["skeins"] for row in plans.values())
    waste_mm = sum(row["waste_mm"] for row in plans.values())
    seconds = [row["seconds"] for row in one.rows] or [float("nan")]
    peak_mb = max((row["peak_mb"] for row in one.rows), default=float("nan"))
    return (
        f"{one.name:22}{f'{len(plans)}/{problems}':>8}{best / problems:>9.0%}"
        f"{proven / problems:>8.0%}{skeins:>8}{waste_mm:>10}"
        f"{statistics.median(seconds):>10.3f}{max(seconds):>9.2f}{peak_mb:>9.0f}"
    )


def _ratios(one: Answers, base: Answers) -> str:
    both = sorted(one.plans.keys() & base.plans.keys())
    pairs = [(one.plans[number], base.plans[number]) for number in both]
    skeins, waste = (_ratio_of_sums(pairs, name) for name in ("skeins", "waste_mm"))
    medians = [
        statistics.median(pair[place]["seconds"] for pair in pairs) if pairs else 0
        for place in (0, 1)
    ]
    return f"  |{skeins:>7}{waste:>9}{_ratio(*medians, places=2):>9}"


def _ratio_of_sums(pairs: list[tuple[Row, Row]], name: str) -> str:
    return _ratio(*(sum(pair[place][name] for pair in pairs) for place in (0, 1)), places=3)


def _ratio(value: float, base: float, places: int) -> str:
    return f"{value / base:.{places}f}" if base else "-"
