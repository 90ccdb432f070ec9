from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns

from patterns.grid import Carry, GridPattern
from patterns.knots import Finish, Knot
from patterns.version_words import NOTHING_CHANGED, change_words

DIAGONAL = all_same(6, slots="AABBCC")
GRID = GridPattern("Heart", "A", (tuple("ABA"), tuple("BBB")))


@pytest.mark.parametrize(
    ("after", "words"),
    [
        (DIAGONAL, NOTHING_CHANGED),
        (replace(DIAGONAL, name="Wave"), "called Wave instead of All the same"),
        (all_same(8, slots="AABBCCDD"), "8 strands instead of 6"),
        (all_same(6, slots="AABBCC", rows=4), "4 rows instead of 2"),
        (all_same(5, slots="AABBC", rows=4), "5 strands instead of 6, 4 rows instead of 2"),
        (replace(DIAGONAL, slots=tuple("ABABCC")), "other letters for 2 strands"),
        (replace(DIAGONAL, slots=tuple("AABBCD")), "other letters for 1 strand"),
        (
            replace(DIAGONAL, rows=((Knot.F, Knot.B, Knot.F), (Knot.F, Knot.F))),
            "1 knot changed",
        ),
        (replace(DIAGONAL, finish=Finish.NEAREST), "another rule for where the band ends"),
        (GRID, "called Heart instead of All the same, a grid pattern instead of a diagonal one"),
    ],
)
def test_what_changed_in_a_diagonal_pattern(after, words):
    assert change_words(DIAGONAL, after) == words


@pytest.mark.parametrize(
    ("after", "words"),
    [
        (GRID, NOTHING_CHANGED),
        (replace(GRID, rows=(tuple("ABA"), tuple("ABA"))), "2 cells painted anew"),
        (replace(GRID, rows=(tuple("AB"), tuple("BB"))), "2 columns instead of 3"),
        (replace(GRID, rows=(tuple("ABA"),)), "1 row instead of 2"),
        (replace(GRID, background="B"), "background B instead of A"),
        (replace(GRID, carry=Carry.CUT), "colours carried by another rule"),
    ],
)
def test_what_changed_in_a_grid(after, words):
    assert change_words(GRID, after) == words


@given(st.one_of(patterns(), grid_patterns()), st.one_of(patterns(), grid_patterns()))
def test_there_are_words_for_any_two_and_none_for_equal_ones(before, after):
    assert (change_words(before, after) == NOTHING_CHANGED) == (before == after)


def test_rows_as_makers_write_them():
    before = make_pattern(["f f", "f", "f f", "f"], slots="AABB")
    after = make_pattern(["f b", "f", "f f", "bf"], slots="AABB")
    assert change_words(before, after) == "2 knots changed"
