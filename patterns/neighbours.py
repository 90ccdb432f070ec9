"""Which colour slots lie beside each other in a tied band, and how often."""

from collections import Counter
from collections.abc import Iterator
from functools import lru_cache
from itertools import pairwise
from types import MappingProxyType
from typing import TypeAlias

from patterns.grid import GridPattern, band_rows
from patterns.knots import DiagonalPattern
from patterns.techniques import Pattern
from patterns.tying import tie_rows

SlotPair: TypeAlias = tuple[str, str]


@lru_cache(maxsize=128)
def neighbouring_slots(pattern: Pattern, rows: int) -> MappingProxyType[SlotPair, int]:
    """Count the sides along which knots of two different slots touch.

    Parameters
    ----------
    pattern
        A pattern of either technique.
    rows
        Rows of the band, 0 or more.

    Returns
    -------
    Sides by the two slots, in the order of the alphabet; no entry where they never touch.

    Notes
    -----
    A knot shows the strand that ties it. Diagonal: a knot stands on a corner, so the one in row
    r on positions p and p + 1 shares a side with those of row r + 1 that begin at p - 1 and
    p + 1. Grid: cells share sides with those beside, above and below them.
    """
    if isinstance(pattern, GridPattern):
        sides = _grid_sides(pattern, rows)
    else:
        sides = _diagonal_sides(pattern, rows)
    counts = Counter((min(pair), max(pair)) for pair in sides if pair[0] != pair[1])
    return MappingProxyType(dict(sorted(counts.items())))


def _grid_sides(pattern: GridPattern, rows: int) -> Iterator[SlotPair]:
    above: tuple[str, ...] = ()
    for cells in band_rows(pattern, rows):
        yield from pairwise(cells)
        yield from zip(above, cells, strict=False)
        above = cells


def _diagonal_sides(pattern: DiagonalPattern, rows: int) -> Iterator[SlotPair]:
    above: dict[int, str] = {}
    for tied_row in tie_rows(pattern, rows):
        here = {knot.left: pattern.slots[knot.tying - 1] for knot in tied_row}
        for left, slot in here.items():
            yield from ((above[left + way], slot) for way in (-1, 1) if left + way in above)
        above = here
