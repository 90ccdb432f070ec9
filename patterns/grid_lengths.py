"""Strand lengths of grid patterns: base strands, the leading strand, and the runs of a colour."""

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise

from patterns.geometry import Gauge, StrandLength, StrandTable, rows_for
from patterns.grid import Carry, Cell, GridPattern, tie_cells

DEFAULT_JOIN_TAIL_MM = 50


@dataclass(frozen=True)
class Run:
    """One thread of a colour from its first cell to its last.

    Parameters
    ----------
    slot
        The colour slot.
    number
        Counted from 1 within the slot, in the order in which the runs begin.
    cells
        Cells it ties.
    passed
        Columns it is carried past, behind the band.
    turned
        Rows it is carried down, behind the band.
    first, last
        Its first and its last cell in the band.
    """

    slot: str
    number: int
    cells: int
    passed: int
    turned: int
    first: Cell
    last: Cell


def way_between(start: Cell, end: Cell) -> tuple[int, int]:
    """Return the columns passed and the rows gone down from one cell to a later one of its colour.

    Notes
    -----
    In one row the columns between the two are passed; neighbours cost nothing, since the link
    of a knot leads to the next. To another row the thread goes straight down and passes the
    columns on the way, its own one included: so the leading strand, which turns at an edge
    (one row down) and passes behind every cell of another colour, is counted by the same rule.
    """
    columns = abs(end.column - start.column)
    rows = end.row - start.row
    return (columns - 1, 0) if rows == 0 else (columns, rows)


def find_runs(
    pattern: GridPattern, rows: int, gauge: Gauge, join_tail_mm: float = DEFAULT_JOIN_TAIL_MM
) -> tuple[Run, ...]:
    """Return the runs of every colour but the background's.

    Parameters
    ----------
    pattern
        The pattern; its `carry` decides where a colour is cut.
    rows
        Rows of the whole band.
    gauge
        The maker's gauge.
    join_tail_mm
        Tail left hanging at each end of a run [mm].

    Returns
    -------
    Runs by slot, then in the order in which they begin.

    Notes
    -----
    Between two cells of a colour, next to each other in the order of tying, the thread is
    carried where that takes no more than the two tails of a join; the choice at one place does
    not touch any other, so the sum is the least.
    """
    by_slot: dict[str, list[Cell]] = {}
    for row in tie_cells(pattern, rows):
        for cell in row:
            if cell.slot != pattern.background:
                by_slot.setdefault(cell.slot, []).append(cell)
    return tuple(
        run
        for slot in sorted(by_slot)
        for run in _runs_of(by_slot[slot], pattern.carry, gauge, join_tail_mm)
    )


def _runs_of(cells: list[Cell], carry: Carry, gauge: Gauge, join_tail_mm: float) -> Iterable[Run]:
    groups = [[cells[0]]]
    for before, cell in pairwise(cells):
        if _is_carried(before, cell, carry, gauge, join_tail_mm):
            groups[-1].append(cell)
        else:
            groups.append([cell])
    return (_run(group, number) for number, group in enumerate(groups, start=1))


def _is_carried(start: Cell, end: Cell, carry: Carry, gauge: Gauge, join_tail_mm: float) -> bool:
    if carry is Carry.CARRIED:
        return True
    if carry is Carry.CUT:
        return end.row - start.row <= 1 and abs(end.column - start.column) <= 1
    return carried_mm(*way_between(start, end), gauge) <= 2 * join_tail_mm


def _run(cells: list[Cell], number: int) -> Run:
    ways = [way_between(start, end) for start, end in pairwise(cells)]
    return Run(
        slot=cells[0].slot,
        number=number,
        cells=len(cells),
        passed=sum(passed for passed, _ in ways),
        turned=sum(turned for _, turned in ways),
        first=cells[0],
        last=cells[-1],
    )


def carried_mm(passed: int, turned: int, gauge: Gauge) -> float:
    """Return the thread of a way behind the band [mm]: (c + 1) d a column, 2 d a row."""
    return passed * gauge.passing_mm + turned * gauge.turning_mm


def grid_table(
    pattern: GridPattern,
    knotted_length_mm: float,
    gauge: Gauge,
    join_tail_mm: float = DEFAULT_JOIN_TAIL_MM,
) -> StrandTable:
    """Return rows, counts and thread of every strand of a grid pattern.

    Parameters
    ----------
    pattern
        The pattern.
    knotted_length_mm
        Length of the band [mm].
    gauge
        The maker's gauge.
    join_tail_mm
        Tail at each end of a run [mm]; it decides what is carried, and is not in the table.

    Returns
    -------
    The table: base strands left to right, the leading strand, then the runs.

    Raises
    ------
    LengthError
        As `rows_for`.

    Notes
    -----
    With d the thread diameter and c the loop ratio: a cell takes (2 + 2 pi c) d of the strand
    that ties it and 2 d of its base strand, so a base strand takes 2 d a row, the length of
    the band. Behind a cell of another colour the leading strand passes, (c + 1) d; at the end
    of each row it turns, 2 d.
    """
    rows = rows_for(pattern, knotted_length_mm, gauge)
    columns = pattern.columns
    runs = find_runs(pattern, rows, gauge, join_tail_mm)
    return StrandTable(
        rows=rows,
        strands=(
            *(_base_strand(column, pattern, rows, gauge) for column in range(1, columns + 1)),
            _leading_strand(columns + 1, pattern, rows, gauge),
            *(_run_strand(columns + 1 + place, run, gauge) for place, run in enumerate(runs, 1)),
        ),
        band_length_mm=rows * gauge.grid_row_mm,
        band_width_mm=columns * gauge.grid_column_mm,
    )


def _base_strand(number: int, pattern: GridPattern, rows: int, gauge: Gauge) -> StrandLength:
    return StrandLength(
        strand=number,
        slot=pattern.background,
        tied=0,
        base=rows,
        idle=0,
        knotted_mm=rows * gauge.base_mm,
        role="base",
    )


def _leading_strand(number: int, pattern: GridPattern, rows: int, gauge: Gauge) -> StrandLength:
    slots = Counter(cell.slot for row in tie_cells(pattern, rows) for cell in row)
    tied = slots[pattern.background]
    passed = rows * pattern.columns - tied
    return StrandLength(
        strand=number,
        slot=pattern.background,
        tied=tied,
        base=0,
        idle=0,
        knotted_mm=tied * gauge.knotting_mm + carried_mm(passed, rows, gauge),
        role="leading",
        passed=passed,
        turned=rows,
        first_row=1,
        last_row=rows,
    )


def _run_strand(number: int, run: Run, gauge: Gauge) -> StrandLength:
    return StrandLength(
        strand=number,
        slot=run.slot,
        tied=run.cells,
        base=0,
        idle=0,
        knotted_mm=run.cells * gauge.knotting_mm + carried_mm(run.passed, run.turned, gauge),
        role="run",
        passed=run.passed,
        turned=run.turned,
        first_row=run.first.row,
        last_row=run.last.row,
        run=run.number,
    )
