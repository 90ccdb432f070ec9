"""What a pattern does: its repeat, its rows for each size, who ties, and where its thread goes."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from patterns.cut_lengths import Piece
from patterns.flat_rule import (
    FLAT_LENGTHS_MM,
    FlatLength,
    flat_length,
    smallest_flat_mm,
    strand_needs,
)
from patterns.geometry import Gauge, LengthError, StrandLength, StrandTable, rows_for
from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern, Finish
from patterns.techniques import Pattern
from patterns.tying import colour_order, order_of_repeat
from patterns.working import counted, in_mm, number

# Where a strand "hardly ties" and where it "ties all the time": its knots tied, as a share of the
# knots it takes part in. This project's own choice.
HARDLY_TIES_SHARE = 0.15
ALWAYS_TIES_SHARE = 0.85
_ENDS = {
    Finish.EXACT: "rounded up to whole rows",
    Finish.NEAREST: "taken to the nearest whole repeats of {repeat} rows",
    Finish.AT_LEAST: "taken up to whole repeats of {repeat} rows",
    Finish.AT_MOST: "taken down to whole repeats of {repeat} rows",
    Finish.CENTRED: "rounded up to whole rows, the picture in their middle",
}


@dataclass(frozen=True)
class Measure:
    """A length and how it was made.

    Parameters
    ----------
    length_mm
        The length, to the nearest millimetre [mm].
    working
        How it adds up.
    """

    length_mm: int
    working: str


@dataclass(frozen=True)
class SizeRows:
    """The rows of one size; `rows` is 0 where it cannot be tied, and `why_not` says why.

    `beside_picture` are the rows beyond those of the pattern: the background of a centred picture.
    """

    name: str
    length_mm: int
    rows: int
    repeats: int
    rows_over: int
    working: str
    why_not: str = ""
    beside_picture: int = 0


@dataclass(frozen=True)
class Return:
    """After how many repeats, rows and millimetres something is back in its place."""

    repeats: int
    rows: int
    length: Measure


@dataclass(frozen=True)
class BusyStrand:
    """A strand at one of the ends: it hardly ties, or ties all the time.

    Parameters
    ----------
    strand
        The strand.
    share
        Knots it ties, of the knots it takes part in [share].
    working
        How the share was made.
    """

    strand: StrandLength
    share: float
    working: str


@dataclass(frozen=True)
class GridFacts:
    """Where the thread of a grid pattern goes.

    Parameters
    ----------
    leading_share
        The leading strand's part of the thread in the knots [share].
    leading_working
        How that was made.
    runs
        Number of runs, of all colours but the background's.
    joins
        Places where a colour is cut and begins again.
    joins_working
        How the joins were counted.
    longest_run, shortest_run
        By the thread in their knots; None without runs.
    """

    leading_share: float
    leading_working: str
    runs: int
    joins: int
    joins_working: str
    longest_run: StrandLength | None
    shortest_run: StrandLength | None

    @property
    def runs_are_even(self) -> bool:
        """Whether there are runs, and all take the same to the millimetre."""
        if self.longest_run is None or self.shortest_run is None:
            return False
        return round(self.longest_run.knotted_mm) == round(self.shortest_run.knotted_mm)


@dataclass(frozen=True)
class ShadeThread:
    """The thread of one shade in a bracelet; `key` is None for slots without a shade."""

    key: int | None
    slots: tuple[str, ...]
    pieces: int
    total_mm: int
    working: str


@dataclass(frozen=True)
class Analysis:
    """Everything the page says about what a pattern does.

    Parameters
    ----------
    repeat_length, width
        Of one repeat, and of the band.
    sizes
        Rows for each size.
    colours_back, strands_back
        When the colours, and when every strand, are back; None in a grid, where nothing moves.
    hardly_tie, always_tie
        Strands at the two ends; empty in a grid, where the role decides.
    greediest, most_frugal
        Of the strands that hang, by thread in the knots; the first of equals.
    thread
        By shade.
    flat
        The flat rule of thumb at both its ends.
    smallest_flat_mm
        The smallest flat length that would do [mm].
    at_smallest
        That length, held against what each strand needs.
    grid
        What only a grid has.
    """

    repeat_length: Measure
    width: Measure
    sizes: tuple[SizeRows, ...]
    colours_back: Return | None
    strands_back: Return | None
    hardly_tie: tuple[BusyStrand, ...]
    always_tie: tuple[BusyStrand, ...]
    greediest: StrandLength
    most_frugal: StrandLength
    thread: tuple[ShadeThread, ...]
    flat: tuple[FlatLength, ...]
    smallest_flat_mm: int
    at_smallest: FlatLength
    grid: GridFacts | None

    @property
    def is_even(self) -> bool:
        """Whether no strand spends more than another, to the millimetre."""
        return round(self.greediest.knotted_mm) == round(self.most_frugal.knotted_mm)


def analyse(
    pattern: Pattern,
    table: StrandTable,
    pieces: Sequence[Piece],
    gauge: Gauge,
    *,
    sizes: Sequence[tuple[str, int]] = (),
    shade_keys: Mapping[str, int] | None = None,
) -> Analysis:
    """Say what a pattern does in one bracelet.

    Parameters
    ----------
    pattern
        The pattern.
    table
        Its strands for the knotted length.
    pieces
        The pieces to cut, from the same table.
    gauge
        The maker's gauge.
    sizes
        Name and knotted length [mm] of each size to give the rows for.
    shade_keys
        The shade of every slot that has one.
    """
    needs = strand_needs(pieces)
    hanging = [strand for strand in table.strands if strand.role != "run"]
    smallest = smallest_flat_mm(needs)
    diagonal = isinstance(pattern, DiagonalPattern)
    return Analysis(
        repeat_length=_repeat_length(pattern, gauge),
        width=_width(pattern, table, gauge),
        sizes=tuple(_size_rows(pattern, name, mm, gauge) for name, mm in sizes),
        colours_back=_back(pattern, gauge, colours=True),
        strands_back=_back(pattern, gauge, colours=False),
        hardly_tie=_busy(hanging, 0, HARDLY_TIES_SHARE) if diagonal else (),
        always_tie=_busy(hanging, ALWAYS_TIES_SHARE, 1) if diagonal else (),
        greediest=max(hanging, key=lambda strand: strand.knotted_mm),
        most_frugal=min(hanging, key=lambda strand: strand.knotted_mm),
        thread=thread_by_shade(pieces, shade_keys or {}),
        flat=tuple(flat_length(needs, flat_mm) for flat_mm in FLAT_LENGTHS_MM),
        smallest_flat_mm=smallest,
        at_smallest=flat_length(needs, smallest),
        grid=None if diagonal else _grid_facts(table),
    )


def row_mm(pattern: Pattern, gauge: Gauge) -> float:
    """Return the length a row adds to the band [mm]."""
    return gauge.grid_row_mm if isinstance(pattern, GridPattern) else gauge.row_mm


def _rows_measure(rows: int, pattern: Pattern, gauge: Gauge) -> Measure:
    each_mm = row_mm(pattern, gauge)
    length_mm = rows * each_mm
    return Measure(
        round(length_mm), f"{counted(rows, 'row')} × {in_mm(each_mm, 3)} = {in_mm(length_mm)}"
    )


def _repeat_length(pattern: Pattern, gauge: Gauge) -> Measure:
    return _rows_measure(len(pattern.rows), pattern, gauge)


def _width(pattern: Pattern, table: StrandTable, gauge: Gauge) -> Measure:
    if isinstance(pattern, GridPattern):
        parts = f"{counted(pattern.columns, 'column')} × {in_mm(gauge.grid_column_mm, 3)}"
    else:
        parts = f"{counted(pattern.strands, 'strand')} × {in_mm(gauge.row_mm, 3)}"
    return Measure(round(table.band_width_mm), f"{parts} = {in_mm(table.band_width_mm)}")


def _size_rows(pattern: Pattern, name: str, length_mm: int, gauge: Gauge) -> SizeRows:
    each_mm = row_mm(pattern, gauge)
    working = f"{in_mm(length_mm)} / {in_mm(each_mm, 3)} a row = {number(length_mm / each_mm, 2)}"
    try:
        rows = rows_for(pattern, length_mm, gauge)
    except LengthError as error:
        return SizeRows(name, length_mm, 0, 0, 0, working, str(error))
    repeats, rows_over = divmod(rows, len(pattern.rows))
    ends = _ENDS[pattern.finish].format(repeat=len(pattern.rows))
    working = f"{working}, {ends} = {rows}"
    beside = rows - len(pattern.rows)
    return SizeRows(
        name, length_mm, rows, repeats, rows_over, working, beside_picture=max(0, beside)
    )


def _back(pattern: Pattern, gauge: Gauge, *, colours: bool) -> Return | None:
    if isinstance(pattern, GridPattern):
        return None
    repeats = colour_order(pattern) if colours else order_of_repeat(pattern)
    rows = repeats * len(pattern.rows)
    return Return(repeats, rows, _rows_measure(rows, pattern, gauge))


def _busy(strands: Sequence[StrandLength], lowest: float, highest: float) -> tuple[BusyStrand, ...]:
    """A strand that never meets another ties nothing and is left out: it has no share."""
    return tuple(
        BusyStrand(strand, share, _share_working(strand, share))
        for strand in strands
        if (knots := strand.tied + strand.base)
        if lowest <= (share := strand.tied / knots) <= highest
    )


def _share_working(strand: StrandLength, share: float) -> str:
    knots = strand.tied + strand.base
    return (
        f"{strand.tied} tied / ({strand.tied} tied + {strand.base} as base = {knots})"
        f" = {number(share * 100, 1)} %"
    )


def thread_by_shade(
    pieces: Sequence[Piece], shade_keys: Mapping[str, int]
) -> tuple[ShadeThread, ...]:
    """Return the thread of one bracelet by shade, ends and safety included.

    Parameters
    ----------
    pieces
        The pieces to cut.
    shade_keys
        The shade of every slot that has one; a slot without one stands alone.

    Returns
    -------
    In the order of the first slot of each shade.
    """
    grouped: dict[tuple[int | None, str], list[Piece]] = {}
    for piece in sorted(pieces, key=lambda piece: piece.slot):
        key = shade_keys.get(piece.slot)
        grouped.setdefault((key, piece.slot if key is None else ""), []).append(piece)
    return tuple(_shade_thread(key, group) for (key, _), group in grouped.items())


def _shade_thread(key: int | None, pieces: list[Piece]) -> ShadeThread:
    cuts: dict[int, int] = {}
    for piece in pieces:
        cuts[piece.cut_mm] = cuts.get(piece.cut_mm, 0) + 1
    parts = [
        f"{count} × {in_mm(cut)}" if count > 1 else in_mm(cut)
        for cut, count in sorted(cuts.items(), reverse=True)
    ]
    total_mm = sum(piece.cut_mm for piece in pieces)
    return ShadeThread(
        key=key,
        slots=tuple(dict.fromkeys(piece.slot for piece in pieces)),
        pieces=len(pieces),
        total_mm=total_mm,
        working=f"{' + '.join(parts)} = {in_mm(total_mm)}",
    )


def _grid_facts(table: StrandTable) -> GridFacts:
    runs = [strand for strand in table.strands if strand.role == "run"]
    colours = len({run.slot for run in runs})
    leading = next(strand for strand in table.strands if strand.role == "leading")
    total_mm = sum(strand.knotted_mm for strand in table.strands)
    share = leading.knotted_mm / total_mm
    return GridFacts(
        leading_share=share,
        leading_working=(
            f"{in_mm(leading.knotted_mm)} / {in_mm(total_mm)} in all knots"
            f" = {number(share * 100, 1)} %"
        ),
        runs=len(runs),
        joins=len(runs) - colours,
        joins_working=(
            f"{counted(len(runs), 'run')} - {counted(colours, 'first run')}, one of each colour"
            f" = {len(runs) - colours}"
        ),
        longest_run=max(runs, key=lambda run: run.knotted_mm, default=None),
        shortest_run=min(runs, key=lambda run: run.knotted_mm, default=None),
    )
