"""How a pattern is read while it is tied: its rows as written, and where they begin again."""

from collections.abc import Iterable
from dataclasses import dataclass
from itertools import groupby, islice

from patterns.grid import GridPattern, band_rows, first_picture_row, is_from_left
from patterns.grid_lengths import Run
from patterns.knots import DiagonalPattern, Finish
from patterns.techniques import Pattern
from patterns.tying import colour_order

NO_KNOTS = "no knots"
# A repeat of few rows is charted until its colours come back, so that the chart shows the band.
MOST_ROWS_CHARTED_ON = 24


@dataclass(frozen=True)
class WrittenRow:
    """A row of the band in words.

    Parameters
    ----------
    row
        The row of the band, from 1.
    words
        Its knots, or its cells counted, in the order in which they are tied.
    side
        In a grid the side the row begins at, "left" or "right"; else "".
    """

    row: int
    words: str
    side: str = ""

    @property
    def name(self) -> str:
        """The row's number and, in a grid, its side: "4, from the right"."""
        return f"{self.row}, from the {self.side}" if self.side else str(self.row)

    @property
    def text(self) -> str:
        """The row as written: "Row 7: f f b", of a grid "Row 4, from the right: 2A 3B 1A"."""
        return f"Row {self.name}: {self.words}"


def counted_words(words: Iterable[str]) -> str:
    """Return equal words that follow each other with their number: "3f 2b 1fb"."""
    return " ".join(f"{len(list(group))}{word}" for word, group in groupby(words))


def rows_in_turn(pattern: Pattern) -> int:
    """Return after how many rows the reading begins again with row 1.

    Notes
    -----
    Rows of a grid are tied from the left and from the right in turn, so a repeat of an odd
    number of rows is read twice before it begins again on the same side.
    """
    repeat = len(pattern.rows)
    return 2 * repeat if repeat % 2 else repeat


def written_range(pattern: Pattern, rows: int) -> range:
    """Return the rows of the band to write out: one turn, or the picture that stands once.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole band, 1 or more.
    """
    if pattern.finish is Finish.CENTRED and isinstance(pattern, GridPattern):
        first = first_picture_row(pattern, rows)
        return range(first, min(rows, first + len(pattern.rows) - 1) + 1)
    return range(1, min(rows, rows_in_turn(pattern)) + 1)


def chart_range(pattern: Pattern, rows: int) -> range:
    """Return the rows of the band to chart: those written, and of short repeats some more.

    Notes
    -----
    A repeat is followed on until the colours stand in their first places again where that
    takes no more than 24 rows.
    """
    written = written_range(pattern, rows)
    if not isinstance(pattern, DiagonalPattern):
        return written
    until_colours_are_back = len(pattern.rows) * colour_order(pattern)
    if until_colours_are_back > MOST_ROWS_CHARTED_ON:
        return written
    return range(1, min(rows, until_colours_are_back) + 1)


def read_rows(
    pattern: Pattern, numbers: range, rows: int, *, counted: bool = False
) -> list[WrittenRow]:
    """Return rows of the band in words.

    Parameters
    ----------
    pattern
        The pattern.
    numbers
        Which rows of the band, counted from 1.
    rows
        Rows of the whole band; they say where a centred picture stands.
    counted
        Whether equal knots that follow each other are counted ("3f 2b") in a diagonal
        pattern; cells of a grid always are.
    """
    if isinstance(pattern, GridPattern):
        band = islice(band_rows(pattern, rows), numbers.start - 1, numbers.stop - 1)
        return [_grid_row(row, cells) for row, cells in zip(numbers, band, strict=True)]
    join = counted_words if counted else " ".join
    knots = (pattern.rows[(row - 1) % len(pattern.rows)] for row in numbers)
    return [
        WrittenRow(row, join(tied) or NO_KNOTS) for row, tied in zip(numbers, knots, strict=True)
    ]


def _grid_row(row: int, cells: tuple[str, ...]) -> WrittenRow:
    if is_from_left(row):
        return WrittenRow(row, counted_words(cells), "left")
    return WrittenRow(row, counted_words(reversed(cells)), "right")


def written_rows(pattern: Pattern, rows: int | None = None, *, counted: bool = False) -> list[str]:
    """Return the rows to read as written.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole band; without, one turn of the repeat, or the picture alone.
    counted
        As in `read_rows`.

    Returns
    -------
    "Row 7: f f b"; of a grid, in the order of tying, "Row 4, from the right: 2A 3B 1A".
    """
    if rows is None:
        is_once = pattern.finish is Finish.CENTRED
        rows = len(pattern.rows) if is_once else rows_in_turn(pattern)
    numbers = written_range(pattern, rows)
    return [row.text for row in read_rows(pattern, numbers, rows, counted=counted)]


def repeat_words(pattern: Pattern, rows: int) -> tuple[str, ...]:
    """Say where the repeat begins again, how often, and with which row the band ends.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole band, 1 or more.

    Returns
    -------
    One sentence or a few.
    """
    if pattern.finish is Finish.CENTRED and isinstance(pattern, GridPattern):
        return _picture_words(pattern, rows)
    turn = rows_in_turn(pattern)
    if rows <= turn:
        ending = "which is the whole repeat, once" if rows == turn else "and end within the repeat"
        return (f"Tie {_rows(1, rows)}, {ending}.", *_side_words(pattern, rows))
    whole, over = divmod(rows, turn)
    times = "once" if whole == 1 else f"{whole} times"
    then = f", then {_rows(1, over)}" if over else ""
    return (
        f"Tie {_rows(1, turn)}, then begin again with row 1: {times} in full{then}. "
        f"Row {rows} of the band, its last, is row {over or turn} of the repeat.",
        *_side_words(pattern, rows),
    )


def _rows(first: int, last: int) -> str:
    if first == last:
        return f"row {first}"
    return f"rows {first} {'and' if last == first + 1 else 'to'} {last}"


def _picture_words(pattern: GridPattern, rows: int) -> tuple[str, ...]:
    picture = written_range(pattern, rows)
    first, last = picture.start, picture.stop - 1
    parts = []
    if first > 1:
        parts.append(f"{_rows(1, first - 1)} in {pattern.background} throughout")
    parts.append(f"the picture, {_rows(first, last)}, once")
    if last < rows:
        parts.append(f"{_rows(last + 1, rows)} in {pattern.background} throughout")
    return (f"Tie {', then '.join(parts)}.",)


def _side_words(pattern: Pattern, rows: int) -> tuple[str, ...]:
    """An odd repeat comes back from the other side, which the written rows already show."""
    repeat, turn = len(pattern.rows), rows_in_turn(pattern)
    if repeat == turn or rows <= repeat:
        return ()
    last = min(rows, turn)
    return (
        f"{_capital(_rows(repeat + 1, last))} show{'s' if last == repeat + 1 else ''} "
        f"{_rows(1, last - repeat)} again, tied from the other side.",
    )


def _capital(words: str) -> str:
    return words[0].upper() + words[1:]


def colour_words(pattern: Pattern, rows: int) -> str:
    """Say when the colours stand in their first places again; "" where each repeat does it."""
    if not isinstance(pattern, DiagonalPattern) or rows <= len(pattern.rows):
        return ""
    repeats = colour_order(pattern)
    back = repeats * len(pattern.rows)
    if repeats == 1:
        return ""
    if back > rows:
        return "The knots stay the same; the colours move on with each repeat."
    return (
        f"The knots stay the same; the colours move on, and are back after {repeats} repeats, "
        f"{back} rows."
    )


def again_words(pattern: Pattern, rows: int) -> str:
    """Say which rows of the chart are repeats of the rows written; "" where there are none."""
    charted, written = chart_range(pattern, rows), written_range(pattern, rows)
    if charted == written:
        return ""
    again = _capital(_rows(written.stop, charted.stop - 1))
    verb = "is" if charted.stop - written.stop == 1 else "are"
    return (
        f"{again} of the chart {verb} the repeat again, {_rows(1, written.stop - 1)}, "
        "after the strands have changed places."
    )


def run_words(run: Run) -> str:
    """Say what a run ties, and where it begins and ends."""
    first, last = run.first, run.last
    begins = f"row {first.row}, column {first.column}"
    if run.cells == 1:
        return f"1 cell, {begins}"
    return f"{run.cells} cells, from {begins}, to row {last.row}, column {last.column}"
