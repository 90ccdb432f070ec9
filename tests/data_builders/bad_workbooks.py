"""Workbooks that are damaged, hostile, or hold one bad row."""

import random
import struct
import zipfile
from collections.abc import Callable, Iterator, Sequence
from typing import Literal

from tests.data_builders import workbooks
from tests.data_builders.workbooks import (
    CONTENT_TYPES,
    SHEET,
    STRINGS,
    STYLES,
    WORKBOOK,
    WORKBOOK_LINKS,
    cell,
    parts_of,
    parts_with_sheet,
    row_of,
    sheet_xml,
    strings_xml,
    zipped,
)

Outcome = Literal["refused", "bad rows", "anything"]
Case = tuple[str, Outcome, bytes, frozenset[int], frozenset[int]]

_NONE: frozenset[int] = frozenset()
_MEGABYTE = 1024 * 1024


def bad_workbooks(
    order: Callable[..., list[str]], header: Sequence[str], chance: random.Random
) -> Iterator[Case]:
    """Make the workbooks: a name, what must come of it, the file, its bad and its good rows."""
    sound = parts_of([header, order(), order()])
    refused = {
        **_damaged(sound, chance),
        **_bombs(sound),
        **_entities(sound),
        **_deep(sound),
        **_incomplete(sound, header),
        **_oversized(header, order),
    }
    for name, data in refused.items():
        yield name, "refused", data, _NONE, _NONE
    for name, data in _flipped(sound, chance).items():
        yield name, "anything", data, _NONE, _NONE
    for name, rows in _bad_cells(header, order).items():
        yield name, "bad rows", zipped(parts_with_sheet(rows)), frozenset({3}), frozenset({2})


def _damaged(sound: dict[str, bytes], chance: random.Random) -> dict[str, bytes]:
    whole = zipped(sound)
    cuts = {f"cut off after byte {at}": whole[:at] for at in _some(chance, len(whole), 20)}
    return {
        **cuts,
        "start missing": b"PK\x03\x04" + whole[200:],
        "twenty bytes lost in the middle": whole[:900] + whole[920:],
        "locked with a password": _with_flags(whole, 0x1),
        "an unknown way of compression": _with_compression(whole, 99),
        "says 10 bytes": _with_sizes(whole, 10),
        "says 1 GB": _with_sizes(whole, 1024 * _MEGABYTE),
        "says the most bytes": _with_sizes(whole, 0xFFFFFFFE),
    }


def _some(chance: random.Random, length: int, count: int) -> list[int]:
    return sorted(chance.sample(range(5, length - 1), count))


def _flipped(sound: dict[str, bytes], chance: random.Random) -> dict[str, bytes]:
    flipped = {}
    for compression in (zipfile.ZIP_DEFLATED, zipfile.ZIP_STORED):
        whole = zipped(sound, compression)
        for at in _some(chance, len(whole), 20):
            changed = bytearray(whole)
            changed[at] ^= 1 << chance.randrange(8)
            flipped[f"bit flipped in byte {at}, compression {compression}"] = bytes(changed)
    return flipped


def _headers_of(whole: bytes) -> Iterator[tuple[int, int]]:
    """Where each header starts, and how far behind its signature its fields begin."""
    for signature, shift in ((b"PK\x01\x02", 2), (b"PK\x03\x04", 0)):
        at = whole.find(signature)
        while at >= 0:
            yield at, shift
            at = whole.find(signature, at + 4)


def _patched(whole: bytes, offset: int, value: bytes) -> bytes:
    changed = bytearray(whole)
    for at, shift in _headers_of(whole):
        changed[at + shift + offset : at + shift + offset + len(value)] = value
    return bytes(changed)


def _with_flags(whole: bytes, flags: int) -> bytes:
    return _patched(whole, 6, struct.pack("<H", flags))


def _with_compression(whole: bytes, method: int) -> bytes:
    return _patched(whole, 8, struct.pack("<H", method))


def _with_sizes(whole: bytes, size: int) -> bytes:
    return _patched(whole, 22, struct.pack("<I", size))


def _bombs(sound: dict[str, bytes]) -> dict[str, bytes]:
    spaces = b" " * _MEGABYTE
    inner = zipped({"a.xml": spaces * 20})
    nested = inner
    for level in range(5):
        nested = zipped({f"{level}-{number}.zip": nested for number in range(10)})
    dense = zipped(sound | {SHEET: sound[SHEET] + spaces * 60})
    return {
        "zip bomb, 60 MB of spaces": dense,
        "zip bomb that says it is small": _with_sizes(dense, 1000),
        "zip bomb in a part nobody reads": zipped(sound | {"xl/media/a.bin": spaces * 51}),
        "zip bomb, many parts": zipped(sound | {f"xl/{n}.xml": spaces * 2 for n in range(20)}),
        "zip bomb, nested": nested,
        "zip bomb, nested in a workbook": zipped(
            sound | {"xl/more.zip": nested, "xl/x.xml": spaces * 60}
        ),
        "1,100 parts": zipped(sound | {f"xl/part{n}.xml": b"" for n in range(1100)}),
        "4 million empty strings": zipped(
            sound | {STRINGS: strings_xml("<si/>" * 4_000_000).encode()}
        ),
        "600,000 strings of changing text": zipped(
            sound
            | {
                STRINGS: strings_xml(
                    "".join(f"<si><t>{n}</t></si>" for n in range(300_000))
                ).encode()
            }
        ),
    }


def _entities(sound: dict[str, bytes]) -> dict[str, bytes]:
    entities = '<!ENTITY a "ha">' + "".join(
        f'<!ENTITY {chr(n + 1)} "{f"&{chr(n)};" * 20}">' for n in range(ord("a"), ord("j"))
    )
    declaration = f"<!DOCTYPE x [{entities}]>"
    outside = '<!DOCTYPE x [<!ENTITY a SYSTEM "file:///etc/hostname">]>'
    cases = {}
    for part in (SHEET, STRINGS, STYLES, WORKBOOK, WORKBOOK_LINKS, CONTENT_TYPES):
        head, _, body = sound[part].decode().partition("?>")
        for name, doctype in (("entities", declaration), ("a file", outside)):
            text = f"{head}?>{doctype}{body.replace('</', '&j;</' if doctype == declaration else '&a;</', 1)}"
            cases[f"{name} in {part}"] = zipped(sound | {part: text.encode()})
            wide = text.replace("UTF-8", "UTF-16").encode("utf-16")
            cases[f"{name} in {part} as UTF-16"] = zipped(sound | {part: wide})
    return cases


def _deep(sound: dict[str, bytes]) -> dict[str, bytes]:
    cases = {}
    for depth in (2000, 100_000):
        nested = "".join(f"<a{n % 97}>" for n in range(depth))
        closing = "".join(f"</a{n % 97}>" for n in reversed(range(depth)))
        for part, text in (
            (STRINGS, strings_xml(f"<si>{nested}{closing}</si>")),
            (SHEET, sheet_xml([row_of([f"<c>{nested}{closing}</c>"])])),
            (WORKBOOK, workbooks.workbook_xml([nested + closing])),
            (CONTENT_TYPES, nested + closing),
        ):
            if part != STRINGS:  # no cell asks for that string, so that list is good
                cases[f"{depth} levels in {part}"] = zipped(sound | {part: text.encode()})
            unclosed = text.replace(closing, "")
            cases[f"{depth} levels never closed in {part}"] = zipped(
                sound | {part: unclosed.encode()}
            )
    return cases


def _incomplete(sound: dict[str, bytes], header: Sequence[str]) -> dict[str, bytes]:
    def without(*names: str) -> bytes:
        return zipped({name: part for name, part in sound.items() if name not in names})

    hidden = workbooks.workbook_xml(['<sheet name="A" sheetId="1" state="hidden" r:id="rId1"/>'])
    cases = {f"without {name}": without(name) for name in (SHEET, WORKBOOK, WORKBOOK_LINKS, CONTENT_TYPES, STRINGS)}  # fmt: skip
    cases |= {
        f"{name} empty": zipped(sound | {name: b""}) for name in sound if name != "_rels/.rels"
    }
    cases |= {
        f"{name} not XML": zipped(sound | {name: b"\x00<<>"})
        for name in sound
        if name != "_rels/.rels"
    }
    return cases | {
        "a zip of texts": zipped({"a.txt": b"text", "b/c.csv": b"a;b"}),
        "another kind of sheet": zipped({"mimetype": b"application/x", "content.xml": b"<a/>"}),
        "a binary workbook": zipped(
            {CONTENT_TYPES: sound[CONTENT_TYPES], "xl/workbook.bin": b"\x00"}
        ),
        "macros": zipped(sound | {"xl/vbaProject.bin": b"\x00" * 100}),
        "all sheets hidden": zipped(sound | {WORKBOOK: hidden.encode()}),
        "no sheets": zipped(sound | {WORKBOOK: workbooks.workbook_xml([]).encode()}),
        "empty sheet": zipped(parts_of([])),
        "only column names": zipped(parts_of([header])),
        "sheet outside the package": zipped(
            sound | {WORKBOOK_LINKS: sound[WORKBOOK_LINKS].replace(b"worksheets/", b"../../../")}
        ),
    }


def _oversized(header: Sequence[str], order: Callable[..., list[str]]) -> dict[str, bytes]:
    names, good = row_of(map(cell, header)), [cell(text) for text in order()]
    sheets = {
        "a row at the end of numbers": [names, row_of(good, 10**18), row_of(good)],
        "a row far below": [names, row_of(good, 10**9)],
        "rows numbered in words": [names, row_of(good).replace("<row", '<row r="two"')],
        "rows numbered by halves": [names, row_of(good).replace("<row", '<row r="2.5"')],
        "a cell far right": [names, row_of([*good, '<c r="XFD2"><v>1</v></c>'])],
        "a cell further right than any": [names, row_of([*good, '<c r="ZZZZZZZ2"><v>1</v></c>'])],
        "styled cells far right in many rows": [names, *['<row><c r="XFD2" s="1"/></row>'] * 5000],
        "a cell without a place": [names, row_of([*good, '<c r="??"><v>1</v></c>'])],
        "41 columns": [names, row_of(good + [cell("x")] * 33)],
        "5,001 orders": [names, *[row_of(good)] * 5001],
        "a cell of 2,001 characters": [names, row_of([*good[:-1], cell("x" * 2001)])],
        "a cell of 1,000,000 characters": [names, row_of([*good[:-1], cell("xy" * 500_000)])],
        "a million empty cells": [names, *["<row>" + '<c s="1"/>' * 100 + "</row>"] * 10_100],
        "text that is not there": [names, row_of([*good, '<c t="s"><v>99</v></c>'])],
        "text of no number": [names, row_of([*good, '<c t="s"><v>x</v></c>'])],
        "a number in words": [names, row_of([*good, "<c><v>three</v></c>"])],
        "a number of 5,000 digits": [names, row_of([*good, f"<c><v>{'9' * 5000}</v></c>"])],
        "a style in words": [names, row_of([*good, '<c s="x"><v>1</v></c>'])],
        "a truth of no kind": [names, row_of([*good, '<c t="b"><v>maybe</v></c>'])],
        "a date of no kind": [names, row_of([*good, '<c t="d"><v>2026-99-99</v></c>'])],
    }
    return {name: zipped(parts_with_sheet(sheet_xml(rows))) for name, rows in sheets.items()}


def _bad_cells(header: Sequence[str], order: Callable[..., list[str]]) -> dict[str, str]:
    names, good = row_of(map(cell, header)), row_of(map(cell, order()))

    def third(place: int, xml: str, dimension: str | None = None) -> str:
        cells = [cell(text) for text in order()]
        cells[place] = xml
        return sheet_xml([names, good, row_of(cells)], dimension)

    unknown = cell("Wvvae of the north")
    sheets = {
        "formula without a result as a name": third(0, "<c><f>A1&amp;B1</f></c>"),
        "formula without a result as a pattern": third(
            1, '<c t="str"><f>A1</f></c>'.replace(' t="str"', "")
        ),
        "formula with a wrong result": third(
            1, '<c t="str"><f>A1</f><v>Wvvae of the north</v></c>'
        ),
        "shared formula without a result": third(5, '<c><f t="shared" si="0"/></c>'),
        "array formula without a result": third(5, '<c r="F3"><f t="array" ref="F3">A1</f></c>'),
        "error as a size": third(3, '<c t="e"><v>#REF!</v></c>'),
        "truth as a quantity": third(5, '<c t="b"><v>1</v></c>'),
        "half a quantity": third(5, "<c><v>2.5</v></c>"),
        "quantity beyond all numbers": third(5, "<c><v>1e999</v></c>"),
        "no number as a quantity": third(5, "<c><v>nan.</v></c>".replace("nan.", "-3")),
        "date beyond all dates": third(6, '<c s="1"><v>99999999999</v></c>'),
        "date before all dates": third(6, '<c s="1"><v>-5</v></c>'),
        "date long past": third(6, '<c s="1"><v>2</v></c>'),
        "a time as a date": third(6, '<c s="1"><v>0.5</v></c>'),
        "number as a date": third(6, "<c><v>46361</v></c>"),
        "shared text as a pattern": third(1, '<c t="s"><v>0</v></c>'),
        "size written as one cell": third(1, unknown, "A1"),
    }
    for dimension in ("A1:XFD1048576", "A1:A1", "Z99:ZZ100", "A1:ZZZ99999999"):
        sheets[f"size written as {dimension}"] = third(1, unknown, dimension)
    return sheets
