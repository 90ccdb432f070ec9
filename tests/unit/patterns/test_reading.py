"""Rows in words, and where they begin again; the expected words are written out by hand."""

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns

from patterns.grid import Cell, GridPattern, tie_cells
from patterns.grid_lengths import Run
from patterns.knots import Finish
from patterns.reading import (
    again_words,
    chart_range,
    colour_words,
    counted_words,
    read_rows,
    repeat_words,
    run_words,
    written_range,
    written_rows,
)

HEART = ("AABAA", "ABBBA", "AABAA")


def grid(rows=HEART, finish=Finish.EXACT):
    return GridPattern("Heart", "A", tuple(tuple(row) for row in rows), finish)


def test_written_rows():
    pattern = make_pattern(["f f b", "fb bf"], slots="AABBCC")
    assert written_rows(pattern) == ["Row 1: f f b", "Row 2: fb bf"]
    assert written_rows(make_pattern(["f", ""], slots="AB"))[1] == "Row 2: no knots"


def test_written_rows_counted():
    pattern = make_pattern(["f f f b b", "fb fb bf f"])
    assert written_rows(pattern, counted=True) == ["Row 1: 3f 2b", "Row 2: 2fb 1bf 1f"]


def test_written_rows_of_a_grid_in_the_order_of_tying():
    lopsided = grid(("AABBBA", "AABBBA"))
    assert written_rows(lopsided) == [
        "Row 1, from the left: 2A 3B 1A",
        "Row 2, from the right: 1A 3B 2A",
    ]


def test_written_rows_of_an_odd_grid_show_both_sides():
    # Three rows: the fourth row of the band is row 1 again, and comes from the right.
    written = written_rows(grid(("AB", "AA", "BA")))
    assert written == [
        "Row 1, from the left: 1A 1B",
        "Row 2, from the right: 2A",
        "Row 3, from the left: 1B 1A",
        "Row 4, from the right: 1B 1A",
        "Row 5, from the left: 2A",
        "Row 6, from the right: 1A 1B",
    ]


def test_written_rows_of_a_centred_picture_have_the_numbers_of_the_band():
    # Ten rows, three of them the picture: (10 - 3) // 2 = 3 before it, so it begins with row 4.
    written = written_rows(grid(finish=Finish.CENTRED), 10)
    assert written[0] == "Row 4, from the right: 2A 1B 2A"
    assert [line.split(",")[0] for line in written] == ["Row 4", "Row 5", "Row 6"]


def test_written_rows_end_with_the_band():
    assert len(written_rows(all_same(6, rows=24), 7)) == 7


@given(grid_patterns(), st.integers(1, 40))
def test_words_of_a_grid_spell_the_cells_as_they_are_tied(pattern, rows):
    # tie_cells walks the band cell by cell and is tested by itself.
    for read, cells in zip(
        read_rows(pattern, range(1, rows + 1), rows), tie_cells(pattern, rows), strict=True
    ):
        spelled = "".join(
            slot * int(count) for count, slot in re.findall(r"(\d+)([A-Z])", read.words)
        )
        assert spelled == "".join(cell.slot for cell in cells)
        assert (read.side == "left") == (cells[0].column == 1)


@given(st.lists(st.sampled_from(["f", "b", "fb", "bf"])))
def test_counted_words_unfold_to_the_same_words(words):
    unfolded = [
        word
        for part in counted_words(words).split()
        for word in [part.lstrip("0123456789")] * int(re.match(r"\d+", part)[0])
    ]
    assert unfolded == words


# --- where the repeat begins again --------------------------------------------------------------


@pytest.mark.parametrize(
    ("rows", "sentence"),
    [
        # 118 = 4 x 24 + 22
        (
            118,
            "Tie rows 1 to 24, then begin again with row 1: 4 times in full, then rows 1 to 22. "
            "Row 118 of the band, its last, is row 22 of the repeat.",
        ),
        (
            120,
            "Tie rows 1 to 24, then begin again with row 1: 5 times in full. "
            "Row 120 of the band, its last, is row 24 of the repeat.",
        ),
        (
            25,
            "Tie rows 1 to 24, then begin again with row 1: once in full, then row 1. "
            "Row 25 of the band, its last, is row 1 of the repeat.",
        ),
        (24, "Tie rows 1 to 24, which is the whole repeat, once."),
        (9, "Tie rows 1 to 9, and end within the repeat."),
    ],
)
def test_repeat_words(rows, sentence):
    pattern = make_pattern(["fb fb fb", "fb fb"] * 12)
    assert repeat_words(pattern, rows) == (sentence,)


def test_colour_words_say_when_the_colours_are_back():
    # All forward, 6 strands AABBCC: colours are back after 6 repeats of two rows (outside the
    # project: sympy's permutation orders, as in test_knots).
    slant = make_pattern(["f f f", "f f"], slots="AABBCC")
    assert colour_words(slant, 118) == (
        "The knots stay the same; the colours move on, and are back after 6 repeats, 12 rows."
    )
    assert colour_words(slant, 6) == (
        "The knots stay the same; the colours move on with each repeat."
    )
    assert colour_words(slant, 2) == ""
    assert colour_words(make_pattern(["fb fb fb", "fb fb"]), 118) == colour_words(grid(), 40) == ""


def test_repeat_words_of_an_odd_grid():
    # Three rows are read as six; 20 = 3 x 6 + 2.
    assert repeat_words(grid(), 20) == (
        "Tie rows 1 to 6, then begin again with row 1: 3 times in full, then rows 1 and 2. "
        "Row 20 of the band, its last, is row 2 of the repeat.",
        "Rows 4 to 6 show rows 1 to 3 again, tied from the other side.",
    )
    assert repeat_words(grid(), 4)[1] == "Row 4 shows row 1 again, tied from the other side."


def test_repeat_words_of_a_centred_picture():
    picture = grid(finish=Finish.CENTRED)
    assert repeat_words(picture, 10) == (
        "Tie rows 1 to 3 in A throughout, then the picture, rows 4 to 6, once, "
        "then rows 7 to 10 in A throughout.",
    )
    assert repeat_words(picture, 3) == ("Tie the picture, rows 1 to 3, once.",)


@given(st.one_of(patterns(), grid_patterns()), st.integers(1, 60))
def test_reading_the_written_rows_ties_the_whole_band(pattern, rows):
    """The sentence is followed as a maker would, and gives the band's rows one after the other."""
    if pattern.finish is Finish.CENTRED and rows < len(pattern.rows):
        rows = len(pattern.rows)
    written = {row.row: row.words for row in read_rows(pattern, written_range(pattern, rows), rows)}
    first = repeat_words(pattern, rows)[0]
    tied = []
    if " times in full" in first or "once in full" in first:
        turn = int(re.search(r"Tie rows 1 (?:to|and) (\d+)", first)[1])
        times = 1 if "once in full" in first else int(re.search(r"(\d+) times", first)[1])
        over = re.search(r"then rows? 1(?: (?:to|and) (\d+))?\.", first)
        tied = list(range(1, turn + 1)) * times + list(
            range(1, int(over[1] or 1) + 1) if over else []
        )
    else:
        for start, end, blank in re.findall(
            r"rows? (\d+)(?: (?:to|and) (\d+))?( in . through)?", first
        ):
            tied += [None if blank else row for row in range(int(start), int(end or start) + 1)]
    background = f"{len(pattern.rows[0])}{getattr(pattern, 'background', '')}"
    words = [background if row is None else written[row] for row in tied]
    assert words == [row.words for row in read_rows(pattern, range(1, rows + 1), rows)]


def test_chart_range_follows_short_repeats_until_the_colours_are_back():
    slant = make_pattern(["f f f", "f f"], slots="AABBCC")
    assert chart_range(slant, 118) == range(1, 13)
    assert chart_range(slant, 5) == range(1, 6)
    # 16 strands, all their own colour: back after 16 repeats of 2 rows, too many to chart.
    assert chart_range(all_same(16), 118) == range(1, 3)
    assert chart_range(grid(finish=Finish.CENTRED), 10) == range(4, 7)


def test_again_words_tell_the_rows_that_come_again():
    slant = make_pattern(["f f f", "f f"], slots="AABBCC")
    assert again_words(slant, 118) == (
        "Rows 3 to 12 of the chart are the repeat again, rows 1 and 2, "
        "after the strands have changed places."
    )
    assert again_words(slant, 3).startswith("Row 3 of the chart is the repeat again")
    assert again_words(slant, 2) == again_words(grid(), 20) == ""


def test_run_words():
    run = Run("B", 2, 12, 3, 2, Cell(7, 3, "B"), Cell(9, 2, "B"))
    assert run_words(run) == "12 cells, from row 7, column 3, to row 9, column 2"
    single = Run("B", 1, 1, 0, 0, Cell(7, 3, "B"), Cell(7, 3, "B"))
    assert run_words(single) == "1 cell, row 7, column 3"
