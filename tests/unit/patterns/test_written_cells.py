import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns

from patterns.grid import Carry, Finish, GridPattern
from patterns.pattern_file import write_pattern
from patterns.reading import written_rows
from patterns.written_cells import read_letters, read_written_cells
from tests.data_builders.hostile_pastes import hostile_pastes


@pytest.mark.parametrize(
    ("text", "rows"),
    [
        ("AABBA", ["AABBA"]),
        ("a a b", ["AAB"]),
        ("A, A; B / C|A", ["AABCA"]),
        ("3A 2B", ["AAABB"]),
        ("3A2B", ["AAABB"]),
        ("A 2 B", ["ABB"]),
        ("2AB", ["AAB"]),
        ("AB\nBA\nx2", ["AB", "BA"] * 2),
        ("AB x3", ["AB"] * 3),
        ("Row 1: AB\nrow 2: BA", ["AB", "BA"]),
        ("1. AB\n2. BA", ["AB", "BA"]),
        ("rows 1-3: AB", ["AB"] * 3),
        ("Row 1, from the left: 2A 1B\nRow 2, from the right: 2A 1B", ["AAB", "BAA"]),
        ("from right: AAB", ["BAA"]),
        ("AB # a comment\n\n# another\nBA", ["AB", "BA"]),
        ("2X 1R\nR X X", ["XXR", "RXX"]),
        ("", []),
    ],
)
def test_what_makers_type(text, rows):
    found = read_written_cells(text)
    assert found.problems == ()
    assert ["".join(row) for row in found.rows] == rows
    assert len(found.lines) == len(rows)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("A ! B", "Row 1, column 2: '!' is not a letter from A to Z."),
        ("AB\nAß", "Row 2, column 2: 'ß' is not a letter from A to Z."),
        ("A 3", "Row 1, column 2: '3' does not say which letter comes so often."),
        ("3 3A", "Row 1, column 1: '3' does not say which letter comes so often."),
        ("61A", "Row 1, column 1: '61': count from 1 to 60."),
        ("999999999999A", "Row 1, column 1: '999999999999': count from 1 to 60."),
        ("A" * 61, "Row 1, column 61: there are at most 60. Take some out."),
        ("3 x A", "Row 1, column 1: '3 x' may be a count or cells of X. Write 3A, or XXX."),
        ("3x A", "Row 1, column 1: '3x A' may be a count or cells of X."),
        ("AB\nABA", "Row 2, column 3: the row has 3 columns, row 1 has 2"),
        ("AB\nA", "Row 2, column 2: the row has 1 column, row 1 has 2"),
        ("AB\nRow 4: BA", "Row 2, column 1: the line says row 4, but it is row 2."),
        ("x2", "Row 1, column 1: 'x2' repeats the rows above it, and there are none."),
        ("AB\nx999", "Row 2, column 1: 'x999' would make more than 400 rows."),
        ("\u202eA", "Row 1, column 1: '?' is not a letter from A to Z."),
        ("¹A", "Row 1, column 1: '¹' is not a letter from A to Z."),
        ("A\0B", "Row 1, column 2: '?' is not a letter from A to Z."),
        ("A " * 40_000, "Row 1, column 1: this is more than 64 KB; no pattern is."),
    ],
)
def test_what_is_not_understood_is_named_with_row_and_place(text, message):
    first = read_written_cells(text).problems[0].message
    assert first.startswith(message)


def test_the_rest_is_kept_and_the_line_is_known():
    found = read_written_cells("AB\n\nA?B\nBB")
    assert ["".join(row) for row in found.rows] == ["AB", "AB", "BB"]
    (problem,) = found.problems
    assert (problem.line, problem.row, problem.place, problem.word) == (3, 2, 2, "?")
    uneven = read_written_cells("# two rows\nAB\n\nABA").problems[0]
    assert (uneven.line, uneven.row) == (4, 2)


@given(grid_patterns(max_columns=24))
def test_rows_of_a_pattern_file_read_back(pattern):
    text = write_pattern(pattern).partition('"""\n')[2].partition('\n"""')[0]
    assert read_written_cells(text).rows == pattern.rows


@given(grid_patterns(max_columns=24))
def test_written_rows_read_back(pattern):
    """Rows in words are written in the order of tying, every second from the right."""
    exact = GridPattern(pattern.name, pattern.background, pattern.rows, Finish.EXACT, Carry.LEAST)
    found = read_written_cells("\n".join(written_rows(exact)))
    assert found.problems == ()
    assert found.rows == (pattern.rows if len(pattern.rows) % 2 == 0 else pattern.rows * 2)


def test_hostile_pastes_are_told_row_and_place():
    told = 0
    for text in hostile_pastes():
        found = read_written_cells(text)
        assert len(found.rows) == len(found.lines) <= 400
        assert all(len(row) <= 60 for row in found.rows)
        told += bool(found.problems)
        for problem in found.problems:
            assert problem.message.startswith(f"Row {problem.row}, column {problem.place}: ")
            assert problem.message.isprintable()
            assert len(problem.message) < 300
    assert told > 600


@given(st.text(max_size=200))
def test_any_text(text):
    read_written_cells(text)
    read_letters(text, 60)


@pytest.mark.parametrize("text", ["A A B B", "AABB", "2A 2b", "a,a\nb;b", " 2 A 2 B "])
def test_letters_of_strands(text):
    assert read_letters(text, 60) == (("A", "A", "B", "B"), None)


@pytest.mark.parametrize(
    ("text", "place", "sentence"),
    [
        ("A ! B", 2, "'!' is not a letter from A to Z."),
        ("A3", 2, "'3' does not say which letter comes so often."),
        ("61 A", 1, "'61': count from 1 to 60."),
        ("A " * 61, 61, "there are at most 60. Take some out."),
    ],
)
def test_letters_that_are_none(text, place, sentence):
    _, problem = read_letters(text, 60)
    assert problem is not None
    assert (problem.place, problem.sentence) == (place, sentence)
