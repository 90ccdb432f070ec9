"""A list of orders as rows of text, from a file or from pasted cells."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from planner.order_list.cells import clean_cell, unguarded
from planner.order_list.columns import count_named, field_named
from planner.order_list.delimited import decode, read_records
from planner.order_list.limits import (
    MAX_CELL_CHARACTERS,
    MAX_COLUMNS,
    MAX_FILE_BYTES,
    MAX_ROWS,
    OrderListError,
)
from planner.order_list.workbook import read_workbook

_HEADER_WITHIN_ROWS = 5
_EMPTY = "The list is empty. Put one order in each row, under the names of the columns."
_LIMIT_MB = MAX_FILE_BYTES // 1024**2
_ZIP_MAGIC = b"PK\x03\x04"
_OTHER_KINDS = (
    (
        b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1",
        "This is an old .xls workbook, or one locked with a password. Save it as .xlsx or .csv.",
    ),
    (b"PK\x05\x06", "This zip file is empty. Save your list as .xlsx or .csv."),
    (b"PK\x07\x08", "This is one part of a split zip file. Save your list as .xlsx or .csv."),
    (b"%PDF-", "This is a PDF. Save your list as .xlsx or .csv."),
)


@dataclass(frozen=True)
class TableRow:
    """One row that is not blank, with its number in the list as its maker sees it.

    `formulas` holds the numbers of the columns whose cell is a formula without a stored result.
    """

    number: int
    cells: tuple[str, ...]
    formulas: frozenset[int] = frozenset()

    def __post_init__(self) -> None:
        if self.number < 1:
            raise ValueError("rows are counted from 1")


@dataclass(frozen=True)
class Table:
    """A list of orders: the names of its columns, if it has them, and its rows.

    `notices` says what its maker should know about how the list was read.
    """

    header: tuple[str, ...] | None
    rows: tuple[TableRow, ...]
    notices: tuple[str, ...] = ()


def read_table(data: bytes, filename: str | None = None) -> Table:
    """Read an order list from a CSV or XLSX file.

    Parameters
    ----------
    data
        The file: XLSX, or text with cells parted by tab, semicolon or comma.
    filename
        Its name, if it has one; what is in the file decides how it is read.

    Returns
    -------
    Table
        Rows that are not blank, numbered as a spreadsheet numbers them: a quoted cell of several
        lines does not count as several rows.

    Raises
    ------
    OrderListError
        When the file cannot be read, is empty, or holds more than the limits.
    """
    if len(data) > MAX_FILE_BYTES:
        raise OrderListError(
            f"The file is larger than {_LIMIT_MB} MB, the limit. Split the list, or keep only the orders."
        )
    if not data.strip():
        raise OrderListError(_EMPTY)
    for magic, message in _OTHER_KINDS:
        if data.startswith(magic):
            raise OrderListError(message)
    if data.startswith(_ZIP_MAGIC):
        return _table_of_workbook(data)
    if (filename or "").casefold().endswith((".xlsx", ".xlsm", ".xls")):
        raise OrderListError(
            "The file is called a workbook, but is none. Save your list as .xlsx or .csv."
        )
    text, notices = decode(data)
    return _table_of_text(text, notices)


def read_pasted(text: str) -> Table:
    """Read an order list from cells pasted out of a spreadsheet, or typed as CSV.

    Parameters
    ----------
    text
        Rows as lines, cells parted by tab, semicolon or comma.

    Returns
    -------
    Table
        As `read_table`.

    Raises
    ------
    OrderListError
        When nothing was pasted, a quote is left open, or there is more than the limits.
    """
    if len(text) > MAX_FILE_BYTES:
        raise OrderListError(
            f"The pasted cells are more than {MAX_FILE_BYTES:,} characters, the limit. Paste fewer rows."
        )
    return _table_of_text(text.removeprefix("\ufeff"), ())


def _table_of_text(text: str, notices: tuple[str, ...]) -> Table:
    records = enumerate(read_records(text), start=1)
    rows = _checked_rows((number, cells, frozenset()) for number, cells in records)
    return _with_header(rows, notices)


def _table_of_workbook(data: bytes) -> Table:
    sheet = read_workbook(data)
    formulas: dict[int, frozenset[int]] = {}
    for number, column in sheet.formulas:
        formulas[number] = formulas.get(number, frozenset()) | {column}
    none: frozenset[int] = frozenset()
    rows = _checked_rows(
        (number, cells, formulas.get(number, none)) for number, cells in sheet.rows
    )
    table = _with_header(rows, sheet.notices)
    if table.header is None:
        return table
    # What is scribbled to the right of the named columns is no lost half of a torn cell here.
    widest = max(len(row.cells) for row in table.rows)
    return replace(table, header=table.header + ("",) * (widest - len(table.header)))


def _checked_rows(rows: Iterable[tuple[int, Sequence[str], frozenset[int]]]) -> list[TableRow]:
    checked: list[TableRow] = []
    for number, cells, formulas in rows:
        filled = _without_blank_end(cells)
        if not filled:
            continue
        if len(checked) >= MAX_ROWS + _HEADER_WITHIN_ROWS:
            raise _too_many_rows()
        _check_size(number, filled)
        cleaned = tuple(clean_cell(unguarded(cell)) for cell in filled)
        checked.append(TableRow(number, cleaned, formulas))
    return checked


def _without_blank_end(cells: Sequence[str]) -> Sequence[str]:
    end = len(cells)
    while end and not cells[end - 1].strip():
        end -= 1
    return cells[:end]


def _check_size(number: int, cells: Sequence[str]) -> None:
    if len(cells) > MAX_COLUMNS:
        raise OrderListError(
            f"Row {number} has {len(cells):,} columns; {MAX_COLUMNS} is the limit. "
            "Keep only the columns of the orders."
        )
    for column, cell in enumerate(cells, start=1):
        if len(cell) > MAX_CELL_CHARACTERS:
            raise OrderListError(
                f"Row {number}, column {column}: the cell holds {len(cell):,} characters; "
                f"{MAX_CELL_CHARACTERS:,} is the limit. Shorten it."
            )


def _too_many_rows() -> OrderListError:
    return OrderListError(f"The list has more than {MAX_ROWS:,} orders, the limit. Split it.")


def _with_header(rows: list[TableRow], notices: tuple[str, ...]) -> Table:
    if not rows:
        raise OrderListError(_EMPTY)
    above = _rows_above_header(rows)
    if above is None:
        header, orders = None, rows
    else:
        header, orders = rows[above].cells, rows[above + 1 :]
    if not orders:
        raise OrderListError("The list names its columns, but there is no order under them.")
    if len(orders) > MAX_ROWS:
        raise _too_many_rows()
    if above:
        numbers = ", ".join(str(row.number) for row in rows[:above])
        notices += (f"Left out above the names of the columns: row {numbers}.",)
    return Table(header, tuple(orders), notices)


def _rows_above_header(rows: list[TableRow]) -> int | None:
    """Count the rows before the column names; a title above them is common in spreadsheets."""
    if count_named(rows[0].cells) > 1:
        return 0
    for above, row in enumerate(rows[1:_HEADER_WITHIN_ROWS], start=1):
        named = {field_named(cell) for cell in row.cells}
        if {"pattern", "size"} <= named:
            return above
    return None
