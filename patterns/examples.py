"""Worked examples beside the forms: what a gauge and an ending come to."""

from dataclasses import dataclass

from patterns.cut_lengths import CutRule, Ending, EndingError, pieces_for
from patterns.geometry import Gauge, StrandLength, StrandTable, rows_for
from patterns.knots import DiagonalPattern, Knot
from patterns.strand_answer import PieceLine
from patterns.working import piece_working

EXAMPLE_BAND_MM = 150
# The rows of a length are the same for every pattern that ends with exact rows.
_TWO_STRANDS = DiagonalPattern("Two strands", ("A", "B"), ((Knot.F,), ()))
_EXAMPLE_STRANDS = (
    StrandLength(1, "A", 0, 0, 0, 600.0),
    StrandLength(2, "A", 0, 0, 0, 500.0),
    StrandLength(3, "B", 0, 0, 0, 600.0),
)


@dataclass(frozen=True)
class GaugeExample:
    """What knots of a gauge take, and the rows of a band of 150 mm; lengths in mm."""

    knotting_mm: float
    base_mm: float
    idle_mm: float
    rows: int


def gauge_example(gauge: Gauge) -> GaugeExample:
    """Return what one knot takes, and the rows of the example band."""
    return GaugeExample(
        knotting_mm=gauge.knotting_mm,
        base_mm=gauge.base_mm,
        idle_mm=gauge.idle_mm,
        rows=rows_for(_TWO_STRANDS, EXAMPLE_BAND_MM, gauge),
    )


def ending_example(ending: Ending, rule: CutRule) -> tuple[PieceLine, ...]:
    """Return the pieces of example strands with 60 and 50 cm in the knots.

    A straight start shows one strand; a folded one a pair and a strand without a partner.
    Empty where the workshop's rule cannot be met.
    """
    strands = _EXAMPLE_STRANDS if ending.start == "folded" else _EXAMPLE_STRANDS[:1]
    try:
        pieces = pieces_for(
            StrandTable(rows=1, strands=strands, band_length_mm=0, band_width_mm=0), ending, rule
        )
    except EndingError:
        return ()
    return tuple(PieceLine(piece, piece_working(piece, ending, rule)) for piece in pieces)
