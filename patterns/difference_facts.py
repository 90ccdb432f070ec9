"""Two patterns side by side: how their numbers and their looks differ."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from patterns.analysis import Analysis, Measure
from patterns.cut_lengths import Piece
from patterns.differences import why_rows_differ
from patterns.geometry import Gauge, StrandLength, StrandTable
from patterns.grid import GridPattern, band_rows
from patterns.techniques import Pattern
from patterns.variants import drawn_slots
from patterns.working import counted, in_mm, knotted_working

FactKind = Literal["count", "length", "words"]
Words = tuple[str, str]
MORE_OR_FEWER: Words = ("more", "fewer")
MORE_OR_LESS: Words = ("more", "less")
LONGER_OR_SHORTER: Words = ("longer", "shorter")
WIDER_OR_NARROWER: Words = ("wider", "narrower")


@dataclass(frozen=True)
class Side:
    """One of the two patterns, in one bracelet: its strands, its pieces, and what it does."""

    pattern: Pattern
    table: StrandTable
    pieces: tuple[Piece, ...]
    analysis: Analysis
    gauge: Gauge


@dataclass(frozen=True)
class Value:
    """A number or words about one pattern; lengths in whole mm."""

    number: int
    words: str = ""
    working: str = ""


@dataclass(frozen=True)
class Fact:
    """One line of the comparison.

    Parameters
    ----------
    name
        What is compared.
    kind
        "count", "length" [mm] or "words".
    first, second
        Its value in each pattern.
    difference
        How the second stands to the first: "the same", "more", "wider"; with a number before it
        where `by` is not 0.
    by
        By how much they differ; 0 for the same and for words.
    """

    name: str
    kind: FactKind
    first: Value
    second: Value
    difference: str
    by: int


def compare_facts(first: Side, second: Side) -> tuple[Fact, ...]:
    """Compare two patterns in one bracelet of one knotted length, number by number."""
    facts = [
        _technique(first, second),
        *(_measured(measured, first, second) for measured in _MEASURED),
        _looks(first, second),
    ]
    return tuple(fact for fact in facts if fact is not None)


def _technique(first: Side, second: Side) -> Fact:
    words = (first.pattern.technique, second.pattern.technique)
    same = words[0] == words[1]
    return Fact(
        "Technique",
        "words",
        Value(0, words[0]),
        Value(0, words[1]),
        "the same" if same else "different",
        0,
    )


@dataclass(frozen=True)
class _Measured:
    name: str
    kind: FactKind
    words: Words
    of: Callable[[Side], Value | None]


def _measured(measured: _Measured, first: Side, second: Side) -> Fact | None:
    """Nothing where one of the two has no such number."""
    one, two = measured.of(first), measured.of(second)
    if one is None or two is None:
        return None
    by = two.number - one.number
    difference = "the same" if by == 0 else measured.words[by < 0]
    return Fact(measured.name, measured.kind, one, two, difference, abs(by))


def _value(measure: Measure) -> Value:
    return Value(measure.length_mm, working=measure.working)


def _strand_value(strand: StrandLength, side: Side) -> Value:
    return Value(round(strand.knotted_mm), strand.label, knotted_working(strand, side.gauge))


def _thread(side: Side) -> Value:
    parts = [
        f"{line.slots[0]}: {counted(line.pieces, 'piece')}, {in_mm(line.total_mm)}"
        for line in side.analysis.thread
    ]
    total_mm = sum(piece.cut_mm for piece in side.pieces)
    return Value(total_mm, working=f"{' + '.join(parts)} = {in_mm(total_mm)}")


def _band_length(side: Side) -> Value:
    length_mm = side.table.band_length_mm
    each_mm = length_mm / side.table.rows
    working = f"{counted(side.table.rows, 'row')} × {in_mm(each_mm, 3)} = {in_mm(length_mm)}"
    return Value(round(length_mm), working=working)


def _tied(side: Side) -> Value:
    tied = [strand.tied for strand in side.table.strands]
    most = f"the {counted(len(tied), 'strand')} tie from {min(tied)} to {max(tied)} each"
    return Value(sum(tied), working=most)


def _colours_back(side: Side) -> Value | None:
    back = side.analysis.colours_back
    return Value(back.repeats, working=back.length.working) if back else None


def _strands_back(side: Side) -> Value | None:
    back = side.analysis.strands_back
    return Value(back.repeats, working=back.length.working) if back else None


_MEASURED = (
    _Measured(
        "Strands that hang", "count", MORE_OR_FEWER, lambda side: Value(side.pattern.strands)
    ),
    _Measured(
        "Rows of a repeat", "count", MORE_OR_FEWER, lambda side: Value(len(side.pattern.rows))
    ),
    _Measured(
        "Length of a repeat",
        "length",
        LONGER_OR_SHORTER,
        lambda side: _value(side.analysis.repeat_length),
    ),
    _Measured("Rows to tie", "count", MORE_OR_FEWER, lambda side: Value(side.table.rows)),
    _Measured("Knots to tie", "count", MORE_OR_FEWER, _tied),
    _Measured("Length of the band", "length", LONGER_OR_SHORTER, _band_length),
    _Measured(
        "Width of the band", "length", WIDER_OR_NARROWER, lambda side: _value(side.analysis.width)
    ),
    _Measured("Pieces to cut", "count", MORE_OR_FEWER, lambda side: Value(len(side.pieces))),
    _Measured("Thread in all", "length", MORE_OR_LESS, _thread),
    _Measured(
        "Greediest strand",
        "length",
        MORE_OR_LESS,
        lambda side: _strand_value(side.analysis.greediest, side),
    ),
    _Measured(
        "Most frugal strand",
        "length",
        MORE_OR_LESS,
        lambda side: _strand_value(side.analysis.most_frugal, side),
    ),
    _Measured(
        "One length for every strand",
        "length",
        LONGER_OR_SHORTER,
        lambda side: Value(side.analysis.smallest_flat_mm),
    ),
    _Measured("Repeats until the colours are back", "count", MORE_OR_FEWER, _colours_back),
    _Measured("Repeats until every strand is back", "count", MORE_OR_FEWER, _strands_back),
)


def _looks(first: Side, second: Side) -> Fact | None:
    """Slot by slot over the rows both have: colours depend on the colourway, slots do not."""
    if why_rows_differ(first.pattern, second.pattern):
        return None
    rows = min(first.table.rows, second.table.rows)
    drawn, drawn_then = _shown(first.pattern, rows), _shown(second.pattern, rows)
    different = [
        number
        for number, (row, row_then) in enumerate(zip(drawn, drawn_then, strict=True), 1)
        if row != row_then
    ]
    words = f"{len(different)} of {rows} rows show other slots" if different else "the same"
    if different and len(different) < rows:
        words += f", the first is row {different[0]}"
    drawn_above = Value(0, "as drawn above")
    return Fact("Picture", "words", drawn_above, drawn_above, words, 0)


def _shown(pattern: Pattern, rows: int) -> list[tuple[str, ...]]:
    if isinstance(pattern, GridPattern):
        return list(band_rows(pattern, rows))
    return drawn_slots(pattern, rows)
