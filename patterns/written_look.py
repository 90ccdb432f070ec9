"""Typed rows shown again row by row: what was understood, and what is wrong with each."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import takewhile

from patterns.grid import MAX_COLUMNS, MIN_COLUMNS, GridPattern
from patterns.knots import DiagonalPattern, Knot, knots_in_row
from patterns.reading import NO_KNOTS, counted_words
from patterns.techniques import Pattern
from patterns.written_lines import Written, WrittenProblem

NOTHING_YET = "nothing understood yet"


@dataclass(frozen=True)
class LookedRow:
    """A row as it was understood.

    Parameters
    ----------
    row
        Its number in the repeat, from 1.
    words
        Its knots, or its cells counted, from column 1.
    notes
        What was not understood in it, or does not fit.
    """

    row: int
    words: str
    notes: tuple[str, ...]


def look_at_knots(written: Written[Knot], strands: int) -> tuple[LookedRow, ...]:
    """Return every row of knots with its words and what is wrong with it."""

    def note(row: int, knots: int) -> str:
        needed = knots_in_row(strands, row)
        return "" if knots == needed else f"{knots} knots; {strands} strands need {needed} here"

    return _look(written, lambda words: " ".join(words) or NO_KNOTS, note)


def look_at_cells(written: Written[str]) -> tuple[LookedRow, ...]:
    """Return every row of cells with its words and what is wrong with it."""
    return _look(written, counted_words, lambda row, cells: "")


def _look(
    written: Written[Knot] | Written[str],
    in_words: Callable[[Sequence[str]], str],
    note: Callable[[int, int], str],
) -> tuple[LookedRow, ...]:
    problems: dict[int, list[WrittenProblem]] = {}
    for problem in written.problems:
        problems.setdefault(problem.row, []).append(problem)
    last = max([len(written.rows), *problems])
    looked = []
    for row in range(1, last + 1):
        words = written.rows[row - 1] if row <= len(written.rows) else ()
        notes = [f"{one.place_word} {one.place}: {one.sentence}" for one in problems.get(row, ())]
        if not notes and (misfit := note(row, len(words))):
            notes = [misfit]
        in_short = NOTHING_YET if row in problems and not words else in_words(words)
        looked.append(LookedRow(row, in_short, tuple(notes)))
    return tuple(looked)


def rows_before_notes(looked: Sequence[LookedRow]) -> int:
    """Return how many rows stand before the first with something wrong."""
    return len(list(takewhile(lambda row: not row.notes, looked)))


def beginning_of_knots(
    written: Written[Knot], looked: Sequence[LookedRow], slots: tuple[str, ...]
) -> Pattern | None:
    """Return a pattern that begins with the rows that are right, to be drawn so far, if any are.

    Parameters
    ----------
    written, looked
        What was typed.
    slots
        The slots of the strands.
    """
    right = rows_before_notes(looked)
    if not right or len(slots) < 2:
        return None
    rows = written.rows[:right]
    added = range(right + 1, right + right % 2 + 1)
    filler = tuple((Knot.F,) * knots_in_row(len(slots), row) for row in added)
    return DiagonalPattern("Typed rows", slots, (*rows, *filler))


def beginning_of_cells(written: Written[str], looked: Sequence[LookedRow]) -> Pattern | None:
    """Return a pattern of the rows of cells that are right, if any are."""
    rows = written.rows[: rows_before_notes(looked)]
    if not rows or not MIN_COLUMNS <= len(rows[0]) <= MAX_COLUMNS:
        return None
    return GridPattern("Typed rows", most_used(rows), rows)


def most_used(rows: Sequence[Sequence[str]]) -> str:
    """Return the slot with most cells, of equals the first letter."""
    cells = [cell for row in rows for cell in row]
    return min(set(cells), key=lambda slot: (-cells.count(slot), slot))


def own_slots(rows: Sequence[Sequence[Knot]], letters: str, most: int) -> tuple[str, ...]:
    """Return a slot of its own for each strand, as many as two rows below each other pair.

    3 knots and 2 knots are six strands, 3 and 3 are seven.
    """
    first, second = (len(row) for row in (*rows, (), ())[:2])
    strands = min(2 * first + (first > 0 and first == second), most)
    return tuple(letters[place % len(letters)] for place in range(strands))
