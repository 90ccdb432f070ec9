"""The linear bound by column generation, with patterns capped at the demand.

Notes
-----
The duals of the linear programme are turned into whole weights, and the bound is proven from these
weights in whole numbers, as in `planner.cutting.bounds`: nothing rests on the tolerances of the
linear solver. Any duals give a bound, so the search may end at any time.

References
----------
P. C. Gilmore and R. E. Gomory, "A linear programming approach to the cutting-stock problem",
Operations Research 9 (1961) 849-859; the bound from duals on the way is that of A. A. Farley,
"A note on bounding a class of linear programming problems", Operations Research 38 (1990) 922-923
(both from memory).
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from planner.cutting.bounds import Bounds, bounds_for_need
from planner.cutting.highs import INFINITY, Limits, quiet_highs
from planner.cutting.knapsack import VALUE_CELLS, Pattern, best_patterns
from planner.cutting.packs import SoldAs

SCALE = 1_000_000
"""Weights a smallest unit of money."""
MOST_ROUNDS = 2_000


@dataclass(frozen=True)
class Column:
    """A way to cut one stock length.

    Parameters
    ----------
    size
        The stock length [cells].
    put_up
        Index of the put-up; None for the shelf.
    pieces
        Pairs of (length [cells], count).
    """

    size: int
    put_up: int | None
    pieces: tuple[tuple[int, int], ...]


@dataclass(frozen=True)
class LinearBound:
    """What column generation proves, and by which weights.

    Parameters
    ----------
    bounds
        The strongest bounds on the way.
    value
        The optimum of the linear programme [smallest units of money]; None where it was cut short.
    weights
        Length [cells] to its weight in the last of them [`SCALE` a smallest unit of money].
    """

    bounds: Bounds
    value: float | None
    weights: dict[int, int]


def linear_bound(
    demand: Mapping[int, int],
    shelf: Mapping[int, int],
    sold: Sequence[SoldAs],
    limits: Limits,
    *,
    enough: int | None = None,
    start: Sequence[Column] = (),
) -> LinearBound | None:
    """Bound the cost of every plan by the linear programme over all patterns.

    Parameters
    ----------
    demand
        Length [cells] to count.
    shelf
        Length of a stock piece [cells] to count.
    sold
        The put-ups.
    limits
        When to stop.
    enough
        A cost; the search ends when the bound reaches it [smallest units of money].
    start
        Patterns to begin with.

    Returns
    -------
    LinearBound or None
        None where a stock piece has more cells than the table of values takes.
    """
    if max([*shelf, *(item.size for item in sold)], default=0) > VALUE_CELLS or not demand:
        return None
    return _Search(dict(demand), dict(shelf), list(sold), limits, enough).run(start)


@dataclass
class _Search:
    demand: dict[int, int]
    shelf: dict[int, int]
    sold: list[SoldAs]
    limits: Limits
    enough: int | None
    weights: dict[int, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.lengths = sorted(self.demand)
        self.counts = [self.demand[length] for length in self.lengths]
        self.row = {length: index for index, length in enumerate(self.lengths)}
        self.shelf_row = {size: len(self.lengths) + i for i, size in enumerate(self.shelf)}
        self.bounds = Bounds(0, 0, (0,) * len(self.sold))

    def run(self, start: Sequence[Column]) -> LinearBound:
        highs = self._master()
        for column in start:
            self._add(highs, column)
        for _ in range(MOST_ROUNDS):
            if self.limits.are_over:
                break
            highs.setOptionValue("time_limit", self.limits.left_s)
            highs.run()
            duals = _duals(highs)
            if duals is None:
                break
            new = self._price(duals)
            if self.enough is not None and self.bounds.cost >= self.enough:
                break
            if not new:
                value = highs.getInfo().objective_function_value
                return LinearBound(self.bounds, value, self.weights)
            for column in new:
                self._add(highs, column)
        return LinearBound(self.bounds, None, self.weights)

    def _master(self) -> Any:
        """Rows only: every piece is cut, no more is opened than lies there."""
        import numpy as np

        highs = quiet_highs(self.limits)
        none: tuple[Any, Any] = (np.array([], dtype=np.int32), np.array([]))
        for count in self.counts:
            highs.addRow(float(count), INFINITY, 0, *none)
        for count in self.shelf.values():
            highs.addRow(-INFINITY, float(count), 0, *none)
        # Pieces that come from nowhere, dearer than any way to cut them: so that it has a solution.
        dearest = 10 * max([1.0, *(item.price_each for item in self.sold)])
        for index in range(len(self.lengths)):
            highs.addCol(dearest, 0.0, INFINITY, 1, np.array([index], dtype=np.int32), np.ones(1))
        return highs

    def _add(self, highs: Any, column: Column) -> None:
        import numpy as np

        rows = [self.row[length] for length, _ in column.pieces]
        entries = [float(count) for _, count in column.pieces]
        cost = 0.0
        if column.put_up is None:
            rows.append(self.shelf_row[column.size])
            entries.append(1.0)
        else:
            cost = self.sold[column.put_up].price_each
        highs.addCol(
            cost, 0.0, INFINITY, len(rows), np.array(rows, dtype=np.int32), np.array(entries)
        )

    def _price(self, duals: Sequence[float]) -> list[Column]:
        """Prove the bound of these duals; give the patterns that may lower the programme."""
        weights = [int(max(0.0, duals[index]) * SCALE) for index in range(len(self.lengths))]
        sizes = sorted({*self.shelf, *(item.size for item in self.sold)})
        found = best_patterns(self.lengths, self.counts, weights, sizes)
        self._bound(weights, {size: value for size, (value, _) in found.items()})
        columns = []
        for size in self.shelf:
            value, pattern = found[size]
            if value > -duals[self.shelf_row[size]] * SCALE * (1 + 1e-9) + len(self.lengths):
                columns.append(self._column(size, None, pattern))
        for index, item in enumerate(self.sold):
            value, pattern = found[item.size]
            if value > item.price_each * SCALE * (1 + 1e-9) + len(self.lengths):
                columns.append(self._column(item.size, index, pattern))
        return columns

    def _column(self, size: int, put_up: int | None, pattern: Pattern) -> Column:
        pieces = tuple((self.lengths[index], taken) for index, taken in pattern)
        return Column(size, put_up, pieces)

    def _bound(self, weights: Sequence[int], holds: Mapping[int, int]) -> None:
        need = sum(weight * count for weight, count in zip(weights, self.counts, strict=True))
        need -= sum(holds[size] * count for size, count in self.shelf.items())
        found = bounds_for_need(need, [holds[item.size] for item in self.sold], self.sold)
        if found.possible:
            self.bounds = self.bounds.combined(found)
        self.weights = dict(zip(self.lengths, weights, strict=True))


def _duals(highs: Any) -> list[float] | None:
    import highspy

    if highs.getModelStatus() != highspy.HighsModelStatus.kOptimal:
        return None
    return list(highs.getSolution().row_dual)
