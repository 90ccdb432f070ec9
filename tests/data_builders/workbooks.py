"""XLSX workbooks written part by part, so that any part of them can be wrong."""

import io
import zipfile
from collections.abc import Iterable, Mapping, Sequence
from xml.sax.saxutils import escape, quoteattr

SHEET = "xl/worksheets/sheet1.xml"
STRINGS = "xl/sharedStrings.xml"
STYLES = "xl/styles.xml"
WORKBOOK = "xl/workbook.xml"
WORKBOOK_LINKS = "xl/_rels/workbook.xml.rels"
CONTENT_TYPES = "[Content_Types].xml"

_MAIN = 'xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"'
_DOCUMENT = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_PACKAGE = "http://schemas.openxmlformats.org/package/2006"
_TYPES = "application/vnd.openxmlformats-officedocument.spreadsheetml"
_HEAD = '<?xml version="1.0" encoding="UTF-8"?>'


def cell(text: str) -> str:
    """A cell that holds text."""
    return f'<c t="inlineStr"><is><t xml:space="preserve">{escape(text)}</t></is></c>'


def row_of(cells: Iterable[str], number: int | None = None) -> str:
    """A row of cells that are XML already."""
    at = "" if number is None else f' r="{number}"'
    return f"<row{at}>{''.join(cells)}</row>"


def sheet_xml(rows: Iterable[str], dimension: str | None = None) -> str:
    """A sheet of rows that are XML already."""
    size = "" if dimension is None else f"<dimension ref={quoteattr(dimension)}/>"
    return f"{_HEAD}<worksheet {_MAIN}>{size}<sheetData>{''.join(rows)}</sheetData></worksheet>"


def strings_xml(items: str) -> str:
    """The table of shared strings, with items that are XML already."""
    return f"{_HEAD}<sst {_MAIN}>{items}</sst>"


def parts_of(rows: Iterable[Sequence[str]]) -> dict[str, bytes]:
    """All parts of a sound workbook with one sheet; cell style 1 is a date."""
    text_rows = sheet_xml(row_of(map(cell, texts)) for texts in rows)
    return parts_with_sheet(text_rows)


def parts_with_sheet(sheet: str) -> dict[str, bytes]:
    """All parts of a workbook whose only sheet is given as XML."""
    parts = {
        CONTENT_TYPES: _content_types(),
        "_rels/.rels": _links([("officeDocument", WORKBOOK)]),
        WORKBOOK: workbook_xml(['<sheet name="Orders" sheetId="1" r:id="rId1"/>']),
        WORKBOOK_LINKS: _links(
            [
                ("worksheet", "worksheets/sheet1.xml"),
                ("styles", "styles.xml"),
                ("sharedStrings", "sharedStrings.xml"),
            ]
        ),
        STYLES: _styles(),
        STRINGS: strings_xml("<si><t>Shared</t></si>"),
        SHEET: sheet,
    }
    return {name: text.encode() for name, text in parts.items()}


def workbook_xml(sheets: Iterable[str]) -> str:
    """The workbook part, with its sheets as XML."""
    return f'{_HEAD}<workbook {_MAIN} xmlns:r="{_DOCUMENT}"><sheets>{"".join(sheets)}</sheets></workbook>'


def zipped(parts: Mapping[str, bytes], compression: int = zipfile.ZIP_DEFLATED) -> bytes:
    """A zip file of the parts."""
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", compression) as archive:
        for name, content in parts.items():
            archive.writestr(zipfile.ZipInfo(name), content, compression)
    return target.getvalue()


def _content_types() -> str:
    overrides = {
        WORKBOOK: f"{_TYPES}.sheet.main+xml",
        SHEET: f"{_TYPES}.worksheet+xml",
        STYLES: f"{_TYPES}.styles+xml",
        STRINGS: f"{_TYPES}.sharedStrings+xml",
    }
    entries = "".join(
        f'<Override PartName="/{name}" ContentType="{kind}"/>' for name, kind in overrides.items()
    )
    return (
        f'{_HEAD}<Types xmlns="{_PACKAGE}/content-types">'
        '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
        f'<Default Extension="xml" ContentType="application/xml"/>{entries}</Types>'
    )


def _links(targets: Iterable[tuple[str, str]]) -> str:
    links = "".join(
        f'<Relationship Id="rId{number}" Type="{_DOCUMENT}/{kind}" Target="{target}"/>'
        for number, (kind, target) in enumerate(targets, start=1)
    )
    return f'{_HEAD}<Relationships xmlns="{_PACKAGE}/relationships">{links}</Relationships>'


def _styles() -> str:
    return (
        f"{_HEAD}<styleSheet {_MAIN}>"
        '<fonts count="1"><font/></fonts>'
        '<fills count="1"><fill><patternFill patternType="none"/></fill></fills>'
        '<borders count="1"><border/></borders>'
        '<cellStyleXfs count="1"><xf numFmtId="0" fontId="0" fillId="0" borderId="0"/></cellStyleXfs>'
        '<cellXfs count="2"><xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/>'
        '<xf numFmtId="14" fontId="0" fillId="0" borderId="0" xfId="0"/></cellXfs>'
        '<cellStyles count="1"><cellStyle name="Normal" xfId="0" builtinId="0"/></cellStyles>'
        "</styleSheet>"
    )
