"""The exact search over patterns: only those that a cheaper plan could use are enumerated.

Notes
-----
Let the weights of the linear bound be w, the most that stock of length L can hold of them W(L), and
the bound itself b. Summed over a plan, what each opened piece holds less than W(L), together with
W of the shelf's pieces left unopened, is what the plan costs above b. So a plan that costs at most
c uses no pattern that holds less than W(L) - (c - b); when these are few, an integer programme over
them settles whether there is such a plan.

References
----------
The idea is reduced-cost enumeration as used for routing problems: R. Baldacci, N. Christofides and
A. Mingozzi, Mathematical Programming 115 (2008) 351-385 (from memory).
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.cutting.highs import INFINITY, Limits, Programme, Verdict, solve_whole
from planner.cutting.knapsack import value_tables
from planner.cutting.linear import SCALE, Column
from planner.cutting.packs import SoldAs
from planner.cutting.put_up_columns import add_put_up

if TYPE_CHECKING:
    import numpy as np

MOST_PATTERNS = 20_000
"""Beyond so many HiGHS does not get far in seconds (measured)."""
QUICK_PATTERNS = 4_000
"""So many are settled in a second or so; of more, presolving runs on past its time (measured)."""


@dataclass(frozen=True)
class PatternPlan:
    """The answer of the search over patterns.

    Parameters
    ----------
    verdict
        ``"optimal"``: `opened` is the cheapest plan up to the cost asked for; ``"impossible"``:
        proven that no plan costs so little; ``"unknown"``: not settled.
    opened
        Patterns and how often each is cut; together they may hold more pieces than wanted.
    """

    verdict: Verdict
    opened: tuple[tuple[Column, int], ...]


def cheapest_by_patterns(
    demand: Mapping[int, int],
    shelf: Mapping[int, int],
    sold: Sequence[SoldAs],
    weights: Mapping[int, int],
    most: int,
    limits: Limits,
    *,
    share: float = 1.0,
    most_patterns: int = MOST_PATTERNS,
) -> PatternPlan | None:
    """Search for the cheapest plan that costs at most `most`.

    Parameters
    ----------
    demand
        Length [cells] to count.
    shelf
        Length of a stock piece [cells] to count.
    sold
        The put-ups.
    weights
        Length [cells] to its weight in the linear bound [`SCALE` a smallest unit of money].
    most
        Only plans up to this cost are of interest [smallest units of money].
    limits
        When to stop.
    share
        Only patterns that spend at most this share of the gap are looked at: below 1 a quick way to
        a plan, since a plan spends the gap once, but no proof.
    most_patterns
        With more patterns it is not tried.

    Returns
    -------
    PatternPlan or None
        None where there are too many patterns, so that a larger share is not worth trying.
    """
    columns = _columns(demand, shelf, sold, weights, most, limits, share, most_patterns)
    if columns is None:
        return None
    programme = Programme()
    rows = {length: programme.row(count, INFINITY) for length, count in demand.items()}
    opened_rows = {size: programme.row(0, count) for size, count in shelf.items()}
    money = programme.row(0, most)
    new_rows = [programme.row(-INFINITY, 0) for _ in sold]
    for index, item in enumerate(sold):
        add_put_up(programme, item, new_rows[index], money, 1)
    first = len(programme.columns)
    for column in columns:
        opened = opened_rows[column.size] if column.put_up is None else new_rows[column.put_up]
        entries: dict[int, float] = {rows[length]: count for length, count in column.pieces}
        programme.column({**entries, opened: 1})
    answer = solve_whole(programme, limits, presolve=len(columns) <= QUICK_PATTERNS)
    used = zip(columns, answer.values[first:], strict=False)
    verdict = answer.verdict if share >= 1 or answer.verdict != "impossible" else "unknown"
    return PatternPlan(verdict, tuple((column, count) for column, count in used if count))


def _columns(
    demand: Mapping[int, int],
    shelf: Mapping[int, int],
    sold: Sequence[SoldAs],
    weights: Mapping[int, int],
    most: int,
    limits: Limits,
    share: float,
    most_patterns: int,
) -> list[Column] | None:
    """All patterns that a plan of at most that cost could use; None where there are too many."""
    lengths = sorted(demand)
    counts = [demand[length] for length in lengths]
    worth = [weights[length] for length in lengths]
    largest = max([*shelf, *(item.size for item in sold)])
    tables = value_tables(lengths, counts, worth, largest)
    holds = tables[-1]
    base = sum(w * count for w, count in zip(worth, counts, strict=True))
    base -= sum(int(holds[size]) * count for size, count in shelf.items())
    # What rounding may have made of prices that the weights exceed a little.
    slack = int((most * SCALE - base) * share)
    excess = max([0, *(int(holds[x.size] - x.price_each * SCALE) + 1 for x in sold)])
    slack += excess * (sum(counts) + 1)
    found: list[Column] = []
    wanted: list[tuple[int, int | None, int]]
    wanted = [(size, None, int(holds[size]) - slack) for size in shelf]
    wanted += [(x.size, i, int(x.price_each * SCALE) - slack) for i, x in enumerate(sold)]
    walk = _Walk(lengths, counts, worth, tables)
    for size, put_up, least in wanted:
        for pieces in walk.patterns(len(lengths), size, least):
            if pieces:
                found.append(Column(size, put_up, pieces))
            if len(found) > most_patterns or limits.are_over:
                return None
    return found


@dataclass(frozen=True)
class _Walk:
    lengths: Sequence[int]
    counts: Sequence[int]
    worth: Sequence[int]
    tables: Sequence["np.ndarray"]

    def patterns(self, first: int, room: int, least: int) -> Iterator[tuple[tuple[int, int], ...]]:
        """Give the patterns of the first lengths that fit and weigh enough; no step leads nowhere."""
        if first == 0:
            yield ()
            return
        index = first - 1
        length = self.lengths[index]
        for taken in range(min(self.counts[index], room // length), -1, -1):
            rest, still = room - taken * length, least - taken * self.worth[index]
            if self.tables[index][rest] < still:
                continue
            for more in self.patterns(index, rest, still):
                yield (*more, (length, taken)) if taken else more
