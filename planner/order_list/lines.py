"""Lists of orders, and rows of the grid, read into lines against what can be ordered."""

from collections.abc import Iterable, Mapping
from datetime import date

from planner.order_list.catalogue import Catalogue
from planner.order_list.cells import listed
from planner.order_list.columns import FIELD_LABELS, UNNAMED_ORDER, read_columns
from planner.order_list.reader import RowReader
from planner.order_list.results import BadLine, GoodLine, Reading
from planner.order_list.table import Table


def read_lines(
    table: Table,
    catalogue: Catalogue,
    *,
    today: date,
    market_date: date | None,
    day_first: bool = True,
) -> Reading:
    """Read a list's rows into order lines.

    Parameters
    ----------
    table
        The list.
    catalogue
        What can be ordered.
    today
        Due dates without a year are the next from this day on.
    market_date
        The due date of lines without one.
    day_first
        Whether ``5/12/2026`` is 5 December.

    Returns
    -------
    Reading
        Good and bad lines, each in the order of the list.

    Raises
    ------
    OrderListError
        When two columns name the same field, or there is none for the pattern or the size.
    """
    columns = read_columns(table.header)
    reader = RowReader(catalogue, today, market_date, day_first)
    lines = [reader.read_table_row(row, columns) for row in table.rows]
    notices = table.notices
    unread = [str(row.number) for row, line in zip(table.rows, lines, strict=True) if line is None]
    if unread:
        notices += (f"Left out, with nothing in the columns that are read: row {listed(unread)}.",)
    if table.header is None:
        labels = ", ".join(FIELD_LABELS[field] for field in UNNAMED_ORDER)
        notices += (f"The list does not name its columns, so they were read as: {labels}.",)
    return _sorted_out(lines, columns.ignored, notices)


def read_rows(
    rows: Iterable[tuple[int, Mapping[str, str]]],
    catalogue: Catalogue,
    *,
    today: date,
    market_date: date | None,
    day_first: bool = True,
) -> Reading:
    """Read many rows of the grid, looking names up in one index.

    Parameters
    ----------
    rows
        Row numbers, and cells by field.
    catalogue, today, market_date, day_first
        As in `read_lines`.

    Returns
    -------
    Reading
        Good and bad lines; blank rows are left out.
    """
    reader = RowReader(catalogue, today, market_date, day_first)
    return _sorted_out([reader.read(number, cells) for number, cells in rows], (), ())


def _sorted_out(
    lines: Iterable[GoodLine | BadLine | None], ignored: tuple[str, ...], notices: tuple[str, ...]
) -> Reading:
    kept = [line for line in lines if line is not None]
    return Reading(
        tuple(line for line in kept if isinstance(line, GoodLine)),
        tuple(line for line in kept if isinstance(line, BadLine)),
        ignored,
        notices,
    )
