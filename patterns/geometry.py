"""From counted knots to millimetres of thread: gauge, rows, width and strand lengths."""

from dataclasses import dataclass
from math import ceil, pi, sqrt
from typing import Literal

from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern, Finish
from patterns.tying import StrandCount, count_strands

Role = Literal["strand", "base", "leading", "run"]

MIN_KNOTTED_LENGTH_MM = 1
MAX_KNOTTED_LENGTH_MM = 5000
MAX_ROWS = 20_000
# Without it 150.0000000001 mm of exactly 118 rows would ask for a 119th.
_ROW_NOISE = 1e-9


class GaugeError(ValueError):
    """A gauge that no thread has."""


class LengthError(ValueError):
    """A knotted length that cannot be tied."""


@dataclass(frozen=True)
class Gauge:
    """How a maker's thread lies in the knot.

    Parameters
    ----------
    thread_diameter_mm
        Thread diameter as it lies in the knot [mm], 0.1 to 10.
    loop_ratio
        Centre-line diameter of a loop round the base strand [thread diameters], 0.5 to 5; the
        maker's tightness.
    idle_run
        Thread a strand runs along the edge in a row it sits out [thread diameters], 0 to 10;
        sqrt 2 is the straight chord.

    Raises
    ------
    GaugeError
        When a value is not a number or outside its range.

    Notes
    -----
    Knotting strand, a knot: (2 + 2 pi c) d with c the loop ratio and d the diameter.
    Base strand, a knot: 2 d. A row adds sqrt(2) d: knots tile as squares of side 2 d that
    stand on a corner, and a row is half a diagonal. So N/2 squares side by side are N sqrt(2) d
    wide, and a strand that sits a row out runs straight along half a diagonal, sqrt(2) d.

    In a grid the knots hang below each other: a row adds 2 d, a column the outer diameter of a
    loop, (c + 1) d, and a thread that passes behind a column takes as much. Turning into the
    next row takes 2 d.
    """

    thread_diameter_mm: float = 0.9
    loop_ratio: float = 1.5
    idle_run: float = sqrt(2)

    def __post_init__(self) -> None:
        _check_range("thread diameter", self.thread_diameter_mm, 0.1, 10, " mm")
        _check_range("loop ratio", self.loop_ratio, 0.5, 5, "")
        _check_range("idle run", self.idle_run, 0, 10, " thread diameters")

    @property
    def knotting_mm(self) -> float:
        """Thread the tying strand spends on a knot [mm]."""
        return (2 + 2 * pi * self.loop_ratio) * self.thread_diameter_mm

    @property
    def base_mm(self) -> float:
        """Thread the base strand spends on a knot [mm]."""
        return 2 * self.thread_diameter_mm

    @property
    def idle_mm(self) -> float:
        """Thread a strand spends on a row it sits out [mm]."""
        return self.idle_run * self.thread_diameter_mm

    @property
    def row_mm(self) -> float:
        """Length a row adds to the band of a diagonal pattern [mm]."""
        return sqrt(2) * self.thread_diameter_mm

    @property
    def grid_row_mm(self) -> float:
        """Length a row adds to the band of a grid pattern [mm]."""
        return 2 * self.thread_diameter_mm

    @property
    def grid_column_mm(self) -> float:
        """Width a column adds to the band of a grid pattern [mm]."""
        return (self.loop_ratio + 1) * self.thread_diameter_mm

    @property
    def passing_mm(self) -> float:
        """Thread spent on passing behind one column of a grid [mm]."""
        return self.grid_column_mm

    @property
    def turning_mm(self) -> float:
        """Thread spent on going one row down a grid, at its edge or behind it [mm]."""
        return 2 * self.thread_diameter_mm


def _check_range(name: str, value: float, lowest: float, highest: float, unit: str) -> None:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise GaugeError(f"The {name} has to be a number.")
    if not lowest <= value <= highest:  # no comparison holds for nan
        raise GaugeError(f"The {name} has to be from {lowest} to {highest}{unit}.")


@dataclass(frozen=True)
class StrandLength:
    """What one strand does, and the thread it spends in the knotted part.

    Parameters
    ----------
    strand
        Its number, from 1, left to right; in a grid the leading strand and the runs follow.
    slot
        Its colour slot.
    tied, base, idle
        Knots it ties, knots it is the base strand in, rows it sits out at an edge.
    knotted_mm
        Thread it spends in the knotted part [mm].
    role
        "strand" in a diagonal pattern; "base", "leading" or "run" in a grid.
    passed, turned
        In a grid: columns it passes behind, and rows it goes down at the edge or behind.
    first_row, last_row
        In a grid: the rows of the band between which it ties.
    run
        Number of a run within its slot; 0 for other strands.
    """

    strand: int
    slot: str
    tied: int
    base: int
    idle: int
    knotted_mm: float
    role: Role = "strand"
    passed: int = 0
    turned: int = 0
    first_row: int | None = None
    last_row: int | None = None
    run: int = 0

    @property
    def label(self) -> str:
        """What sheets and pages call it."""
        if self.role == "run":
            return f"run {self.run} of {self.slot}"
        return {
            "strand": f"strand {self.strand}",
            "base": f"base strand {self.strand}",
            "leading": "leading strand",
        }[self.role]


@dataclass(frozen=True)
class StrandTable:
    """All strands of a bracelet of so many rows, and what its band measures [mm]."""

    rows: int
    strands: tuple[StrandLength, ...]
    band_length_mm: float
    band_width_mm: float


def rows_for(pattern: DiagonalPattern | GridPattern, knotted_length_mm: float, gauge: Gauge) -> int:
    """Return how many rows to tie for a knotted length.

    Parameters
    ----------
    pattern
        The pattern; its finish says how to end.
    knotted_length_mm
        Length of the band [mm], 1 to 5000.
    gauge
        The maker's gauge.

    Returns
    -------
    Rows, at least 1.

    Raises
    ------
    LengthError
        When the length is out of range, needs too many rows, is shorter than one repeat
        where at most whole repeats are asked for, or shorter than a centred picture.

    Notes
    -----
    Exact rows: ceil(L / p), with p what a row adds: sqrt(2) d, in a grid 2 d. Whole repeats
    are taken of these rows: the nearest number of repeats (a tie goes up; one at the least), at
    least, or at most as many rows. A centred picture takes the exact rows.
    """
    row_mm = gauge.grid_row_mm if isinstance(pattern, GridPattern) else gauge.row_mm
    exact = _exact_rows(knotted_length_mm, row_mm)
    repeat = len(pattern.rows)
    repeats = {
        Finish.NEAREST: max(1, (2 * exact + repeat) // (2 * repeat)),
        Finish.AT_LEAST: -(-exact // repeat),
        Finish.AT_MOST: exact // repeat,
    }
    too_short = f"{repeat * row_mm:.0f} mm, longer than {float(knotted_length_mm):.0f} mm."
    if pattern.finish is Finish.CENTRED and exact < repeat:
        raise LengthError(
            f"The picture of {repeat} rows is {too_short} Choose a longer size, or another finish."
        )
    if pattern.finish not in repeats:
        return exact
    if repeats[pattern.finish] == 0:
        raise LengthError(
            f"One repeat of {repeat} rows is {too_short} Choose a longer size or another finish."
        )
    return _checked_rows(repeats[pattern.finish] * repeat)


def _exact_rows(knotted_length_mm: float, row_mm: float) -> int:
    length_mm = float(knotted_length_mm)
    if not MIN_KNOTTED_LENGTH_MM <= length_mm <= MAX_KNOTTED_LENGTH_MM:
        raise LengthError(
            f"The knotted length has to be from {MIN_KNOTTED_LENGTH_MM} mm "
            f"to {MAX_KNOTTED_LENGTH_MM} mm."
        )
    return _checked_rows(ceil(length_mm / row_mm - _ROW_NOISE))


def _checked_rows(rows: int) -> int:
    if rows > MAX_ROWS:
        raise LengthError(
            f"That takes {rows} rows; {MAX_ROWS} is the most. "
            "Shorten the band or check the thread diameter."
        )
    return rows


def knotted_thread_mm(count: StrandCount, gauge: Gauge) -> float:
    """Return the thread a strand spends in the knotted part.

    Parameters
    ----------
    count
        What the strand does.
    gauge
        The maker's gauge.

    Returns
    -------
    Length [mm]: tied * (2 + 2 pi c) d + base * 2 d + idle * idle run * d.
    """
    return count.tied * gauge.knotting_mm + count.base * gauge.base_mm + count.idle * gauge.idle_mm


def band_width_mm(strands: int, gauge: Gauge) -> float:
    """Return the width of a band of so many strands [mm]: N sqrt(2) d."""
    return strands * gauge.row_mm


def band_length_mm(rows: int, gauge: Gauge) -> float:
    """Return the length so many rows add to a band [mm]: R sqrt(2) d."""
    return rows * gauge.row_mm


def diagonal_table(pattern: DiagonalPattern, knotted_length_mm: float, gauge: Gauge) -> StrandTable:
    """Return rows, counts and thread of every strand for a knotted length.

    Parameters
    ----------
    pattern
        The pattern.
    knotted_length_mm
        Length of the band [mm].
    gauge
        The maker's gauge.

    Returns
    -------
    The table, strands in the order of the start.

    Raises
    ------
    LengthError
        As `rows_for`.

    Notes
    -----
    For any pattern of N strands over an even number of rows that measure L the mean strand is
    L / (sqrt(2) d) * (((2 + 2 pi c) d + 2 d) (N - 1) / (2 N) + i d / N), with c the loop ratio
    and i the idle run: two rows hold N - 1 knots, each with one knotting and one base strand,
    and two idle rows. It does not depend on d.
    """
    rows = rows_for(pattern, knotted_length_mm, gauge)
    return StrandTable(
        rows=rows,
        strands=tuple(
            StrandLength(
                count.strand,
                count.slot,
                count.tied,
                count.base,
                count.idle,
                knotted_thread_mm(count, gauge),
            )
            for count in count_strands(pattern, rows)
        ),
        band_length_mm=band_length_mm(rows, gauge),
        band_width_mm=band_width_mm(pattern.strands, gauge),
    )
