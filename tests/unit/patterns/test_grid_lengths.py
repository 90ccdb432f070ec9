"""Lengths of grid patterns against derivations written out here, cell by cell.

The numbers of one cell, a passed column, a turn and a tail are those of the trade's geometry:
a knot takes (2 + 3 pi) d at a loop ratio of 1.5 (check value: 11.424778 d), a base strand 2 d,
a passed column 2.5 d, a turn 2 d; tails of 50 mm are common practice, no source.
"""

from collections import Counter
from itertools import pairwise, product
from math import pi

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns
from test_grid import make_grid

from patterns.cut_lengths import CutRule, Ending, pieces_for
from patterns.geometry import Gauge, LengthError
from patterns.grid import Carry, Cell, band_rows
from patterns.grid_lengths import find_runs, grid_table, way_between
from patterns.knots import Finish
from patterns.techniques import strand_table

ONE_MM = Gauge(thread_diameter_mm=1)  # d = 1 mm: a row is 2 mm, a column 2.5 mm
CELL = 2 + 3 * pi
STRAIGHT = Ending("Straight", "straight", 60, 60, 1.0, 30, 90, 0, 0, 0)
FOLDED = Ending("Fold", "folded", 0, 100, 1.25, 30, 90, 50, 80, 0)
RULE = CutRule(safety_share=0.1, rounding_step_mm=10)


def by_label(table):
    return {strand.label: strand for strand in table.strands}


def test_two_rows_by_hand():
    # Row 1 from the left: A B A. Row 2 from the right: B A B, so column 3 first.
    table = grid_table(make_grid("ABA", "BAB"), 4, ONE_MM)
    strands = by_label(table)
    assert table.rows == 2
    assert (table.band_length_mm, table.band_width_mm) == (4, 7.5)
    for column in (1, 2, 3):
        assert strands[f"base strand {column}"].knotted_mm == 4  # 2 rows x 2 d
    # The leading strand ties three A, passes behind three B, turns at the end of both rows.
    leading = strands["leading strand"]
    assert (leading.tied, leading.passed, leading.turned) == (3, 3, 2)
    assert leading.knotted_mm == pytest.approx(3 * CELL + 3 * 2.5 + 2 * 2)
    # B: (1,2), then (2,3): a row down and a column along; then (2,1): past column 2.
    run = strands["run 1 of B"]
    assert (run.tied, run.passed, run.turned) == (3, 2, 1)
    assert run.knotted_mm == pytest.approx(3 * CELL + (2 + 2.5) + 2.5)
    assert (run.first_row, run.last_row) == (1, 2)
    assert len(strands) == 5


def test_far_cells_are_cut_and_joined():
    # B in row 1 and in row 52: 51 rows down are 102 mm of carrying, two tails 100 mm: cut.
    rows = ["BA"] + ["AA"] * 50 + ["BA"]
    runs = find_runs(make_grid(*rows), 52, ONE_MM, 50)
    assert [(run.number, run.cells, run.first.row, run.last.row) for run in runs] == [
        (1, 1, 1, 1),
        (2, 1, 52, 52),
    ]
    # One row nearer, carrying takes as much as the two tails, and saves a join.
    assert len(find_runs(make_grid(*(["BA"] + ["AA"] * 49 + ["BA"])), 51, ONE_MM, 50)) == 1


def test_maker_chooses_to_carry_or_to_cut():
    rows = ["BAAAB"] + ["AAAAA"] * 60 + ["BAAAA"]
    carried = find_runs(make_grid(*rows, carry=Carry.CARRIED), 62, ONE_MM, 50)
    assert [(run.cells, run.passed, run.turned) for run in carried] == [(3, 3 + 4, 61)]
    cut = find_runs(make_grid(*rows, carry=Carry.CUT), 62, ONE_MM, 50)
    assert [run.cells for run in cut] == [1, 1, 1]


def test_cut_where_cells_do_not_touch():
    # Row 1: B in column 1; row 2 from the right: B in column 2 touches it corner to corner.
    assert len(find_runs(make_grid("BAA", "ABA", carry=Carry.CUT), 2, ONE_MM)) == 1
    assert len(find_runs(make_grid("BAA", "AAB", carry=Carry.CUT), 2, ONE_MM)) == 2


def test_scrap_of_a_run_by_hand():
    # Three cells side by side: 3 x 11.4248 = 34.27; + 10 % = 37.70; + 2 tails of 50 = 137.70.
    table = strand_table(make_grid("ABBBA"), 2, ONE_MM)
    run = next(piece for piece in pieces_for(table, STRAIGHT, RULE) if piece.role == "run")
    assert (run.label, run.short_label, run.cut_mm, run.ends_mm) == (
        "run 1 of B",
        "run 1",
        140,
        100,
    )


def test_pieces_of_a_straight_start_by_hand():
    table = strand_table(make_grid("ABA", "BAB"), 4, ONE_MM)
    pieces = pieces_for(table, STRAIGHT, RULE)
    # Ends: 60 x 1 + 30 + 90 = 180 each. Base: 4 x 1.1 + 360 = 364.4 -> 370.
    # Leading: (34.274 + 7.5 + 4) x 1.1 + 360 = 410.35 -> 420. Run: 41.274 x 1.1 + 100 = 145.4 -> 150.
    assert [(piece.label, piece.cut_mm) for piece in pieces] == [
        ("base strand 1", 370),
        ("base strand 2", 370),
        ("base strand 3", 370),
        ("leading strand", 420),
        ("run 1 of B", 150),
    ]


def test_folded_start_folds_the_leading_strand_with_a_base_strand():
    # Three base strands and the leading one are two pairs; the longest goes with the shortest.
    pieces = pieces_for(strand_table(make_grid("ABA", "BAB"), 4, ONE_MM), FOLDED, RULE)
    assert [piece.label for piece in pieces] == [
        "base strands 1 and 2",
        "leading strand and base strand 3",
        "run 1 of B",
    ]
    assert pieces[1].short_label == "lead + 3"
    assert pieces[-1].fold_mm is None


@pytest.mark.parametrize(
    ("length_mm", "d", "rows"), [(150, 1, 75), (150, 0.9, 84), (151, 1, 76), (1.8, 0.9, 1)]
)
def test_rows_add_two_diameters(length_mm, d, rows):
    # ceil(150 / 1.8) = ceil(83.33) = 84
    assert grid_table(make_grid(), length_mm, Gauge(d)).rows == rows


def test_picture_longer_than_the_band_is_refused():
    pattern = make_grid(*["ABA"] * 50, finish=Finish.CENTRED)
    with pytest.raises(LengthError, match=r"picture of 50 rows is 100 mm, longer than 98 mm"):
        grid_table(pattern, 98, ONE_MM)
    assert grid_table(pattern, 100, ONE_MM).rows == 50


def test_whole_repeats_of_a_grid():
    ways = {Finish.NEAREST: 8, Finish.AT_LEAST: 12, Finish.AT_MOST: 8, Finish.EXACT: 9}
    for finish, rows in ways.items():
        assert grid_table(make_grid(finish=finish), 18, ONE_MM).rows == rows


gauges = st.builds(Gauge, thread_diameter_mm=st.floats(0.4, 2), loop_ratio=st.floats(1, 2.5))
tails = st.integers(0, 200)


def tying_order(pattern, rows):
    """The cells in tying order, found another way than by the code: by sorting."""
    cells = [
        (row, column, slot)
        for row, slots in enumerate(band_rows(pattern, rows), 1)
        for column, slot in enumerate(slots, 1)
    ]
    return sorted(cells, key=lambda cell: (cell[0], cell[1] if cell[0] % 2 else -cell[1]))


@given(grid_patterns(), st.integers(1, 60), gauges, tails)
def test_cells_and_carries_are_the_sum_over_the_runs(pattern, rows, gauge, tail_mm):
    counts = Counter(slot for _, _, slot in tying_order(pattern, rows))
    runs = find_runs(pattern, rows, gauge, tail_mm)
    d, c = gauge.thread_diameter_mm, gauge.loop_ratio
    for slot in set(counts) - {pattern.background}:
        own = [run for run in runs if run.slot == slot]
        assert [run.number for run in own] == list(range(1, len(own) + 1))
        assert sum(run.cells for run in own) == counts[slot]
        taken = sum(
            run.cells * (2 + 2 * pi * c) * d + run.passed * (c + 1) * d + run.turned * 2 * d
            for run in own
        )
        carries = sum(run.passed * (c + 1) * d + run.turned * 2 * d for run in own)
        assert taken == pytest.approx(counts[slot] * (2 + 2 * pi * c) * d + carries)
    assert all(run.slot != pattern.background for run in runs)


@given(grid_patterns(), st.integers(2, 120), gauges)
def test_table_holds_the_geometry(pattern, length_mm, gauge):
    try:
        table = grid_table(pattern, length_mm, gauge)
    except LengthError:
        return
    d, c = gauge.thread_diameter_mm, gauge.loop_ratio
    base = [strand for strand in table.strands if strand.role == "base"]
    assert len(base) == pattern.columns
    assert all(strand.knotted_mm == pytest.approx(table.rows * 2 * d) for strand in base)
    counts = Counter(slot for _, _, slot in tying_order(pattern, table.rows))
    others = sum(counts.values()) - counts[pattern.background]
    (leading,) = (strand for strand in table.strands if strand.role == "leading")
    assert leading.knotted_mm == pytest.approx(
        counts[pattern.background] * (2 + 2 * pi * c) * d
        + others * (c + 1) * d
        + table.rows * 2 * d
    )
    # No hanging strand's knotted part is ever shorter than the band.
    assert all(
        strand.knotted_mm >= table.band_length_mm - 1e-6
        for strand in table.strands
        if strand.role != "run"
    )
    assert [strand.strand for strand in table.strands] == list(range(1, len(table.strands) + 1))
    tied = Counter()
    for strand in table.strands:
        tied[strand.slot] += strand.tied
    assert +tied == +counts


@given(grid_patterns(max_columns=4, max_rows=3), st.integers(1, 4), gauges, tails)
def test_least_thread_is_the_least_of_all_ways_to_cut(pattern, rows, gauge, tail_mm):
    """Brute force over every choice of cutting or carrying, thread and tails together."""
    pattern = make_grid(*("".join(row) for row in pattern.rows), background=pattern.background)
    d, c = gauge.thread_diameter_mm, gauge.loop_ratio
    for slot in set(pattern.used_slots) - {pattern.background}:
        cells = [cell for cell in tying_order(pattern, rows) if cell[2] == slot]
        gaps = []
        for (row, column, _), (next_row, next_column, _) in pairwise(cells):
            down, along = next_row - row, abs(next_column - column)
            passed = along if down else along - 1
            gaps.append(down * 2 * d + passed * (c + 1) * d)
        if not cells or len(gaps) > 9:
            continue
        least = min(
            sum(2 * tail_mm if is_cut else gap for is_cut, gap in zip(ways, gaps, strict=True))
            for ways in product((False, True), repeat=len(gaps))
        )
        runs = [run for run in find_runs(pattern, rows, gauge, tail_mm) if run.slot == slot]
        carried = sum(run.passed * (c + 1) * d + run.turned * 2 * d for run in runs)
        assert carried + 2 * tail_mm * (len(runs) - 1) == pytest.approx(least)


def test_way_between_follows_the_band():
    assert way_between(Cell(1, 1, "B"), Cell(1, 2, "B")) == (0, 0)
    assert way_between(Cell(1, 1, "B"), Cell(1, 4, "B")) == (2, 0)
    assert way_between(Cell(1, 3, "B"), Cell(2, 3, "B")) == (0, 1)
    assert way_between(Cell(2, 3, "B"), Cell(2, 1, "B")) == (1, 0)
    assert way_between(Cell(1, 1, "B"), Cell(4, 3, "B")) == (2, 3)
