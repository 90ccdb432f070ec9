"""How filling compares with first-fit decreasing and the bound on invented shades.

Run it with `python -m tests.benchmarks.benchmark_cutting`; it prints, it does not judge.
"""

import random
import time
from collections import Counter
from decimal import Decimal

from planner.cutting import (
    Demand,
    Group,
    Lot,
    LotStock,
    Offer,
    Problem,
    PutUp,
    StockPiece,
    solve,
    solve_with_lots,
)
from tests.unit.planner.cutting.cutting_helpers import first_fit_decreasing_cost

PRICE = Decimal(1)


def shade_problem(seed: int, shortest_mm: int, longest_mm: int, pieces: int) -> Problem:
    rng = random.Random(seed)
    step_mm = rng.choice([1, 5, 10])
    lengths = [
        step_mm * rng.randrange(shortest_mm // step_mm, longest_mm // step_mm) for _ in range(40)
    ]
    demand = Counter(rng.choice(lengths) for _ in range(pieces))
    stock = [rng.randrange(400, 7500) for _ in range(rng.choice([0, 5, 20]))]
    return Problem(
        tuple(Demand(length, count) for length, count in demand.items()),
        tuple(StockPiece(length, 1) for length in stock),
        (PutUp(7840, PRICE),),
    )


def compare(name: str, shortest_mm: int, longest_mm: int, pieces: int, shades: int = 20) -> None:
    filled = bound = ffd = proven = 0
    slowest_s = 0.0
    for seed in range(shades):
        problem = shade_problem(seed, shortest_mm, longest_mm, pieces)
        result = solve(problem)
        filled += result.bought
        bound += result.bought_lower_bound
        ffd += int(first_fit_decreasing_cost(problem, problem.buy[0]) or 0)
        proven += result.status == "optimal"
        slowest_s = max(slowest_s, result.seconds)
    print(
        f"{name:<24} bound {bound:5}  filling {filled:5}  first-fit decreasing {ffd:5}"
        f"  proven {proven}/{shades}  slowest {slowest_s:.2f} s"
    )


def batch(bracelets: int = 500, shades: int = 10) -> None:
    started = time.perf_counter()
    proven = 0
    for seed in range(shades):
        rng = random.Random(seed)
        kinds = [
            tuple(10 * rng.randrange(35, 130) for _ in range(rng.randrange(2, 5)))
            for _ in range(30)
        ]
        groups = tuple(
            Group(str(n), rng.choice(kinds)) for n in range(bracelets) if rng.random() < 0.3
        )
        lots = tuple(
            Lot(str(n), tuple(LotStock(f"{n}.{m}", rng.randrange(400, 7840)) for m in range(3)))
            for n in range(3)
        )
        offers = (
            Offer("skein", "A", 7840, Decimal("1.20")),
            Offer("box", "A", 12 * 7840, Decimal("13.00")),
            Offer("other skein", "B", 7840, Decimal("1.25")),
        )
        proven += solve_with_lots(groups, lots, offers).status == "optimal"
    seconds = time.perf_counter() - started
    print(
        f"{bracelets} bracelets, {shades} shades with lots: {seconds:.2f} s, proven {proven}/{shades}"
    )


if __name__ == "__main__":
    compare("350-1600 mm, 200 pieces", 350, 1600, 200)
    compare("350-1600 mm, 2000 pieces", 350, 1600, 2000)
    compare("1500-3200 mm, 120 pieces", 1500, 3200, 120)
    compare("1500-3200 mm, 390 pieces", 1500, 3200, 390)
    batch()
