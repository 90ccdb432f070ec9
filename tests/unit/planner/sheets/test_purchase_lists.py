"""The purchase list as CSV and XLSX: lists.py."""

import csv
from dataclasses import replace
from decimal import Decimal
from io import BytesIO, StringIO
from zipfile import ZipFile

import pytest
from hypothesis import given
from hypothesis import strategies as st
from openpyxl import load_workbook
from sheet_factories import HEAD, order, purchase_row, purchase_sheet

from planner.sheets.contents import MissingShade
from planner.sheets.lists import purchase_csv, purchase_xlsx

# OWASP ASVS 1.2.10 / CWE-1236: what a spreadsheet may take for a formula.
DANGEROUS = ("=1+1", "+1", "-1", "@SUM(A1)", "\tx", "\rx")


def sheet_with(**changes):
    return purchase_sheet(order("Quay Threads", purchase_row(0, 3, **changes), purchase_row(1, 5)))


def read_csv(data: bytes) -> list[list[str]]:
    return list(csv.reader(StringIO(data.decode("utf-8-sig"), newline=""), strict=True))


def test_csv_has_a_mark_crlf_and_a_line_per_shade():
    data = purchase_csv(sheet_with())
    assert data.startswith(b"\xef\xbb\xbf")
    assert data.count(b"\r\n") == data.count(b"\n") == 3
    header, first, _ = read_csv(data)
    assert header[6:8] == ["Each (EUR)", "Cost (EUR)"]
    assert first == [
        "Quay Threads",
        "T04",
        "Tarred rope",
        "skein of 8 m",
        "8",
        "3",
        "1.20",
        "3.60",
        "fewer than 3 is impossible",
        "1",
        "0",
    ]

    box = purchase_row(0, 12, pack_size=12, spare=5, cost=Decimal("1.20"))
    assert read_csv(purchase_csv(purchase_sheet(order("Quay Threads", box))))[1][5:] == [
        "1",
        "1.20",
        "1.20",
        "fewer than 12 is impossible",
        "12",
        "5",
    ]


def test_csv_quotes_as_rfc_4180_says():
    # RFC 4180, section 2, rules 6 and 7.
    data = purchase_csv(sheet_with(shade_name='Sea, "deep"\r\nblue'))
    assert b'"Sea, ""deep""\r\nblue"' in data
    assert read_csv(data)[1][2] == 'Sea, "deep"\r\nblue'


@pytest.mark.parametrize("text", DANGEROUS)
def test_csv_puts_an_apostrophe_before_formulas_and_never_before_numbers(text):
    row = purchase_row(0, 3, shade_name=text, put_up=text, proof=text, shade_code=text)
    negative = replace(row, unit_price=Decimal("-1.20"), cost=Decimal("-3.60"))
    first = read_csv(purchase_csv(purchase_sheet(order(text, negative))))[1]
    assert [first[n] for n in (0, 1, 2, 3, 8)] == ["'" + text] * 5
    assert first[6:8] == ["-1.20", "-3.60"]


@given(st.text(st.characters(codec=None), max_size=50))
def test_csv_of_any_name_reads_back_without_formulas(name):
    for cells in read_csv(purchase_csv(sheet_with(shade_name=name)))[1:]:
        assert not cells[2].startswith(("=", "+", "-", "@", "\t", "\r"))


def workbook_of(sheet):
    return load_workbook(BytesIO(purchase_xlsx(sheet))).active


def test_xlsx_holds_numbers_as_numbers_and_the_sum():
    page = workbook_of(sheet_with())
    rows = [[cell.value for cell in row] for row in page.iter_rows()]
    assert rows[1][:8] == ["Quay Threads", "T04", "Tarred rope", "skein of 8 m", 8, 3, 1.2, 3.6]
    # 3 x 1.20 + 5 x 1.20 = 9.60
    assert rows[3][5] == 8
    assert rows[3][7] == pytest.approx(9.6)
    assert sum(row[7] for row in rows[1:3]) == pytest.approx(rows[3][7])


@pytest.mark.parametrize("text", DANGEROUS[:4])
def test_xlsx_keeps_formulas_as_text(text):
    sheet = sheet_with(shade_name=text, put_up=text)
    cell = workbook_of(sheet)["C2"]
    assert (cell.value, cell.data_type) == (text, "s")
    with ZipFile(BytesIO(purchase_xlsx(sheet))) as archive:
        assert b"<f>" not in archive.read("xl/worksheets/sheet1.xml")


@pytest.mark.parametrize("text", ["a\x00b", "\x1b[0m", "\ud800", "x" * 40_000, "\uffff", "ים 🧶"])
def test_lists_take_any_name(text):
    sheet = replace(sheet_with(shade_name=text), head=replace(HEAD, workshop=text, batch=text))
    assert len(read_csv(purchase_csv(sheet))) == 3
    assert workbook_of(sheet)["B2"].value == "T04"


def test_lists_are_equal_bytes_for_equal_sheets():
    assert purchase_csv(sheet_with()) == purchase_csv(sheet_with())
    document = purchase_xlsx(sheet_with())
    assert document == purchase_xlsx(sheet_with())
    with ZipFile(BytesIO(document)) as archive:
        assert {entry.date_time for entry in archive.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        core = archive.read("docProps/core.xml")
    assert core.count(b"2026-11-28T00:00:00Z") == 2


def test_lists_of_nothing_have_their_heads():
    assert len(read_csv(purchase_csv(purchase_sheet()))) == 1
    assert workbook_of(purchase_sheet())["A1"].value == "Supplier"


def test_lists_name_the_shades_that_were_not_worked_out():
    """A list that lacks shades must not look like the whole purchase."""
    missing = MissingShade("T09", "Net green", "not worked out: stopped before it was its turn")
    sheet = replace(sheet_with(), missing=(missing,))
    last = read_csv(purchase_csv(sheet))[-1]
    assert last == ["", "T09", "Net green", "", "", "", "", "", missing.why, "", ""]
    page = load_workbook(BytesIO(purchase_xlsx(sheet))).active
    *_, row, sums = page.iter_rows(values_only=True)
    assert row == (None, "T09", "Net green", *[None] * 5, missing.why, None, None)
    assert sums[0] == "So far, without the shades not worked out"
