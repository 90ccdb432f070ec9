import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns

from patterns.grid import (
    MAX_COLUMNS,
    Carry,
    GridPattern,
    band_rows,
    first_picture_row,
    mirrored_grid,
    tie_cells,
)
from patterns.knots import Finish, PatternError

HEART = ("ABABA", "BBBBB", "ABBBA", "AABAA")


def make_grid(*rows, background="A", **changes):
    return GridPattern("Heart", background, tuple(tuple(row) for row in rows or HEART), **changes)


@pytest.mark.parametrize(
    ("rows", "message"),
    [
        ((), "1 to 400 rows; this one has 0"),
        ((("A",),), "2 to 60 columns; row 1 has 1"),
        ((("A",) * (MAX_COLUMNS + 1),), "2 to 60 columns; row 1 has 61"),
        ((("A", "B"), ("A",)), "Row 2 has 1 cell; row 1 has 2"),
        ((("A", "B"), ()), "Row 2 has no cells; row 1 has 2"),
        ((("A", "B"), ("A", "B", "C")), "Row 2 has 3 cells; row 1 has 2"),
        ((("A", "?"),), "Row 1, column 2: '?' is not a letter from A to Z."),
        ((("A", "AB"),), "Row 1, column 2: 'AB' is not a letter"),
        ((("A", 7),), "Row 1, column 2: '7' is not a letter"),
        ((("A", "B"),) * 401, "1 to 400 rows; this one has 401"),
        ([("A", "B")], "tuple of rows"),
        ((["A", "B"],), "tuple of rows"),
    ],
)
def test_grid_pattern_says_what_is_wrong(rows, message):
    with pytest.raises(PatternError, match=message.replace("?", r"\?")):
        GridPattern("Heart", "A", rows)


@pytest.mark.parametrize("background", ["", "AA", "a", "1", None])
def test_background_has_to_be_a_letter(background):
    with pytest.raises(PatternError, match="background"):
        make_grid(background=background)


def test_error_names_row_and_column():
    with pytest.raises(PatternError) as raised:
        make_grid("AAA", "AA!")
    assert (raised.value.row, raised.value.knot) == (2, 3)


def test_used_slots_hold_the_background_even_where_no_cell_shows_it():
    assert make_grid("BB", "CB").used_slots == ("A", "B", "C")
    assert (make_grid().columns, make_grid().strands) == (5, 6)


def test_rows_are_tied_in_turn_from_the_left_and_from_the_right():
    cells = list(tie_cells(make_grid("ABC", "ABC", "ABC"), 3))
    assert [[cell.column for cell in row] for row in cells] == [[1, 2, 3], [3, 2, 1], [1, 2, 3]]
    assert [[cell.slot for cell in row] for row in cells] == [
        ["A", "B", "C"],
        ["C", "B", "A"],
        ["A", "B", "C"],
    ]


def test_centred_picture_has_background_before_and_after():
    # 9 rows, 4 of them the picture: 2 before it, 3 after.
    pattern = make_grid(finish=Finish.CENTRED)
    shown = ["".join(row) for row in band_rows(pattern, 9)]
    assert shown == ["AAAAA"] * 2 + list(HEART) + ["AAAAA"] * 3
    assert first_picture_row(pattern, 9) == 3


@given(grid_patterns(), st.integers(0, 60))
def test_band_shows_the_rows_in_turn_or_once(pattern, rows):
    shown = list(band_rows(pattern, rows))
    assert len(shown) == rows
    if pattern.finish is not Finish.CENTRED:
        assert shown == (list(pattern.rows) * (rows + 1))[:rows]
    elif rows >= len(pattern.rows):
        first = first_picture_row(pattern, rows) - 1
        assert shown[first : first + len(pattern.rows)] == list(pattern.rows)
        others = shown[:first] + shown[first + len(pattern.rows) :]
        assert all(set(row) == {pattern.background} for row in others)
        after = rows - first - len(pattern.rows)
        assert 0 <= after - first <= 1


@given(grid_patterns())
def test_mirrored_twice_is_the_same(pattern):
    assert mirrored_grid(mirrored_grid(pattern)) == pattern
    for row, image in zip(pattern.rows, mirrored_grid(pattern).rows, strict=True):
        assert list(image) == [row[-1 - place] for place in range(len(row))]


def test_negative_rows_are_refused():
    with pytest.raises(ValueError, match="negative"):
        list(band_rows(make_grid(), -1))


@pytest.mark.parametrize("field", ["finish", "carry"])
def test_choices_have_to_be_of_their_kind(field):
    with pytest.raises(PatternError, match="There is no"):
        make_grid(**{field: "least"})
    assert make_grid(carry=Carry.CUT).carry == "cut"
