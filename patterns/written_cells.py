"""Rows of cells, and strands by letters, as a maker types or pastes them."""

import re
from dataclasses import replace

from patterns.grid import MAX_COLUMNS
from patterns.knots import shown
from patterns.written_lines import CannotRead, LineReader, Written, WrittenProblem

CellReader = LineReader[str]
_SIDE = re.compile(
    r"[,\s]*(?:from|on)\s+(?:the\s+)?(?P<side>left|right)(?:\s+side)?\s*[:,.]?", re.IGNORECASE
)
_COUNT_OR_CELLS = re.compile(r"[0-9]+\s+x\b|[0-9]+x\s+[a-z]\b", re.IGNORECASE)
_TOKEN = re.compile(r"[0-9]+|[A-Za-z]+|[^\s,;/|0-9A-Za-z]+")


def read_written_cells(text: str) -> Written[str]:
    """Read rows of cells as people write them.

    Parameters
    ----------
    text
        One line a row, a slot letter for each cell: "AABBA", "A A B", "3A 2B", in any case, with
        blanks, commas, semicolons, strokes or bars between them. "x2" at the end of a row is that
        row twice; "x2" on a line of its own repeats all rows since the last such line. A row may
        begin with its number ("Row 7:", "7.", "7", "rows 1-2:"), which is checked, and with the
        side from which it is written ("Row 4, from the right:"). What follows # is left aside.
        At most 64 KB.

    Returns
    -------
    All rows, each from column 1 on the left, with what was understood of each, and at most 100
    problems; every row needs as many columns as the first.
    """
    written = CellReader(_read_row, "column", x_is_a_word=True).read(text)
    return replace(written, problems=(*written.problems, *_uneven(written)))


def _uneven(written: Written[str]) -> tuple[WrittenProblem, ...]:
    """Rows that were understood, but are shorter or longer than the first."""
    if written.problems or not written.rows:
        return ()
    columns = len(written.rows[0])
    return tuple(
        WrittenProblem(
            line,
            row,
            min(len(cells), columns) + 1,
            "column",
            "",
            f"the row has {_columns(len(cells))}, row 1 has {columns}, and every row needs as many.",
        )
        for row, (cells, line) in enumerate(zip(written.rows, written.lines, strict=True), start=1)
        if len(cells) != columns
    )


def _columns(count: int) -> str:
    return "1 column" if count == 1 else f"{count} columns"


def read_letters(text: str, most: int) -> tuple[tuple[str, ...], WrittenProblem | None]:
    """Read slot letters in one row, as "A A B B", "AABB" or "2A 2B".

    Parameters
    ----------
    text
        What was typed; lines of it follow each other.
    most
        How many letters there may be.

    Returns
    -------
    The letters, and what was not understood first, if anything.
    """
    reader = CellReader(_read_row, "letter", x_is_a_word=True)
    try:
        letters = _letters(reader, " ".join(text.split()), most)
    except CannotRead:
        letters = ()
    return letters, next(iter(reader.problems), None)


def _read_row(reader: CellReader, line: str) -> tuple[str, ...]:
    side = _SIDE.match(line)
    cells = _letters(reader, line[side.end() :] if side else line, MAX_COLUMNS)
    return cells[::-1] if side and side["side"].lower() == "right" else cells


def _letters(reader: CellReader, line: str, most: int) -> tuple[str, ...]:
    unsure = _COUNT_OR_CELLS.search(line)
    if unsure:
        reader.problem(
            unsure[0], f"'{shown(unsure[0])}' may be a count or cells of X. Write 3A, or XXX."
        )
        raise CannotRead
    cells: list[str] = []
    count = ""
    for token in _TOKEN.findall(line):
        reader.place = len(cells) + 1
        if count and not token.isalpha():
            break
        if token.isascii() and token.isdigit():
            count = token
            continue
        if not token.isascii() or not token.isalpha():
            reader.problem(token, f"'{shown(token)}' is not a letter from A to Z.")
            continue
        times = _times(reader, count, most)
        cells.extend([token[0].upper()] * times + list(token[1:].upper()))
        count = ""
        if len(cells) > most:
            reader.place = most + 1
            reader.problem(token, f"there are at most {most}. Take some out.")
            raise CannotRead
    if count:
        reader.problem(count, f"'{shown(count)}' does not say which letter comes so often.")
    return tuple(cells)


def _times(reader: CellReader, count: str, most: int) -> int:
    times = int(count[:9] or 1)
    if 1 <= times <= most:
        return times
    reader.problem(count, f"'{shown(count)}': count from 1 to {most}.")
    return 1
