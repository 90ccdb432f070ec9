"""Families: each against its own picture, written out here anew."""

from itertools import pairwise
from math import pi, sqrt

import pytest

from patterns.families import FAMILIES, FamilyError, make_family
from patterns.geometry import Gauge, diagonal_table
from patterns.knots import MAX_STRANDS, SLOT_LETTERS, Knot, PatternError, knots_in_row
from patterns.pattern_file import read_pattern, write_pattern
from patterns.tying import (
    colour_order,
    count_strands,
    mirrored,
    order_of_repeat,
    permutation,
    tie_rows,
)

KEYS = list(FAMILIES)
ON_LINES = ("zigzag", "wave", "diamond", "double-diamond")
ON_A_GROUND = ("hearts", "crosses", "arrowheads", "checks", "ladder", "bars")


def all_strands(key: str) -> range:
    return range(FAMILIES[key].fewest, MAX_STRANDS + 1)


def all_colours(key: str, strands: int) -> str:
    """As many colours as there is room for, at most 26."""
    return SLOT_LETTERS[: FAMILIES[key].places(strands)]


def picture(pattern, rows: int) -> dict[tuple[int, int], str]:
    """The slot that shows at every row and gap, counted from 1."""
    return {
        (row, knot.left): pattern.slots[knot.tying - 1]
        for row, tied in enumerate(tie_rows(pattern, rows), start=1)
        for knot in tied
    }


def drawn(pattern, rows: int) -> list[str]:
    """The picture as text, a character a gap; a blank where two knots lie side by side."""
    seen = picture(pattern, rows)
    gaps = range(1, pattern.strands)
    return ["".join(seen.get((row, gap), " ") for gap in gaps) for row in range(1, rows + 1)]


def test_every_family_has_a_key_a_name_and_a_sentence_of_its_own():
    for words in ("key", "name", "sentence"):
        assert len({getattr(family, words) for family in FAMILIES.values()}) == len(FAMILIES) >= 9
    assert all(family.sentence.endswith(".") for family in FAMILIES.values())
    assert {"stripe", "chevron", "zigzag", "diamond"} < set(KEYS)


@pytest.mark.parametrize("key", KEYS)
def test_family_of_every_number_of_strands_shows_the_colours_given(key):
    for strands in all_strands(key):
        colours = all_colours(key, strands)
        pattern = make_family(key, strands, colours)
        assert pattern.strands == strands
        assert pattern.used_slots == tuple(colours)
        assert read_pattern(write_pattern(pattern)) == pattern
        rows = len(pattern.rows) * colour_order(pattern)
        assert set(picture(pattern, rows).values()) == set(colours), strands


@pytest.mark.parametrize("key", KEYS)
def test_family_with_two_colours_shows_both(key):
    for strands in all_strands(key):
        pattern = make_family(key, strands, "QB")
        seen = set(picture(pattern, len(pattern.rows) * colour_order(pattern)).values())
        assert seen == set(pattern.used_slots) == {"Q", "B"}, strands


@pytest.mark.parametrize("key", [*ON_LINES, *ON_A_GROUND])
def test_family_that_comes_back_has_its_colours_back_after_each_repeat(key):
    for strands in all_strands(key):
        pattern = make_family(key, strands, all_colours(key, strands))
        assert permutation(pattern) == tuple(range(1, strands + 1))


@pytest.mark.parametrize("strands", all_strands("stripe"))
def test_stripe_is_f_throughout_and_runs_on(strands):
    colours = all_colours("stripe", strands)
    pattern = make_family("stripe", strands, colours)
    assert {knot for row in pattern.rows for knot in row} == {Knot.F}
    assert len(pattern.rows) == 2
    # The strands go round like a belt: after N repeats of two rows each is back.
    assert order_of_repeat(pattern) == strands
    seen = picture(pattern, 6 * strands)
    assert all(
        seen.get((row + 1, gap + 1), slot) == slot
        for (row, gap), slot in seen.items()
        if row < 6 * strands
    )
    # Along the left edge the colours come in the order given.
    edge = "".join(seen[row, 1] for row in range(1, 2 * strands, 2))
    assert edge == (colours if strands <= 26 else edge)
    assert [edge.index(slot) for slot in colours] == sorted(edge.index(slot) for slot in colours)


@pytest.mark.parametrize("strands", all_strands("chevron"))
def test_chevron_points_one_way_on_both_sides(strands):
    half = strands // 2
    colours = all_colours("chevron", strands)
    seen = picture(make_family("chevron", strands, colours), 4 * strands)
    expected = spread(colours, half)
    for (row, gap), slot in seen.items():
        if gap <= half:
            assert slot == expected[(row - gap) // 2 % half]
        else:
            assert slot == seen.get((row - strands % 2, strands - gap), slot)


def spread(colours: str, places: int) -> str:
    """As many places for each colour, the first ones one more."""
    each, over = divmod(places, len(colours))
    return "".join(
        slot * (each + 1 if number < over else each) for number, slot in enumerate(colours)
    )


@pytest.mark.parametrize("key", ["chevron", "double-chevron", "diamond", "double-diamond"])
def test_family_that_is_its_own_mirror_image(key):
    for strands in all_strands(key):
        pattern = make_family(key, strands, all_colours(key, strands))
        repeat = len(pattern.rows) * colour_order(pattern)
        here, image = drawn(pattern, 2 * repeat), drawn(mirrored(pattern), repeat)
        # Of odd strands the right half lags by a row, in the mirror image the left half: the
        # image begins with row 2, and its right half is two rows ahead.
        half, ahead = strands // 2, 2 * (strands % 2)
        for row, seen in enumerate(image):
            assert seen[:half] == here[row][:half]
            assert seen[half:] == here[row + ahead][half:]


@pytest.mark.parametrize("strands", all_strands("double-chevron"))
def test_double_chevron_has_two_points_side_by_side(strands):
    """From gap to gap a colour comes a row later or a row sooner; later, then sooner is a point."""
    quarter = strands // 4
    pattern = make_family("double-chevron", strands, all_colours("double-chevron", strands))
    seen = picture(pattern, 2 * quarter)
    first_row = {gap: row for (row, gap), slot in seen.items() if slot == "A"}
    assert len(first_row) == strands - 1
    steps = [(first_row[gap + 1] - first_row[gap]) % (2 * quarter) for gap in range(1, strands - 1)]
    later, sooner = 1, 2 * quarter - 1
    assert set(steps) == {later, sooner}
    turns = list(pairwise(steps))
    assert turns.count((later, sooner)) == 2
    assert turns.count((sooner, later)) == 1
    assert (steps[0], steps[-1]) == (later, sooner)


@pytest.mark.parametrize("strands", all_strands("zigzag"))
def test_zigzag_turns_after_as_many_rows_as_strands(strands):
    pattern = make_family("zigzag", strands, all_colours("zigzag", strands))
    assert len(pattern.rows) == 2 * strands
    for number, row in enumerate(pattern.rows):
        knot = {0: Knot.FB, strands: Knot.BF}.get(number, Knot.B if number < strands else Knot.F)
        assert set(row) <= {knot}, number + 1
    seen = picture(pattern, 4 * strands)
    for (row, gap), slot in seen.items():
        # Rows 1 to N + 1 run to the left, the next N back to the right, and so on.
        step = -1 if (row - 1) % (2 * strands) < strands else 1
        assert seen.get((row + 1, gap + step), slot) == slot, (row, gap)


@pytest.mark.parametrize("key", ON_LINES)
def test_line_is_never_broken(key):
    """Every knot has one of its own colour below it, but where the line leaves at an edge or
    another line of that colour stands in its place."""
    for strands in all_strands(key):
        pattern = make_family(key, strands, all_colours(key, strands))
        rows = 2 * len(pattern.rows)
        seen = picture(pattern, rows)
        walls = {strands // 2, strands // 2 + 1} if strands % 2 else set()
        for (row, gap), slot in seen.items():
            below = {seen.get((row + 1, gap - 1)), seen.get((row + 1, gap + 1))}
            inside = 2 < gap < strands - 2 and not walls & {gap, gap - 1, gap + 1}
            if key != "double-diamond" and row < rows and inside and gap != strands // 2:
                assert slot in below, (strands, row, gap)


@pytest.mark.parametrize("strands", range(4, MAX_STRANDS + 1, 2))
def test_diamond_closes(strands):
    """Rings at equal distance, along and across together, from the heart between four knots."""
    half = strands // 2
    colours = all_colours("diamond", strands)
    pattern = make_family("diamond", strands, colours)
    ring = spread(colours, half)
    heart_row = half + 1
    for (row, gap), slot in picture(pattern, 2 * half + 1).items():
        distance = abs(row - heart_row) + abs(gap - half)
        assert slot == ring[(distance - 1) // 2], (row, gap)


@pytest.mark.parametrize("strands", range(5, MAX_STRANDS + 1, 2))
def test_diamond_of_odd_strands_closes_round_the_middle_strand(strands):
    half = strands // 2
    pattern = make_family("diamond", strands, all_colours("diamond", strands))
    # What is left of the middle strand is the left half of the diamond of one strand less.
    even = make_family("diamond", strands - 1, all_colours("diamond", strands - 1))
    rows = 4 * half
    left, of_even = picture(pattern, rows), picture(even, rows)
    for (row, gap), slot in of_even.items():
        if gap <= half:
            assert left[row, gap] == slot


def test_double_diamond_is_two_diamonds_side_by_side():
    for strands in range(8, MAX_STRANDS + 1, 4):
        one = make_family("diamond", strands // 2, all_colours("diamond", strands // 2))
        two = make_family("double-diamond", strands, all_colours("diamond", strands // 2))
        half = strands // 2
        single, double = drawn(one, strands), drawn(two, strands)
        assert [row[: half - 1] for row in double] == single
        assert [row[half:] for row in double] == single


@pytest.mark.parametrize("strands", all_strands("braid"))
def test_braid_takes_every_strand_from_edge_to_edge(strands):
    pattern = make_family("braid", strands, all_colours("braid", strands))
    assert all(knot.swaps for row in pattern.rows for knot in row)
    assert order_of_repeat(pattern) == strands
    seen = picture(pattern, 4 * strands)
    for (row, gap), slot in seen.items():
        inward = 1 if gap < strands // 2 else -1
        if gap not in (strands // 2, strands // 2 + 1):
            assert seen.get((row + 1, gap + inward), slot) == slot
        # What leaves the left edge comes back from the right one, N rows later.
        if gap == 1 and row <= 3 * strands:
            assert seen[row + strands, strands - 1] == slot


PICTURES = {
    ("hearts", 6): ["A A A", " B B ", "B B B", " B B ", "A B A", " A A "],
    ("hearts", 7): [
        "A A A ", " B B A", "B B B ", " B B A", "A B A ", " A A A",
    ],
    ("hearts", 12): [
        "A A A A A A",
        " A B A B A ",
        "A B B B B A",
        " B B B B B ",
        "A B B B B A",
        " A B B B A ",
        "A A B B A A",
        " A A B A A ",
        "A A A A A A",
        " A A A A A ",
    ],
    ("crosses", 6): [
        "A A A", " A A ", "B A B", " B B ", "A B A", " B B ", "B A B", " A A ",
    ],
    ("arrowheads", 6): ["A A A", " A A ", "A B A", " B B ", "B B B", " A A "],
    ("checks", 7): [
        "A A B ", " A B B", "A A B ", " B A A", "B B A ", " B A A",
    ],
    ("bars", 5): ["A A ", " A A", "A A ", " B B", "B B ", " B B"],
    ("ladder", 8): [
        "B A A B", " B A B ", "B B B B", " B B B ", "B A A B", " B A B ",
    ],
}  # fmt: skip


@pytest.mark.parametrize(("key", "strands"), PICTURES)
def test_motif_as_it_was_drawn_by_hand(key, strands):
    pattern = make_family(key, strands, "AB")
    assert drawn(pattern, len(pattern.rows)) == PICTURES[key, strands]


@pytest.mark.parametrize("key", ON_A_GROUND)
def test_motif_stands_on_strands_that_keep_their_places(key):
    for strands in all_strands(key):
        pattern = make_family(key, strands, "AB")
        assert not any(knot.swaps for row in pattern.rows for knot in row)
        assert set(pattern.slots[::2]) == {"A"}
        assert set(pattern.slots[1::2]) == {"B"}


@pytest.mark.parametrize("key", ["hearts", "crosses", "arrowheads"])
def test_motif_in_the_middle_is_the_same_on_both_sides(key):
    for strands in all_strands(key):
        pattern = make_family(key, strands, "AB")
        middle = strands // 2
        seen = picture(pattern, len(pattern.rows))
        for (row, gap), slot in seen.items():
            assert seen.get((row, 2 * middle - gap), slot) == slot
        rows_of_motif = {row for (row, gap), slot in seen.items() if slot == "B"}
        assert max(rows_of_motif) - min(rows_of_motif) + 1 == len(rows_of_motif)
        assert len(pattern.rows) - len(rows_of_motif) >= 2


def test_straight_stripes_stay_in_their_places():
    for strands in all_strands("straight-stripes"):
        pattern = make_family("straight-stripes", strands, "AB")
        assert permutation(pattern) == tuple(range(1, strands + 1))
        columns = {gap: slot for (_, gap), slot in picture(pattern, 2).items()}
        assert "".join(columns[gap] for gap in range(1, strands)) == spread("AB", strands - 1)


EVEN = [
    ("stripe", range(2, 61)),
    ("braid", range(3, 61)),
    ("chevron", range(4, 61, 2)),
    ("double-chevron", range(8, 61, 4)),
]


@pytest.mark.parametrize(("key", "numbers"), EVEN, ids=[key for key, _ in EVEN])
def test_thread_of_even_families_is_the_closed_form(key, numbers):
    """Where all strands are used evenly, each takes L ((2 + 3 pi) + 2) / sqrt 2 (N - 1) / (2 N),
    idle run 0: derived from knots like squares on a corner, independent of the diameter."""
    for strands in numbers:
        pattern = make_family(key, strands, all_colours(key, strands))
        gauge = Gauge(thread_diameter_mm=0.9, loop_ratio=1.5, idle_run=0)
        length_mm = 2 * strands * sqrt(2) * 0.9
        table = diagonal_table(pattern, length_mm - 0.001, gauge)
        assert table.rows == 2 * strands
        expected_mm = length_mm * ((2 + 3 * pi) + 2) / sqrt(2) * (strands - 1) / (2 * strands)
        for strand in table.strands:
            assert strand.knotted_mm == pytest.approx(expected_mm)


@pytest.mark.parametrize("key", ["stripe", "braid"])
def test_even_family_ties_as_often_as_it_is_base(key):
    for strand in count_strands(make_family(key, 9, "ABC"), 18):
        assert (strand.tied, strand.base, strand.idle) == (8, 8, 2)


def test_strand_that_never_ties_takes_the_colour_beside_it():
    """In a wave of six, strand 2 waits at the left edge below knots of one colour."""
    pattern = make_family("wave", 6, "ABCD")
    idle = [count.slot for count in count_strands(pattern, 10) if count.tied == 0]
    assert len(idle) == 2
    assert set(idle) <= {"A", "D"}


@pytest.mark.parametrize(
    ("order", "slots"),
    [
        ("A", "AAAAAA"),
        ("AB", "AAABBB"),
        ("ABCD", "AABBCD"),
        ("ABABAB", "ABABAB"),
        ("ZZZQZZ", "ZZZQZZ"),
    ],
)
def test_order_is_spread_over_neighbouring_places(order, slots):
    seen = picture(make_family("stripe", 6, order), 12)
    assert "".join(seen[row, 1] for row in range(1, 12, 2)) == slots


@pytest.mark.parametrize(
    ("key", "strands", "order", "field", "words"),
    [
        ("spiral", 6, "AB", "family", "There is no family 'spiral'. Choose one from the list."),
        ("\0\u202e", 6, "AB", "family", "There is no family '??'."),
        ("chevron", 3, "AB", "strands", "Chevron takes 4 to 60 strands, not 3."),
        ("stripe", 61, "AB", "strands", "2 to 60 strands, not 61"),
        ("stripe", -(10**9), "AB", "strands", "2 to 60 strands"),
        ("stripe", 6, "", "order", "Stripe in one direction takes 1 colour or more."),
        ("hearts", 6, "A", "order", "Hearts takes 2 colours or more."),
        ("chevron", 6, "ABCD", "order", "room for 3 colours; these are 4. Take 1 out"),
        ("stripe", 6, ["A", "b"], "order", "Colour 2: 'b' is not a letter from A to Z."),
        ("stripe", 6, ["A", "BC"], "order", "Colour 2: 'BC' is not a letter"),
        ("stripe", 6, ["Ä"], "order", "Colour 1: 'Ä' is not a letter"),
    ],
)
def test_family_that_cannot_be_made_says_what_and_where(key, strands, order, field, words):
    with pytest.raises(FamilyError) as caught:
        make_family(key, strands, order)
    assert words in str(caught.value)
    assert caught.value.field == field


def test_family_is_named_by_its_strands_or_by_the_maker():
    assert make_family("zigzag", 12, "AB").name == "Zigzag, 12 strands"
    assert make_family("zigzag", 12, "AB", name=" Tacking ").name == "Tacking"
    with pytest.raises(PatternError, match="80 is the most"):
        make_family("zigzag", 12, "AB", name="n" * 81)


def test_rows_have_the_knots_they_need():
    for key in KEYS:
        for strands in all_strands(key):
            for number, row in enumerate(make_family(key, strands, "AB").rows, start=1):
                assert len(row) == knots_in_row(strands, number)
