"""CSV files and pasted cells: what their bytes say, and which character parts their cells."""

import csv
import io
import re
from collections import Counter
from collections.abc import Iterator
from itertools import islice

from planner.order_list.columns import count_named
from planner.order_list.limits import MAX_CELL_CHARACTERS, OrderListError

DELIMITERS = ("\t", ";", ",")
"""The characters that may part cells; the first wins where all fit equally well."""

_SAMPLE_ROWS = 50
_SAMPLE_CHARACTERS = 65_536
_MARKS = (  # UTF-32 before UTF-16, whose little-endian mark it begins with
    (b"\xff\xfe\x00\x00", "utf-32"),
    (b"\x00\x00\xfe\xff", "utf-32"),
    (b"\xff\xfe", "utf-16"),
    (b"\xfe\xff", "utf-16"),
    (b"\xef\xbb\xbf", "utf-8-sig"),
)
_SAVE_AGAIN = "Save it again as CSV in UTF-8, or as .xlsx."
_DELIMITER_LINE = re.compile('"?sep=(.)"?(?:\r\n|\r|\n)', re.IGNORECASE)
_END = "\x00 end of the list \x00"


def decode(data: bytes) -> tuple[str, tuple[str, ...]]:
    """Turn the bytes of a text file into text.

    Parameters
    ----------
    data
        The file: UTF-8 with or without its mark, UTF-16 with its mark, or Windows-1252.

    Returns
    -------
    tuple of str and tuple of str
        The text, and what its maker should know about how it was read.

    Raises
    ------
    OrderListError
        When the bytes are not text in any of these.
    """
    for mark, encoding in _MARKS:
        if data.startswith(mark):
            return _decode_marked(data, encoding), ()
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError:
        return _decode_last_resort(data)
    if text.count("\x00") * 4 > len(text):
        raise OrderListError(f"The file seems to be UTF-16 without its mark. {_SAVE_AGAIN}")
    return text, ()


def _decode_marked(data: bytes, encoding: str) -> str:
    try:
        return data.decode(encoding).removeprefix("\ufeff")
    except UnicodeDecodeError as error:
        name = encoding.removesuffix("-sig").upper()
        raise OrderListError(
            f"The file says that it is {name}, but byte {error.start + 1:,} is not. {_SAVE_AGAIN}"
        ) from error


def _decode_last_resort(data: bytes) -> tuple[str, tuple[str, ...]]:
    """Read Windows-1252, the eight-bit code older spreadsheets export, unless it cannot be text."""
    try:
        if b"\x00" in data:
            raise ValueError("a NUL byte")
        text = data.decode("cp1252")
    except ValueError as error:
        raise OrderListError(
            f"The file is not text that can be read here. {_SAVE_AGAIN}"
        ) from error
    notice = (
        "The file is not UTF-8, so it was read as Windows-1252. "
        "Look at letters with accents before you go on."
    )
    return text, (notice,)


def read_records(text: str) -> Iterator[list[str]]:
    """Split text into rows and cells.

    Parameters
    ----------
    text
        Rows ended by CR, LF or both; cells parted by one of `DELIMITERS`; a cell with a delimiter,
        a quote or a newline stands in quotes, and quotes inside it are doubled.

    Yields
    ------
    list of str
        Every row, blank ones too, so that counting them gives the row numbers of a spreadsheet.

    Raises
    ------
    OrderListError
        When a quote is opened and never closed.

    References
    ----------
    Shafranovich, RFC 4180: Common Format and MIME Type for CSV Files (2005), section 2.
    """
    given = _DELIMITER_LINE.match(text)
    if given is not None and given[1] in DELIMITERS:
        yield []
        yield from _split(text[given.end() :], given[1], row=1)
    else:
        yield from _split(text, find_delimiter(text))


def _split(text: str, delimiter: str, row: int = 0) -> Iterator[list[str]]:
    """Split the rows that follow so many others."""
    # A quote left open swallows all that follows, the last row added here too. That tells it from
    # a list that ends well, which the csv module does not.
    source = io.StringIO(f"{text}\n{_END}", newline="")
    waiting: list[str] | None = None
    try:
        for record in csv.reader(source, delimiter=delimiter):
            row += 1
            if waiting is not None:
                yield waiting
            waiting = record
    except csv.Error as error:
        raise OrderListError(
            f"Row {row + 1}: a cell holds more than {csv.field_size_limit():,} characters; "
            f'{MAX_CELL_CHARACTERS:,} is the limit. Look for a quote (") that is never closed.'
        ) from error
    if waiting != [_END]:
        raise OrderListError(
            f'Row {row}: a quote (") is opened and never closed. Close it, or take it out.'
        )


def find_delimiter(text: str) -> str:
    """Tell which character parts the cells, from the first rows.

    Parameters
    ----------
    text
        The list.

    Returns
    -------
    str
        The one of `DELIMITERS` that gives the most column names in one of the first rows; without
        any, the one that never stands beside a quoted cell's quotes wrongly, then the one that gives
        most rows the same number of cells, then the most cells. So a decimal comma loses against
        a semicolon.
    """
    return max(DELIMITERS, key=lambda delimiter: _fitness(text, delimiter))


def _fitness(text: str, delimiter: str) -> tuple[int, bool, float, int]:
    rows, is_sound = _sample(text, delimiter, strict=True), True
    if not rows:
        rows, is_sound = _sample(text, delimiter, strict=False), False
    named = max((count_named(row[:100]) for row in rows[:5]), default=0)
    widths = Counter(len(row) for row in rows if len(row) > 1)
    if not widths:
        return (0, False, 0.0, 0)
    width, times = max(widths.items(), key=lambda item: (item[1], item[0]))
    return (named if named > 1 else 0, is_sound, times / len(rows), width)


def _sample(text: str, delimiter: str, *, strict: bool) -> list[list[str]]:
    """Read the first rows; strictly, nothing but a delimiter may follow a quoted cell."""
    source = io.StringIO(text[:_SAMPLE_CHARACTERS], newline="")
    reader = csv.reader(source, delimiter=delimiter, strict=strict)
    try:
        return list(islice(filter(None, reader), _SAMPLE_ROWS))
    except csv.Error:
        return []
