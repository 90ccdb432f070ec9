"""Documents given away page by page: page_stream.py."""

from hashlib import sha512
from io import BytesIO

import pytest
from pypdf import PdfReader
from reportlab.pdfbase.pdfdoc import PDFStream
from sheet_factories import HEAD, tag, tag_sheet
from sheet_reading import page_count, page_texts

from planner.sheets.pages import Block, Opening, document_parts
from planner.sheets.paper import PAPERS
from planner.sheets.pen import Pen
from planner.sheets.tag_layouts import TagError
from planner.sheets.tags import build_tag_sheet, tag_sheet_parts

A4 = PAPERS["a4"]


def figures_of(page: int, line: int) -> str:
    return sha512(f"{page} {line}".encode()).hexdigest()[:90]


def long_document(pages: int, pen: Pen | None = None):
    """Pages of one block each, full of figures that hardly compress."""

    def block(number: int) -> Block:
        def draw(pen: Pen, top: float) -> None:
            for line in range(60):
                pen.text(50, top - 10 * line, figures_of(number, line), 8)

        return Block(650, draw)

    pen = pen or Pen(A4, "Long", HEAD)
    blocks = [block(number) for number in range(pages)]
    return document_parts(pen, HEAD, Opening("Long", "Very"), blocks)


def test_every_page_is_given_away_when_it_is_drawn():
    parts = list(long_document(5))
    assert len(parts) == 6
    assert parts[0].startswith(b"%PDF-")
    assert parts[-1].rstrip().endswith(b"%%EOF")
    assert all(len(part) > 1_000 for part in parts[:-1])


def test_document_reads_back_strictly_page_by_page():
    document = b"".join(long_document(5))
    reader = PdfReader(BytesIO(document), strict=True)
    assert len(reader.pages) == 5
    for number, text in enumerate(page_texts(document)):
        assert f"page {number + 1} of 5" in text
        assert figures_of(number, 0) in text
    assert reader.metadata is not None
    assert reader.metadata.title == "Long"


def test_table_says_where_each_object_begins():
    """ISO 32000-1, 7.5.4: ten digits of offset for each object, from object 1 on."""
    document = b"".join(long_document(3))
    start = int(document.rsplit(b"startxref", 1)[1].split()[0])
    rows = document[start:].split(b"trailer")[0].splitlines()[3:]
    assert len(rows) > 6
    for number, row in enumerate(rows, start=1):
        offset = int(row[:10])
        assert document[offset:].startswith(f"{number} 0 obj".encode())


def test_nothing_that_was_drawn_is_kept():
    pen = Pen(A4, "Long", HEAD)
    parts = long_document(9, pen)
    for _ in range(6):
        next(parts)
    document = pen.canvas._doc
    assert len(document.Pages.pages) == 6
    assert not any(page.stream for page in document.Pages.pages)
    assert not any(isinstance(kept, PDFStream) for kept in document.idToObject.values())


@pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
def test_parts_are_the_document(paper):
    sheet = tag_sheet(*(tag(number) for number in range(1, 30)))
    parts = list(tag_sheet_parts(sheet, paper))
    assert b"".join(parts) == build_tag_sheet(sheet, paper)
    assert len(parts) == page_count(b"".join(parts)) + 1


def test_what_is_wrong_is_raised_before_the_first_part():
    with pytest.raises(TagError):
        tag_sheet_parts(tag_sheet(tag(1), tag(2, pieces=tag(1).pieces * 60)), A4)
