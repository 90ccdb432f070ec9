from dataclasses import replace

import pytest

from patterns.cut_lengths import CutRule, Ending
from patterns.examples import ending_example, gauge_example
from patterns.geometry import Gauge
from patterns.grid import Carry, GridPattern
from patterns.knots import Finish
from patterns.pattern_file import read_pattern
from patterns.strand_answer import NoAnswer, answer_for
from tests.factories import pattern_text

TIES = Ending("Ties", "straight", 60, 60, 1.25, 30, 90, 0, 0, 0)
FOLD = Ending("Fold", "folded", 0, 60, 1.25, 30, 90, 50, 80, 0)
SLIDING = Ending("Sliding", "straight", 60, 60, 1.25, 30, 90, 0, 0, 400)
RULE = CutRule(0.1, 10)


def answer(length_mm=150, ending=TIES, **pattern):
    return answer_for(read_pattern(pattern_text(**pattern)), length_mm, Gauge(), ending, RULE)


def test_answer_for_150_mm_is_118_rows():
    # Common practice, no source: 150 mm at 0.9 mm is 118 rows.
    found = answer()
    assert found.rows == 118
    assert (found.whole_repeats, found.rows_over) == (59, 0)
    # 118 rows x sqrt 2 x 0.9 mm = 150.2 mm; width 6 x sqrt 2 x 0.9 mm = 7.637 mm.
    assert (found.band_length_mm, found.band_width_mm) == (150, 8)


def test_answer_for_a_centred_picture_says_which_rows_show_it():
    rows = (("A", "B"),) * 20
    picture = GridPattern("Picture", "A", rows, Finish.CENTRED)
    # 150 mm / (2 x 0.9 mm) = 83.3, so 84 rows: 32 before the picture, 32 after it.
    assert answer_for(picture, 150, Gauge(), TIES, RULE).picture_rows == (33, 52)
    repeated = replace(picture, finish=Finish.EXACT)
    assert answer_for(repeated, 150, Gauge(), TIES, RULE).picture_rows is None
    assert answer().picture_rows is None


def test_answer_for_adds_up_over_strands_and_slots():
    found = answer(strands="A A B B C C")
    assert len(found.strands) == len(found.pieces) == 6
    assert found.total_mm == sum(line.piece.cut_mm for line in found.pieces)
    assert found.total_mm == sum(line.total_mm for line in found.slots)
    assert [(line.slot, line.pieces) for line in found.slots] == [("A", 2), ("B", 2), ("C", 2)]
    cuts = sorted(line.piece.cut_mm for line in found.pieces)
    assert cuts[0] < cuts[-1]
    assert (found.shortest_mm, found.longest_mm) == (cuts[0], cuts[-1])
    assert not found.has_folds


def test_answer_for_a_folded_start_pairs_strands():
    found = answer(ending=FOLD, strands="A A B C C C")
    assert found.has_folds
    assert sorted(len(line.piece.strands) for line in found.pieces) == [1, 1, 2, 2]


def test_answer_for_a_sliding_closure_counts_the_sliding_piece():
    found = answer(ending=SLIDING)
    assert [line.piece.role for line in found.pieces].count("sliding") == 1
    assert found.slots[0].pieces == 3


def test_answer_for_a_repeat_that_does_not_fit_says_so():
    rows = ("f f f", "f f") * 60
    with pytest.raises(NoAnswer, match="One repeat of 120 rows is 153 mm, longer than 150 mm"):
        answer(rows=rows, finish="at_most")


def test_gauge_example_at_0_9_mm():
    # Derived: (2 + 3 pi) d = 11.424778 d and 2 d (Notes of patterns/geometry.py) at d = 0.9 mm.
    # Common practice, no source: 118 rows for 150 mm.
    example = gauge_example(Gauge(thread_diameter_mm=0.9))
    assert example.knotting_mm == pytest.approx(10.2823, abs=1e-4)
    assert example.base_mm == pytest.approx(1.8)
    assert example.rows == 118


def test_ending_example_shows_a_pair_and_a_single_strand_of_a_folded_start():
    # Pair: 2 x (60 x 1.25 + 30 + 90) + 50 + 660 + 550 = 1650. Single: 660 + 195 + 80 = 935.
    cuts = [line.piece.cut_mm for line in ending_example(FOLD, RULE)]
    assert cuts == [1650, 940]


def test_ending_example_of_a_straight_start_is_one_strand():
    # 660 + 195 + 195 = 1050.
    assert [line.piece.cut_mm for line in ending_example(TIES, RULE)] == [1050]


def test_answer_for_thousands_of_threads_says_what_to_do():
    # Single cells that never touch, each cut by the maker's wish: 30 in every second of 84 rows.
    dots = GridPattern("Dots", "A", (("A", "B") * 30, ("A", "A") * 30), carry=Carry.CUT)
    with pytest.raises(NoAnswer, match=r"into \d,\d{3} threads; 1,500 are the most"):
        answer_for(dots, 200, Gauge(), TIES, RULE)
    carried = replace(dots, carry=Carry.LEAST)
    assert len(answer_for(carried, 200, Gauge(), TIES, RULE).pieces) < 150
