"""Cutting sheets, reopened: cutting.py, bars.py."""

from dataclasses import replace
from functools import cache
from itertools import pairwise

import pytest
from sheet_factories import HEAD, SHADES, cutting_sheet, shade_cuts, stock
from sheet_reading import all_text, overlapping, page_count, page_texts, runs

from planner.sheets.bars import row_length_mm, rows_of, segments_of
from planner.sheets.contents import SheetCut
from planner.sheets.cutting import build_cutting_sheet
from planner.sheets.paper import PAPERS

A4 = PAPERS["a4"]
PAPER_CASES = pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
CUT_SIZE = 12.5


def listed(document: bytes) -> list[tuple[str, str]]:
    """Pairs of length and tag number, as they stand in the lists of cuts."""
    figures = [run.text for run in runs(document) if run.size == CUT_SIZE]
    return list(zip(figures[::2], figures[1::2], strict=True))


@cache
def large_sheet():
    shades, tag_number = [], 1
    for shade in range(6):
        pieces = []
        for skein in range(7):
            pieces.append(stock(tag_number, 4 + (shade + skein) % 9, is_new=skein > 1))
            tag_number += 13
        shades.append(shade_cuts(shade, *pieces))
    return cutting_sheet(*shades)


@cache
def large_document(paper) -> bytes:
    return build_cutting_sheet(large_sheet(), paper)


def expected_cuts(sheet):
    return [
        (f"{cut.cut_mm / 10:g}", str(cut.tag_number))
        for shade in sheet.shades
        for piece in shade.stock
        for cut in piece.cuts
    ]


@PAPER_CASES
def test_every_piece_stands_once_in_cutting_order(paper):
    sheet = large_sheet()
    document = large_document(paper)
    assert listed(document) == expected_cuts(sheet)
    assert overlapping(runs(document)) == []
    lengths = len({length for length, _ in expected_cuts(sheet)})
    answer = f"{len(expected_cuts(sheet))} pieces of {lengths} lengths in 6 shades"
    assert answer in all_text(document)


@PAPER_CASES
def test_every_thread_is_drawn_once_and_its_rest_told(paper):
    sheet = large_sheet()
    text = all_text(large_document(paper))
    threads = [piece for shade in sheet.shades for piece in shade.stock]
    assert text.count("New skein 1 of 3") + text.count("Remnant, lot 41-B") == len(threads)
    rests = text.count("goes back on the shelf") + text.count("left: waste")
    assert rests + text.count("Nothing left.") == len(threads)


@PAPER_CASES
def test_shade_heading_is_repeated_where_a_page_continues_it(paper):
    sheet = cutting_sheet(shade_cuts(0, *[stock(1 + 9 * n, 9) for n in range(20)]))
    pages = page_texts(build_cutting_sheet(sheet, paper))
    assert len(pages) > 2
    assert all(SHADES[0][0] in page for page in pages)
    assert ["(continued)" in page for page in pages] == [False] + [True] * (len(pages) - 1)
    assert all(f"page {n} of {len(pages)}" in page for n, page in enumerate(pages, start=1))


@PAPER_CASES
def test_threads_cuts_stay_together_on_a_page(paper):
    document = large_document(paper)
    sources = [run for run in runs(document) if run.text.startswith(("New skein", "Remnant, lot"))]
    for page in range(1, page_count(document) + 1):
        found = [run for run in runs(document) if run.page == page]
        rests = [run for run in found if "left" in run.text or "goes back" in run.text]
        assert len(rests) == sum(1 for source in sources if source.page == page)


def test_rest_is_named_as_the_maker_will_treat_it():
    back = stock(1, 3, 5000, goes_back=True, left_mm=1220)
    waste = stock(9, 3, 5000, goes_back=False, left_mm=74)
    none = stock(12, 3, 5000, goes_back=False, left_mm=0)
    text = all_text(build_cutting_sheet(cutting_sheet(shade_cuts(0, back, waste, none)), A4))
    assert "122 cm goes back on the shelf" in text
    assert "7.4 cm left: waste" in text
    assert "Nothing left." in text


def test_fold_and_strands_stand_beside_the_cut():
    text = all_text(build_cutting_sheet(cutting_sheet(shade_cuts(0, stock(1, 5))), A4))
    assert "3 + 4 B" in text
    assert "59" in text
    assert "sliding piece E" in text
    assert "measure the fold from the end of the first strand named" in text


@PAPER_CASES
def test_inches_keep_their_fractions_and_their_room(paper):
    cuts = tuple(SheetCut(1990 + n, "59 + 60", "W", 8001 + n * 7, 4000 + n * 7) for n in range(6))
    piece = stock(1, 1, 60_000, cuts=cuts, left_mm=100)
    document = build_cutting_sheet(cutting_sheet(shade_cuts(0, piece), unit="in"), paper)
    assert ("315", "1990") in listed(document)
    assert ("315 1/4", "1991") in listed(document)
    assert all_text(document).count("59 + 60 W") == 6
    assert overlapping(runs(document)) == []


@PAPER_CASES
@pytest.mark.parametrize("count", [36, 37, 250])
def test_long_list_of_one_thread_is_continued(paper, count):
    cuts = tuple(SheetCut(n, "1", "A", 400, None) for n in range(1, count + 1))
    spool = stock(1, 1, 100_000, cuts=cuts, left_mm=100_000 - 400 * count, source="Spool of 100 m")
    document = build_cutting_sheet(cutting_sheet(shade_cuts(0, spool)), paper)
    assert listed(document) == [("40", str(n)) for n in range(1, count + 1)]
    order = [run.text for run in runs(document) if run.size == 8.5 and run.text.isdigit()]
    assert order == [str(n) for n in range(1, count + 1)]
    assert ("Spool of 100 m (continued)" in all_text(document)) == (count > 36)
    assert overlapping(runs(document)) == []


def test_nothing_to_cut_is_said_plainly():
    document = build_cutting_sheet(cutting_sheet(), A4)
    assert "Nothing to cut: this plan has no pieces." in all_text(document)


def test_notices_stand_before_the_cuts():
    notice = "3 bracelets have no thread yet: tags 4, 7 and 9."
    sheet = replace(cutting_sheet(shade_cuts(0, stock(1, 3))), notices=(notice,))
    text = all_text(build_cutting_sheet(sheet, A4))
    assert text.index(notice) < text.index("Tarred rope")


@PAPER_CASES
@pytest.mark.parametrize("name", ["W" * 80, "Κύματα στο λιμάνι " * 5, "ערב\x00\x1b\n" * 20, ""])
def test_names_of_any_kind_never_run_into_each_other(paper, name):
    shade = replace(shade_cuts(0, stock(1, 9, source=name)), shade_code=name, shade_name=name)
    sheet = replace(
        cutting_sheet(shade), head=replace(HEAD, workshop=name, batch=name, plan_label=name)
    )
    assert overlapping(runs(build_cutting_sheet(sheet, paper))) == []


@pytest.mark.parametrize("reckoned_mm", [400, 7840, 25_000, 100_000, 1_000_000])
def test_segments_cover_a_thread_to_scale_without_gaps(reckoned_mm):
    piece = stock(1, 9, reckoned_mm)
    row_mm = row_length_mm(reckoned_mm)
    assert rows_of(piece, row_mm) <= 12
    segments = segments_of(piece, row_mm)
    spans = [(s.row * row_mm + s.start_mm, s.row * row_mm + s.end_mm) for s in segments]
    assert spans[0][0] == 0
    assert spans[-1][1] == reckoned_mm
    assert all(before[1] == after[0] for before, after in pairwise(spans))
    for number, cut in enumerate(piece.cuts, start=1):
        own = [s for s in segments if s.tag_number == number]
        assert sum(s.end_mm - s.start_mm for s in own) == cut.cut_mm
        assert sum(s.labelled for s in own) == 1


def test_bar_numbers_stand_over_their_segments():
    piece = stock(31, 6)
    found = runs(build_cutting_sheet(cutting_sheet(shade_cuts(0, piece)), A4))
    labels = [run for run in found if run.size == 8.0]
    assert [run.text for run in labels] == [str(n) for n in range(31, 37)]
    width = A4.width_pt - 2 * 16 / 25.4 * 72
    place = 0
    for run, cut in zip(labels, piece.cuts, strict=True):
        centre = 16 / 25.4 * 72 + (place + cut.cut_mm / 2) / 7840 * width
        assert (run.left + run.right) / 2 == pytest.approx(centre, abs=1.0)
        place += cut.cut_mm
