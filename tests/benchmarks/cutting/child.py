"""One solver on one group, in a process of its own, so that its peak of memory is its own.

Writes a line of JSON for each problem as soon as it is done, so what was found before a crash stays.
"""

import json
import resource
import sys
import time
from pathlib import Path
from typing import Any

from tests.benchmarks.cutting.groups import Sample, groups
from tests.benchmarks.cutting.solvers import Solver, solver_named
from tests.cutting_greedy import faults

KEEP_LENGTH_MM = 300
"""What is left of a stock piece and shorter is waste; the solver's usual value."""


def main(task: dict[str, Any], answers: Path) -> None:
    solver = solver_named(task["solver"])
    group = next(one for one in groups() if one.title == task["group"])
    with answers.open("a") as file:
        for sample in group.samples(task["count"], task["seed"]):
            row = answer(solver, sample, task["time_limit_s"], task["seed"])
            print(json.dumps(row | {"peak_mb": peak_mb()}), file=file, flush=True)


def answer(solver: Solver, sample: Sample, time_limit_s: float, seed: int) -> dict[str, Any]:
    started = time.perf_counter()
    plan = solver(sample.problem, time_limit_s, seed)
    row = {
        "seconds": time.perf_counter() - started,
        "pieces": sum(piece.count for piece in sample.problem.demand),
        "optimum": None if sample.optimum is None else str(sample.optimum),
        "cost": None,
    }
    if plan is None:
        return row
    left = [cut.left_mm for cut in plan.cuts]
    return row | {
        "cost": str(plan.cost),
        "proven": plan.proven,
        "skeins": plan.bought,
        "waste_mm": sum(left_mm for left_mm in left if left_mm < KEEP_LENGTH_MM),
        "faults": list(faults(sample.problem, plan.cuts, plan.cost)),
    }


def peak_mb() -> float:
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return peak / (1024 * 1024 if sys.platform == "darwin" else 1024)


if __name__ == "__main__":
    main(json.loads(sys.argv[1]), Path(sys.argv[2]))
