"""Cutting sheets, reopened: cutting.py, bars.py."""

import re
from dataclasses import replace
from functools import cache
from itertools import pairwise

import pytest
from sheet_factories import HEAD, SHADES, cutting_sheet, shade_cuts, stock
from sheet_reading import all_text, overlapping, page_count, runs

from planner.sheets.bars import row_length_mm, rows_of, segments_of
from planner.sheets.contents import ShadeCuts, SheetCut, StackCut, StockCut
from planner.sheets.cutting import build_cutting_sheet
from planner.sheets.paper import PAPERS

A4 = PAPERS["a4"]
PAPER_CASES = pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())
CUT_SIZE = 12.5
WORD_SIZE = 11.0


def listed(document: bytes) -> list[tuple[str, ...]]:
    """Rows as they stand in the lists of cuts: length, tags, strands and, where folded, fold.

    A row begins with a length; what is left, or the name of a thread, ends the list.
    """
    rows: list[list[str]] = []
    is_list = False
    for run in runs(document):
        if run.size == CUT_SIZE:
            rows.append([run.text])
            is_list = True
        elif run.size == WORD_SIZE:
            is_list = is_list and not re.search("left|goes back|[Ss]kein|Spool|thread", run.text)
            if is_list:
                rows[-1].append(run.text)
    return [tuple(row) for row in rows]


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


def as_row(cut: SheetCut) -> tuple[str, ...]:
    """A row of its own, as every cut of the large sheet has."""
    row = (f"{cut.cut_mm / 10:g}", str(cut.tag_number), f"{cut.label} {cut.slot}")
    return row if cut.fold_mm is None else (*row, f"{cut.fold_mm / 10:g}")


def expected_rows(sheet):
    return [as_row(cut) for shade in sheet.shades for piece in shade.stock for cut in piece.cuts]


@PAPER_CASES
def test_every_piece_stands_once_in_cutting_order(paper):
    sheet = large_sheet()
    document = large_document(paper)
    assert listed(document) == expected_rows(sheet)
    assert overlapping(runs(document)) == []
    lengths = len({row[0] for row in expected_rows(sheet)})
    answer = f"{len(expected_rows(sheet))} pieces of {lengths} lengths in 6 shades"
    assert answer in all_text(document)


@PAPER_CASES
def test_every_thread_is_drawn_once_and_its_rest_told(paper):
    sheet = large_sheet()
    text = all_text(large_document(paper))
    threads = [piece for shade in sheet.shades for piece in shade.stock]
    assert text.count("New skein 1 of 3") + text.count("Remnant, lot 41-B") == len(threads)
    rests = text.count("goes back on the shelf") + text.count("left: waste")
    assert rests + text.count("Nothing left.") == len(threads)


def alike(*tags: int, left_mm: int = 100) -> StockCut:
    """A skein cut into three lengths of one bracelet after another, the first two folded."""
    cuts = [
        SheetCut(tag, label, "B", cut_mm, fold_mm)
        for label, cut_mm, fold_mm in (("3 + 4", 1180, 590), ("7", 960, None), ("8", 960, None))
        for tag in tags
    ]
    reckoned_mm = sum(cut.cut_mm for cut in cuts) + left_mm
    return stock(1, 0, reckoned_mm, cuts=tuple(cuts), left_mm=left_mm, goes_back=left_mm >= 300)


@PAPER_CASES
def test_skeins_cut_alike_are_drawn_once_with_all_tags(paper):
    stack = StackCut("new thread 1 to 3: 8 m skein", (alike(1, 2), alike(3, 4), alike(7, 9)))
    sheet = cutting_sheet(ShadeCuts(*SHADES[0], (stack,)))
    document = build_cutting_sheet(sheet, paper)
    text = all_text(document)
    assert listed(document) == [
        ("118", "1\u20134, 7, 9", "3 + 4 B", "59"),
        ("96", "1\u20134, 7, 9", "7, 8 B"),
    ]
    assert "New thread 1 to 3: 8 m skein" in text
    assert "3 together" in text
    assert "\u00d7 2" in text
    assert "\u00d7 4" in text
    assert "10 cm of each left: waste" in text
    assert "as your shears cut cleanly" in text
    assert overlapping(runs(document)) == []
    # The bar is that of one skein, and shows lengths: a tag number would be one of several.
    assert [run.text for run in runs(document) if run.size == 8.0] == ["118"] * 2 + ["96"] * 4


def test_rests_of_skeins_cut_alike_are_told_apart():
    seven = replace(alike(1, left_mm=450), source="piece 7: remnant")
    nine = replace(alike(2, left_mm=20), source="piece 9: remnant")
    stack = StackCut("pieces 7, 9: remnant", (seven, nine))
    text = all_text(build_cutting_sheet(cutting_sheet(ShadeCuts(*SHADES[0], (stack,))), A4))
    assert "45 cm of piece 7 goes back on the shelf" in text
    assert "2 cm of piece 9 left: waste" in text


def test_skeins_cut_alike_with_nothing_left_say_so_once():
    stack = StackCut("new thread 1, 2: hank", (alike(1, left_mm=0), alike(2, left_mm=0)))
    text = all_text(build_cutting_sheet(cutting_sheet(ShadeCuts(*SHADES[0], (stack,))), A4))
    assert text.count("Nothing left.") == 1


def test_length_is_told_again_where_its_tags_go_on():
    cuts = (SheetCut(8, "1", "A", 870, None), SheetCut(11, "2", "A", 870, None))
    piece = stock(1, 2, 2000, cuts=cuts, left_mm=260)
    document = build_cutting_sheet(cutting_sheet(shade_cuts(0, piece)), A4)
    assert listed(document) == [("87", "8", "1 A"), ("87", "11", "2 A")]
    assert all_text(document).count("\u00d7") == 1


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
    found = {row[:3] for row in listed(document)}
    assert {("315", "1990", "59 + 60 W"), ("315 1/4", "1991", "59 + 60 W")} <= found
    assert len(found) == 6
    assert overlapping(runs(document)) == []


@PAPER_CASES
@pytest.mark.parametrize("count", [35, 36, 250])
def test_long_list_of_one_thread_is_continued(paper, count):
    cuts = tuple(SheetCut(n, "1", "A", 700 - n, None) for n in range(1, count + 1))
    left_mm = 200_000 - sum(cut.cut_mm for cut in cuts)
    spool = stock(1, 1, 200_000, cuts=cuts, left_mm=left_mm, source="Spool of 200 m")
    document = build_cutting_sheet(cutting_sheet(shade_cuts(0, spool)), paper)
    assert listed(document) == [as_row(cut) for cut in cuts]
    assert ("Spool of 200 m (continued)" in all_text(document)) == (count > 35)
    assert overlapping(runs(document)) == []


@PAPER_CASES
def test_more_tags_and_strands_than_a_line_holds_are_all_told(paper):
    """Of 60 tags every second one, each with 30 folded pieces of one length."""
    labels = [f"{n} + {61 - n}" for n in range(1, 31)]
    cuts = tuple(
        SheetCut(tag, label, "A", 500, None) for tag in range(2, 121, 2) for label in labels
    )
    spool = stock(1, 1, 1_000_000, cuts=cuts, left_mm=1_000_000 - 500 * len(cuts))
    document = build_cutting_sheet(cutting_sheet(shade_cuts(0, spool)), paper)
    assert overlapping(runs(document)) == []
    words = " ".join(run.text for run in runs(document) if run.size == WORD_SIZE)
    for tag in range(62, 121, 2):  # no strand has such a number
        assert len(re.findall(rf"\b{tag}\b(?! m)", words)) == 1
    rows = -(-60 // 24)
    for label in labels:
        assert words.count(label) == rows
    assert "\u2026" not in all_text(document)
    assert min(run.bottom for run in runs(document) if run.size >= WORD_SIZE) > 40


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
    for cut in piece.cuts:
        own = [s for s in segments if s.cut == cut]
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
