"""Neighbouring slots, held against the shapes of the drawn band."""

from collections import Counter
from itertools import combinations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns

from patterns.drawing import draw_band
from patterns.grid import GridPattern
from patterns.knots import Finish
from patterns.neighbours import neighbouring_slots
from patterns.shapes import Line


def sides_drawn(pattern, rows):
    """How often two drawn knots of different slots have a whole edge in common."""
    colours = dict.fromkeys(pattern.used_slots, "#808080")
    shapes = draw_band(pattern, rows, colours).shapes
    knots = [shape for shape in shapes if not isinstance(shape, Line)]
    corners = [{(round(x, 6), round(y, 6)) for x, y in knot.corners} for knot in knots]
    return Counter(
        tuple(sorted((first.slot, second.slot)))
        for (first, some), (second, others) in combinations(zip(knots, corners, strict=True), 2)
        if len(some & others) == 2 and first.slot != second.slot
    )


@given(patterns(max_strands=8), st.integers(1, 14))
def test_neighbouring_slots_of_diagonal_patterns_share_a_drawn_edge(pattern, rows):
    assert dict(neighbouring_slots(pattern, rows)) == sides_drawn(pattern, rows)


@given(grid_patterns(max_columns=6, max_rows=6), st.integers(1, 14))
def test_neighbouring_slots_of_grid_patterns_share_a_drawn_edge(pattern, rows):
    assert dict(neighbouring_slots(pattern, rows)) == sides_drawn(pattern, rows)


def test_neighbouring_slots_of_a_one_direction_stripe():
    # Four strands, all forward, rows of 2 and 1 knots: A and C tie row 1, A ties row 2 between
    # them (it came forward), so over two rows A and C share one side.
    assert dict(neighbouring_slots(all_same(4), 2)) == {("A", "C"): 1}


def test_neighbouring_slots_of_a_checked_grid():
    # Two by two cells, all four inner sides between A and B.
    board = GridPattern("Board", "A", (("A", "B"), ("B", "A")))
    assert dict(neighbouring_slots(board, 2)) == {("A", "B"): 4}


def test_neighbouring_slots_where_a_centred_picture_meets_its_ground():
    # One row B B between rows of A A: two sides above, two below.
    line = GridPattern("Line", "A", (("B", "B"),), Finish.CENTRED)
    assert dict(neighbouring_slots(line, 3)) == {("A", "B"): 4}


@pytest.mark.parametrize("rows", [0, 1])
def test_neighbouring_slots_of_a_row_alone(rows):
    # Knots of one row meet at their corners alone.
    assert neighbouring_slots(make_pattern(["f f", "f"]), rows) == {}


def test_neighbouring_slots_of_two_strands_stand_apart():
    # With two strands every second row has no knot, and the next is not beside the last.
    assert neighbouring_slots(all_same(2), 8) == {}


def test_neighbouring_slots_cannot_be_changed_by_a_caller():
    with pytest.raises(TypeError):
        neighbouring_slots(all_same(4), 2)["A", "B"] = 3


def test_neighbouring_slots_of_a_negative_number_of_rows():
    for pattern in (all_same(4), GridPattern("Board", "A", (("A", "B"),))):
        with pytest.raises(ValueError, match="negative"):
            neighbouring_slots(pattern, -1)
