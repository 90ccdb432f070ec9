"""Two patterns side by side, held against edits made here and sums made by hand."""

from dataclasses import replace
from random import Random

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns

from patterns.analysis import analyse
from patterns.cut_lengths import CutRule, Ending, pieces_for
from patterns.difference_facts import Side, compare_facts
from patterns.differences import compare_rows, compare_slots, why_rows_differ
from patterns.geometry import Gauge
from patterns.grid import GridPattern
from patterns.knots import Finish, Knot
from patterns.techniques import strand_table

TIES = Ending("Ties", "straight", 60, 60, 1.25, 30, 90, 0, 0, 0)
GAUGE = Gauge(thread_diameter_mm=1.0)


def side_of(pattern, length_mm=150):
    pattern = replace(pattern, finish=Finish.EXACT)
    table = strand_table(pattern, length_mm, GAUGE)
    pieces = pieces_for(table, TIES, CutRule(0.1, 10))
    return Side(pattern, table, pieces, analyse(pattern, table, pieces, GAUGE), GAUGE)


def facts_of(first, second):
    return {fact.name: fact for fact in compare_facts(side_of(first), side_of(second))}


# --- rows ------------------------------------------------------------------------------------


def test_rows_of_equal_patterns_are_one_run():
    pattern = all_same(6, rows=8)
    (only,) = compare_rows(pattern, pattern)
    assert (only.kind, only.count, only.first_last, only.second_last) == ("same", 8, 8, 8)


def test_a_changed_knot_is_named():
    first = make_pattern(["f f f", "f f", "b b b", "b b"])
    second = make_pattern(["f f f", "f f", "b fb b", "b b"])
    same, changed, rest = compare_rows(first, second)
    assert (same.kind, same.count, rest.kind, rest.count) == ("same", 2, "same", 1)
    assert (changed.kind, changed.first_row, changed.second_row) == ("changed", 3, 3)
    assert changed.places == (2,)
    assert [knot.word for knot in changed.second if knot.differs] == ["fb"]
    assert [knot.word for knot in changed.first if knot.differs] == ["b"]


def test_inserted_rows_are_only_in_the_second():
    rows = ["f f f", "f f", "b b b", "b b"]
    second = make_pattern([*rows[:2], "fb fb fb", "bf bf", *rows[2:]])
    found = compare_rows(make_pattern(rows), second)
    assert [(row.kind, row.first_row, row.second_row, row.count) for row in found] == [
        ("same", 1, 1, 2),
        ("only second", 0, 3, 1),
        ("only second", 0, 4, 1),
        ("same", 3, 5, 2),
    ]
    back = compare_rows(second, make_pattern(rows))
    assert [row.kind for row in back] == ["same", "only first", "only first", "same"]


def test_an_odd_row_is_never_the_same_as_an_even_one():
    # Five strands: both kinds of row have two knots, on other strands.
    first = make_pattern(["f f", "b b"], slots="ABCDE")
    second = make_pattern(["b b", "f f"], slots="ABCDE")
    assert [row.kind for row in compare_rows(first, second)] == ["changed", "changed"]


@given(patterns(min_strands=3, max_strands=8), st.data())
def test_changed_knots_are_found_exactly(pattern, data):
    row = data.draw(st.integers(0, len(pattern.rows) - 1))
    place = data.draw(st.integers(0, len(pattern.rows[row]) - 1))
    other = data.draw(st.sampled_from([k for k in Knot if k is not pattern.rows[row][place]]))
    rows = [list(knots) for knots in pattern.rows]
    rows[row][place] = other
    changed = replace(pattern, rows=tuple(tuple(knots) for knots in rows))
    rebuilt_first, rebuilt_second = rebuilt(pattern, changed)
    assert rebuilt_first == list(pattern.rows)
    assert rebuilt_second == list(changed.rows)


def rebuilt(first, second):
    """Reference: the two patterns' rows again, from their differences alone."""
    ours, theirs = [], []
    for row in compare_rows(first, second):
        if row.kind == "same":
            assert (
                first.rows[row.first_row - 1 : row.first_last]
                == second.rows[row.second_row - 1 : row.second_last]
            )
            ours += first.rows[row.first_row - 1 : row.first_last]
            theirs += second.rows[row.second_row - 1 : row.second_last]
            continue
        if row.kind == "changed":
            assert row.places == tuple(
                number
                for number, (knot, knot_then) in enumerate(
                    zip(row.first, row.second, strict=True), 1
                )
                if knot.word != knot_then.word
            )
            assert row.places
        if row.first_row:
            ours.append(_row(row.first))
        if row.second_row:
            theirs.append(_row(row.second))
    return ours, theirs


def _row(knots):
    return tuple(knot.word for knot in knots if knot.word != "no knots")


def test_differences_rebuild_both_patterns():
    random = Random(4)
    for _ in range(200):
        strands = random.randint(2, 6)
        first, second = (
            make_pattern(
                [
                    " ".join(random.choices(["f", "b"], k=(strands - row % 2) // 2))
                    for row in range(2 * random.randint(1, 6))
                ],
                slots="A" * strands,
            )
            for _ in range(2)
        )
        assert rebuilt(first, second) == (list(first.rows), list(second.rows))


@given(grid_patterns(max_columns=3, max_rows=6), st.data())
def test_differences_rebuild_both_grids(first, data):
    cells = st.lists(st.sampled_from("AB"), min_size=first.columns, max_size=first.columns)
    rows = data.draw(st.lists(cells.map(tuple), min_size=1, max_size=6))
    second = replace(first, rows=tuple(rows))
    assert rebuilt(first, second) == (list(first.rows), list(second.rows))


GRID = GridPattern("Grid", "A", (("A", "B"), ("B", "A")))


@pytest.mark.parametrize(
    ("first", "second", "words"),
    [
        (all_same(6), all_same(6, "b"), ""),
        (all_same(6), all_same(8), "6 strands, the other 8"),
        (all_same(3), GRID, "One is a diagonal pattern, the other a grid"),
        (GRID, GridPattern("Wide", "A", (("A", "B", "A"),)), "2 columns, the other 3"),
        (GRID, replace(GRID, background="B"), ""),
    ],
)
def test_why_rows_cannot_be_compared(first, second, words):
    assert words in why_rows_differ(first, second)
    assert bool(words) == bool(why_rows_differ(first, second))


# --- slots -----------------------------------------------------------------------------------


def test_slots_of_strands():
    found = compare_slots(all_same(4, slots="AABB"), all_same(5, slots="ABBBC"))
    assert [(line.place, line.first, line.second) for line in found] == [
        ("Strand 2", "A", "B"),
        ("Strand 5", "", "C"),
    ]


def test_slots_of_a_grid():
    found = compare_slots(GRID, GridPattern("Other", "C", (("A", "C"),)))
    assert [(line.place, line.first, line.second) for line in found] == [
        ("Background", "A", "C"),
        ("Slot B", "B", ""),
        ("Slot C", "", "C"),
    ]


# --- facts -----------------------------------------------------------------------------------


def test_facts_by_hand():
    facts = facts_of(all_same(6), all_same(8, rows=4))
    strands = facts["Strands that hang"]
    assert (strands.first.number, strands.second.number) == (6, 8)
    assert (strands.difference, strands.by) == ("more", 2)
    # 6 and 8 strands of sqrt 2 mm: 8.49 and 11.31 mm.
    width = facts["Width of the band"]
    assert (width.first.number, width.second.number, width.difference) == (8, 11, "wider")
    assert width.by == 3
    assert width.second.working == "8 strands × 1.414 mm = 11.3 mm"
    assert (facts["Rows to tie"].difference, facts["Rows to tie"].by) == ("the same", 0)
    assert facts["Technique"].difference == "the same"
    # All forward: the strands are back after 6 repeats of 2 rows, and 8 strands after 16 rows,
    # 4 repeats of 4.
    back = facts["Repeats until every strand is back"]
    assert (back.first.number, back.second.number) == (6, 4)
    assert (back.difference, back.by) == ("fewer", 2)
    assert "Picture" not in facts


def test_knots_to_tie_by_hand():
    # 107 rows: 54 odd ones of 3 knots and 53 even ones of 2.
    assert facts_of(all_same(6), all_same(6))["Knots to tie"].first.number == 54 * 3 + 53 * 2


def test_picture_of_equal_looks_is_the_same_whatever_the_knots():
    first, second = make_pattern(["f f", "f"], "AAAA"), make_pattern(["fb b", "bf"], "AAAA")
    assert facts_of(first, second)["Picture"].difference == "the same"


def test_picture_says_where_it_begins_to_differ():
    # Strands A A B B: in row 1 nothing shows of the change, in row 2 the other strand ties.
    first, second = make_pattern(["f f", "fb"], "AABB"), make_pattern(["f f", "bf"], "AABB")
    words = facts_of(first, second)["Picture"].difference
    assert words == "53 of 107 rows show other slots, the first is row 2"


@given(patterns(max_strands=6, max_double_rows=3), patterns(max_strands=6, max_double_rows=3))
def test_facts_turned_round_say_the_opposite(first, second):
    there, back = facts_of(first, second), facts_of(second, first)
    opposite = {
        "more": {"fewer", "less"},
        "wider": {"narrower"},
        "longer": {"shorter"},
        "fewer": {"more"},
        "less": {"more"},
        "narrower": {"wider"},
        "shorter": {"longer"},
        "the same": {"the same"},
        "different": {"different"},
    }
    assert there.keys() == back.keys()
    for name, fact in there.items():
        if fact.kind != "words":
            assert back[name].difference in opposite[fact.difference]
            assert back[name].by == fact.by == abs(fact.first.number - fact.second.number)


def test_a_diagonal_beside_a_grid_has_what_both_have():
    facts = facts_of(all_same(3), GRID)
    assert facts["Technique"].difference == "different"
    assert "Repeats until the colours are back" not in facts
    assert facts["Thread in all"].first.number > 0
