import io
from datetime import date, datetime, time
from decimal import Decimal
from typing import Any

import pytest
from openpyxl import Workbook

from planner.order_list.limits import OrderListError
from planner.order_list.table import Table, read_table
from tests.data_builders.workbooks import (
    STRINGS,
    cell,
    parts_of,
    parts_with_sheet,
    row_of,
    sheet_xml,
    zipped,
)


def saved(*rows: list[Any]) -> bytes:
    """A workbook as openpyxl, outside this project, writes it."""
    workbook = Workbook()
    for row in rows:
        workbook.active.append(row)
    return saved_workbook(workbook)


def saved_workbook(workbook: Workbook) -> bytes:
    target = io.BytesIO()
    workbook.save(target)
    return target.getvalue()


def read_sheet(*rows: str) -> Table:
    return read_table(zipped(parts_with_sheet(sheet_xml(rows))), "orders.xlsx")


def test_cells_of_every_kind_become_text() -> None:
    values = [
        "text", 3, 3.0, 2.5, Decimal("16.1"), True, date(2026, 12, 5), datetime(2026, 12, 5),
        datetime(2026, 12, 5, 14, 30), time(9, 15), "  spaced ", "two\nlines", "#REF!", None, 1e15, -4, "end",
    ]  # fmt: skip
    table = read_table(saved(["pattern", "size"], values))
    assert table.rows[0].cells == (
        "text", "3", "3", "2.5", "16.1", "TRUE", "2026-12-05", "2026-12-05",
        "2026-12-05 14:30", "09:15:00", "  spaced ", "two\nlines", "#REF!", "", "1000000000000000", "-4", "end",
    )  # fmt: skip


def test_number_with_a_binary_tail_reads_as_the_spreadsheet_shows_it() -> None:
    table = read_sheet(row_of(["<c><v>0.30000000000000004</v></c>"]))
    assert table.rows[0].cells == ("0.3",)


def test_rows_keep_their_numbers() -> None:
    table = read_table(
        saved(["pattern", "size"], [], ["Wave", "Large"], [None, " "], ["Rope", "Small"])
    )
    assert table.header == ("pattern", "size")
    assert [(row.number, row.cells[0]) for row in table.rows] == [(3, "Wave"), (5, "Rope")]


def test_row_after_a_million_empty_ones_is_read() -> None:
    far = row_of([cell("Wave"), cell("Large")], 1_048_576)
    table = read_sheet(row_of([cell("pattern"), cell("size")]), far)
    assert [row.number for row in table.rows] == [1_048_576]


def test_text_like_a_formula_stays_text() -> None:
    workbook = Workbook()
    workbook.active.append(["=1+1", "Wave", "'=2+2"])
    workbook.active["A1"].data_type = "s"
    assert read_table(saved_workbook(workbook)).rows[0].cells == ("=1+1", "Wave", "=2+2")


def test_formula_gives_its_stored_result() -> None:
    table = read_sheet(
        row_of(
            [
                "<c><f>1+2</f><v>3</v></c>",
                '<c t="str"><f>A1&amp;"x"</f><v>3x</v></c>',
                '<c t="str"><f>""</f><v></v></c>',
                cell("end"),
            ]
        )
    )
    assert table.rows[0].cells == ("3", "3x", "", "end")
    assert table.rows[0].formulas == frozenset()


def test_formula_without_a_result_is_marked() -> None:
    table = read_table(saved(["pattern", "size"], ["Wave", "=A1"], ["=A2", None]))
    assert [row.cells for row in table.rows] == [("Wave", "=A1"), ("=A2",)]
    assert [row.formulas for row in table.rows] == [{2}, {1}]


def test_formula_without_a_result_is_marked_in_a_part_in_utf_16() -> None:
    sheet = sheet_xml([row_of([cell("Wave"), "<c><f>A1</f></c>", cell("end")])])
    parts = parts_with_sheet(sheet.replace("UTF-8", "UTF-16"))
    parts["xl/worksheets/sheet1.xml"] = sheet.replace("UTF-8", "UTF-16").encode("utf-16")
    assert read_table(zipped(parts)).rows[0].formulas == {2}


def test_first_visible_sheet_is_read_and_the_others_are_named() -> None:
    workbook = Workbook()
    workbook.active.title = "Prices"
    workbook.active.append(["hidden", "one"])
    workbook.active.sheet_state = "hidden"
    for title in ("Stall", "Old", "Older"):
        workbook.create_sheet(title).append(["Wave", title])
    workbook.active = 1
    table = read_table(saved_workbook(workbook))
    assert table.rows[0].cells == ("Wave", "Stall")
    assert table.notices == (
        "Only the first sheet, 'Stall', was read; the other 2 sheets were left out.",
    )


def test_scribbles_beside_the_list_are_a_column_without_name() -> None:
    table = read_table(saved(["pattern", "size"], ["Wave", "Large", None, "paid"]))
    assert table.header == ("pattern", "size", "", "")


@pytest.mark.parametrize("dimension", ["A1", "A1:XFD1048576", "Z9:ZZ10", "A1:A0"])
def test_size_written_in_a_sheet_does_not_matter(dimension: str) -> None:
    rows = [row_of([cell("pattern"), cell("size")]), row_of([cell("Wave"), cell("Large")])]
    table = read_table(zipped(parts_with_sheet(sheet_xml(rows, dimension))))
    assert [row.cells for row in table.rows] == [("Wave", "Large")]


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        ({"xl/vbaProject.bin": b"x"}, "holds macros"),
        ({f"xl/media/{n}.bin": b" " * 1024**2 for n in range(51)}, "unpacks to more than 50 MB"),
        ({"xl/a.xml": b" " * 2 * 1024**2}, "is mostly empty rows"),
        ({STRINGS: b"<!DOCTYPE a><sst/>"}, "declares XML entities"),
        ({STRINGS: "<!ENTITY a>".encode("utf-16")}, "declares XML entities"),
        ({"xl/a.xml": b"".join(b"<a%d/>" % n for n in range(500_001))}, "too many cells"),
        ({f"xl/{n}.bin": b"" for n in range(1001)}, "more than 1,000 parts"),
        ({STRINGS: b"<sst>"}, "damaged, or was not written by a spreadsheet"),
    ],
)
def test_workbook_refused_says_why(changes: dict[str, bytes], sentence: str) -> None:
    parts = parts_of([["pattern", "size"], ["Wave", "Large"]])
    assert read_table(zipped(parts)).rows
    # Noise beside a dense part must not hide how dense it is.
    with pytest.raises(OrderListError, match=sentence):
        read_table(zipped(parts | changes | {"xl/noise.bin": bytes(range(256)) * 10}))


def test_workbook_with_a_password_is_refused() -> None:
    locked = bytearray(zipped(parts_of([["Wave", "Large"]])))
    for signature, flags in ((b"PK\x01\x02", 8), (b"PK\x03\x04", 6)):
        locked[locked.find(signature) + flags] |= 1
    with pytest.raises(OrderListError, match="locked with a password"):
        read_table(bytes(locked))


def test_sheet_that_spans_a_million_cells_is_refused() -> None:
    with pytest.raises(OrderListError, match="spans more than 1,000,000 cells"):
        read_sheet(*['<row><c r="XFD1" s="1"/></row>'] * 62)


def test_zip_without_a_workbook_is_refused() -> None:
    with pytest.raises(OrderListError, match="zip file, but not a"):
        read_table(zipped({"orders.csv": b"a;b"}), "orders.zip")
