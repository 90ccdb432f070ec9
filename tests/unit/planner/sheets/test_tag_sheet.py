"""Cut tags, reopened: tags.py, tag_layouts.py, piece_columns.py."""

from dataclasses import replace

import pytest
from sheet_factories import CAUTIONS, HEAD, SHADES, band, piece, single_pieces, tag, tag_sheet
from sheet_reading import all_text, overlapping, page_count, page_texts, runs

from planner.sheets.paper import PAPERS
from planner.sheets.tag_layouts import TAG_LAYOUTS, TagError, arrange, layout_for, least_height
from planner.sheets.tags import build_tag_sheet

A4, LETTER = PAPERS["a4"], PAPERS["letter"]
PAPER_CASES = pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
LONG = "Zigzag of the longest winter evening by the harbour wall, second try, wide, 1234"
NAMES = {
    "80 characters": LONG,
    "one long word": "W" * 80,
    "Cyrillic": "Зимний вечер у гавани",
    "Greek": "Κύματα στο λιμάνι το βράδυ",
    "right to left": "ערב בנמל \u202eabc\u202c",
    "control characters": "Tide\x00 line\x1b[31m\n\t\u0085",
    "10,000 characters": "ab " * 3333,
    "nothing": "",
}


def numbers(document: bytes) -> list[str]:
    return [run.text for run in runs(document) if run.size > 20]


@PAPER_CASES
def test_every_tag_number_stands_once(paper):
    tags = [tag(number, 1 + number % 9) for number in range(1, 41)]
    assert numbers(build_tag_sheet(tag_sheet(*tags), paper)) == [str(each.number) for each in tags]


@PAPER_CASES
def test_small_tags_stand_eight_on_a_page(paper):
    document = build_tag_sheet(tag_sheet(*[tag(number, 3) for number in range(1, 25)]), paper)
    assert page_count(document) == 3
    assert "page 3 of 3" in page_texts(document)[2]


@PAPER_CASES
def test_300_tags_come_in_order(paper):
    document = build_tag_sheet(tag_sheet(*[tag(number) for number in range(1, 301)]), paper)
    assert numbers(document) == [str(number) for number in range(1, 301)]
    assert page_count(document) == 38


def test_no_tags_is_one_page_that_says_so():
    document = build_tag_sheet(tag_sheet(), A4)
    assert page_count(document) == 1
    assert "No tags: this plan has no bracelets to make." in all_text(document)


def test_tag_shows_everything_a_maker_needs():
    text = all_text(build_tag_sheet(tag_sheet(tag(27, cautions=CAUTIONS[:1])), "a4"))
    text = " ".join(text.split())
    for words in (
        "27",
        "Slipway chevron",
        "Adult M · Harbour lights",
        "for Saltmarch rowing club",
        "due Fri 4 Dec 2026",
        "Tie 118 rows to 15 cm",
        "folded start, plaited ties",
        "2 + 1",
        SHADES[0][0],
        SHADES[0][1],
        "124",
        "64",
        "cut, cm",
        "Measure the fold from the end of the first strand named.",
        "fold, cm",
        CAUTIONS[0],
    ):
        assert words in text


@PAPER_CASES
@pytest.mark.parametrize("unit", ["cm", "in", "mm"])
@pytest.mark.parametrize("count", [1, 12, 24, 25, 60, 61])
def test_every_piece_stands_on_its_tag_in_order(paper, unit, count):
    each = replace(tag(1), pieces=single_pieces(count), drawing=band(24), cautions=CAUTIONS)
    found = runs(build_tag_sheet(tag_sheet(each, unit=unit), paper))
    strands = [run.text for run in found if run.text.isdigit() and is_strand(run, found)]
    assert strands == [str(number) for number in range(1, count + 1)]
    assert overlapping(found) == []


def is_strand(run, found):
    """Whether a number stands in a column headed "strand", by its place on the page."""
    heads = [head for head in found if head.text == "strand" and head.base > run.base]
    return any(abs(head.left - run.left) < 1.5 for head in heads)


def test_pieces_of_24_strands_fit_four_tags_a_page():
    assert layout_for(replace(tag(1), pieces=single_pieces(24)), A4).key == "tall"
    assert layout_for(replace(tag(1), pieces=single_pieces(24)), LETTER).key == "tall"
    assert layout_for(tag(1, 3), A4).key == "compact"


def test_more_pieces_than_a_page_holds_are_refused_by_number():
    with pytest.raises(TagError, match="Tag 7 has 400 pieces"):
        layout_for(replace(tag(7), pieces=single_pieces(400)), A4)


@PAPER_CASES
def test_arrange_keeps_order_and_gives_each_tag_its_height(paper):
    tags = [replace(tag(number), pieces=single_pieces(1 + number * 7 % 55)) for number in range(60)]
    pages = arrange(tags, paper)
    placed = [each for page in pages for row in page for each in row.tags]
    assert placed == tags
    for page in pages:
        assert sum(row.layout.twelfths for row in page) <= 12
        for row in page:
            room = (paper.height_pt - 22 / 25.4 * 72) * row.height_share
            assert all(least_height(each, row.layout, paper) <= room + 1e-6 for each in row.tags)
            assert len(row.tags) <= row.layout.columns


def test_layouts_stand_in_order_of_their_size():
    areas = [layout.twelfths / layout.columns for layout in TAG_LAYOUTS]
    assert areas == sorted(areas)


@PAPER_CASES
@pytest.mark.parametrize("name", NAMES.values(), ids=NAMES.keys())
def test_names_of_any_kind_never_run_into_each_other(paper, name):
    pieces = tuple(
        piece((n + 12, n), n, shade_code=name[:80], shade_name=name, slot=name[:1])
        for n in range(1, 9)
    )
    each = tag(
        104, pattern=name, colourway=name, size=name, ending=name, for_whom=name, pieces=pieces
    )
    head = replace(HEAD, workshop=name, batch=name, plan_label=name)
    sheet = replace(tag_sheet(*[each] * 5), head=head)
    found = runs(build_tag_sheet(sheet, paper))
    assert overlapping(found) == []
    assert [run.text for run in found if run.size > 20] == ["104"] * 5
    assert sum(run.text.startswith("page ") for run in found) == page_count_of(found)


def page_count_of(found):
    return max(run.page for run in found)


def test_letters_that_the_typeface_lacks_are_explained_at_the_foot():
    text = all_text(build_tag_sheet(tag_sheet(tag(1, for_whom="ים")), A4))
    assert "for ☐☐" in text
    assert "☐ is a letter this typeface lacks" in text
    assert "typeface" not in all_text(build_tag_sheet(tag_sheet(tag(1)), A4))


def test_empty_fields_leave_no_hole():
    full = runs(build_tag_sheet(tag_sheet(tag(1)), A4))
    bare = runs(build_tag_sheet(tag_sheet(tag(1, for_whom="", colourway="", due=None)), A4))
    texts = [run.text for run in bare]
    assert "Adult M" in texts
    assert not any(text.startswith(("for", "due", "·")) for text in texts)
    whole = tag(1, colourway="")
    moved = runs(build_tag_sheet(tag_sheet(tag(1, size="", colourway="")), A4))
    assert base_of(moved, "for Saltmarch rowing club") > base_of(full, "for Saltmarch rowing club")
    assert whole.size in [run.text for run in runs(build_tag_sheet(tag_sheet(whole), A4))]


def base_of(found, text):
    return next(run.base for run in found if run.text == text)


def test_bracelet_without_folds_has_no_fold_column():
    each = replace(tag(1), pieces=single_pieces(4))
    assert "fold" not in all_text(build_tag_sheet(tag_sheet(each), A4)).replace("folded start", "")


def test_sliding_piece_is_called_so():
    slide = replace(piece((), 2, 200, fold_mm=None), label="slide")
    each = replace(tag(1), pieces=(*single_pieces(2), slide))
    assert "slide" in all_text(build_tag_sheet(tag_sheet(each), A4))


def test_lengths_are_in_the_makers_unit():
    # 1 in = 25.4 mm exactly: 609.6 mm is 24 in, 622.3 mm is 24 1/2 in; whole mm round up.
    each = tag(1, pieces=(piece((1,), 0, 623), piece((2,), 1, 610)), knotted_length_mm=152)
    text = all_text(build_tag_sheet(tag_sheet(each, unit="in"), LETTER))
    assert "24 1/2" in text
    assert "cut, in" in text
    assert "Tie 118 rows to 6 in" in text


def test_shared_drawing_is_stored_once():
    equal = [tag(1), tag(2, drawing=replace(band(6)))]
    assert equal[0].drawing is not equal[1].drawing
    assert build_tag_sheet(tag_sheet(*equal), A4).count(b"/Subtype /Form") == 1
    shared = build_tag_sheet(tag_sheet(*[tag(number) for number in range(1, 9)]), A4)
    own = [tag(number, drawing=band(6, 100 + number)) for number in range(1, 9)]
    assert shared.count(b"/Subtype /Form") == 1
    assert build_tag_sheet(tag_sheet(*own), A4).count(b"/Subtype /Form") == 8
