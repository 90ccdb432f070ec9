import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns, patterns

from patterns.knots import SLOT_LETTERS
from patterns.pattern_file import write_pattern
from patterns.written_cells import read_written_cells
from patterns.written_look import (
    beginning_of_cells,
    beginning_of_knots,
    look_at_cells,
    look_at_knots,
    most_used,
    own_slots,
    rows_before_notes,
)
from patterns.written_rows import read_written_rows


def typed(pattern) -> str:
    return write_pattern(pattern).partition('"""\n')[2].partition('\n"""')[0]


def test_every_row_has_its_words_and_what_is_wrong():
    looked = look_at_knots(read_written_rows("f b\nf huh\nf f f\n-\nx999"), 4)
    assert [(row.row, row.words) for row in looked] == [
        (1, "f b"),
        (2, "f"),
        (3, "f f f"),
        (4, "no knots"),
        (5, "nothing understood yet"),
    ]
    assert [row.notes for row in looked] == [
        (),
        ("knot 2: 'huh' is not a knot. Use f, b, fb or bf.",),
        ("3 knots; 4 strands need 2 here",),
        ("0 knots; 4 strands need 1 here",),
        ("knot 1: 'x999' would make more than 400 rows.",),
    ]
    assert rows_before_notes(looked) == 1


def test_cells_are_counted():
    looked = look_at_cells(read_written_cells("AABBB\nAAB"))
    assert [row.words for row in looked] == ["2A 3B", "2A 1B"]
    assert looked[1].notes[0].startswith("column 4: the row has 3 columns")


@given(patterns())
def test_beginning_of_right_rows_is_the_pattern(pattern):
    written = read_written_rows(typed(pattern))
    looked = look_at_knots(written, pattern.strands)
    assert rows_before_notes(looked) == len(pattern.rows)
    beginning = beginning_of_knots(written, looked, pattern.slots)
    assert (beginning.rows, beginning.slots) == (pattern.rows, pattern.slots)


@given(patterns(min_strands=3), st.integers(0, 9))
def test_beginning_ends_before_the_first_row_that_is_wrong(pattern, wrong):
    """A row with a word that is no knot; a row is added where the others are an odd number."""
    wrong %= len(pattern.rows)
    lines = typed(pattern).split("\n")
    lines[wrong] = "f ?"
    written = read_written_rows("\n".join(lines))
    beginning = beginning_of_knots(written, look_at_knots(written, pattern.strands), pattern.slots)
    if wrong == 0:
        assert beginning is None
    else:
        assert beginning.rows[:wrong] == pattern.rows[:wrong]
        assert len(beginning.rows) == wrong + wrong % 2


@given(grid_patterns())
def test_beginning_of_right_cells_is_the_pattern(pattern):
    written = read_written_cells(typed(pattern))
    assert beginning_of_cells(written, look_at_cells(written)).rows == pattern.rows


@pytest.mark.parametrize("text", ["", "A", "?"])
def test_nothing_to_draw(text):
    cells, knots = read_written_cells(text), read_written_rows(text)
    assert beginning_of_cells(cells, look_at_cells(cells)) is None
    assert beginning_of_knots(knots, look_at_knots(knots, 2), ("A", "B")) is None
    assert beginning_of_knots(knots, look_at_knots(knots, 0), ()) is None


@pytest.mark.parametrize(
    ("rows", "background"), [(["ABB"], "B"), (["BBAA"], "A"), (["CA", "CA"], "A"), (["Z"], "Z")]
)
def test_slot_used_most(rows, background):
    assert most_used(rows) == background


@given(patterns(min_strands=3))
def test_own_slots_are_as_many_as_the_strands(pattern):
    """Not with two strands, whose second row has no knots: their first row is one of three as well."""
    assert len(own_slots(pattern.rows, SLOT_LETTERS, 60)) == pattern.strands
    assert own_slots((), SLOT_LETTERS, 60) == ()
