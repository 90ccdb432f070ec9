"""The cheapest put-ups that hold at least so much: the covering knapsack problem."""

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import gcd

STEP_LIMIT = 20_000


@dataclass(frozen=True)
class Purchase:
    """Put-ups to buy, and what any purchase that holds as much must cost.

    Parameters
    ----------
    counts
        How many of each put-up.
    bound
        No purchase that holds the need costs less [smallest units of money]; equal to the cost of
        `counts` unless the search was cut short.
    """

    counts: tuple[int, ...]
    bound: int


def cheapest_purchase(sizes: Sequence[int], prices: Sequence[int], need: int) -> Purchase | None:
    """Find the cheapest put-ups that together hold a need.

    Parameters
    ----------
    sizes
        What each put-up holds; one that holds 0 is never bought.
    prices
        What each costs [smallest units of money].
    need
        What they must hold together.

    Returns
    -------
    Purchase or None
        None when nothing holds anything and something is needed.

    Notes
    -----
    Branch and bound over the put-ups by price per size; the bound of a branch is what the rest
    would cost at the best price per size still open, rounded up. After `STEP_LIMIT` steps the
    bound of the whole, rounded up to a sum that the prices can make, is returned instead.
    """
    if need <= 0:
        return Purchase((0,) * len(sizes), 0)
    order = [index for index in range(len(sizes)) if sizes[index] > 0]
    if not order:
        return None
    order.sort(key=lambda index: (Fraction(prices[index], sizes[index]), -sizes[index], index))
    search = _Search([sizes[index] for index in order], [prices[index] for index in order])
    search.visit(0, need, 0, [])
    counts = [0] * len(sizes)
    for index, count in zip(order, search.best_counts, strict=False):
        counts[index] = count
    bound = search.best_cost
    if search.steps > STEP_LIMIT:
        step = gcd(*(prices[index] for index in order)) or 1
        bound = min(bound, -(-search.least(0, need) // step) * step)
    return Purchase(tuple(counts), bound)


class _Search:
    def __init__(self, sizes: list[int], prices: list[int]) -> None:
        self.sizes = sizes
        self.prices = prices
        self.steps = 0
        self.best_cost = -1
        self.best_counts: list[int] = []

    def least(self, first: int, need: int) -> int:
        """Bound what `need` costs with the put-ups from `first` on."""
        return -(-need * self.prices[first] // self.sizes[first])

    def visit(self, first: int, need: int, cost: int, counts: list[int]) -> None:
        """Try every useful count of put-up `first`, most of it first."""
        size, price = self.sizes[first], self.prices[first]
        most = -(-need // size)
        self._offer(cost + most * price, [*counts, most])
        if first == len(self.sizes) - 1:
            return
        for count in range(most - 1, -1, -1):
            self.steps += 1
            spent, rest = cost + count * price, need - count * size
            if self.steps > STEP_LIMIT or self.best_cost <= spent + self.least(first, rest):
                return  # that sum is the same for every smaller count
            if self.best_cost > spent + self.least(first + 1, rest):
                self.visit(first + 1, rest, spent, [*counts, count])

    def _offer(self, cost: int, counts: list[int]) -> None:
        if not self.best_counts or cost < self.best_cost:
            self.best_cost = cost
            self.best_counts = counts
