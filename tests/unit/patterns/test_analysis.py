"""What a pattern does, held against counts and sums made by hand or by a plain walk."""

from dataclasses import replace
from math import ceil, sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns

from patterns.analysis import (
    ALWAYS_TIES_SHARE,
    HARDLY_TIES_SHARE,
    analyse,
    thread_by_shade,
)
from patterns.cut_lengths import CutRule, Ending, pieces_for
from patterns.flat_rule import (
    FLAT_LENGTHS_MM,
    flat_length,
    listed,
    smallest_flat_mm,
    strand_needs,
)
from patterns.geometry import Gauge
from patterns.grid import Carry, GridPattern
from patterns.knots import Finish
from patterns.shared_lengths import with_distinct_lengths
from patterns.techniques import strand_table
from patterns.tying import colour_order, order_of_repeat

RULE = CutRule(0.1, 10)
TIES = Ending("Ties", "straight", 60, 60, 1.25, 30, 90, 0, 0, 0)
FOLDED = Ending("Folded", "folded", 0, 60, 1.25, 30, 90, 50, 40, 0)
# Diameter 1 mm, a knot of 11.42 mm, a row of sqrt 2 mm.
GAUGE = Gauge(thread_diameter_mm=1.0)


def analysed(pattern, length_mm=150, ending=TIES, **more):
    table = strand_table(pattern, length_mm, GAUGE)
    return analyse(pattern, table, pieces_for(table, ending, RULE), GAUGE, **more)


# --- the repeat and its sizes ----------------------------------------------------------------


def test_repeat_and_width_by_hand():
    found = analysed(all_same(6, rows=4))
    # Four rows of sqrt 2 mm are 5.66 mm, six strands of sqrt 2 mm 8.49 mm.
    assert found.repeat_length.length_mm == 6
    assert found.width.length_mm == 8
    assert found.repeat_length.working == "4 rows × 1.414 mm = 5.7 mm"
    assert found.width.working == "6 strands × 1.414 mm = 8.5 mm"


def test_orders_in_repeats_rows_and_millimetres():
    # All swap, N = 6, colours ABCCBA: colours back after 3 double rows, strands after 6
    # (sympy.combinatorics; computed apart from the code).
    found = analysed(all_same(6, slots="ABCCBA"))
    assert (found.colours_back.repeats, found.colours_back.rows) == (3, 6)
    assert (found.strands_back.repeats, found.strands_back.rows) == (6, 12)
    assert found.colours_back.length.length_mm == round(6 * sqrt(2))
    assert found.strands_back.length.length_mm == round(12 * sqrt(2))


def test_rows_for_each_size_by_hand():
    sizes = [("Small", 100), ("Large", 170)]
    found = analysed(all_same(4, rows=8), sizes=sizes)
    # 100 / 1.41421 = 70.71 -> 71 = 8 x 8 + 7; 170 / 1.41421 = 120.2 -> 121 = 15 x 8 + 1.
    assert [(size.rows, size.repeats, size.rows_over) for size in found.sizes] == [
        (71, 8, 7),
        (121, 15, 1),
    ]
    assert "70.71, rounded up to whole rows = 71" in found.sizes[0].working


def test_a_size_that_cannot_be_tied_says_why_and_the_others_stay():
    pattern = all_same(4, rows=80)
    pattern = replace(pattern, finish=Finish.AT_MOST)
    found = analysed(pattern, 150, sizes=[("Tiny", 60), ("Large", 170)])
    tiny, large = found.sizes
    assert tiny.rows == 0
    assert "longer than 60 mm" in tiny.why_not
    assert (large.rows, large.why_not) == (80, "")


# --- who ties --------------------------------------------------------------------------------


def test_who_hardly_ties_and_who_ties_all_the_time():
    # The left strand of each pair ties and comes back, in rows 1, 3, ...; in rows 2, 4, ... the
    # same: strand 1 ties in every knot it is in, strand 4 in none; 2 and 3 in every second one.
    found = analysed(make_pattern(["fb fb", "fb"]))
    assert [busy.strand.strand for busy in found.always_tie] == [1]
    assert [busy.strand.strand for busy in found.hardly_tie] == [4]
    assert found.always_tie[0].share == 1
    assert found.hardly_tie[0].share == 0
    # Rows 1, 3, ..., 107 of ceil(150 / sqrt 2) = 107: 54 knots.
    assert found.hardly_tie[0].working == "0 tied / (0 tied + 54 as base = 54) = 0 %"
    # Strands 2 and 3 have a knot in every row; strand 2 ties the 53 even ones, 3 the 54 odd ones.
    assert found.greediest.strand == 3
    assert found.most_frugal.strand == 4
    assert not found.is_even


@given(patterns(max_strands=8), st.integers(30, 200))
def test_shares_by_definition(pattern, length_mm):
    pattern = replace(pattern, finish=Finish.EXACT)
    found = analysed(pattern, length_mm)
    strands = strand_table(pattern, length_mm, GAUGE).strands
    shares = {s.strand: s.tied / (s.tied + s.base) for s in strands if s.tied + s.base}
    assert {busy.strand.strand for busy in found.hardly_tie} == {
        strand for strand, share in shares.items() if share <= HARDLY_TIES_SHARE
    }
    assert {busy.strand.strand for busy in found.always_tie} == {
        strand for strand, share in shares.items() if share >= ALWAYS_TIES_SHARE
    }
    assert found.greediest.knotted_mm == max(s.knotted_mm for s in strands)
    assert found.most_frugal.knotted_mm == min(s.knotted_mm for s in strands)
    assert found.colours_back.repeats == colour_order(pattern)
    assert found.strands_back.repeats == order_of_repeat(pattern)


def test_an_even_pattern_says_so():
    # All forward over whole true repeats: every strand does the same (derived).
    pattern = replace(all_same(4, rows=8), finish=Finish.NEAREST)
    assert analysed(pattern).is_even


# --- the flat rule of thumb ------------------------------------------------------------------


def test_flat_rule_by_hand():
    # Strand 4 of the pattern above is base 54 times and idle 53 times: 54 x 2 + 53 x sqrt 2 =
    # 182.95 mm. Ends: 60 x 1.25 + 30 + 90 = 195 at each end. Cut: 182.95 x 1.1 + 390 = 591.2 -> 600.
    # Strand 1 ties 54 knots: 54 x 11.4248 + 53 x sqrt 2 = 691.9; x 1.1 + 390 = 1151.1 -> 1160.
    # Strand 2: 53 tied, 54 base: 605.5 + 108 = 713.5; x 1.1 + 390 = 1174.9 -> 1180.
    # Strand 3: 54 tied, 53 base: 616.9 + 106 = 722.9; x 1.1 + 390 = 1185.2 -> 1190.
    found = analysed(make_pattern(["fb fb", "fb"]))
    short, long = found.flat
    assert (short.flat_mm, long.flat_mm) == FLAT_LENGTHS_MM == (750, 1000)
    assert short.too_much_mm == 150
    assert [(lack.label, lack.short_mm) for lack in short.short] == [
        ("strand 3", 363),  # 722.9 + 390 = 1112.9 -> 1113
        ("strand 2", 354),  # 1103.5 -> 1104
        ("strand 1", 332),  # 1081.9 -> 1082
    ]
    assert long.too_much_mm == 400
    assert [lack.short_mm for lack in long.short] == [113, 104, 82]
    assert found.smallest_flat_mm == 1190
    # At 1190: 30 + 10 + 0 + 590 too much.
    assert found.at_smallest.too_much_mm == 630
    assert found.at_smallest.working == "3 × 1,190 mm - their own lengths 2,940 mm = 630 mm"
    assert found.at_smallest.short == ()


def test_a_strand_between_its_need_and_its_cut_is_tight():
    pattern = make_pattern(["fb fb", "fb"])
    table = strand_table(pattern, 150, GAUGE)
    needs = strand_needs(pieces_for(table, TIES, RULE))
    # 1120 is over 1113, what strand 3 needs bare, and under 1190, what it is cut to.
    assert flat_length(needs, 1120).tight == "strands 1, 2 and 3"
    assert flat_length(needs, 1120).tight_strands == 3
    assert flat_length(needs, 1120).short == ()


def test_strands_that_lack_the_same_are_told_together():
    # All forward, six strands: by the symmetry of 107 rows some strands take the same.
    table = strand_table(all_same(6), 150, GAUGE)
    needs = strand_needs(pieces_for(table, TIES, RULE))
    short = flat_length(needs, 750).short
    assert sum(lack.strands for lack in short) == 6
    assert len({lack.short_mm for lack in short}) == len(short) < 6
    by_label = {need.label: need.bare_mm - 750 for need in needs}
    for lack in short:
        same = [label for label, short_mm in by_label.items() if short_mm == lack.short_mm]
        assert lack.label == listed(same)


@pytest.mark.parametrize(
    ("labels", "words"),
    [
        ([], ""),
        (["strand 1"], "strand 1"),
        (["strand 1", "strand 12"], "strands 1 and 12"),
        (["strand 1", "strand 2", "strand 3"], "strands 1, 2 and 3"),
        (["leading strand"], "leading strand"),
        (
            ["base strand 1", "base strand 2", "leading strand"],
            "base strands 1 and 2 and leading strand",
        ),
    ],
)
def test_strands_listed(labels, words):
    assert listed(labels) == words


@given(patterns(max_strands=9), st.sampled_from([TIES, FOLDED]), st.integers(300, 2500))
def test_flat_rule_holds_together(pattern, ending, flat_mm):
    table = strand_table(replace(pattern, finish=Finish.EXACT), 120, GAUGE)
    pieces = pieces_for(table, ending, RULE)
    needs = strand_needs(pieces)
    assert len(needs) == pattern.strands
    # Folded or not, the strands' own lengths are the pieces.
    assert sum(need.cut_mm for need in needs) == sum(piece.cut_mm for piece in pieces)
    assert all(need.bare_mm <= need.cut_mm for need in needs)
    found = flat_length(needs, flat_mm)
    at_smallest = flat_length(needs, smallest_flat_mm(needs))
    assert not at_smallest.short
    assert not at_smallest.tight
    assert (
        flat_length(needs, smallest_flat_mm(needs) - 1).tight
        or flat_length(needs, smallest_flat_mm(needs) - 1).short
    )
    # Every strand is over, tight, short, or exactly right.
    right = sum(need.cut_mm == flat_mm for need in needs)
    over = sum(need.cut_mm < flat_mm for need in needs)
    short = sum(lack.strands for lack in found.short)
    assert over + right + short + found.tight_strands == pattern.strands


@given(patterns(max_strands=9), st.sampled_from([TIES, FOLDED]), st.integers(1, 3))
def test_flat_rule_leaves_out_what_shared_lengths_add(pattern, ending, lengths):
    table = strand_table(replace(pattern, finish=Finish.EXACT), 120, GAUGE)
    pieces = pieces_for(table, ending, RULE)
    assert strand_needs(with_distinct_lengths(pieces, lengths)) == strand_needs(pieces)


# --- thread by shade -------------------------------------------------------------------------


def test_thread_by_shade_puts_slots_of_one_shade_together():
    table = strand_table(all_same(6, slots="AABBCC"), 150, GAUGE)
    pieces = pieces_for(table, TIES, RULE)
    found = thread_by_shade(pieces, {"A": 7, "C": 7})
    assert [(line.key, line.slots, line.pieces) for line in found] == [
        (7, ("A", "C"), 4),
        (None, ("B",), 2),
    ]
    assert sum(line.total_mm for line in found) == sum(piece.cut_mm for piece in pieces)
    assert found[0].working.endswith(f"= {found[0].total_mm:,} mm")


@given(patterns(max_strands=9), st.sampled_from([TIES, FOLDED]))
def test_thread_by_slot_is_all_of_the_pieces(pattern, ending):
    table = strand_table(replace(pattern, finish=Finish.EXACT), 100, GAUGE)
    pieces = pieces_for(table, ending, RULE)
    found = thread_by_shade(pieces, {})
    assert tuple(line.slots[0] for line in found) == pattern.used_slots
    assert sum(line.total_mm for line in found) == sum(piece.cut_mm for piece in pieces)
    assert sum(line.pieces for line in found) == len(pieces)


# --- grids -----------------------------------------------------------------------------------


def test_grid_by_hand():
    # Two rows of three columns over 4 mm: A B A, then B A B, each once (rows of 2 mm). Cut where
    # cells do not touch: row 2 is tied from the right, so B goes (1,2), (2,3), (2,1): touching,
    # then not. Two runs: 2 cells with a way of 2.5 + 2, and 1 cell.
    pattern = GridPattern("Small", "A", (("A", "B", "A"), ("B", "A", "B")), carry=Carry.CUT)
    found = analysed(pattern, 4)
    knot = (2 + 3 * 3.141592653589793) * 1.0
    leading = 3 * knot + 3 * 2.5 + 2 * 2
    runs = [2 * knot + 4.5, knot]
    total = 3 * 4 + leading + sum(runs)
    assert found.grid.leading_share == pytest.approx(leading / total, rel=1e-12)
    assert (found.grid.runs, found.grid.joins) == (2, 1)
    assert not found.grid.runs_are_even
    assert found.grid.longest_run.knotted_mm == pytest.approx(runs[0])
    assert found.grid.shortest_run.knotted_mm == pytest.approx(runs[1])
    assert found.colours_back is None
    assert found.strands_back is None
    assert (found.hardly_tie, found.always_tie) == ((), ())
    assert found.greediest.role == "leading"
    assert found.most_frugal.role == "base"
    # Only what hangs is held against the flat rule: three base strands and the leading strand.
    assert found.repeat_length.working == "2 rows × 2 mm = 4 mm"
    assert found.width.working == "3 columns × 2.5 mm = 7.5 mm"


def test_grid_of_the_background_alone_has_no_runs():
    found = analysed(GridPattern("Plain", "A", (("A", "A"),)), 20)
    assert (found.grid.runs, found.grid.joins) == (0, 0)
    assert found.grid.longest_run is None
    assert found.grid.shortest_run is None
    assert not found.grid.runs_are_even


def test_grid_of_single_cells_has_even_runs():
    found = analysed(GridPattern("Dots", "A", (("B", "A", "B"),), carry=Carry.CUT), 2)
    assert found.grid.runs == 2
    assert found.grid.runs_are_even


@given(grid_patterns(max_columns=6, max_rows=8))
def test_grid_facts_hold_together(pattern):
    pattern = replace(pattern, finish=Finish.EXACT)
    table = strand_table(pattern, 60, GAUGE)
    pieces = pieces_for(table, TIES, RULE)
    found = analyse(pattern, table, pieces, GAUGE)
    needs = strand_needs(pieces)
    assert len(needs) == pattern.columns + 1
    assert found.grid.runs == sum(piece.role == "run" for piece in pieces)
    colours = {piece.slot for piece in pieces if piece.role == "run"}
    assert found.grid.joins == found.grid.runs - len(colours)
    assert 0 < found.grid.leading_share < 1


def test_rows_in_the_table_are_the_rows_of_the_size():
    pattern = all_same(5, rows=6)
    found = analysed(pattern, 150, sizes=[("This", 150)])
    assert found.sizes[0].rows == strand_table(pattern, 150, GAUGE).rows == ceil(150 / sqrt(2))


def test_rows_beside_a_centred_picture_by_hand():
    # 4 rows of 2 mm in a band of 20 mm: ten rows, six of them beside the picture.
    rows = ("ABABA", "BBBBB", "ABBBA", "AABAA")
    pattern = GridPattern("Heart", "A", tuple(map(tuple, rows)), Finish.CENTRED)
    (size,) = analysed(pattern, 20, sizes=(("Ring", 20),)).sizes
    assert (size.rows, size.beside_picture) == (10, 6)
