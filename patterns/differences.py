"""Two patterns side by side: rows that differ, and slots that differ."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from difflib import SequenceMatcher
from itertools import zip_longest
from typing import Literal

from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern
from patterns.techniques import Pattern

RowKind = Literal["same", "changed", "only first", "only second"]
NO_KNOTS = "no knots"


@dataclass(frozen=True)
class WrittenKnot:
    """A knot or a cell as it is written, and whether the other pattern has another one there."""

    word: str
    differs: bool


@dataclass(frozen=True)
class RowDifference:
    """A row that differs, or a run of rows that do not.

    Parameters
    ----------
    kind
        "same": `count` rows are the same; "changed": the row has other knots; "only first",
        "only second": the other pattern has no such row.
    first_row, second_row
        Its number in each pattern, from 1; 0 where there is none.
    count
        Rows; more than 1 only where they are the same.
    first, second
        Its knots in each pattern; empty where it has no such row, or where they are the same.
    places
        Where the knots differ, from 1.
    """

    kind: RowKind
    first_row: int
    second_row: int
    count: int
    first: tuple[WrittenKnot, ...] = ()
    second: tuple[WrittenKnot, ...] = ()
    places: tuple[int, ...] = ()

    @property
    def first_last(self) -> int:
        """The last of its rows in the first pattern."""
        return self.first_row + self.count - 1

    @property
    def second_last(self) -> int:
        """The last of its rows in the second pattern."""
        return self.second_row + self.count - 1


@dataclass(frozen=True)
class SlotDifference:
    """A place whose slot differs; "" where one of the patterns has no such place."""

    place: str
    first: str
    second: str


def compare_rows(first: Pattern, second: Pattern) -> tuple[RowDifference, ...]:
    """Compare two repeats row by row.

    Parameters
    ----------
    first, second
        Two patterns that `why_rows_differ` has nothing against.

    Returns
    -------
    Rows in their order, those that are the same as one.

    Notes
    -----
    Rows are matched by difflib. In a diagonal pattern an odd row never matches an even one,
    since it pairs other strands.
    """
    keys = [_row_keys(pattern) for pattern in (first, second)]
    matcher = SequenceMatcher(None, keys[0], keys[1], autojunk=False)
    found: list[RowDifference] = []
    for tag, start, end, other_start, other_end in matcher.get_opcodes():
        if tag == "equal":
            found.append(RowDifference("same", start + 1, other_start + 1, end - start))
        else:
            found.extend(_block(first, second, (start, end), (other_start, other_end)))
    return tuple(found)


def _row_keys(pattern: Pattern) -> list[tuple[int, tuple[str, ...]]]:
    turns = 2 if isinstance(pattern, DiagonalPattern) else 1
    return [(number % turns, tuple(row)) for number, row in enumerate(pattern.rows)]


def _block(
    first: Pattern, second: Pattern, ours: tuple[int, int], theirs: tuple[int, int]
) -> Iterator[RowDifference]:
    """Pair the rows of a changed block in their order.

    Matches are of odd rows with odd ones, so a block begins alike in both and so do its rows.
    """
    for number, other in zip_longest(range(*ours), range(*theirs)):
        if other is None:
            yield _only(first, number, "only first")
        elif number is None:
            yield _only(second, other, "only second")
        else:
            yield _changed(first, number, second, other)


def _only(pattern: Pattern, number: int, kind: RowKind) -> RowDifference:
    knots = _written(pattern.rows[number], range(len(pattern.rows[number])))
    if kind == "only first":
        return RowDifference(kind, number + 1, 0, 1, first=knots)
    return RowDifference(kind, 0, number + 1, 1, second=knots)


def _changed(first: Pattern, number: int, second: Pattern, other: int) -> RowDifference:
    row, row_then = first.rows[number], second.rows[other]
    differing = [
        place
        for place, (knot, knot_then) in enumerate(zip(row, row_then, strict=True))
        if knot != knot_then
    ]
    if not differing:
        return RowDifference("same", number + 1, other + 1, 1)
    return RowDifference(
        "changed",
        number + 1,
        other + 1,
        1,
        _written(row, differing),
        _written(row_then, differing),
        tuple(place + 1 for place in differing),
    )


def _written(row: Sequence[str], differing: Sequence[int]) -> tuple[WrittenKnot, ...]:
    if not row:
        return (WrittenKnot(NO_KNOTS, True),)
    return tuple(WrittenKnot(str(word), place in differing) for place, word in enumerate(row))


def why_rows_differ(first: Pattern, second: Pattern) -> str:
    """Say why no row of the one can be a row of the other; nothing where they can be compared."""
    if isinstance(first, GridPattern) != isinstance(second, GridPattern):
        return "One is a diagonal pattern, the other a grid: their rows are tied in other ways."
    if isinstance(first, GridPattern) and isinstance(second, GridPattern):
        if first.columns != second.columns:
            return (
                f"One has {first.columns} columns, the other {second.columns}: no row is the same."
            )
        return ""
    if first.strands != second.strands:
        return f"One has {first.strands} strands, the other {second.strands}: no row is the same."
    return ""


def compare_slots(first: Pattern, second: Pattern) -> tuple[SlotDifference, ...]:
    """Compare the slots: of each strand at the start, in a grid of the background."""
    if isinstance(first, DiagonalPattern) and isinstance(second, DiagonalPattern):
        pairs = zip_longest(first.slots, second.slots, fillvalue="")
        found = [(f"Strand {number}", *pair) for number, pair in enumerate(pairs, start=1)]
    else:
        background, background_then = (
            pattern.background if isinstance(pattern, GridPattern) else ""
            for pattern in (first, second)
        )
        letters = sorted({*first.used_slots, *second.used_slots})
        found = [("Background", background, background_then)] + [
            (
                f"Slot {letter}",
                letter if letter in first.used_slots else "",
                letter if letter in second.used_slots else "",
            )
            for letter in letters
        ]
    return tuple(SlotDifference(*line) for line in found if line[1] != line[2])
