"""XLSX workbooks: the first visible sheet as rows of text."""

import io
import math
import re
import warnings
from collections.abc import Container, Iterator
from dataclasses import dataclass
from datetime import date, datetime, time
from typing import Any

from planner.order_list.cells import shown
from planner.order_list.limits import MAX_SHEET_CELLS, OrderListError
from planner.order_list.package import repacked

LAST_SHEET_ROW = 1_048_576
"""The last row of a sheet that any spreadsheet writes."""

_FORMULA = re.compile(rb"<(?:[\w.-]+:)?f[\s/>]")
_SAVE_AGAIN = "Open it in your spreadsheet and save it again as .xlsx or .csv."


@dataclass(frozen=True)
class Sheet:
    """One sheet of a workbook as text.

    `formulas` holds (row number, column number) of every formula without a stored result, whose
    cell holds the formula itself.
    """

    rows: tuple[tuple[int, tuple[str, ...]], ...]
    formulas: frozenset[tuple[int, int]]
    notices: tuple[str, ...]


def read_workbook(data: bytes) -> Sheet:
    """Read the first visible sheet of a workbook.

    Parameters
    ----------
    data
        An XLSX file.

    Returns
    -------
    Sheet
        Its rows that are not empty, with the numbers the spreadsheet gives them. Dates are ISO
        8601, whole numbers have no decimals, formulas are the results stored with them.

    Raises
    ------
    OrderListError
        When the file is no sound .xlsx workbook, or holds more than the limits.
    """
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # what the library drops of a workbook, nobody asks for
            return _read_package(repacked(data))
    except OrderListError:
        raise
    except Exception as error:
        # A hostile or half-written part may fail anywhere in zipfile or openpyxl, with any class
        # of error; for the maker they all mean the same.
        raise OrderListError(
            f"The workbook is damaged, or was not written by a spreadsheet. {_SAVE_AGAIN}"
        ) from error


def _read_package(package: io.BytesIO) -> Sheet:
    sheet, notices = _first_visible_sheet(package, stored_results=True)
    texts: dict[tuple[int, int], str] = {}
    for cell in _cells_of(sheet):
        # A formula whose stored result is no text keeps the type "str", without a value.
        if cell.value is not None or cell.data_type == "str":
            texts[cell.row, cell.column] = _text_of(cell.value)
    formulas = {}
    if _may_hold_formulas(package):
        formulas = _formulas_without_results(package, texts)
    return Sheet(_rows_from(texts | formulas), frozenset(formulas), notices)


def _formulas_without_results(
    package: io.BytesIO, texts: Container[tuple[int, int]]
) -> dict[tuple[int, int], str]:
    sheet, _ = _first_visible_sheet(package, stored_results=False)
    return {
        (cell.row, cell.column): str(getattr(cell.value, "text", cell.value))
        for cell in _cells_of(sheet)
        if cell.data_type == "f" and (cell.row, cell.column) not in texts
    }


def _rows_from(texts: dict[tuple[int, int], str]) -> tuple[tuple[int, tuple[str, ...]], ...]:
    rows: dict[int, list[str]] = {}
    for (number, column), text in sorted(texts.items()):
        if text:
            row = rows.setdefault(number, [])
            row += [""] * (column - 1 - len(row)) + [text]
    return tuple((number, tuple(row)) for number, row in rows.items())


def _first_visible_sheet(
    package: io.BytesIO, *, stored_results: bool
) -> tuple[Any, tuple[str, ...]]:
    from openpyxl import load_workbook

    package.seek(0)
    workbook = load_workbook(package, read_only=True, data_only=stored_results, keep_links=False)
    visible = [sheet for sheet in workbook.worksheets if sheet.sheet_state == "visible"]
    if not visible:
        raise OrderListError(f"The workbook has no visible sheet. {_SAVE_AGAIN}")
    sheet, others = visible[0], len(visible) - 1
    sheet.reset_dimensions()  # the size written in a sheet may be anything
    if not others:
        return sheet, ()
    rest = "the other sheet was" if others == 1 else f"the other {others} sheets were"
    return sheet, (f"Only the first sheet, {shown(sheet.title)}, was read; {rest} left out.",)


def _cells_of(sheet: Any) -> Iterator[Any]:
    """Give every cell in the file, and stop where rows and gaps in them become too many."""
    passed = 0
    for row in sheet.iter_rows(max_row=LAST_SHEET_ROW):
        passed += len(row)
        if passed > MAX_SHEET_CELLS:
            raise OrderListError(
                f"The sheet spans more than {MAX_SHEET_CELLS:,} cells, the limit. "
                "Copy only the orders into a new workbook."
            )
        yield from (cell for cell in row if cell.data_type != "n" or cell.value is not None)


def _text_of(value: object) -> str:
    match value:
        case None:
            return ""
        case bool():
            return "TRUE" if value else "FALSE"
        case float():
            return _text_of_number(value)
        case datetime() if value.time() == time():
            return value.date().isoformat()
        case datetime():
            return value.isoformat(" ", "minutes")
        case date() | time():
            return value.isoformat()
    return str(value)


def _text_of_number(value: float) -> str:
    if not math.isfinite(value):
        return "#NUM!"
    # The binary fraction behind a typed 16.1 may show 17 digits in a file; a spreadsheet shows 15.
    return str(int(value)) if value.is_integer() else repr(float(f"{value:.15g}"))


def _may_hold_formulas(package: io.BytesIO) -> bool:
    """Tell whether any part mentions a formula, since a second reading costs as much as the first."""
    return _FORMULA.search(package.getvalue().replace(b"\x00", b"")) is not None  # UTF-16 too
