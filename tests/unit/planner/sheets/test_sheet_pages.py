"""What all three sheets have in common: margins, equal bytes, head and foot: pages.py, pen.py."""

import hashlib
import subprocess
import sys
from functools import cache
from io import BytesIO
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from pypdf import PdfReader
from sheet_factories import (
    CAUTIONS,
    HEAD,
    cutting_sheet,
    order,
    purchase_row,
    purchase_sheet,
    shade_cuts,
    stock,
    tag,
    tag_sheet,
)
from sheet_reading import page_count, page_texts, rendered

from planner.sheets.cutting import build_cutting_sheet
from planner.sheets.pages import Block, Heading, Opening, draw_document, paginate
from planner.sheets.paper import PAPERS
from planner.sheets.pen import Pen, letter_colour_on, thread_colour
from planner.sheets.purchase import build_purchase_sheet
from planner.sheets.tags import build_tag_sheet

PAPER_CASES = pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
KIND_CASES = pytest.mark.parametrize("kind", ["purchase", "cutting", "tags"])


@cache
def built(kind: str, paper) -> bytes:
    if kind == "purchase":
        rows = [purchase_row(n, n + 1) for n in range(30)]
        return build_purchase_sheet(purchase_sheet(order("Quay Threads", *rows)), paper)
    if kind == "cutting":
        threads = [stock(1 + 9 * n, 9) for n in range(12)]
        return build_cutting_sheet(cutting_sheet(shade_cuts(3, *threads)), paper)
    tags = [tag(n, 1 + n % 6, cautions=CAUTIONS[: n % 4]) for n in range(1, 20)]
    return build_tag_sheet(tag_sheet(*tags), paper)


@PAPER_CASES
@KIND_CASES
def test_nothing_is_printed_in_the_5_mm_edge(kind, paper):
    document = built(kind, paper)
    dots_per_inch = 127
    edge = 5 * dots_per_inch / 25.4
    assert page_count(document) > 1
    for page in range(page_count(document)):
        pixels = np.array(rendered(document, dots_per_inch, page))
        inked = np.argwhere(pixels < 255)
        top, left = inked.min(axis=0)
        bottom, right = inked.max(axis=0)
        height, width = pixels.shape
        assert min(top, left, height - 1 - bottom, width - 1 - right) >= edge


@PAPER_CASES
@KIND_CASES
def test_pages_have_the_papers_size_and_say_where_they_belong(kind, paper):
    document = built(kind, paper)
    for number, page in enumerate(PdfReader(BytesIO(document)).pages, start=1):
        assert float(page.mediabox.width) == pytest.approx(paper.width_pt, abs=0.01)
        assert float(page.mediabox.height) == pytest.approx(paper.height_pt, abs=0.01)
        text = page_texts(document)[number - 1]
        assert f"page {number} of {page_count(document)}" in text
        assert "Saltmarch harbour fair" in text
        assert "Saturday 5 December 2026" in text


@KIND_CASES
def test_document_names_its_title_workshop_and_language(kind):
    reader = PdfReader(BytesIO(built(kind, PAPERS["a4"])))
    assert "Saltmarch harbour fair" in reader.metadata.title
    assert reader.metadata.author == "Two Tides Thread Stall"
    assert reader.trailer["/Root"]["/Lang"] == "en"


@KIND_CASES
def test_every_letter_is_embedded(kind):
    for page in PdfReader(BytesIO(built(kind, PAPERS["a4"]))).pages:
        fonts = [font.get_object() for font in page["/Resources"]["/Font"].values()]
        for font in fonts:
            if font["/BaseFont"] == "/Helvetica":
                # reportlab always lists its own first font; no letter may be set in it.
                name = next(n for n, f in page["/Resources"]["/Font"].items() if f == font)
                assert f"{name} ".encode() not in page.get_contents().get_data()
            else:
                assert "/FontFile2" in font["/FontDescriptor"].get_object()
        assert any("SourceSansPro" in font["/BaseFont"] for font in fonts)


def digests() -> list[str]:
    kinds = ("purchase", "cutting", "tags")
    return [hashlib.sha256(built(kind, PAPERS["letter"])).hexdigest() for kind in kinds]


def test_same_sheets_are_the_same_bytes_in_other_processes():
    here = Path(__file__).parent
    program = (
        f"import sys; sys.path[:0] = [{str(here)!r}, {str(here.parents[3])!r}]\n"
        "import test_sheet_pages\n"
        "print(test_sheet_pages.digests())"
    )
    for seed, zone in (("1", "UTC"), ("2", "Pacific/Auckland")):
        other = subprocess.run(
            [sys.executable, "-c", program],
            check=True,
            capture_output=True,
            text=True,
            env={"PYTHONHASHSEED": seed, "TZ": zone},
        )
        assert other.stdout.strip() == str(digests())


@KIND_CASES
def test_same_sheet_is_the_same_bytes_again(kind):
    assert built.__wrapped__(kind, PAPERS["a4"]) == built(kind, PAPERS["a4"])


def blocks_of(heights, heading=None):
    return [Block(height, lambda pen, top: None, heading) for height in heights]


def test_paginate_breaks_before_what_does_not_fit():
    pages = paginate(blocks_of([40, 40, 40, 40]), first=90, later=130)
    assert [len(page) for page in pages] == [2, 2]


def test_paginate_counts_a_repeated_heading():
    heading = Heading(20, lambda pen, top, continued: None)
    pages = paginate(blocks_of([40, 40, 40, 40], heading), first=100, later=100)
    assert [len(page) for page in pages] == [2, 2]
    pages = paginate(blocks_of([40, 40, 40, 40], heading), first=99, later=100)
    assert [len(page) for page in pages] == [1, 2, 1]


def test_paginate_keeps_a_heading_with_its_first_block():
    heading = Heading(20, lambda pen, top, continued: None)
    mixed = blocks_of([50]) + blocks_of([40], heading)
    assert [len(page) for page in paginate(mixed, first=109, later=200)] == [1, 1]
    assert [len(page) for page in paginate(mixed, first=110, later=200)] == [2]


@PAPER_CASES
def test_blocks_stand_below_each_other_and_above_the_foot(paper):
    drawn = []

    def recorded(height):
        return Block(height, lambda pen, top: drawn.append((top, top - height)))

    heights = [90.0, 30.0, 200.0, 10.0] * 9
    pen = Pen(paper, "Recorded", HEAD)
    draw_document(pen, HEAD, Opening("Recorded", ""), [recorded(each) for each in heights])
    assert [round(top - foot, 6) for top, foot in drawn] == heights
    for (_, foot), (top, _) in pairwise(drawn):
        assert top == pytest.approx(foot) or top > paper.height_pt - 100
    assert min(foot for _, foot in drawn) >= 16 / 25.4 * 72 - 1e-6


def test_letters_on_thread_are_readable():
    # WCAG 2.2, 1.4.3: 4.5 : 1 for text.
    for colour in ("#ffffff", "#000000", "#777777", "#767676", "#ff0000", "#e2a23b", "#1b4f9c"):
        letters = letter_colour_on(colour)
        assert contrast(colour, letters) >= 4.5


def contrast(one: str, other: str) -> float:
    def luminance(colour):
        parts = [int(colour[n : n + 2], 16) / 255 for n in (1, 3, 5)]
        linear = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
        return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

    bright, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (bright + 0.05) / (dark + 0.05)


@pytest.mark.parametrize("colour", ["", "red;", "#12", "javascript:"])
def test_thread_of_unknown_colour_is_drawn_undyed(colour):
    assert thread_colour(colour).hexval() == thread_colour("#cfc8ba").hexval()
