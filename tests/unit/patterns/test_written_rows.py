from time import perf_counter

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import patterns

from patterns.pattern_file import write_pattern
from patterns.written_lines import MOST_PROBLEMS
from patterns.written_rows import read_written_rows
from tests.data_builders.hostile_pastes import hostile_pastes


def rows(text):
    found = read_written_rows(text)
    assert found.problems == (), found.problems
    return [" ".join(row) for row in found.rows]


def problems(text):
    return [problem.message for problem in read_written_rows(text).problems]


@pytest.mark.parametrize(
    ("text", "wanted"),
    [
        ("f f b", ["f f b"]),
        ("F, B, FB, BF", ["f b fb bf"]),
        ("f;b / fb|bf", ["f b fb bf"]),
        ("forward, backward forward-backward Backward–Forward", ["f b fb bf"]),
        ("forward forward", ["f f"]),
        ("3f 2b", ["f f f b b"]),
        ("f, 2 b", ["f b b"]),
        ("3 x f 2×b", ["f f f b b"]),
        ("fx3 b", ["f f f b"]),
        ("f x3 b", ["f f f b"]),
        ("2fb", ["fb fb"]),
        ("3(f b)", ["f b f b f b"]),
        ("(f b) x3", ["f b f b f b"]),
        ("2 (f 2(b)) f", ["f b b f b b f"]),
        ("f f b x2", ["f f b", "f f b"]),
        ("f f b, x 2", ["f f b", "f f b"]),
        ("f b\nb f\nx2", ["f b", "b f", "f b", "b f"]),
        ("f\nx2\nb\nx 3", ["f", "f", "b", "b", "b"]),
        ("Row 1: f f b", ["f f b"]),
        ("1. f f b\n2. b b", ["f f b", "b b"]),
        ("1) f\n2) b", ["f", "b"]),
        ("R1 f f b\nr2 b", ["f f b", "b"]),
        ("1 f f b\n2 b b", ["f f b", "b b"]),
        ("- f f b\n- b b", ["f f b", "b b"]),
        ("Row 1: 3 f", ["f f f"]),
        ("f b\n(x2)\nb\n3x", ["f b", "f b", "b", "b", "b"]),
        ("rows 1-3: f b", ["f b"] * 3),
        ("rows 1 to 2: f b\nrow 3: b", ["f b", "f b", "b"]),
        ("f\n-\nf\nno knots", ["f", "", "f", ""]),
        ("f f # the slanted half\n\n# only words\n b b ", ["f f", "b b"]),
        ("fff bb", ["f f f b b"]),
        ("f f b.", ["f f b"]),
        ("f\r\nb\rf", ["f", "b", "f"]),
        ("", []),
    ],
)
def test_what_makers_type(text, wanted):
    assert rows(text) == wanted


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("f x b", "Row 1, knot 2: 'x' is not a knot. Use f, b, fb or bf."),
        ("f f\nf ? b", "Row 2, knot 2: '?' is not a knot. Use f, b, fb or bf."),
        ("f ffb", "Row 1, knot 2: 'ffb' may be f f b or f fb. Put blanks between the knots."),
        ("bfb", "Row 1, knot 1: 'bfb' may be b f b or bf b. Put blanks between the knots."),
        (
            "f forward  Backward",
            "Row 1, knot 1: 'forward Backward' may be one knot or two. Write forward-Backward, or"
            " put a comma between two knots.",
        ),
        ("7 f f b", "Row 1, knot 1: the line says row 7, but it is row 1."),
        ("3 3 f", "Row 1, knot 1: '3 ' does not say what is tied so often."),
        ("Row 1:", "Row 1, knot 1: there is nothing behind the number. Write - for no knots."),
        ("f x0", "Row 1, knot 2: that makes no row."),
        ("f\nx0", "Row 2, knot 1: 'x0' repeats nothing. Count from 1."),
        ("f b-f", "Row 1, knot 2: 'b-f' is not a knot."),
        ("f 3", "Row 1, knot 2: '3' does not say what is tied so often."),
        ("f (b", "Row 1, knot 2: there is an opening bracket without a closing one."),
        ("f b) f", "Row 1, knot 3: there is a closing bracket without an opening one."),
        ("99f", "Row 1, knot 1: '99': count from 1 to 30."),
        ("0f", "Row 1, knot 1: '0': count from 1 to 30."),
        ("f " * 31, "Row 1, knot 31: a row has at most 30 knots. Part it, or look at its counts."),
        ("((((((f", "Row 1, knot 1: brackets go 4 deep at the most."),
        ("x2", "Row 1, knot 1: 'x2' repeats the rows above it, and there are none."),
        ("f\nx999", "Row 2, knot 1: 'x999' would make more than 400 rows."),
        ("f x500", "Row 1, knot 2: that makes more than 400 rows. Take some out."),
        (
            "f\nRow 3: b",
            "Row 2, knot 1: the line says row 3, but it is row 2. Look for a row that is missing or"
            " stands twice; a count is written 3f, without a blank.",
        ),
        ("rows 1-999: b", "Row 1, knot 1: 'rows 1-999:' is no range of rows. Write rows 1-4."),
        ("\u202ef", "Row 1, knot 1: '?f' is not a knot. Use f, b, fb or bf."),
    ],
)
def test_what_is_not_understood_is_named_with_row_and_place(text, message):
    assert any(message in problem for problem in problems(text)), problems(text)


def test_the_rest_is_kept_where_a_word_is_not_understood():
    found = read_written_rows("f f b\nf huh b\nb b")
    assert [" ".join(row) for row in found.rows] == ["f f b", "f b", "b b"]
    (problem,) = found.problems
    assert (problem.line, problem.row, problem.place, problem.word) == (2, 2, 2, "huh")


def test_every_row_with_something_wrong_is_named():
    found = read_written_rows("f x\n\nf f\n? b\nb !")
    assert [(p.line, p.row) for p in found.problems] == [(1, 1), (4, 3), (5, 4)]


@given(patterns())
def test_rows_of_a_pattern_file_read_back(pattern):
    text = write_pattern(pattern).partition('"""\n')[2].partition('\n"""')[0]
    assert read_written_rows(text).rows == pattern.rows


@given(patterns(), st.randoms(use_true_random=False))
def test_rows_written_in_other_ways_read_back(pattern, chance):
    lines = []
    for number, row in enumerate(pattern.rows, start=1):
        words = [chance.choice((word, word.upper())) for word in row]
        line = chance.choice((" ", ", ", ";", " / ")).join(words) or "-"
        lines.append(chance.choice(("", f"Row {number}: ", f"{number}. ", f"R{number} ")) + line)
    found = read_written_rows("\n".join(lines))
    assert found.problems == ()
    assert found.rows == pattern.rows


def test_hostile_pastes_are_told_row_and_place():
    told = 0
    for text in hostile_pastes():
        found = read_written_rows(text)
        assert len(found.rows) <= 400
        assert all(len(row) <= 30 for row in found.rows)
        assert len(found.problems) <= MOST_PROBLEMS
        told += bool(found.problems)
        for problem in found.problems:
            assert problem.message.startswith(f"Row {problem.row}, knot {problem.place}: ")
            assert len(problem.message) < 300
            assert problem.message.isprintable()
    assert told > 600


def test_one_number_that_does_not_fit_is_one_problem():
    found = read_written_rows("1: f\n2: b\n4: f\n5: b\n6: f")
    assert [(p.line, p.row) for p in found.problems] == [(3, 3)]
    assert len(found.rows) == 5


@pytest.mark.parametrize("word", ["3 ", "(", "3(", "x ", "f x ", "forward ", "fb", "- ", "1 x"])
def test_a_word_without_end_is_read_in_no_time(word):
    begun = perf_counter()
    found = read_written_rows(word * (60_000 // len(word)))
    assert found.problems
    assert perf_counter() - begun < 2


def test_more_than_64_kb_is_refused():
    (problem,) = read_written_rows("f " * 40_000).problems
    assert "more than 64 KB" in problem.message


@given(st.text(max_size=200))
def test_any_text(text):
    read_written_rows(text)
