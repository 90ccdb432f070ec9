import csv
import io
import tracemalloc
from collections.abc import Callable

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from planner.order_list.columns import DEFAULT_ORDER, count_named
from planner.order_list.delimited import DELIMITERS, find_delimiter
from planner.order_list.limits import (
    MAX_CELL_CHARACTERS,
    MAX_COLUMNS,
    MAX_FILE_BYTES,
    MAX_ROWS,
    OrderListError,
)
from planner.order_list.table import Table, TableRow, read_pasted, read_table
from tests.data_builders.workbooks import SHEET, parts_of, zipped

HEADER = "for;pattern;size"


def rows_of(table: Table) -> list[tuple[int, tuple[str, ...]]]:
    return [(row.number, row.cells) for row in table.rows]


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-32"])
def test_file_in_unicode(encoding: str) -> None:
    table = read_table(f"{HEADER}\nZoë ש 😀;Wave;Large\n".encode(encoding), "orders.csv")
    assert table == Table(("for", "pattern", "size"), (TableRow(2, ("Zoë ש 😀", "Wave", "Large")),))


def test_file_in_utf_16_big_endian_with_mark() -> None:
    table = read_table(b"\xfe\xff" + f"{HEADER}\nZoë;Wave;Large\n".encode("utf-16-be"))
    assert table.rows[0].cells[0] == "Zoë"


def test_file_in_windows_1252_says_so() -> None:
    table = read_table(f"{HEADER}\nZoë “9€”;Wave;Large\n".encode("cp1252"))
    assert table.rows[0].cells[0] == "Zoë “9€”"
    assert "read as Windows-1252" in table.notices[0]


@pytest.mark.parametrize("ending", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("delimiter", DELIMITERS)
def test_rows_keep_the_numbers_of_a_spreadsheet(ending: str, delimiter: str) -> None:
    lines = ["for;pattern;size", "", '"two', 'lines";Wave;Large', ";;", "", "Bo;Wave;Small"]
    text = ending.join(lines).replace(";", delimiter)
    expected = [(3, ("two\nlines", "Wave", "Large")), (6, ("Bo", "Wave", "Small"))]
    assert rows_of(read_pasted(text)) == expected
    assert rows_of(read_table(text.encode())) == expected


def test_quotes_are_undone_only_round_a_cell() -> None:
    table = read_pasted(HEADER + '\n"the ""big"" one";6 1/2" band;"a;b"\n')
    assert table.rows[0].cells == ('the "big" one', '6 1/2" band', "a;b")


@pytest.mark.parametrize(
    ("text", "delimiter"),
    [
        ("for,pattern,size\na;b;c;d,e,f\n", ","),
        ("pattern;size\nWave, the big one;15,5 cm\n", ";"),
        ("Anna;Wave;15,5 cm\nBo;Wave;16,5 cm\n", ";"),
        ("Anna,Wave,M\nBo,Wave,M,,,2\n", ","),
        ("Anna\tWave; Rope\tM\nBo\tWave; Rope\tL\n", "\t"),
        ('"a","b;c"\n', ","),
        ('"a;b;c","d"\n"e;f;g","h"\n', ","),
        ("Wave\n", "\t"),
        ('sloppy "quotes", here\n"like" this, too\n', ","),
    ],
)
def test_delimiter_is_found(text: str, delimiter: str) -> None:
    assert find_delimiter(text) == delimiter


def test_delimiter_given_in_the_first_line_counts_as_a_row() -> None:
    table = read_pasted("sep=,\r\na;b;c,Wave,Large\r\n")
    assert rows_of(table) == [(2, ("a;b;c", "Wave", "Large"))]


CELLS = st.text(
    st.characters(exclude_categories=["Cs", "Cc"], exclude_characters="\ufffd\ufffe\uffff\ufeff")
    | st.sampled_from("\t\n;,\"'=@ "),
    max_size=12,
).filter(lambda cell: cell[:1] != "'")
ROWS = st.lists(st.lists(CELLS, min_size=1, max_size=8), min_size=1, max_size=60)


@given(rows=ROWS, delimiter=st.sampled_from(DELIMITERS), ending=st.sampled_from(["\r\n", "\n"]))
def test_table_written_by_the_csv_module_reads_back(
    rows: list[list[str]], delimiter: str, ending: str
) -> None:
    # Outside reference: Python's csv writer, quoting where it must (RFC 4180, section 2).
    rows = [[*row, "last"] for row in rows]
    target = io.StringIO(newline="")
    csv.writer(target, delimiter=delimiter, lineterminator=ending).writerows([DEFAULT_ORDER, *rows])
    table = read_table(target.getvalue().encode())
    assert table.header == DEFAULT_ORDER
    assert [list(row.cells) for row in table.rows] == rows


@given(rows=ROWS, delimiter=st.sampled_from(DELIMITERS))
def test_table_all_in_quotes_needs_no_column_names(rows: list[list[str]], delimiter: str) -> None:
    rows = [[*row, "last"] for row in rows]
    assume(not any(count_named(row) > 1 for row in rows[:5]))
    target = io.StringIO(newline="")
    csv.writer(target, delimiter=delimiter, quoting=csv.QUOTE_ALL).writerows(rows)
    table = read_pasted(target.getvalue())
    assert [list(row.cells) for row in table.rows] == rows


def cells_or_error(read: Callable[..., Table], given: str | bytes) -> str:
    """All cells of a list, or the sentence that refuses it."""
    try:
        return " ".join(cell for row in read(given).rows for cell in row.cells)
    except OrderListError as error:
        return str(error)


@given(st.text() | st.text(st.sampled_from("\x00\r\n\t ;,\"'=a\ud800")))
def test_pasted_text_of_any_kind_is_read_or_refused(text: str) -> None:
    assert cells_or_error(read_pasted, text).encode()  # a lone surrogate would raise


@given(st.binary(max_size=200) | st.binary(max_size=200).map(lambda data: b"PK\x03\x04" + data))
def test_file_of_any_bytes_is_read_or_refused(data: bytes) -> None:
    assert cells_or_error(read_table, data).encode()


@pytest.mark.parametrize(
    ("written", "read"),
    [
        ("'=1+1", "=1+1"), ("'+1", "+1"), ("'-1", "-1"), ("'@a", "@a"), ('"\'\ta"', "\ta"), ('"\'\ra"', "\na"),
        ("'quoted'", "'quoted'"), ("''=1", "''=1"), ("=1+1", "=1+1"), ("-1", "-1"),
    ],
)  # fmt: skip
def test_apostrophe_guard_is_undone(written: str, read: str) -> None:
    # The guard: OWASP ASVS 1.2.10 / CWE-1236.
    assert read_pasted(f"{HEADER}\n{written};Wave;Large").rows[0].cells[0] == read


def test_header_below_a_title_is_found_and_the_title_reported() -> None:
    table = read_pasted(
        "Orders of the summer\n\nwhat\twe\tsold\nname\tpattern\tsize\nBo\tWave\tLarge\n"
    )
    assert table.header == ("name", "pattern", "size")
    assert rows_of(table) == [(5, ("Bo", "Wave", "Large"))]
    assert table.notices == ("Left out above the names of the columns: row 1, 3.",)


def test_header_needs_two_names() -> None:
    assert read_pasted("Name\tWave\tLarge\n").header is None
    assert read_pasted("Name\tWave\tSize\nBo\tWave\tL\n").header == ("Name", "Wave", "Size")


@pytest.mark.parametrize("row", range(1, 6))
def test_quote_left_open_names_its_row(row: int) -> None:
    lines = ["Anna;Wave;Large"] * 6
    lines[row] = '"Bo;Wave;Large'
    with pytest.raises(OrderListError, match=rf"Row {row + 1}: a quote \(\"\) is opened and never"):
        read_pasted("\n".join(lines))


@pytest.mark.parametrize("rest", ["", "Cy;Wave;Large\n" * 20_000])
def test_quote_left_open_below_the_line_that_names_the_delimiter_names_its_row(rest: str) -> None:
    with pytest.raises(OrderListError, match=r"Row 3: a "):
        read_pasted(f'sep=;\nAnna;Wave;Large\nBo;"Wave;Large\n{rest}')


def test_quote_left_open_in_a_very_long_list_names_its_row() -> None:
    text = 'Anna;Wave;Large\nBo;"Wave;Large\n' + "Cy;Wave;Large\n" * 20_000
    with pytest.raises(OrderListError, match=r"Row 2: a cell holds more than 131,072 char"):
        read_pasted(text)
    assert csv.field_size_limit() == 131_072


def test_limit_of_rows() -> None:
    order = "Anna;Wave;Large\n"
    assert len(read_pasted(f"Orders\n{HEADER}\n{order * MAX_ROWS}").rows) == MAX_ROWS
    for header in ("", HEADER + "\n", f"Orders\n{HEADER}\n"):
        with pytest.raises(OrderListError, match="more than 5,000 orders"):
            read_pasted(header + order * (MAX_ROWS + 1))


def test_limit_of_columns_counts_no_blank_ones() -> None:
    row = ";".join(["x"] * MAX_COLUMNS)
    assert len(read_pasted(f"{row};;; ;").rows[0].cells) == MAX_COLUMNS
    with pytest.raises(OrderListError, match="Row 1 has 41 columns; 40 is the limit"):
        read_pasted(f"{row};x")


def test_limit_of_characters_in_a_cell() -> None:
    assert read_pasted(f"a;b\n{'x' * MAX_CELL_CHARACTERS};b").rows
    with pytest.raises(OrderListError, match="Row 2, column 1: the cell holds 2,001 characters"):
        read_pasted(f"a;b\n{'x' * (MAX_CELL_CHARACTERS + 1)};b")


def test_limit_of_bytes() -> None:
    start = f"{HEADER}\nAnna;Wave;Large\n".encode()
    assert read_table(start.ljust(MAX_FILE_BYTES, b"\n")).rows
    with pytest.raises(OrderListError, match="larger than 2 MB"):
        read_table(start.ljust(MAX_FILE_BYTES + 1, b"\n"))
    with pytest.raises(OrderListError, match="more than 2,097,152 characters"):
        read_pasted("\n" * (MAX_FILE_BYTES + 1))


@pytest.mark.parametrize(
    ("data", "name", "sentence"),
    [
        (b"", "a.csv", "The list is empty."),
        (b"for;pattern;size\n", "a.csv", "names its columns, but there is no order"),
        (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1 and more", "a.xls", "Save it as .xlsx or .csv."),
        (b"a;b", "a.xlsx", "called a workbook, but is none"),
        (b"a\x00;\x00b\x00\n\x00" * 9, "a.csv", "seems to be UTF-16 without its mark"),
        (b"\xff\xfea", "a.csv", "says that it is UTF-16, but byte 3 is not"),
        (b"a;\x81\n", "a.csv", "not text that can be read here"),
    ],
)
def test_file_refused_says_why(data: bytes, name: str, sentence: str) -> None:
    with pytest.raises(OrderListError, match=sentence.replace(".", r"\.")):
        read_table(data, name)


def test_zip_bomb_that_lies_about_its_size_is_never_unpacked_whole() -> None:
    sound = parts_of([["pattern", "size"], ["Wave", "Large"]])
    bomb = bytearray(zipped(sound | {SHEET: b" " * 40 * 1024**2}))
    for signature, field in ((b"PK\x01\x02", 24), (b"PK\x03\x04", 22)):
        at = bomb.rfind(signature)
        bomb[at + field : at + field + 4] = (1000).to_bytes(4, "little")
    tracemalloc.start()
    try:
        with pytest.raises(OrderListError):
            read_table(bytes(bomb))
        assert tracemalloc.get_traced_memory()[1] < 8 * 1024**2
    finally:
        tracemalloc.stop()
