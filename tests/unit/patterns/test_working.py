"""The arithmetic that a page shows must come out when a maker redoes it with the shown numbers."""

import re
from fractions import Fraction

import pytest

from patterns.cut_lengths import CutRule, Ending, pieces_for
from patterns.defaults import DEFAULT_ENDINGS
from patterns.geometry import Gauge, StrandLength, StrandTable
from patterns.pattern_file import read_pattern
from patterns.techniques import strand_table
from patterns.working import end_working, knotted_working, piece_working, start_working
from tests.factories import pattern_text

RULES = [CutRule(0.1, 10), CutRule(0.125, Fraction(127, 10)), CutRule(0, 1)]


def numbers(text: str) -> list[float]:
    """Every number of a working but those inside a word such as "Strand 1"."""
    text = re.sub(r"[Ss]trand \d+", "", text)
    return [float(number.replace(",", "")) for number in re.findall(r"\d[\d,]*\.?\d*", text)]


def test_knotted_working_by_hand():
    # 50 x 10.282 + 49 x 1.8 + 19 x 1.273 = 514.1 + 88.2 + 24.187 = 626.5
    strand = StrandLength(1, "A", 50, 49, 19, 626.4998)
    assert knotted_working(strand, Gauge()) == (
        "50 knots tied × 10.282 mm + 49 as base × 1.8 mm + 19 idle rows × 1.273 mm = 626.5 mm"
    )


def test_knotted_working_of_one_says_one():
    assert knotted_working(StrandLength(1, "A", 1, 0, 1, 11.6), Gauge()).startswith("1 knot tied")


@pytest.mark.parametrize("diameter_mm", [0.1, 0.9, 3.3])
def test_knotted_working_can_be_redone(diameter_mm):
    gauge = Gauge(thread_diameter_mm=diameter_mm)
    table = strand_table(read_pattern(pattern_text()), 150, gauge)
    for strand in table.strands:
        tied, a, base, b, idle, c, shown = numbers(knotted_working(strand, gauge))
        slack = 0.05 + 0.0005 * (tied + base + idle)
        assert tied * a + base * b + idle * c == pytest.approx(shown, abs=slack)


@pytest.mark.parametrize("rule", RULES, ids=str)
@pytest.mark.parametrize("ending", DEFAULT_ENDINGS, ids=lambda ending: ending.name)
def test_piece_working_ends_at_the_length_that_is_cut(ending: Ending, rule: CutRule):
    table = strand_table(read_pattern(pattern_text(strands="A A A B C C")), 150, Gauge())
    for piece in pieces_for(table, ending, rule):
        steps = piece_working(piece, ending, rule)
        together = next(step for step in steps if "ounded up to a multiple" in step)
        assert numbers(together)[-1] == piece.cut_mm
        if piece.fold_mm:
            assert numbers(steps[-1]) == [
                piece.fold_mm,
                piece.fold_mm,
                piece.cut_mm - piece.fold_mm,
            ]


@pytest.mark.parametrize("rule", RULES, ids=str)
@pytest.mark.parametrize("ending", DEFAULT_ENDINGS, ids=lambda ending: ending.name)
def test_piece_working_sums_can_be_redone(ending: Ending, rule: CutRule):
    table = strand_table(read_pattern(pattern_text(strands="A A A B C C")), 150, Gauge())
    for piece in pieces_for(table, ending, rule):
        if piece.role == "sliding":
            continue
        steps = piece_working(piece, ending, rule)
        first, second, total, step, cut = numbers(
            next(line for line in steps if "rounded up to a multiple" in line)
        )
        assert first + second == pytest.approx(total, abs=0.11)
        assert total <= cut + 0.05
        assert cut - total < step + 1


def test_piece_working_of_a_folded_pair_by_hand():
    ending = Ending("Fold", "folded", 0, 100, 1.25, 30, 90, 50, 80, 0)
    table = StrandTable(
        1, (StrandLength(1, "A", 0, 0, 0, 600.0), StrandLength(2, "A", 0, 0, 0, 500.0)), 1, 8
    )
    rule = CutRule(0.1, 10)
    # End: 100 x 1.25 + 30 + 90 = 245. 660 + 245 + 25 = 930; 550 + 245 + 25 = 820; 1750.
    assert piece_working(pieces_for(table, ending, rule)[0], ending, rule) == (
        "Strand 1: 600 mm knotted + 10 % safety = 660 mm, + end 245 mm + half the loop 25 mm:"
        " 930 mm, rounded up to whole millimetres",
        "Strand 2: 500 mm knotted + 10 % safety = 550 mm, + end 245 mm + half the loop 25 mm:"
        " 820 mm, rounded up to whole millimetres",
        "End: tie 100 mm × take-up 1.25 + closing knot 30 mm + grip 90 mm = 245 mm",
        "930 mm + 820 mm = 1,750 mm, rounded up to a multiple of 10 mm = 1,750 mm",
        "Folded at 930 mm: 930 mm for strand 1, 820 mm for strand 2",
    )


def test_start_and_end_working_say_what_they_add():
    ending = Ending("Ties", "straight", 60, 80, 1.25, 30, 90, 0, 0, 0)
    assert start_working(ending).endswith("= 195 mm")
    assert end_working(ending).endswith("= 220 mm")
    folded = Ending("Fold", "folded", 0, 80, 1.25, 30, 90, 50, 70, 0)
    assert start_working(folded) == "Start of a strand without a partner: 70 mm"
