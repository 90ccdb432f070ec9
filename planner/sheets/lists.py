"""The purchase list as CSV and as XLSX, for a spreadsheet or a supplier's order form.

References
----------
RFC 4180, Common format and MIME type for CSV files. OWASP ASVS 1.2.10 and CWE-1236 (text that
a spreadsheet would take for a formula). ECMA-376, Office Open XML.
"""

import csv
import re
from collections.abc import Iterator
from datetime import datetime, time
from decimal import Decimal
from io import BytesIO, StringIO
from typing import Any
from zipfile import ZIP_DEFLATED, ZipFile, ZipInfo

from planner.sheets.contents import PurchaseSheet

Cell = str | int | Decimal

_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")
# What neither XML 1.0 nor a CSV reader takes: control characters, half characters, non-characters.
_UNWRITABLE = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f\ud800-\udfff\ufffe\uffff]")
# A spreadsheet cell holds 32,767 characters.
_LONGEST_CELL = 32_000
_ZIP_TIME = (1980, 1, 1, 0, 0, 0)
_WIDTHS = (24, 12, 26, 22, 12, 11, 12, 12, 34, 11, 8)
_MONEY_COLUMNS = (7, 8)


def purchase_csv(sheet: PurchaseSheet) -> bytes:
    """Write the purchase list as CSV.

    Parameters
    ----------
    sheet
        What to buy.

    Returns
    -------
    bytes
        UTF-8 with a byte order mark: without one, common spreadsheets open a CSV file in the
        machine's old 8-bit alphabet and break every accented name. Lines end in CR LF, commas
        separate, the decimal sign is a point. There is no line of sums, so that the file can
        be sorted and filtered.
    """
    stream = StringIO(newline="")
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow([_guarded(name) for name in _header(sheet)])
    for cells in _rows(sheet):
        writer.writerow([_guarded(cell) if isinstance(cell, str) else cell for cell in cells])
    return stream.getvalue().encode("utf-8-sig")


def purchase_xlsx(sheet: PurchaseSheet) -> bytes:
    """Write the purchase list as XLSX, with a line of sums.

    Parameters
    ----------
    sheet
        What to buy.

    Returns
    -------
    bytes
        The same bytes for the same sheet; its time is the day of the plan.
    """
    # openpyxl takes 160 ms to import: only who asks for a spreadsheet waits for it.
    from openpyxl import Workbook
    from openpyxl.styles import Font

    workbook = Workbook()
    page = workbook.active
    page.title = "To buy"
    count = sum(row.packs for order in sheet.suppliers for row in order.rows)
    whole = "So far, without the shades not worked out" if sheet.missing else "All suppliers"
    sums: list[Cell] = [whole, "", "", "", "", count, "", sheet.cost, "", "", ""]
    rows: list[list[Cell]] = [[*_header(sheet)], *_rows(sheet), sums]
    for row_number, cells in enumerate(rows, start=1):
        for column, value in enumerate(cells, start=1):
            _fill(page.cell(row_number, column), value, column)
    for row_number in (1, len(rows)):
        for cell in page[row_number]:
            cell.font = Font(bold=True)
    for letter, width in zip("ABCDEFGHIJK", _WIDTHS, strict=True):
        page.column_dimensions[letter].width = width
    page.freeze_panes = "A2"
    made = datetime.combine(sheet.head.plan_date, time())
    workbook.properties.creator = _writable(sheet.head.workshop)
    workbook.properties.title = _writable(sheet.head.batch)
    workbook.properties.created = made
    buffer = BytesIO()
    workbook.save(buffer)
    return _with_fixed_times(buffer.getvalue(), made)


def _header(sheet: PurchaseSheet) -> list[str]:
    unit = f" ({_writable(sheet.currency)})" if sheet.currency else ""
    return [
        "Supplier",
        "Shade code",
        "Shade name",
        "Put-up",
        "Length (m)",
        "How many",
        f"Each{unit}",
        f"Cost{unit}",
        "Proof",
        "In a pack",
        "Spare",
    ]


def _rows(sheet: PurchaseSheet) -> Iterator[list[Cell]]:
    for order in sheet.suppliers:
        for row in order.rows:
            yield [
                _writable(order.supplier),
                _writable(row.shade_code),
                _writable(row.shade_name),
                _writable(row.put_up),
                Decimal(row.length_mm) / 1000,
                row.packs,
                row.unit_price,
                row.cost,
                _writable(row.proof),
                row.pack_size,
                row.spare,
            ]
    for shade in sheet.missing:
        named = [_writable(shade.shade_code), _writable(shade.shade_name)]
        yield ["", *named, "", "", "", "", "", _writable(shade.why), "", ""]


def _writable(text: str) -> str:
    return _UNWRITABLE.sub("\ufffd", text[:_LONGEST_CELL])


def _guarded(text: str) -> str:
    """Put an apostrophe before what a spreadsheet would run as a formula."""
    return "'" + text if text.startswith(_FORMULA_STARTS) else text


def _fill(cell: Any, value: Cell, column: int) -> None:
    """Fill a cell; text stays text even where it begins like a formula."""
    if value == "":
        return
    cell.value = value
    if isinstance(value, str):
        cell.data_type = "s"
    elif column in _MONEY_COLUMNS:
        cell.number_format = "0.00"


def _with_fixed_times(document: bytes, made: datetime) -> bytes:
    """Rewrite an XLSX file without the moment of writing, so that equal lists are equal files."""
    stamp = made.strftime("%Y-%m-%dT%H:%M:%SZ").encode()
    modified = re.compile(rb"(<dcterms:modified[^>]*>)[^<]*")
    buffer = BytesIO()
    with ZipFile(BytesIO(document)) as old, ZipFile(buffer, "w", ZIP_DEFLATED) as new:
        for name in old.namelist():
            data = old.read(name)
            if name == "docProps/core.xml":
                data = modified.sub(rb"\g<1>" + stamp, data)
            entry = ZipInfo(name, _ZIP_TIME)
            entry.compress_type = ZIP_DEFLATED
            new.writestr(entry, data)
    return buffer.getvalue()
