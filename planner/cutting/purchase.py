"""The cheapest put-ups that hold at least so much: the covering knapsack problem."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from math import gcd

from planner.cutting.packs import SoldAs

STEP_LIMIT = 20_000
SPARE_BUNDLES = 2
"""How many steps of packs more than the need are looked at, since pieces may not fill them."""


@dataclass(frozen=True)
class Purchase:
    """Put-ups to buy, and what any purchase that holds as much must cost.

    Parameters
    ----------
    counts
        How many of each put-up: single ones, also where they come in packs.
    bound
        No purchase that holds the need costs less [smallest units of money]; equal to the cost of
        `counts` unless the search was cut short.
    """

    counts: tuple[int, ...]
    bound: int


@dataclass(frozen=True)
class _Item:
    """A step of packs as one thing to buy."""

    index: int
    size: int
    price: int
    fewest: int


def cheapest_purchase(sold: Sequence[SoldAs], holds: Sequence[int], need: int) -> Purchase | None:
    """Find the cheapest put-ups that together hold a need.

    Parameters
    ----------
    sold
        The put-ups.
    holds
        What one of each holds; one that holds 0 is never bought.
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
    prices = [item.bundle_price for item in sold]
    return _cheapest(sold, holds, prices, need)


def fewest_put_ups(sold: Sequence[SoldAs], holds: Sequence[int], need: int) -> int:
    """Bound how many single put-ups must be bought to hold a need.

    Parameters
    ----------
    sold
        The put-ups.
    holds
        What one of each holds.
    need
        What they must hold together.

    Returns
    -------
    int
        No purchase that holds the need buys fewer; 0 where none holds anything.
    """
    purchase = _cheapest(sold, holds, [item.bundle for item in sold], need)
    return purchase.bound if purchase else 0


def purchases_between(
    sold: Sequence[SoldAs], holds: Sequence[int], need: int, least: int, below: int, most: int
) -> list[tuple[int, ...]]:
    """List purchases that hold a need and cost from `least` to less than `below`.

    Parameters
    ----------
    sold
        The put-ups.
    holds
        What one of each holds.
    need
        What they must hold together.
    least, below
        The range of costs [smallest units of money].
    most
        The search ends after this many purchases.

    Returns
    -------
    list of tuple of int
        How many single put-ups of each, the cheapest purchase first; not all where there are more
        than `most`.
    """
    found: list[tuple[int, tuple[int, ...]]] = []
    search = _Search(_items(sold, holds, [item.bundle_price for item in sold]))
    for bundles in _covers(search, 0, need, 0, below):
        counts = tuple(bundles.get(index, 0) * item.bundle for index, item in enumerate(sold))
        cost = sum(item.cost_of(count) for item, count in zip(sold, counts, strict=True))
        if cost >= least and any(counts):
            found.append((cost, counts))
        if len(found) >= most:
            break
    return [counts for _, counts in sorted(found)]


def _cheapest(
    sold: Sequence[SoldAs], holds: Sequence[int], prices: Sequence[int], need: int
) -> Purchase | None:
    if need <= 0:
        return Purchase((0,) * len(sold), 0)
    items = _items(sold, holds, prices)
    if not items:
        return None
    search = _Search(items)
    search.visit(0, need, 0, [])
    counts = [0] * len(sold)
    for item, bundles in zip(items, search.best_counts, strict=False):
        counts[item.index] = bundles * sold[item.index].bundle
    bound = search.best_cost
    if search.steps > STEP_LIMIT:
        step = gcd(*(item.price for item in items)) or 1
        bound = min(bound, -(-search.least(0, need) // step) * step)
    return Purchase(tuple(counts), bound)


def _items(sold: Sequence[SoldAs], holds: Sequence[int], prices: Sequence[int]) -> list[_Item]:
    items = [
        _Item(index, held * one.bundle, price, one.fewest_bundles)
        for index, (one, held, price) in enumerate(zip(sold, holds, prices, strict=True))
        if held > 0
    ]
    return sorted(items, key=lambda item: (Fraction(item.price, item.size), -item.size, item.index))


@dataclass
class _Search:
    items: list[_Item]
    steps: int = 0
    best_cost: int = -1
    best_counts: list[int] = field(default_factory=list)

    def least(self, first: int, need: int) -> int:
        """Bound what `need` costs with the put-ups from `first` on."""
        return -(-need * self.items[first].price // self.items[first].size)

    def visit(self, first: int, need: int, cost: int, counts: list[int]) -> None:
        """Try every useful count of put-up `first`, most of it first."""
        item = self.items[first]
        most = max(-(-need // item.size), item.fewest)
        self._offer(cost + most * item.price, [*counts, most])
        if first == len(self.items) - 1:
            return
        for count in range(most - 1, -1, -1):
            self.steps += 1
            if 0 < count < item.fewest and self.steps <= STEP_LIMIT:
                continue
            spent, rest = cost + count * item.price, need - count * item.size
            if self.steps > STEP_LIMIT or self.best_cost <= spent + self.least(first, rest):
                return  # that sum is the same for every smaller count
            if self.best_cost > spent + self.least(first + 1, rest):
                self.visit(first + 1, rest, spent, [*counts, count])

    def _offer(self, cost: int, counts: list[int]) -> None:
        if not self.best_counts or cost < self.best_cost:
            self.best_cost = cost
            self.best_counts = counts


def _covers(
    search: _Search, first: int, need: int, spent: int, below: int
) -> Iterator[dict[int, int]]:
    """Give purchases by the index of the put-up that hold the need and cost less than a limit."""
    if need <= 0:
        yield {}
    if first == len(search.items):
        return
    item = search.items[first]
    is_last = first == len(search.items) - 1
    most = max(-(-need // item.size), item.fewest) + SPARE_BUNDLES if need > 0 else 0
    for count in range(most, -1, -1):
        search.steps += 1
        if search.steps > STEP_LIMIT:
            return
        cost, rest = spent + count * item.price, need - count * item.size
        if cost >= below or 0 < count < item.fewest:
            continue
        if rest > 0 and (is_last or cost + search.least(first + 1, rest) >= below):
            return  # that sum is never less for a smaller count
        for more in _covers(search, first + 1, rest, cost, below):
            yield {item.index: count, **more}
