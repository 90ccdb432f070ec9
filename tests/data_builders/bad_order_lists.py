"""Several hundred order lists that are wrong in every way that was thought of.

The same seed gives the same lists. Each knows what must come of it: the list as a whole is refused,
or exactly these rows of it are bad and the others good, or (random damage) anything but a crash.
"""

import csv
import io
import random
from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import partial
from typing import Literal

from tests.data_builders.bad_workbooks import bad_workbooks
from tests.data_builders.workbooks import parts_of, zipped

HEADER = ("for whom", "pattern", "colourway", "size", "ending", "quantity", "due date", "note")


@dataclass(frozen=True)
class Wanted:
    """Names that the workshop under test knows, for the rows that are good."""

    pattern: str = "Wave"
    colourway: str = "Dawn"
    size: str = "Medium"
    ending: str = "Plaited ties"

    def order(self, **changes: str) -> list[str]:
        """A row that is good but for the changes."""
        cells = {
            "for_whom": "Harbour choir",
            "pattern": self.pattern,
            "colourway": self.colourway,
            "size": self.size,
            "ending": self.ending,
            "quantity": "3",
            "due_date": "2026-12-05",
            "note": "",
        }
        return list((cells | changes).values())


@dataclass(frozen=True)
class BadOrderList:
    """One list, as a file (`data`, `filename`) or as pasted text, and what must come of it."""

    name: str
    outcome: Literal["refused", "bad rows", "anything"]
    data: bytes = b""
    filename: str | None = None
    text: str | None = None
    bad_rows: frozenset[int] = frozenset()
    good_rows: frozenset[int] = frozenset()


def bad_order_lists(wanted: Wanted = Wanted(), seed: int = 2026) -> list[BadOrderList]:
    """Make all the lists.

    Parameters
    ----------
    wanted
        Names that the workshop under test knows.
    seed
        Seed of the random ones.
    """
    chance = random.Random(seed)
    lists = [
        *_bad_rows(wanted),
        *_bad_encodings(wanted),
        *_bad_shapes(wanted),
        *_random_bytes(chance),
        *(
            BadOrderList(f"workbook: {name}", outcome, data, "orders.xlsx", None, bad, good)
            for name, outcome, data, bad, good in bad_workbooks(wanted.order, HEADER, chance)
        ),
    ]
    if len({entry.name for entry in lists}) < len(lists):
        raise ValueError("two lists have the same name")
    return lists


_CONTROLS = [chr(code) for code in (*range(0x20), *range(0x7F, 0xA0)) if chr(code) not in "\t\n\r"]

_WRONG_CELLS: dict[str, list[str]] = {
    "for_whom": ["x" * 121, "m" * 2000, "ש" * 200, "😀" * 121, *(f"An{c}na" for c in _CONTROLS)],
    "pattern": [
        "", " ", "\u00a0", "Wvvae of the north", "x" * 2000, "=cmd|' /C calc'!A0", "=1+1", "-1", "@SUM(A1)",
        "تموج", "\u202eevaW gnorw", "😀", "<script>alert(1)</script>", "'; DROP TABLE orders; --",
        "{{ pattern }}", "%s%n", "../../etc/passwd", "None", "null", "0", "\ufffd",
    ],
    "colourway": ["Mauve dust storm", "x" * 2000, "#ff0000", "=A1", "كحلي", "0"],
    "size": [
        "", "Enormous", "40 cm", "1 mm", "9", "23", "165", "-16 cm", "0", "1e2 cm", "16 parsecs", "1/0 in",
        "9**9**9 m", "99999999999999999999 m", "NaN", "inf cm", "16 cm 17 cm", "½½", "16,5,5 cm", "#REF!",
        "١٦", "x" * 2000,
    ],
    "ending": ["Superglue", "x" * 2000, "=A1", "\u202esdne", "0"],
    "quantity": [
        "0", "-2", "1.5", "10000", "99999999999999999999", "1e3", "three", "3 3", "x", "NaN", "inf", "0x10",
        "1_000", "1,000", "1.000", "+-3", "٣", "²", "½", "3;", "--", "9" * 1999, "TRUE", "#DIV/0!", "=3", "-0",
    ],
    "due_date": [
        "2026-02-30", "30.2.2027", "29/2/2027", "31 Apr 2026", "30 Feb", "2026-13-01", "2026-00-10", "2026-01-00",
        "0.0.2026", "32/12/2026", "1999-12-31", "2101-01-01", "9999-12-31", "0000-00-00", "5 Dec 1890", "soon",
        "Saturday", "5 Foo 2026", "5 Jui 2026", "46361", "1e5", "-5 Dec 2026", "5 Dec Dec", "12 12", "Dec",
        "٥/١٢/٢٠٢٦", "5//12//2026", "5/12-2026", "2026-12-05T25", "x" * 2000, "#VALUE!", "\u202e5 Dec 2026",
    ],
    "note": ["x" * 501, "ok\x00", "y" * 2000, "ends\x1b[31m red", "half \x85 way"],
}  # fmt: skip


def _bad_rows(wanted: Wanted) -> Iterator[BadOrderList]:
    """One bad row between two good ones, as CSV, pasted, or as a workbook in turn."""
    makers = [
        partial(_as_csv, delimiter=";"),
        partial(_as_csv, delimiter=","),
        partial(_as_csv, delimiter="\t"),
        _as_pasted,
        _as_workbook,
    ]
    wrong = [(field, cell) for field, cells in _WRONG_CELLS.items() for cell in cells]
    for number, (field, cell) in enumerate(wrong):
        rows = [HEADER, wanted.order(), wanted.order(**{field: cell}), wanted.order()]
        make = makers[number % len(makers)]
        if make is _as_workbook and any(c in cell for c in _CONTROLS):
            make = _as_pasted  # XML cannot even write them
        yield _with_rows(make(rows), f"row {number}: {field} {cell[:20]!a}")
    for half in ("\ud800", "\udfff", "\ud83d", "\udc00\ud800", "a\udcffb"):
        for field in ("for_whom", "pattern", "note"):
            rows = [HEADER, wanted.order(), wanted.order(**{field: half}), wanted.order()]
            yield _with_rows(_as_pasted(rows), f"pasted half character in {field} {half!a}")
    torn = [*wanted.order(note="one"), " two"]
    rows = [HEADER, wanted.order(), torn, wanted.order()]
    yield _with_rows(_as_csv(rows, delimiter=","), "more cells than columns")


def _with_rows(made: BadOrderList, name: str) -> BadOrderList:
    return replace(made, name=name, bad_rows=frozenset({3}), good_rows=frozenset({2, 4}))


def _as_csv(rows: list[list[str]], *, delimiter: str) -> BadOrderList:
    data = _csv_text(rows, delimiter).encode()
    return BadOrderList("", "bad rows", data, "orders.csv")


def _as_pasted(rows: list[list[str]]) -> BadOrderList:
    return BadOrderList("", "bad rows", text=_csv_text(rows, "\t"))


def _as_workbook(rows: list[list[str]]) -> BadOrderList:
    return BadOrderList("", "bad rows", zipped(parts_of(rows)), "orders.xlsx")


def _csv_text(rows: list[list[str]], delimiter: str) -> str:
    target = io.StringIO(newline="")
    csv.writer(target, delimiter=delimiter).writerows(rows)
    return target.getvalue()


def _bad_encodings(wanted: Wanted) -> Iterator[BadOrderList]:
    text = _csv_text([list(HEADER), wanted.order(for_whom="Zoë")], ";")
    files = {
        "UTF-16 little-endian without mark": text.encode("utf-16-le"),
        "UTF-16 big-endian without mark": text.encode("utf-16-be"),
        "UTF-32 without mark": text.encode("utf-32-le"),
        "UTF-16 with an odd number of bytes": text.encode("utf-16") + b"\x00",
        "UTF-16 with half a pair": text.encode("utf-16") + b"\x00\xd8",
        "UTF-8 mark before Windows-1252": b"\xef\xbb\xbf" + text.encode("cp1252"),
        "UTF-32 mark before UTF-8": b"\xff\xfe\x00\x00" + text.encode() + b"x",
        "bytes in no encoding": text.encode("cp1252") + b"\x81\x8d\x8f",
        "Windows-1252 with NUL": text.encode("cp1252") + b"\x00",
        "nothing": b"",
        "spaces": b"  \r\n \t \n",
        "NUL bytes": b"\x00" * 1000,
        "only a UTF-8 mark": b"\xef\xbb\xbf",
        "only a UTF-16 mark": b"\xff\xfe",
        "only delimiters": b";;;;\n;;;;\n",
        "only newlines": b"\n" * 100_000,
        "only column names": ";".join(HEADER).encode(),
        "old workbook": b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\x00" * 2000,
        "PDF": b"%PDF-1.7\n%\xe2\xe3\xcf\xd3\n1 0 obj\n",
        "PNG": b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR" + b"\x00" * 100,
        "gzip": b"\x1f\x8b\x08\x00\x00\x00\x00\x00\x00\x03" + b"\x81" * 100,
        "empty zip": b"PK\x05\x06" + b"\x00" * 18,
        "part of a zip": b"PK\x07\x08PK\x03\x04" + b"\x00" * 100,
        "start of a zip": b"PK\x03\x04",
    }
    for name, data in files.items():
        yield BadOrderList(f"file: {name}", "refused", data, "orders.csv")
    for name in ("orders.xlsx", "ORDERS.XLSM", "orders.xls"):
        yield BadOrderList(f"text called {name}", "refused", text.encode(), name)
    for name, pasted in {"nothing": "", "mark": "\ufeff", "blank": " \n\t\n", "names": "\t".join(HEADER)}.items():  # fmt: skip
        yield BadOrderList(f"pasted: {name}", "refused", text=pasted)


def _bad_shapes(wanted: Wanted) -> Iterator[BadOrderList]:
    good = ";".join(wanted.order())
    header = ";".join(HEADER)
    texts = {
        "a cell of 2,001 characters": f"{header}\n{good}{'x' * 2001}\n",
        "a name of 10,000 characters": f"{header}\n{'x' * 10_000}{good}\n",
        "a cell of 300,000 characters": f"{header}\n{good}{'x' * 300_000}\n",
        "41 columns": f"{header}\n{good}{';x' * 33}\n",
        "100,000 columns": f"{header}\n{good}{';x' * 100_000}\n",
        "100,000 column names": f"{header}{';x' * 100_000}\n{good}\n",
        "5,001 orders": f"{header}\n" + f"{good}\n" * 5001,
        "5,001 orders without names": f"{good}\n" * 5001,
        "more than 2 MB": f"{header}\n{good}\n" + "\n" * 2_200_000,
        "no column for the pattern": header.replace("pattern", "thing") + f"\n{good}\n",
        "no column for the size": header.replace("size", "thing") + f"\n{good}\n",
        "two columns for the size": header.replace("ending", "wrist") + f"\n{good}\n",
        "three columns for the name": f"{header};name;customer\n{good}\n",
    }
    for row in range(1, 9):
        lines = [header, *[good] * 8]
        lines[row] = '"' + lines[row]
        texts[f"quote left open in row {row + 1}"] = "\n".join(lines)
        texts[f"quote left open in row {row + 1} of a long list"] = "\n".join(lines + [good] * 3000)
    for name, text in texts.items():
        yield BadOrderList(f"file: {name}", "refused", text.encode(), "orders.csv")
        yield BadOrderList(f"pasted: {name}", "refused", text=text)


def _random_bytes(chance: random.Random) -> Iterator[BadOrderList]:
    printable = (
        [chr(code) for code in range(32, 0x2FF)] + list(';,\t\n\r"') * 20 + list("\ud800\u202e\x00")
    )
    for number in range(30):
        data = chance.randbytes(chance.choice([1, 2, 3, 7, 64, 1000, 20_000]))
        yield BadOrderList(f"random bytes {number}", "anything", data, None)
        yield BadOrderList(f"random zip {number}", "refused", b"PK\x03\x04" + data, None)
        text = "".join(chance.choices(printable, k=chance.choice([1, 5, 50, 3000])))
        yield BadOrderList(f"random text {number}", "anything", text=text)
