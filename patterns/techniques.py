"""What the techniques have in common: one name for any pattern, one way to its lengths."""

from dataclasses import replace
from typing import TypeAlias

from patterns.geometry import Gauge, StrandTable, diagonal_table
from patterns.grid import GridPattern
from patterns.grid_lengths import DEFAULT_JOIN_TAIL_MM, grid_table
from patterns.knots import DiagonalPattern, Finish

Pattern: TypeAlias = DiagonalPattern | GridPattern
USUAL_LENGTH_MM = 150


def strand_table(
    pattern: Pattern,
    knotted_length_mm: float,
    gauge: Gauge,
    join_tail_mm: float = DEFAULT_JOIN_TAIL_MM,
) -> StrandTable:
    """Return rows, counts and thread of every strand for a knotted length.

    Parameters
    ----------
    pattern
        A pattern of either technique.
    knotted_length_mm
        Length of the band [mm].
    gauge
        The maker's gauge.
    join_tail_mm
        Tail at each end of a run [mm]; only grid patterns have runs.

    Raises
    ------
    LengthError
        As `patterns.geometry.rows_for`.
    """
    if isinstance(pattern, GridPattern):
        return grid_table(pattern, knotted_length_mm, gauge, join_tail_mm)
    return diagonal_table(pattern, knotted_length_mm, gauge)


def usual_thread_mm(pattern: Pattern) -> float:
    """Return the thread in the knots of a usual band, to compare patterns by [mm].

    Notes
    -----
    The band is 150 mm at the standard gauge; a grid pattern's rows are taken in turn, so that a
    picture longer than that compares too.
    """
    in_turn = replace(pattern, finish=Finish.EXACT)
    table = strand_table(in_turn, USUAL_LENGTH_MM, Gauge())
    return sum(strand.knotted_mm for strand in table.strands)


def slot_words(pattern: Pattern, slot: str) -> str:
    """Say where a slot stands: "strands 1, 2", "34 cells of one repeat"."""
    if isinstance(pattern, GridPattern):
        cells = sum(row.count(slot) for row in pattern.rows)
        words = f"{cells} cell{'' if cells == 1 else 's'} of one repeat"
        return f"base and leading strands, {words}" if slot == pattern.background else words
    numbers = [str(number) for number, own in enumerate(pattern.slots, 1) if own == slot]
    return f"strand{'' if len(numbers) == 1 else 's'} {', '.join(numbers)}"
