"""This cutting solver beside others, and how a whole plan grows: prints, does not judge.

Run it with the project's own Python: `python -m tests.benchmarks.benchmark_cutting --help`

Every solver has the same problems, the same time limit and one thread, and works on a group of
problems in a process of its own. All minimise money; only this solver then brings down the waste.
The greedy rules open remnants shortest first (longest first was no better); they count as proven
where they meet the bound on total length. CP-SAT and HiGHS may fall back on the first-fit plan, of
which CP-SAT is told as well. Making a model counts as time, importing does not.
"""

import argparse
import json
import subprocess
import sys
import tempfile
from pathlib import Path
from typing import Any

from tests.benchmarks import benchmark_plan
from tests.benchmarks.cutting.groups import PARTS, Group, groups
from tests.benchmarks.cutting.solvers import NAMES, THIS
from tests.benchmarks.cutting.table import Answers, contradictions, lines

PLAN = "plan"
QUICK = {"count": 2, "time_limit": 1.0}
USUAL = {"count": 10, "time_limit": 10.0}
QUICK_SIZES, USUAL_SIZES = (10, 100, 1_000), (10, 100, 1_000, 10_000)
LEFT_OUT_WHEN_QUICK = (" 40 bins", " 83 bins", " 167 bins")


def words_of(text: str, known: tuple[str, ...]) -> list[str]:
    words = [word.strip() for word in text.split(",") if word.strip()]
    for word in words:
        if word not in known:
            raise argparse.ArgumentTypeError(f"{word!r} is none of {', '.join(known)}")
    return words


def at_least(text: str, least: float, kind: type) -> Any:
    try:
        value = kind(text)
    except ValueError:
        value = least - 1
    if not least <= value < float("inf"):  # nan neither
        raise argparse.ArgumentTypeError(f"{text!r} must be a number from {least} on")
    return value


def options() -> argparse.Namespace:
    parser = argparse.ArgumentParser(
        prog="python -m tests.benchmarks.benchmark_cutting",
        description=__doc__,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--quick", action="store_true", help="few of each: under two minutes")
    parser.add_argument("--time-limit", type=lambda text: at_least(text, 0, float), metavar="S")
    parser.add_argument("--count", type=lambda text: at_least(text, 1, int), help="of each group")
    parser.add_argument("--seed", type=lambda text: at_least(text, 0, int), default=0)
    parser.add_argument(
        "--only",
        type=lambda text: words_of(text, (*PARTS, PLAN)),
        metavar="PART,...",
        help=", ".join((*PARTS, PLAN)),
    )
    parser.add_argument(
        "--without",
        type=lambda text: words_of(text, tuple(NAMES)),
        default=[],
        metavar="SOLVER,...",
        help=", ".join(NAMES),
    )
    chosen = parser.parse_args()
    if set(NAMES) == set(chosen.without):
        parser.error("argument --without: no solver is left")
    for name, value in (QUICK if chosen.quick else USUAL).items():
        if getattr(chosen, name) is None:
            setattr(chosen, name, value)
    return chosen


def answers_of(group: Group, solver: str, chosen: argparse.Namespace) -> Answers:
    task = {
        "group": group.title,
        "solver": solver,
        "count": chosen.count,
        "seed": chosen.seed,
        "time_limit_s": chosen.time_limit,
    }
    patience_s = 60 + (2 * chosen.time_limit + 20) * max(chosen.count, 20)
    with tempfile.TemporaryDirectory() as folder:
        answers = Path(folder) / "answers"
        answers.touch()
        command = [sys.executable, "-m", "tests.benchmarks.cutting.child", json.dumps(task)]
        words = run([*command, str(answers)], patience_s)
        rows = [json.loads(line) for line in answers.read_text().splitlines()]
    return Answers(NAMES[solver], rows, words)


def run(command: list[str], patience_s: float) -> str:
    """Run it; say in a few words how it went wrong."""
    try:
        done = subprocess.run(
            command,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.PIPE,
            text=True,
            timeout=patience_s,
            check=False,
        )
    except subprocess.TimeoutExpired:
        return f"not done in {patience_s:.0f} s"
    if not done.returncode:
        return ""
    return next(iter(done.stderr.strip().splitlines()[::-1]), f"ended with {done.returncode}")


def compare(chosen: argparse.Namespace) -> list[str]:
    solvers = [name for name in NAMES if name not in chosen.without]
    disagreements = []
    for group in groups():
        if chosen.only and group.part not in chosen.only:
            continue
        if chosen.quick and group.title.endswith(LEFT_OUT_WHEN_QUICK):
            continue
        answers = [answers_of(group, solver, chosen) for solver in solvers]
        base = answers[0] if solvers[:1] == [THIS] else None
        print("\n".join(lines(group.title, answers, base)), flush=True)
        disagreements += contradictions(group.title, answers)
    return disagreements


def main() -> None:
    chosen = options()
    print(
        f"At most {chosen.time_limit:g} s for each problem and solver, one thread, seed {chosen.seed}."
        "\nPlans: how many problems have one; cheapest: nobody's costs less; right of the bar:"
        "\ntimes this solver, where both have a plan. Waste: what is left and under 300 mm."
    )
    disagreements = compare(chosen)
    if not chosen.only or PLAN in chosen.only:
        print("\nA whole plan over 60 shades, from bracelets to sheets")
        sizes = QUICK_SIZES if chosen.quick else USUAL_SIZES
        benchmark_plan.show([benchmark_plan.run_apart(size) for size in sizes])
    if disagreements:
        raise SystemExit("\nDisagreements:\n" + "\n".join(disagreements))


if __name__ == "__main__":
    main()
