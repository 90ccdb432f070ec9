"""The square codes: codes.py, and tags rendered for a printer of 203 dots an inch."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from sheet_factories import tag, tag_sheet
from sheet_reading import decoded, page_count, rendered

from planner.sheets.codes import MODULE_PT, CodeTextError, code_for, code_side
from planner.sheets.paper import PAPERS, millimetres
from planner.sheets.tags import build_tag_sheet

PRINTER_DPI = 203


@pytest.mark.parametrize(
    ("length", "version"),
    # ISO/IEC 18004, byte mode, level L: 17 bytes in version 1, 32 in 2, 53 in 3, 78 in 4
    # (from memory).
    [(17, 1), (18, 2), (32, 2), (33, 3), (53, 3), (54, 4), (78, 4)],
)
def test_code_is_the_smallest_that_holds_the_text(length, version):
    assert code_for("x" * length).modules == 17 + 4 * version


def test_code_is_never_narrower_than_12_mm_nor_its_modules_than_4_dots():
    for text in ("x", "x" * 200):
        code = code_for(text)
        assert code.modules * code.module_pt >= millimetres(12) - 1e-9
        assert code.module_pt >= MODULE_PT
        assert code.module_pt >= 4 / 203 * 72 - 1e-9


def test_code_refuses_nothing_and_too_much():
    with pytest.raises(CodeTextError, match="needs a text"):
        code_for("")
    with pytest.raises(CodeTextError, match="too long"):
        code_for("x" * 300)
    with pytest.raises(CodeTextError, match="does not fit"):
        code_for("x" * 5000)


@pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
def test_codes_decode_from_every_page_at_203_dpi(paper):
    tags = [tag(number) for number in range(1, 20)]
    document = build_tag_sheet(tag_sheet(*tags), paper)
    texts = []
    for page in range(page_count(document)):
        texts += [code.text for code in decoded(rendered(document, PRINTER_DPI, page))]
    assert sorted(texts) == sorted(each.code_text for each in tags)


@pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
@pytest.mark.parametrize(
    "address", ["http://10.0.0.7/t/1", "https://stall.example/workshop/t/9001-abcdef"]
)
def test_quiet_zone_of_4_modules_is_white_on_the_page(paper, address):
    # ISO/IEC 18004: at least 4 modules on every side. Measured in pixels of the rendered page.
    crowded = tag(1888, pattern="W" * 80, colourway="W" * 80, for_whom="W" * 80, size="W" * 80)
    document = build_tag_sheet(tag_sheet(*[tag_with(crowded, address)] * 8), paper)
    pixels = np.array(rendered(document, PRINTER_DPI))
    codes = decoded(rendered(document, PRINTER_DPI))
    assert len(codes) == 8
    for code in codes:
        corners = code.position
        left, top = corners.top_left.x, corners.top_left.y
        right, bottom = corners.bottom_right.x, corners.bottom_right.y
        module = (right - left) / code_for(address).modules
        assert module >= 3.9
        zone = round(4 * module)
        around = pixels[top - zone + 1 : bottom + zone, left - zone + 1 : right + zone].copy()
        around[zone - 2 : -zone + 2, zone - 2 : -zone + 2] = 255
        assert around.min() >= 250


@pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
def test_quiet_zone_stays_on_its_own_tag_when_cut(paper):
    document = build_tag_sheet(tag_sheet(*[tag(number) for number in range(1, 9)]), paper)
    edge, dots = millimetres(8), PRINTER_DPI / 72
    width = (paper.width_pt - 2 * edge) / 2
    for code in decoded(rendered(document, PRINTER_DPI)):
        right = code.position.top_right.x / dots
        module = (right - code.position.top_left.x / dots) / code_for(code.text).modules
        cut_line = edge + width * (1 if right < paper.width_pt / 2 else 2)
        assert cut_line - right >= 4 * module


def tag_with(each, address):
    return tag(
        each.number,
        pattern=each.pattern,
        colourway=each.colourway,
        for_whom=each.for_whom,
        size=each.size,
        code_text=address,
    )


def test_code_with_letters_beyond_ascii_decodes_as_written():
    address = "https://stall.example/t/Θάλασσα"
    document = build_tag_sheet(tag_sheet(tag(1, code_text=address)), PAPERS["a4"])
    assert [code.text for code in decoded(rendered(document, PRINTER_DPI))] == [address]


@given(
    st.one_of(
        st.text(min_size=1, max_size=80), st.from_regex(r"[a-z:/0-9A-Z]{1,200}", fullmatch=True)
    )
)
def test_side_is_that_of_the_code_itself(text):
    assert code_side(text) == code_for(text).side_pt


def test_side_of_a_text_without_code_is_refused_by_its_own_name():
    for text in ("", "x" * 300, "x" * 5000):
        with pytest.raises(CodeTextError) as wanted:
            code_for(text)
        with pytest.raises(CodeTextError) as found:
            code_side(text)
        assert str(found.value) == str(wanted.value)
