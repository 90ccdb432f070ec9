"""Cuts the pieces of one problem file from stock and from what can be bought."""

import json
from argparse import ArgumentParser
from collections.abc import Iterator
from decimal import Decimal
from itertools import groupby
from pathlib import Path
from typing import Any

from inventory.measures import MeasureError, parse_decimal, read_quantity
from inventory.shell import Error, OneLineCommand, read_file
from planner.cutting import Cut, CuttingError, Result, read_problem, solve
from planner.cutting.problem_file import MAXIMUM_BYTES


class Command(OneLineCommand):
    help = "Cuts the pieces of a problem file (JSON) from stock and from what can be bought."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", metavar="PROBLEM.json")
        parser.add_argument("--json", action="store_true", help="print JSON")
        parser.add_argument(
            "--time-limit", default="10", metavar="SECONDS", help="stop searching then (default 10)"
        )
        parser.add_argument("--seed", default="0", help="seed of the random passes (default 0)")

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            limit_s = parse_decimal(
                str(options["time_limit"]), name="time limit", minimum=0, maximum=3600
            )
            seed = read_quantity(str(options["seed"]), name="seed", minimum=0, maximum=2**31)
            problem = read_problem(read_file(Path(options["file"]), MAXIMUM_BYTES))
            result = solve(problem, time_limit_s=float(limit_s), seed=seed)
        except (CuttingError, MeasureError) as error:
            raise Error(str(error)) from error
        self.stdout.write(_as_json(result) if options["json"] else _as_table(result))


def _as_json(result: Result) -> str:
    return json.dumps(
        {
            "status": result.status,
            "cost": _money(result.cost),
            "bought": result.bought,
            "lower_bound": _money(result.lower_bound),
            "waste_mm": result.waste_mm,
            "cuts": [
                {
                    "length_mm": cut.length_mm,
                    "new": cut.new,
                    "pieces_mm": list(cut.pieces_mm),
                    "left_mm": cut.left_mm,
                }
                for cut in result.cuts
            ],
            "seconds": round(result.seconds, 3),
        }
    )


def _money(amount: Decimal) -> str:
    return f"{amount:f}"


def _as_table(result: Result) -> str:
    proven = "and less is impossible" if result.status == "optimal" else "perhaps not the least"
    lines = [
        f"To buy: {result.bought}, cost {_money(result.cost)}, {proven} "
        f"(at least {_money(result.lower_bound)}).",
        "times  from         left mm  pieces mm",
    ]
    for cut, cuts in groupby(result.cuts):
        source = f"{'new' if cut.new else 'shelf'} {cut.length_mm}"
        pieces = ", ".join(_grouped(cut))
        lines.append(f"{len(list(cuts)):4}x  {source:<12} {cut.left_mm:7}  {pieces}")
    return "\n".join(lines)


def _grouped(cut: Cut) -> Iterator[str]:
    for length_mm, same in groupby(cut.pieces_mm):
        yield f"{len(list(same))} x {length_mm}"
