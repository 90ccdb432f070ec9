"""Will this strand be long enough? Everything the pattern's page shows for one size and ending."""

from dataclasses import dataclass
from functools import cached_property

from patterns import working
from patterns.cut_lengths import CutRule, Ending, EndingError, Piece, pieces_for
from patterns.geometry import Gauge, GaugeError, LengthError, StrandLength, StrandTable
from patterns.grid import GridPattern, first_picture_row
from patterns.knots import Finish
from patterns.shared_lengths import costs_of_lengths, with_distinct_lengths
from patterns.techniques import Pattern, strand_table

MOST_PIECES = 1_500


@dataclass(frozen=True)
class StrandLine:
    """A strand, and how its knotted thread adds up."""

    strand: StrandLength
    working: str

    @property
    def knotted_mm(self) -> int:
        """Its thread in the knotted part, to the nearest whole millimetre."""
        return round(self.strand.knotted_mm)


@dataclass(frozen=True)
class PieceLine:
    """A piece to cut, and how its length was made."""

    piece: Piece
    working: tuple[str, ...]


@dataclass(frozen=True)
class SlotLine:
    """The thread of one colour slot."""

    slot: str
    pieces: int
    total_mm: int


@dataclass(frozen=True)
class StrandAnswer:
    """Rows, band and pieces of one bracelet; lengths in mm, the band's to the nearest.

    `picture_rows` are the first and the last row of the band that show a centred picture.
    """

    rows: int
    repeat_rows: int
    picture_rows: tuple[int, int] | None
    band_length_mm: int
    band_width_mm: int
    strands: tuple[StrandLine, ...]
    pieces: tuple[PieceLine, ...]
    slots: tuple[SlotLine, ...]
    length_costs: tuple[tuple[int, int], ...]

    @cached_property
    def added_mm(self) -> int:
        """Thread that the pieces take more, to share lengths [mm]."""
        return sum(line.piece.added_mm for line in self.pieces)

    @cached_property
    def shortest_mm(self) -> int:
        """The shortest piece to cut [mm]."""
        return min(line.piece.cut_mm for line in self.pieces)

    @cached_property
    def longest_mm(self) -> int:
        """The longest piece to cut [mm]."""
        return max(line.piece.cut_mm for line in self.pieces)

    @cached_property
    def total_mm(self) -> int:
        """The thread of all pieces [mm]."""
        return sum(line.piece.cut_mm for line in self.pieces)

    @cached_property
    def has_folds(self) -> bool:
        """Whether any piece is folded."""
        return any(line.piece.fold_mm for line in self.pieces)

    @property
    def whole_repeats(self) -> int:
        """How often the repeat is tied in full."""
        return self.rows // self.repeat_rows

    @property
    def rows_over(self) -> int:
        """Rows tied after the last full repeat."""
        return self.rows % self.repeat_rows


class NoAnswer(ValueError):
    """The bracelet cannot be worked out so; the text says why and what to do."""


def _check_pieces(table: StrandTable) -> None:
    """Nobody lays out thousands of scraps, and a page could not show them."""
    if len(table.strands) > MOST_PIECES:
        raise NoAnswer(
            f"The colours are cut into {len(table.strands):,} threads; {MOST_PIECES:,} are the most."
            " Let colours be carried between their cells."
        )


def answer_for(
    pattern: Pattern,
    knotted_length_mm: int,
    gauge: Gauge,
    ending: Ending,
    rule: CutRule,
    distinct_lengths: int | None = None,
) -> StrandAnswer:
    """Work out one bracelet.

    Parameters
    ----------
    pattern : the pattern.
    knotted_length_mm : length of the band [mm].
    gauge : the maker's gauge.
    ending : how the bracelet begins and closes.
    rule : safety share and rounding step.
    distinct_lengths : in how many lengths the pieces are cut at the most; None for each its own.

    Raises
    ------
    NoAnswer
        When the finish cannot be met or a length is out of range.
    """
    try:
        table = strand_table(pattern, knotted_length_mm, gauge, rule.join_tail_mm)
        _check_pieces(table)
        pieces = with_distinct_lengths(pieces_for(table, ending, rule), distinct_lengths)
    except (LengthError, GaugeError, EndingError) as error:
        raise NoAnswer(str(error)) from error
    return StrandAnswer(
        rows=table.rows,
        repeat_rows=len(pattern.rows),
        picture_rows=_picture_rows(pattern, table.rows),
        band_length_mm=round(table.band_length_mm),
        band_width_mm=round(table.band_width_mm),
        strands=tuple(
            StrandLine(strand, working.knotted_working(strand, gauge)) for strand in table.strands
        ),
        pieces=tuple(
            PieceLine(piece, working.piece_working(piece, ending, rule)) for piece in pieces
        ),
        slots=_slot_lines(pieces),
        length_costs=costs_of_lengths(pieces),
    )


def _picture_rows(pattern: Pattern, rows: int) -> tuple[int, int] | None:
    if not isinstance(pattern, GridPattern) or pattern.finish is not Finish.CENTRED:
        return None
    first = first_picture_row(pattern, rows)
    return first, min(rows, first + len(pattern.rows) - 1)


def _slot_lines(pieces: tuple[Piece, ...]) -> tuple[SlotLine, ...]:
    totals: dict[str, list[int]] = {}
    for piece in pieces:
        totals.setdefault(piece.slot, []).append(piece.cut_mm)
    return tuple(SlotLine(slot, len(cuts), sum(cuts)) for slot, cuts in sorted(totals.items()))
