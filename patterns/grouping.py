"""Fewer lengths to measure: pieces cut a little longer, so that several share one length."""

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True)
class Grouping:
    """Lengths put together.

    Parameters
    ----------
    levels_mm
        The distinct lengths to cut, shortest first [mm].
    added_mm
        Thread that the pieces take more than they need, together [mm].
    """

    levels_mm: tuple[int, ...]
    added_mm: int

    def level_of(self, length_mm: int) -> int:
        """Return the length to cut for a piece that needs so much [mm].

        Raises
        ------
        ValueError
            When the piece is longer than every level.
        """
        for level_mm in self.levels_mm:
            if level_mm >= length_mm:
                return level_mm
        raise ValueError(f"No length is as long as {length_mm} mm.")


def group_lengths(lengths_mm: Iterable[int], most: int) -> Grouping:
    """Return the cheapest way to cut pieces in at most so many distinct lengths.

    Parameters
    ----------
    lengths_mm
        What each piece needs, one entry a piece, each positive [mm].
    most
        Distinct lengths at the most, at least 1.

    Returns
    -------
    The grouping that adds the least thread; of equal ones that with the fewest levels, then the
    one whose longest groups are smallest.

    Raises
    ------
    ValueError
        When `most` is below 1 or a length is not positive.

    Notes
    -----
    A piece is never cut shorter than it needs, so each level is the longest piece of its group,
    and a group is a run of the sorted lengths: exchanging two pieces of overlapping groups adds
    nothing. So least(j, k) = min over i < j of least(i, k - 1) + cost(i, j), where cost(i, j) =
    l_j n(i, j) - s(i, j) rounds the i+1-th to the j-th distinct length up to the j-th, n counts
    the pieces among them and s sums their lengths. O(m^2 k) for m distinct lengths.

    References
    ----------
    The recurrence is that of exact clustering on a line: W. D. Fisher, On grouping for maximum
    homogeneity, J. Am. Stat. Assoc. 53 (1958) 789-798 (from memory), with rounding up for a cost.
    """
    if most < 1:
        raise ValueError("There has to be at least one length.")
    counts = Counter(lengths_mm)
    if any(length_mm <= 0 for length_mm in counts):
        raise ValueError("A length has to be positive.")
    distinct = sorted(counts)
    least, last = _tables(distinct, counts, min(most, len(distinct)))
    groups = _fewest_groups(least)
    return Grouping(_levels(distinct, last, groups), least[groups][-1] if distinct else 0)


def costs_by_count(lengths_mm: Iterable[int]) -> tuple[tuple[int, int], ...]:
    """Return for k = 1, 2, ... distinct lengths the thread added [mm], down to the k that adds none.

    Parameters
    ----------
    lengths_mm
        What each piece needs, one entry a piece [mm].
    """
    counts = Counter(lengths_mm)
    distinct = sorted(counts)
    least, _ = _tables(distinct, counts, len(distinct))
    return tuple((groups, least[groups][-1]) for groups in range(1, len(distinct) + 1))


_Table = list[list[int]]
_NOT_POSSIBLE = 10**15


def _tables(distinct: list[int], counts: Counter[int], most: int) -> tuple[_Table, _Table]:
    """Return least[k][j] for the first j lengths in k groups, and where the last group begins."""
    cost = _costs(distinct, counts)
    size = len(distinct)
    least = [[0] + [_NOT_POSSIBLE] * size]
    last = [[0] * (size + 1)]
    for groups in range(1, most + 1):
        before = least[-1]
        row = [_NOT_POSSIBLE] * (size + 1)
        starts = [0] * (size + 1)
        for end in range(groups, size + 1):
            # Of equal costs the latest start, so that the longest group is the smallest.
            row[end], starts[end] = min(
                (before[start] + cost[start][end], -start) for start in range(groups - 1, end)
            )
            starts[end] = -starts[end]
        least.append(row)
        last.append(starts)
    return least, last


def _costs(distinct: list[int], counts: Counter[int]) -> _Table:
    """Return cost[i][j]: thread added where the i+1-th to the j-th length are cut as the j-th."""
    size = len(distinct)
    cost = [[0] * (size + 1) for _ in range(size + 1)]
    for end in range(1, size + 1):
        added = 0
        for start in range(end - 1, -1, -1):
            length_mm = distinct[start]
            added += counts[length_mm] * (distinct[end - 1] - length_mm)
            cost[start][end] = added
    return cost


def _fewest_groups(least: _Table) -> int:
    cheapest = min(row[-1] for row in least)
    return next(groups for groups, row in enumerate(least) if row[-1] == cheapest)


def _levels(distinct: list[int], last: _Table, groups: int) -> tuple[int, ...]:
    levels = []
    end = len(distinct)
    for remaining in range(groups, 0, -1):
        levels.append(distinct[end - 1])
        end = last[remaining][end]
    return tuple(reversed(levels))
