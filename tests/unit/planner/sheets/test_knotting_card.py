"""The knotting card, reopened and read: knotting_card.py."""

import random
import re
from collections import Counter
from datetime import date
from functools import cache
from itertools import pairwise

import numpy as np
import pytest
from sheet_factories import HEAD, SHADES
from sheet_reading import all_text, overlapping, page_count, page_texts, rendered, runs

from inventory.measures import format_length, format_number
from patterns.cut_lengths import CutRule, Ending, pieces_for
from patterns.geometry import Gauge
from patterns.grid import Carry, GridPattern
from patterns.grid_lengths import find_runs
from patterns.knots import DiagonalPattern, Finish, Knot, knots_in_row
from patterns.techniques import strand_table
from planner.planning.cards import fill_card
from planner.planning.demand import ShadeName
from planner.sheets.card_chart import ChartFit
from planner.sheets.knotting_card import build_knotting_card
from planner.sheets.paper import CARD_PAPERS, PaperError, millimetres

TIES = Ending("Plaited ties, both ends", "straight", 60, 60, 1.25, 30, 90, 0, 0, 0)
FOLDED = Ending("Folded start", "folded", 0, 60, 1.25, 30, 90, 50, 100, 60)
RULE = CutRule(0.1, 10)
BOTH_PAPERS = pytest.mark.parametrize("paper", list(CARD_PAPERS))
EDGE_PT = millimetres(5)


def diagonal(strands=12, rows=24, name="Slipway", knots=tuple(Knot), seed=1):
    choose = random.Random(seed)
    return DiagonalPattern(
        name,
        tuple("ABCDEF"[strand * 6 // strands] for strand in range(strands)),
        tuple(
            tuple(choose.choice(knots) for _ in range(knots_in_row(strands, row)))
            for row in range(1, rows + 1)
        ),
    )


def grid(columns=9, rows=12, seed=1, **options):
    choose = random.Random(seed)
    cells = tuple(tuple(choose.choices("AAAABC", k=columns)) for _ in range(rows))
    return GridPattern("Pennant", "A", cells, **options)


def card(pattern, ending=TIES, length_mm=150, unit="cm", **changes):
    table = strand_table(pattern, length_mm, Gauge(), RULE.join_tail_mm)
    shades = {slot: ShadeName(0, *shade) for slot, shade in zip("ABCDEF", SHADES, strict=True)}
    return fill_card(
        **{
            "head": HEAD,
            "unit": unit,
            "pattern": pattern,
            "shades": shades,
            "names": ("Harbour lights", "Adult M", ending.name),
            "ends": ending,
            "rows": table.rows,
            "band_mm": (round(table.band_length_mm), round(table.band_width_mm)),
            "pieces": pieces_for(table, ending, RULE),
            "gauge": Gauge(),
            "join_tail_mm": RULE.join_tail_mm,
            "cautions": ("Colours may run when wet.",),
        }
        | changes
    )


def words_of(document):
    """Words as they are read, however the lines were broken."""
    return " ".join(all_text(document).split())


CARDS = {
    "chevron": card(diagonal()),
    "wide": card(diagonal(24, 40)),
    "widest": card(diagonal(60, 60)),
    "odd": card(diagonal(7, 14), FOLDED, unit="in"),
    "short repeat": card(diagonal(6, 2, knots=(Knot.F,))),
    "grid": card(grid()),
    "odd grid": card(grid(rows=11), FOLDED, unit="in"),
    "centred": card(grid(rows=20, finish=Finish.CENTRED)),
    "wide grid": card(grid(60, 20)),
}
EVERY_CARD = pytest.mark.parametrize("name", CARDS)


@cache
def built(name, paper):
    return build_knotting_card(CARDS[name], paper)


@pytest.mark.parametrize(
    ("paper", "width_mm", "height_mm"),
    # ISO 216: A5 is 148 by 210 mm; half of a US Letter sheet (ANSI) is 5.5 by 8.5 inches.
    [("a5", 148, 210), ("half-letter", 5.5 * 25.4, 8.5 * 25.4)],
)
def test_card_size_of_its_pages(paper, width_mm, height_mm):
    form = CARD_PAPERS[paper]
    assert form.width_pt == pytest.approx(width_mm / 25.4 * 72, abs=0.01)
    assert form.height_pt == pytest.approx(height_mm / 25.4 * 72, abs=0.01)
    page = rendered(built("chevron", paper), 72)
    assert page.size == (pytest.approx(form.width_pt, abs=1), pytest.approx(form.height_pt, abs=1))


def test_card_paper_unknown():
    with pytest.raises(PaperError, match="a5, half-letter"):
        build_knotting_card(CARDS["chevron"], "a4")


@EVERY_CARD
@BOTH_PAPERS
def test_card_says_what_to_tie_and_where_it_ends(name, paper):
    sheet, text = CARDS[name], words_of(built(name, paper))
    length = format_length(sheet.band_length_mm, sheet.unit)
    assert f"Tie {sheet.rows} rows: the band is {length} long" in text
    for words in (sheet.pattern.name, "Harbour lights", "Adult M", sheet.ending):
        assert words in text
    assert "Colours may run when wet." in text


def test_card_repeat_sentence_by_hand():
    # 150 mm at sqrt(2) x 0.9 mm a row: 118 rows = 4 x 24 + 22.
    text = words_of(built("chevron", "a5"))
    assert (
        "Tie rows 1 to 24, then begin again with row 1: 4 times in full, then rows 1 to 22. "
        "Row 118 of the band, its last, is row 22 of the repeat." in text
    )


@EVERY_CARD
@BOTH_PAPERS
def test_every_row_of_the_repeat_stands_in_words(name, paper):
    """Either beside the chart, under its number, or written out; the rows are the pattern's own."""
    sheet, document = CARDS[name], built(name, paper)
    fit = ChartFit(sheet, 300, 400)
    text = words_of(document)
    if isinstance(sheet.pattern, GridPattern):
        before = (sheet.rows - len(sheet.pattern.rows)) // 2
        first = before + 1 if sheet.pattern.finish is Finish.CENTRED else 1
        for place, cells in enumerate(sheet.pattern.rows):
            row = first + place
            tied = cells if row % 2 else cells[::-1]
            assert f"{row}, from the {'left' if row % 2 else 'right'}" in text
            assert spelled(tied) in text
        return
    assert fit.numbers.start == 1
    for row, knots in enumerate(sheet.pattern.rows, start=1):
        single, counted = " ".join(knots), spelled(knots)
        beside = rf"\b{row}\s+({re.escape(single)}|{re.escape(counted)})(?= |$)"
        written = (f"Row {row}: {single}", f"Row {row}: {counted}")
        assert re.search(beside, text) or any(words in text for words in written), row


def spelled(words):
    """Equal words counted, written here without the code under test."""
    parts = []
    for word in words:
        if parts and parts[-1][1] == word:
            parts[-1][0] += 1
        else:
            parts.append([1, word])
    return " ".join(f"{count}{word}" for count, word in parts)


@EVERY_CARD
@BOTH_PAPERS
def test_every_piece_stands_with_its_length(name, paper):
    sheet, document = CARDS[name], built(name, paper)
    lines = Counter()
    for run in runs(document):
        lines[run.text] += 1
    for piece in sheet.pieces:
        assert lines[piece.label], piece.label
    needed = Counter(format_number(piece.cut_mm, sheet.unit) for piece in sheet.pieces)
    needed.update(
        format_number(piece.fold_mm, sheet.unit)
        for piece in sheet.pieces
        if piece.fold_mm is not None
    )
    for figure, count in needed.items():
        assert lines[figure] >= count, figure
    codes = Counter(piece.shade_code for piece in sheet.pieces)
    for code, count in codes.items():
        assert lines[code] >= count


def test_pieces_of_the_card_are_those_that_are_cut():
    # 12 strands, straight start: one piece each, as pieces_for has them.
    table = strand_table(diagonal(), 150, Gauge())
    pieces = pieces_for(table, TIES, RULE)
    assert [piece.cut_mm for piece in CARDS["chevron"].pieces] == [p.cut_mm for p in pieces]


def test_base_strands_of_a_grid_share_a_line():
    # Nine base strands hang straight, all equal; the leading strand is one more; no runs here.
    labels = [piece.label for piece in CARDS["grid"].pieces]
    assert labels == ["9 base", "lead"]
    # Folded: four pairs of equal halves; the ninth goes with the leading strand. A sliding piece.
    folded = [piece.label for piece in CARDS["odd grid"].pieces]
    assert folded == ["4 pairs", "lead + 9", "slide"]


@BOTH_PAPERS
def test_every_run_says_its_scrap_and_where_it_begins(paper):
    sheet = card(grid(carry=Carry.CUT))
    found = find_runs(sheet.pattern, sheet.rows, Gauge(), RULE.join_tail_mm)
    scraps = [
        piece
        for piece in pieces_for(
            strand_table(sheet.pattern, 150, Gauge(), RULE.join_tail_mm), TIES, RULE
        )
        if piece.role == "run"
    ]
    assert len(found) == len(scraps) > 2
    text = words_of(build_knotting_card(sheet, paper))
    for run, scrap in zip(found, scraps, strict=True):
        words = (
            f"Run {run.number} of {run.slot}: any scrap of {format_length(scrap.cut_mm)} does; "
            f"{run.cells} cell"
        )
        assert words in text
        assert f"row {run.first.row}, column {run.first.column}" in text


def test_card_of_many_runs_goes_on_over_pages():
    document = build_knotting_card(card(grid(30, 80, carry=Carry.CUT), length_mm=300), "a5")
    assert page_count(document) > 5
    numbers = re.findall(r"Run (\d+) of B:", all_text(document))
    assert [int(number) for number in numbers] == list(range(1, len(numbers) + 1))


# --- pages --------------------------------------------------------------------------------------


@EVERY_CARD
@BOTH_PAPERS
def test_nothing_is_printed_at_the_edge(name, paper):
    document = built(name, paper)
    edge = int(EDGE_PT)
    for page in range(page_count(document)):
        ink = np.array(rendered(document, 72, page)) < 250
        assert not ink[:edge].any()
        assert not ink[-edge:].any()
        assert not ink[:, :edge].any()
        assert not ink[:, -edge:].any()


@EVERY_CARD
def test_every_page_names_pattern_size_date_and_its_place(name):
    sheet, texts = CARDS[name], page_texts(built(name, "a5"))
    for number, text in enumerate(texts, start=1):
        assert f"page {number} of {len(texts)}" in text
        assert f"Adult M · {sheet.pattern.name}" in text
        assert "made Saturday 28 November 2026" in text


@EVERY_CARD
@BOTH_PAPERS
def test_texts_do_not_run_into_each_other(name, paper):
    sheet, document = CARDS[name], built(name, paper)
    # A lying chart is turned, and the reader takes its letters one by one.
    upright = [run for run in runs(document) if len(run.text) > 1]
    if not ChartFit(sheet, 345, 500).is_lying:
        assert overlapping(upright) == []


@EVERY_CARD
def test_same_card_same_bytes(name):
    assert build_knotting_card(CARDS[name], "a5") == built(name, "a5")


def test_largest_pattern_goes_over_pages_whole():
    sheet = card(diagonal(60, 400), length_mm=520)
    document = build_knotting_card(sheet, "a5")
    text = all_text(document)
    # 60 strands are too wide to stand upright: numbered rows lie, and the words follow.
    written = [int(row) for row in re.findall(r"Row (\d+): ", text)]
    assert written == list(range(1, 401))
    headed = [
        (int(first), int(last))
        for first, last in re.findall(r"Which knots do I tie\? Rows (\d+) to (\d+)", text)
    ]
    assert headed[0][0] == 1
    assert headed[-1][1] == 400
    assert all(last + 1 == first for (_, last), (first, _) in pairwise(headed))


def test_squares_have_their_letters_for_black_and_white():
    # A repeat of 2 rows, followed on for the 12 rows after which the colours are back:
    # 6 x 3 + 6 x 2 knots, and 6 strands above and below.
    letters = Counter(run.text for run in runs(built("short repeat", "a5")))
    in_list = len(CARDS["short repeat"].pieces)
    assert sum(letters[slot] for slot in "ABCDEF") - in_list == 30 + 12


def test_letters_are_large_enough_to_read():
    for name in CARDS:
        assert min(run.size for run in runs(built(name, "half-letter"))) >= 3.7
    # Up to 24 strands nothing is smaller than 5 pt.
    sizes = [run.size for run in runs(built("wide", "a5"))]
    assert min(sizes) >= 5


def test_hostile_names_are_shortened_and_drawn():
    hostile = DiagonalPattern("W" * 80, ("A", "B"), ((Knot.F,), ()))
    head = HEAD.__class__("م" * 80, "B" * 80, None, "P" * 60, date(2026, 11, 28))
    document = build_knotting_card(
        card(hostile, head=head, names=("C" * 60, "S" * 40, "E" * 60)), "half-letter"
    )
    assert page_count(document) == 1
    assert overlapping(runs(document)) == []


def test_undyed_thread_is_named_so():
    text = words_of(build_knotting_card(card(diagonal(), shades={}, names=("", "M", "Ties")), "a5"))
    assert "no shade chosen" in text
    assert "no colourway chosen" in text


def test_card_says_what_to_leave_free():
    # 60 x 1.25 = 75 for the tie, + 30 + 90 = 195 mm at both ends of a straight start.
    words = words_of(build_knotting_card(card(diagonal()), CARD_PAPERS["a5"]))
    assert "Leave 19.5 cm of every strand free before row 1: tie 7.5 cm, closing knot 3 cm" in words
    assert "After the last row 19.5 cm are left" in words
    folded = words_of(build_knotting_card(card(diagonal(), FOLDED), CARD_PAPERS["a5"]))
    assert "The loop of a fold takes 5 cm; row 1 is tied below it." in folded
