"""Each family holds what its name promises, for every number of strands."""

from collections import Counter
from math import pi, sqrt

import pytest

from patterns.families import FAMILIES, FamilyError, make_family
from patterns.families.makers import most_colours
from patterns.geometry import Gauge, diagonal_table
from patterns.knots import (
    SLOT_LETTERS,
    PatternError,
    colour_order,
    mirrored,
    order_of_repeat,
    tie_rows,
)
from patterns.pattern_file import read_pattern, write_pattern

EVERY = [
    (key, strands)
    for key, family in FAMILIES.items()
    for strands in range(family.fewest_strands, 61)
]
PICTURED = ("bars", "checks", "ladder", "crosses", "wave", "hearts")


def make(key, strands, colours=3):
    family = FAMILIES[key]
    count = max(family.fewest_colours, min(colours, most_colours(family, strands)))
    return make_family(key, strands, tuple(SLOT_LETTERS[:count]))


def picture(pattern, rows):
    """The slot that shows, by row and by the middle of the knot."""
    return {
        (row, knot.left): pattern.slots[knot.tying - 1]
        for row, knots in enumerate(tie_rows(pattern, rows), start=1)
        for knot in knots
    }


def test_at_least_eight_families():
    assert len(FAMILIES) >= 8
    assert {"stripe", "chevron", "zigzag", "diamond"} <= set(FAMILIES)
    assert len({family.name for family in FAMILIES.values()}) == len(FAMILIES)


@pytest.mark.parametrize(("key", "strands"), EVERY)
def test_every_family_of_every_width_is_a_pattern(key, strands):
    pattern = make(key, strands)
    assert pattern.strands == strands
    assert pattern.used_slots == tuple(SLOT_LETTERS[: len(pattern.used_slots)])
    assert read_pattern(write_pattern(pattern)) == pattern
    # The colours come back soon enough that a bracelet shows the picture more than once.
    assert colour_order(pattern) * len(pattern.rows) <= 4 * strands + 8


@pytest.mark.parametrize(("key", "strands"), EVERY)
def test_every_colour_asked_for_is_used(key, strands):
    family = FAMILIES[key]
    for count in range(family.fewest_colours, min(most_colours(family, strands), 6) + 1):
        pattern = make_family(key, strands, tuple("QRSTUV"[:count]))
        assert set(pattern.slots) == set("QRSTUV"[:count])


@pytest.mark.parametrize("strands", range(2, 61))
def test_stripe_is_one_cycle_of_all_strands(strands):
    # Outside check: all swap, two rows are one cycle of all N strands (computed with sympy too).
    pattern = make("stripe", strands)
    assert {knot for row in pattern.rows for knot in row} <= {"f"}
    assert order_of_repeat(pattern) == strands


@pytest.mark.parametrize("strands", range(4, 61, 2))
def test_chevron_and_diamond_are_their_own_mirror_image(strands):
    for key in ("chevron", "diamond"):
        if strands < FAMILIES[key].fewest_strands:
            continue
        pattern = make(key, strands)
        rows = 2 * len(pattern.rows)
        assert picture(mirrored(pattern), rows) == picture(pattern, rows)


@pytest.mark.parametrize("strands", range(4, 61))
def test_zigzag_shows_the_same_strands_on_both_slants(strands):
    """Where a strand turns it goes on on the other slant: each row shows as many as it has knots,
    and a strand that shows in a row shows again in the next but one, or waits at the edge."""
    pattern = make("zigzag", strands)
    half = len(pattern.rows) // 2
    kinds = [set(row) for row in pattern.rows if row]
    assert Counter(str(next(iter(kind))) for kind in kinds) == {
        "f": half - 1, "fb": 1, "b": half - 1, "bf": 1,
    }  # fmt: skip
    tied = list(tie_rows(pattern, len(pattern.rows)))
    turning, after = tied[half - 1], tied[half]
    went_on = {knot.tying for knot in turning} & {knot.tying for knot in after}
    assert len(went_on) >= len(after) - 1


@pytest.mark.parametrize("key", PICTURED)
@pytest.mark.parametrize("strands", [8, 9, 13, 16, 24, 37, 60])
def test_pictured_strands_never_leave_their_places(key, strands):
    pattern = make(key, strands)
    assert order_of_repeat(pattern) == 1
    # Each knot lies between a strand of the ground and one of the figure.
    assert all(
        (left == "A") != (right == "A")
        for left, right in zip(pattern.slots, pattern.slots[1:], strict=False)
    )


@pytest.mark.parametrize("strands", [8, 10, 16, 24, 40])
def test_crosses_are_drawn_on_both_slants(strands):
    pattern = make("crosses", strands, colours=2)
    shown = picture(pattern, strands)
    figure = {place for place, slot in shown.items() if slot == "B"}
    # Derived: both diagonals of a square of N rows and N positions; knots stand at every second
    # place of each row, so a slant meets one knot a row, and at its ends the edge.
    for row in range(1, strands + 1):
        middles = sorted(middle for at, middle in figure if at == row)
        assert (row < strands) <= len(middles) <= 2  # in the last row both slants are at the edge
        for middle in middles:
            assert min(abs(middle - row), abs(middle - (strands + 1 - row))) <= 1


@pytest.mark.parametrize("strands", range(8, 61))
def test_hearts_have_no_holes_and_close_to_a_point(strands):
    pattern = make("hearts", strands, colours=2)
    shown = picture(pattern, len(pattern.rows))
    by_row = Counter(row for (row, _), slot in shown.items() if slot == "B")
    rows = sorted(by_row)
    assert rows == list(range(rows[0], rows[-1] + 1))
    assert by_row[rows[-1]] <= 2
    middle = [
        shown.get((row, place)) == "B"
        for row in rows
        for place in (strands // 2, strands // 2 + 1)
        if (row, place) in shown
    ]
    assert True in middle
    first = middle.index(True)
    last = len(middle) - 1 - middle[::-1].index(True)
    assert middle[first : last + 1].count(False) <= 2


def test_bars_cross_the_whole_band():
    shown = picture(make("bars", 12, colours=2), 12)
    for row in range(1, 13):
        assert len({slot for (at, _), slot in shown.items() if at == row}) == 1


@pytest.mark.parametrize("strands", [6, 8, 12, 16])
def test_even_families_take_what_the_closed_form_says(strands):
    # Handbook: patterns that use all strands evenly, idle run 0: L ((2 + 3 pi) + 2) / sqrt 2
    # (N - 1) / (2 N), exact over whole turns of all strands through all places.
    gauge = Gauge(thread_diameter_mm=1, idle_run=0)
    rows = 2 * strands
    table = diagonal_table(make("stripe", strands), rows * sqrt(2), gauge)
    closed_mm = rows * sqrt(2) * ((2 + 3 * pi) + 2) / sqrt(2) * (strands - 1) / (2 * strands)
    assert table.rows == rows
    assert all(strand.knotted_mm == pytest.approx(closed_mm) for strand in table.strands)


@pytest.mark.parametrize(
    ("key", "strands", "colours", "message"),
    [
        ("spiral", 6, "AB", "There is no family 'spiral'"),
        ("chevron", 3, "AB", "Chevron takes 4 to 60 strands, not 3."),
        ("chevron", 61, "AB", "Chevron takes 4 to 60 strands, not 61."),
        ("chevron", 6, "", "takes 1 to 3 colours, not 0"),
        ("chevron", 6, "ABCD", "takes 1 to 3 colours, not 4"),
        ("checks", 8, "A", "takes 2 to 5 colours, not 1"),
        ("stripe", 6, "AA", "A colour stands twice"),
        ("stripe", 6, "A?", "'?' is not a letter"),
        ("stripe", 6, ("AB",), "'AB' is not a letter"),
    ],
)
def test_what_a_family_cannot_make_is_said(key, strands, colours, message):
    with pytest.raises(FamilyError) as raised:
        make_family(key, strands, tuple(colours))
    assert message in str(raised.value)


def test_name_is_the_makers_or_says_what_it_is():
    assert make_family("chevron", 8, ("A", "B")).name == "Chevron, 8 strands"
    assert make_family("chevron", 8, ("A", "B"), name="Gulls").name == "Gulls"
    with pytest.raises(PatternError):
        make_family("chevron", 8, ("A", "B"), name="x" * 81)
