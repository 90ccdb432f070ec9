"""Proven lower bounds on what the new thread must cost and how many put-ups must be bought.

Notes
-----
Give every piece any weight of at least 0, and let W(L) be the largest weight that can be cut from
a stock piece of length L. Summed over all stock pieces of any plan this gives

    total weight <= sum of W over the shelf + sum of W over what is bought,

so what is bought must hold at least the total weight less the shelf's. It holds for stock of any
lengths, and for every choice of weights; two are used here. W may also be replaced by anything
larger.

References
----------
S. Martello and P. Toth, Knapsack Problems (1990), chapter 8 (bin packing bounds); the rounded
weights are those of S. P. Fekete and J. Schepers, "New classes of fast lower bounds for bin packing
problems", Mathematical Programming 91 (2001) (both from memory).
"""

from bisect import bisect_right
from collections import deque
from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from math import ceil

from planner.cutting.knapsack import SUM_CELLS, reachable_sums
from planner.cutting.packs import SoldAs
from planner.cutting.purchase import cheapest_purchase, fewest_put_ups

LARGEST_DIVISOR = 30
MOST_REFERENCES = 6
VALUE_LIMIT = 4_000
"""Most weight a single stock piece may hold for rounded weights to be tried."""


@dataclass(frozen=True)
class Bounds:
    """What is proven about a problem.

    Parameters
    ----------
    cost
        No plan costs less [smallest units of money].
    bought
        No plan buys fewer put-ups.
    purchase
        The cheapest put-ups (how many single ones of each) that could hold what the shelf cannot:
        a target for a plan.
    possible
        False when it is proven that no plan exists.
    """

    cost: int
    bought: int
    purchase: tuple[int, ...]
    possible: bool = True

    def combined(self, other: "Bounds") -> "Bounds":
        """Join two bounds on one problem.

        Parameters
        ----------
        other
            The other bounds.

        Returns
        -------
        Bounds
            The stronger of each, with the dearer target.
        """
        dearer = self if self.cost >= other.cost else other
        return Bounds(
            dearer.cost,
            max(self.bought, other.bought),
            dearer.purchase,
            self.possible and other.possible,
        )


def with_fewest(bounds: Bounds, sold: Sequence[SoldAs]) -> Bounds:
    """Say how many put-ups a proven cost takes: at the dearest price of one, at least so many.

    Parameters
    ----------
    bounds
        What is proven.
    sold
        The put-ups.

    Returns
    -------
    Bounds
        The same, or with more put-ups.
    """
    dearest = max((Fraction(item.price, item.pack_size) for item in sold), default=Fraction(0))
    if not dearest:
        return bounds
    return replace(bounds, bought=max(bounds.bought, ceil(bounds.cost / dearest)))


def length_bounds(demand: dict[int, int], shelf: dict[int, int], sold: Sequence[SoldAs]) -> Bounds:
    """Bound by total length, counting of each stock piece only what pieces can fill.

    Parameters
    ----------
    demand
        Length [cells] to count.
    shelf
        Length of a stock piece [cells] to count.
    sold
        The put-ups.

    Returns
    -------
    Bounds
        With W(L) the largest sum of pieces, counted as often as they are wanted, up to L.
    """
    usable = usable_lengths(demand, [*shelf, *(item.size for item in sold)])
    need = sum(length * count for length, count in demand.items())
    need -= sum(usable[length] * count for length, count in shelf.items())
    return bounds_for_need(need, [usable[item.size] for item in sold], sold)


def rounded_bounds(demand: dict[int, int], shelf: dict[int, int], sold: Sequence[SoldAs]) -> Bounds:
    """Bound by rounded weights, which see that long pieces do not share a stock piece.

    Parameters
    ----------
    demand
        Length [cells] to count.
    shelf
        Length of a stock piece [cells] to count.
    sold
        The put-ups.

    Returns
    -------
    Bounds
        The strongest over the weights floor((k + 1) l / (L + 1)), k = 1..30, L a put-up (or the
        longest of the shelf where none is sold). With k = 1 a piece longer than half a put-up
        weighs 1, and only one of these fits.
    """
    bounds = Bounds(0, 0, (0,) * len(sold))
    sizes = [item.size for item in sold]
    capacities = sorted({*shelf, *sizes})
    for size in sorted(set(sizes), reverse=True)[:MOST_REFERENCES] or capacities[-1:]:
        for divisor in range(1, LARGEST_DIVISOR + 1):
            if capacities[-1] * (divisor + 1) > VALUE_LIMIT * size:
                break
            weights = {length: (divisor + 1) * length // (size + 1) for length in demand}
            holds = _held_weights(weights, capacities)
            need = sum(weights[length] * count for length, count in demand.items())
            need -= sum(holds[length] * count for length, count in shelf.items())
            found = bounds_for_need(need, [holds[size] for size in sizes], sold)
            bounds = bounds.combined(found)
    return bounds


def usable_lengths(demand: dict[int, int], capacities: Sequence[int]) -> dict[int, int]:
    """Find how much of each stock length can be cut at all.

    Parameters
    ----------
    demand
        Length [cells] to count.
    capacities
        Lengths of stock pieces [cells].

    Returns
    -------
    dict
        Length of a stock piece to the largest sum of wanted pieces within it [cells]; beyond
        200,000 cells the length itself, which is never too small.
    """
    total = sum(length * count for length, count in demand.items())
    largest = max((capacity for capacity in capacities if capacity <= SUM_CELLS), default=0)
    lengths = sorted(demand)
    steps = reachable_sums(lengths, [demand[length] for length in lengths], min(largest, total))
    sums = deque(steps, maxlen=1).pop()
    usable = {}
    for capacity in set(capacities):
        if capacity >= total or capacity > SUM_CELLS:
            usable[capacity] = min(capacity, total)
        else:
            usable[capacity] = (sums & ((1 << (capacity + 1)) - 1)).bit_length() - 1
    return usable


def bounds_for_need(need: int, holds: Sequence[int], sold: Sequence[SoldAs]) -> Bounds:
    """Bound what must be bought to hold a weight.

    Parameters
    ----------
    need
        The weight that the shelf cannot hold.
    holds
        The most weight each put-up can hold.
    sold
        The put-ups.

    Returns
    -------
    Bounds
        Impossible when something is needed and nothing holds anything.
    """
    purchase = cheapest_purchase(sold, holds, need)
    if purchase is None:
        return Bounds(0, 0, (0,) * len(holds), possible=False)
    return Bounds(purchase.bound, fewest_put_ups(sold, holds, need), purchase.counts)


def _held_weights(weights: dict[int, int], capacities: list[int]) -> dict[int, int]:
    """Give the largest weight each capacity holds, were every piece wanted without end."""
    shortest: dict[int, int] = {}
    for length in sorted(weights, reverse=True):
        if weights[length]:
            shortest[weights[length]] = length
    if not shortest:
        return dict.fromkeys(capacities, 0)
    # least[v] is the shortest length that weighs v or more.
    least = [0]
    while least[-1] <= capacities[-1]:
        weight = len(least)
        least.append(min(least[max(0, weight - w)] + length for w, length in shortest.items()))
    return {capacity: bisect_right(least, capacity) - 1 for capacity in capacities}
