"""Variants of a pattern that look the same and ask less of the greediest strand."""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Literal

from patterns.even_use import (
    MOST_EVALUATIONS,
    EvenUse,
    KnotChange,
    even_use,
    repeats_to_write_out,
    unrolled,
)
from patterns.geometry import Gauge, LengthError, StrandLength, StrandTable, diagonal_table
from patterns.knots import MAX_REPEAT_ROWS, DiagonalPattern
from patterns.tying import mirrored, order_after, tie_rows
from patterns.working import counted, in_mm, number

# Less than this is not worth another pattern: this project's own choice.
LEAST_SAVING_SHARE = 0.01

Kind = Literal["even", "shifted", "mirrored"]
Picture = Literal["same", "shifted", "mirrored"]
DrawnRows = list[tuple[str, ...]]


@dataclass(frozen=True)
class Variant:
    """A pattern that asks less of its greediest strand.

    Parameters
    ----------
    kind
        How it was made.
    pattern
        The variant, an ordinary pattern.
    changes
        What is different, a sentence.
    picture
        "same", or "shifted" along the band, or every second repeat "mirrored"; compared knot by
        knot over the whole band.
    looks
        The same in words.
    longest, longest_before
        The longest strand, now and in the pattern as it is.
    shortest
        The shortest strand now.
    working
        How the longest strands compare.
    knots
        The knots that are others now, in words.
    """

    kind: Kind
    pattern: DiagonalPattern
    changes: str
    picture: Picture
    looks: str
    longest: StrandLength
    longest_before: StrandLength
    shortest: StrandLength
    working: str
    knots: tuple[str, ...] = ()

    @property
    def saving_share(self) -> float:
        """By how much the longest strand is shorter [share]."""
        return 1 - self.longest.knotted_mm / self.longest_before.knotted_mm


@dataclass(frozen=True)
class VariantSearch:
    """The variants that are worth it, and what was looked at.

    Parameters
    ----------
    rows
        Rows of the bracelet they were worked out for.
    longest
        The longest strand of the pattern as it is.
    variants
        Those that look the same first, then by their longest strand.
    free_knots
        Knots of the repeat, as far as it was written out, that are between strands of one
        colour each time.
    bound_mm
        What no choice at such knots can bring the longest strand under [mm].
    evaluations
        Choices that were looked at.
    """

    rows: int
    longest: StrandLength
    variants: tuple[Variant, ...]
    free_knots: int
    bound_mm: float
    evaluations: int


def find_variants(
    pattern: DiagonalPattern,
    knotted_length_mm: float,
    gauge: Gauge,
    *,
    most_evaluations: int = MOST_EVALUATIONS,
) -> VariantSearch:
    """Look for variants whose longest strand is at least 1 % shorter.

    Parameters
    ----------
    pattern
        The pattern.
    knotted_length_mm
        Length of the band [mm].
    gauge
        The maker's gauge.
    most_evaluations
        Choices to look at for each way to write the repeat out.

    Returns
    -------
    What was found; the same for the same input.

    Raises
    ------
    LengthError
        As `rows_for`.

    Notes
    -----
    Exchanging two strands of one colour at the start changes only their numbers. What helps is
    exchanging them on the way (`even_use`), beginning at another row, or mirroring every second
    repeat where that leaves the colours in place.
    """
    table = diagonal_table(pattern, knotted_length_mm, gauge)
    before = _Before(pattern, knotted_length_mm, gauge, table)
    even = [
        even_use(pattern, table.rows, gauge, repeats=repeats, most_evaluations=most_evaluations)
        for repeats in _ways_to_write_out(before)
    ]
    found = [_even_variant(before, one) for one in even]
    found += [_shifted_variant(before), _mirrored_variant(before)]
    worth = [one for one in found if one and one.saving_share >= LEAST_SAVING_SHARE]
    return VariantSearch(
        rows=table.rows,
        longest=before.longest,
        variants=tuple(sorted(_better_each(worth), key=_rank)),
        free_knots=even[0].free_knots,
        bound_mm=even[0].bound_mm,
        evaluations=sum(one.evaluations for one in even),
    )


@dataclass(frozen=True)
class _Before:
    """The pattern as it is, in one bracelet."""

    pattern: DiagonalPattern
    length_mm: float
    gauge: Gauge
    table: StrandTable

    @property
    def longest(self) -> StrandLength:
        return longest_of(self.table)

    def table_of(self, pattern: DiagonalPattern) -> StrandTable | None:
        """Its strands, or None where a bracelet of it would not have the same rows."""
        try:
            table = diagonal_table(pattern, self.length_mm, self.gauge)
        except LengthError:
            return None
        return table if table.rows == self.table.rows else None


def longest_of(table: StrandTable) -> StrandLength:
    """Return the strand with most thread in its knots, the first of equals."""
    return max(table.strands, key=lambda strand: strand.knotted_mm)


def _rank(variant: Variant) -> tuple[bool, float]:
    return variant.picture != "same", variant.longest.knotted_mm


def _better_each(variants: list[Variant]) -> Iterator[Variant]:
    """The even variants come with the most repeats first: one with fewer is easier to tie, and
    worth showing; one with more has to be better for it."""
    for place, variant in enumerate(variants):
        easier = [other for other in variants[place + 1 :] if other.kind == variant.kind]
        if all(other.longest.knotted_mm > variant.longest.knotted_mm * 1.001 for other in easier):
            yield variant


def _ways_to_write_out(before: _Before) -> list[int]:
    """The most repeats that end on the same row, and the repeat as it is."""
    most = next(
        repeats
        for repeats in repeats_to_write_out(before.pattern)
        if repeats == 1 or before.table_of(unrolled(before.pattern, repeats))
    )
    return [most, 1] if most > 1 else [1]


# --- the picture -----------------------------------------------------------------------------


def drawn_slots(pattern: DiagonalPattern, rows: int) -> DrawnRows:
    """Return the slot that shows at every knot, row by row."""
    return [tuple(pattern.slots[knot.tying - 1] for knot in row) for row in tie_rows(pattern, rows)]


def is_same_picture(
    pattern: DiagonalPattern, variant: DiagonalPattern, rows: int, *, later: int = 0
) -> bool:
    """Return whether a variant shows, knot by knot, what the pattern shows so many rows later."""
    return drawn_slots(pattern, rows + later)[later:] == drawn_slots(variant, rows)


def _is_mirrored_in_turn(pattern: DiagonalPattern, variant: DiagonalPattern, rows: int) -> bool:
    """Return whether repeats show the pattern's first repeat and its mirror image by turns."""
    repeat = len(pattern.rows)
    turns = drawn_slots(pattern, repeat) + drawn_slots(mirrored(pattern), repeat)
    drawn = drawn_slots(variant, rows)
    return all(row == turns[number % len(turns)] for number, row in enumerate(drawn))


# --- the kinds of variant --------------------------------------------------------------------


def _variant(
    before: _Before,
    pattern: DiagonalPattern,
    kind: Kind,
    picture: Picture,
    changes: str,
    looks: str,
    knots: tuple[str, ...] = (),
) -> Variant | None:
    table = before.table_of(pattern)
    if table is None:
        return None
    longest = longest_of(table)
    return Variant(
        kind=kind,
        pattern=pattern,
        changes=changes,
        picture=picture,
        looks=looks,
        longest=longest,
        longest_before=before.longest,
        shortest=min(table.strands, key=lambda strand: strand.knotted_mm),
        working=_working(before.longest, longest),
        knots=knots,
    )


def _working(before: StrandLength, after: StrandLength) -> str:
    saved_mm = before.knotted_mm - after.knotted_mm
    return (
        f"{_tied(before)}; here {_tied(after)}."
        f" {in_mm(before.knotted_mm)} - {in_mm(after.knotted_mm)} = {in_mm(saved_mm)},"
        f" {number(saved_mm / before.knotted_mm * 100, 1)} % of {in_mm(before.knotted_mm)}"
    )


def _tied(strand: StrandLength) -> str:
    return (
        f"{strand.label} ties {counted(strand.tied, 'knot')}, is base in {strand.base}"
        f" and sits out {counted(strand.idle, 'row')}: {in_mm(strand.knotted_mm)}"
    )


def _even_variant(before: _Before, found: EvenUse) -> Variant | None:
    if not is_same_picture(before.pattern, found.pattern, before.table.rows):
        return None
    knots = counted(len(found.changes), "knot")
    where = f"At {knots} of the repeat"
    if found.repeats > 1:
        where = (
            f"{found.repeats} repeats are written out as one of {len(found.pattern.rows)} rows:"
            f" at {knots} of them"
        )
    return _variant(
        before,
        found.pattern,
        "even",
        "same",
        f"{where}, each between two strands of one colour, it is chosen anew who ties and who"
        " goes where.",
        "The same colour at every knot. The thread of the changed knots may lean the other way.",
        tuple(_change_words(change) for change in found.changes),
    )


def _change_words(change: KnotChange) -> str:
    return f"Row {change.row}, knot {change.place}: {change.after} instead of {change.before}"


def _shifted_variant(before: _Before) -> Variant | None:
    pattern, rows = before.pattern, before.table.rows
    lengths = _longest_from(before)
    if not lengths:
        return None
    start = min(lengths, key=lambda row: (round(lengths[row], 6), row))
    shifted = replace(
        pattern,
        slots=tuple(pattern.slots[strand - 1] for strand in order_after(pattern, start)),
        rows=pattern.rows[start:] + pattern.rows[:start],
    )
    if not is_same_picture(pattern, shifted, rows, later=start):
        return None
    same = is_same_picture(pattern, shifted, rows)
    return _variant(
        before,
        shifted,
        "shifted",
        "same" if same else "shifted",
        f"It begins at row {start + 1} of the repeat, with the strands as they stand there:"
        f" {' '.join(shifted.slots)}.",
        "The same colour at every knot."
        if same
        else f"The same picture, begun {counted(start, 'row')} later.",
    )


def _longest_from(before: _Before) -> dict[int, float]:
    """Return the longest strand of a band that begins at each other even row [mm].

    One walk does for all: what a strand takes from row k on is what it has taken by row k + R,
    less what it had by row k. Beginning a whole repeat later only renumbers the strands.
    """
    pattern, rows, gauge = before.pattern, before.table.rows, before.gauge
    span = len(pattern.rows)
    taken = [[0.0] * (pattern.strands + 1)]
    for row in tie_rows(pattern, rows + span):
        now = [taken_mm + gauge.idle_mm for taken_mm in taken[-1]]
        for knot in row:
            now[knot.tying] = taken[-1][knot.tying] + gauge.knotting_mm
            now[knot.base] = taken[-1][knot.base] + gauge.base_mm
        taken.append(now)
    return {
        start: max(
            after - at for at, after in zip(taken[start][1:], taken[start + rows][1:], strict=True)
        )
        for start in range(2, span, 2)
    }


def _mirrored_variant(before: _Before) -> Variant | None:
    pattern, rows = before.pattern, before.table.rows
    image = mirrored(pattern)
    if 2 * len(pattern.rows) > MAX_REPEAT_ROWS or image.rows == pattern.rows:
        return None
    both = replace(pattern, rows=pattern.rows + image.rows)
    if not _is_mirrored_in_turn(pattern, both, max(rows, 2 * len(both.rows))):
        return None
    same = is_same_picture(pattern, both, rows)
    return _variant(
        before,
        both,
        "mirrored",
        "same" if same else "mirrored",
        f"Every second repeat is tied as its mirror image, so one repeat is {len(both.rows)} rows.",
        "The same colour at every knot."
        if same
        else "Every second repeat shows the mirror image: it looks different where repeats meet.",
    )
