from random import Random

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, make_pattern, patterns
from sympy.combinatorics import Permutation

from patterns.knots import DiagonalPattern, Finish, Knot, PatternError, knots_in_row
from patterns.tying import (
    colour_order,
    count_strands,
    mirrored,
    order_after,
    order_of_repeat,
    permutation,
    tie_rows,
)

F, B, FB, BF = Knot.F, Knot.B, Knot.FB, Knot.BF
# An example of our own; what it comes to below was computed apart from the code under test, with
# sympy.combinatorics (Permutation) and by walking the rows.
SIX_STRANDS = make_pattern(["fb b bf", "f f", "f fb f", "b f"])


def sympy_repeat(pattern):
    """Reference: the repeat as a product of transpositions of positions, strands from 0."""
    product = Permutation(pattern.strands - 1)
    for row, knots in enumerate(pattern.rows):
        for place, knot in enumerate(knots):
            if knot in ("f", "b"):
                left = 2 * place + row % 2
                product = Permutation(left, left + 1, size=pattern.strands) * product
    return product


def walked_by_hand(pattern, rows):
    """Reference: a plain walk with a list of strands, knots spelled out one by one."""
    order = list(range(pattern.strands))
    counts = [[0, 0, 0] for _ in order]
    for row in range(rows):
        busy = set()
        for place, knot in enumerate(pattern.rows[row % len(pattern.rows)]):
            left = place * 2 + (1 if row % 2 else 0)
            one, two = order[left], order[left + 1]
            tying, base = {"f": (one, two), "fb": (one, two), "b": (two, one), "bf": (two, one)}[
                knot
            ]
            counts[tying][0] += 1
            counts[base][1] += 1
            busy |= {one, two}
            if knot == "f":
                order[left], order[left + 1] = base, tying
            if knot == "b":
                order[left], order[left + 1] = tying, base
        for strand in set(range(pattern.strands)) - busy:
            counts[strand][2] += 1
    return counts, order


def as_lists(counts):
    return [[count.tied, count.base, count.idle] for count in counts]


# --- the knots -------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("knot", "tying", "after"),
    # Terms of the trade (common practice, no source): f and b swap the strands, fb and bf return;
    # the first letter says whether the left (f) or the right (b) strand ties.
    [("f", 1, (2, 1)), ("b", 2, (2, 1)), ("fb", 1, (1, 2)), ("bf", 2, (1, 2))],
)
def test_knot_on_two_strands(knot, tying, after):
    pattern = DiagonalPattern("Two", ("A", "B"), ((Knot(knot),), ()))
    assert [(tied.tying, tied.base) for tied in next(tie_rows(pattern, 1))] == [(tying, 3 - tying)]
    assert order_after(pattern, 1) == after


@pytest.mark.parametrize(
    ("strands", "odd", "even"),
    [(2, 1, 0), (3, 1, 1), (6, 3, 2), (7, 3, 3), (8, 4, 3), (60, 30, 29)],
)
def test_knots_in_row_by_parity(strands, odd, even):
    # By counting: rows pair strands 1-2, 3-4, ... and 2-3, 4-5, ... in turn, so N even gives N/2
    # and N/2 - 1 knots, N odd (N - 1)/2 in every row.
    assert [knots_in_row(strands, row) for row in (1, 2, 3, 4)] == [odd, even, odd, even]


def test_tie_rows_pairs_and_idle_strand_of_odd_number():
    rows = list(tie_rows(all_same(5, "fb"), 2))
    assert [[knot.left for knot in row] for row in rows] == [[1, 3], [2, 4]]


# --- counts ----------------------------------------------------------------------------------


def test_count_strands_of_six_strand_example():
    # Computed by walking the rows of the example, apart from the code under test.
    counts = count_strands(SIX_STRANDS, 4)
    assert [count.tied for count in counts] == [2, 3, 2, 1, 1, 1]
    assert [count.base for count in counts] == [1, 1, 1, 2, 3, 2]
    assert [count.idle for count in counts] == [1, 0, 1, 1, 0, 1]


@pytest.mark.parametrize("strands", range(2, 21))
@pytest.mark.parametrize("knot", ["f", "b"])
def test_count_strands_all_forward_over_two_n_rows(strands, knot):
    # Derived: in 2N rows all alike every two strands meet twice, and either ties once; so each
    # strand ties N - 1 knots, is base in N - 1 and sits out the other 2 rows.
    counts = count_strands(all_same(strands, knot), 2 * strands)
    assert as_lists(counts) == [[strands - 1, strands - 1, 2]] * strands


def test_count_strands_is_not_one_repeat_scaled_up():
    once, four_times = count_strands(SIX_STRANDS, 4), count_strands(SIX_STRANDS, 16)
    assert [count.tied for count in four_times] != [4 * count.tied for count in once]


@given(patterns(), st.integers(0, 60))
def test_count_strands_equals_walk_by_hand(pattern, rows):
    counts, order = walked_by_hand(pattern, rows)
    assert as_lists(count_strands(pattern, rows)) == counts
    assert order_after(pattern, rows) == tuple(strand + 1 for strand in order)


@given(patterns(max_strands=60, max_double_rows=3), st.integers(0, 60))
def test_count_strands_tied_and_base_each_make_all_knots(pattern, rows):
    counts = count_strands(pattern, rows)
    knots = sum(knots_in_row(pattern.strands, row) for row in range(1, rows + 1))
    assert sum(count.tied for count in counts) == knots
    assert sum(count.base for count in counts) == knots


@given(patterns(max_strands=60, max_double_rows=3), st.integers(0, 60))
def test_count_strands_idle_rows_make_the_rows(pattern, rows):
    # N odd: one strand sits out a row. N even: none in odd rows, two in even ones, so an odd
    # number of rows has one less than rows.
    idle = sum(count.idle for count in count_strands(pattern, rows))
    unmatched = rows % 2 if pattern.strands % 2 == 0 else 0
    assert idle == rows - unmatched


@given(patterns(), st.integers(0, 60))
def test_count_strands_names_strands_and_slots_of_the_start(pattern, rows):
    counts = count_strands(pattern, rows)
    assert [count.strand for count in counts] == list(range(1, pattern.strands + 1))
    assert tuple(count.slot for count in counts) == pattern.slots


def test_count_strands_negative_rows():
    with pytest.raises(ValueError, match="negative"):
        count_strands(SIX_STRANDS, -1)


# --- repeats: orders computed with sympy.combinatorics (Permutation.order) as reference ------


def test_permutation_of_six_strand_example():
    assert permutation(SIX_STRANDS) == (4, 2, 1, 6, 5, 3)  # 3,1,0,5,4,2 counted from 0
    assert order_of_repeat(SIX_STRANDS) == 4


@pytest.mark.parametrize("strands", range(4, 21))
def test_order_all_swap(strands):
    pattern = all_same(strands)
    start = tuple(range(1, strands + 1))
    assert order_after(pattern, strands) == start[::-1]
    assert order_after(pattern, 2 * strands) == start
    two_rows = Permutation([strand - 1 for strand in order_after(pattern, 2)])
    assert two_rows.cycle_structure == {strands: 1}
    assert order_of_repeat(pattern) == strands


@pytest.mark.parametrize("strands", range(2, 21))
def test_order_no_swap(strands):
    assert order_of_repeat(all_same(strands, "fb")) == 1


@pytest.mark.parametrize(
    ("strands", "place", "order"),
    [(7, 0, 6), (7, 1, 12), (7, 2, 10), (8, 0, 7), (8, 1, 15), (8, 2, 15), (8, 3, 7)],
)
@pytest.mark.parametrize("unswapped", [FB, BF])
def test_order_one_no_swap_in_first_row(strands, place, order, unswapped):
    swapping = all_same(strands)
    first = list(swapping.rows[0])
    first[place] = unswapped
    pattern = DiagonalPattern("One", swapping.slots, (tuple(first), swapping.rows[1]))
    assert order_of_repeat(pattern) == order


@pytest.mark.parametrize(("slots", "order"), [("ABCCBA", 3), ("AABBCC", 6)])
def test_colour_order_all_swap(slots, order):
    pattern = all_same(6, slots=slots)
    assert colour_order(pattern) == order
    assert order_of_repeat(pattern) == 6


@given(patterns(max_strands=24))
def test_permutation_and_order_equal_sympy(pattern):
    reference = sympy_repeat(pattern)
    assert [strand - 1 for strand in permutation(pattern)] == reference.array_form
    assert order_of_repeat(pattern) == reference.order()


@given(patterns(max_strands=9))
def test_colour_order_equals_repeating_until_the_slots_return(pattern):
    repeats = 1
    while True:
        order = order_after(pattern, repeats * len(pattern.rows))
        if tuple(pattern.slots[strand - 1] for strand in order) == pattern.slots:
            break
        repeats += 1
    assert colour_order(pattern) == repeats


def random_patterns(count, seed):
    """2 to 20 strands, 2 to 16 rows; colours from few slots, so that they return early."""
    random = Random(seed)
    for _ in range(count):
        strands, rows = random.randint(2, 20), 2 * random.randint(1, 8)
        slots = random.choices(random.choice(["A", "AB", "ABC", "ABCDEFG"]), k=strands)
        knots = tuple(
            tuple(random.choices(tuple(Knot), k=knots_in_row(strands, row)))
            for row in range(1, rows + 1)
        )
        yield DiagonalPattern("Random", tuple(slots), knots)


def test_orders_of_1000_random_patterns_equal_sympy():
    # Order of the repeat: sympy.combinatorics. Colour repeat: brute force, the repeat applied
    # (by sympy's permutation) until every place has its first colour again.
    differing = 0
    for pattern in random_patterns(1000, seed=20):
        reference = sympy_repeat(pattern)
        assert [strand - 1 for strand in permutation(pattern)] == reference.array_form
        assert order_of_repeat(pattern) == reference.order()
        once = reference.array_form
        repeats, colours = 1, [pattern.slots[place] for place in once]
        while tuple(colours) != pattern.slots:
            colours = [colours[place] for place in once]
            repeats += 1
        assert colour_order(pattern) == repeats
        differing += repeats < int(reference.order())
    # The two numbers are not the same thing: in many patterns the colours are back first.
    assert differing > 200


# --- mirror ----------------------------------------------------------------------------------


@given(patterns(min_strands=2).filter(lambda p: p.strands % 2 == 0), st.integers(0, 60))
def test_mirrored_even_strands_mirrors_the_counts(pattern, rows):
    image = as_lists(count_strands(mirrored(pattern), rows))
    assert image == as_lists(count_strands(pattern, rows))[::-1]
    assert mirrored(mirrored(pattern)) == pattern


@given(patterns(min_strands=3).filter(lambda p: p.strands % 2), st.integers(0, 60))
def test_mirrored_odd_strands_mirrors_the_counts_from_row_two(pattern, rows):
    # The image of row 1 would leave the first strand out, so the image starts at row 2: its
    # strand N + 1 - p does what the strand at position p after row 1 does from row 2 on.
    first, more = as_lists(count_strands(pattern, 1)), as_lists(count_strands(pattern, rows + 1))
    from_row_two = [
        [after - before for after, before in zip(*pair, strict=True)]
        for pair in zip(more, first, strict=True)
    ]
    expected = [from_row_two[strand - 1] for strand in reversed(order_after(pattern, 1))]
    assert as_lists(count_strands(mirrored(pattern), rows)) == expected


@given(patterns(max_strands=7, max_double_rows=3))
def test_mirrored_mirrors_the_counts_of_a_true_repeat(pattern):
    # After a true repeat (an even number of rows) every strand is back, so where the walk
    # started does not matter and the counts are mirrored outright, N odd or even.
    rows = len(pattern.rows) * order_of_repeat(pattern)
    counts = as_lists(count_strands(pattern, rows))
    expected = [counts[strand - 1] for strand in order_after(pattern, pattern.strands % 2)]
    assert as_lists(count_strands(mirrored(pattern), rows)) == expected[::-1]


def test_mirrored_of_odd_strands_by_hand():
    pattern = make_pattern(["f fb", "b bf"], slots="ABCDE")
    image = mirrored(pattern)
    # Row 2 (b bf on strands 2-3, 4-5) from the right: fb f. Row 1 (f fb) follows: bf b.
    assert image.rows == ((FB, F), (BF, B))
    # After row 1 the strands stand B A C D E.
    assert image.slots == ("E", "D", "C", "A", "B")


# --- refused ---------------------------------------------------------------------------------

GOOD = {
    "name": "Good",
    "slots": ("A", "B", "C", "D"),
    "rows": ((F, F), (B,)),
    "finish": Finish.EXACT,
}


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"name": ""}, "no name"),
        ({"name": " \t\u200d "}, "no name"),
        ({"name": None}, "has to be text"),
        ({"name": "x" * 81}, "81 characters"),
        ({"name": "x" * 10_000}, "10000 characters"),
        ({"name": "a\x00b"}, "control character"),
        ({"name": "a\nb"}, "control character"),
        ({"name": "a\u202eb"}, "control character"),
        ({"name": "a\ud800b"}, "control character"),
        ({"name": "a\uffffb"}, "control character"),
        ({"slots": ()}, "2 to 60 strands"),
        ({"slots": ("A",)}, "2 to 60 strands"),
        ({"slots": ("A",) * 61}, "2 to 60 strands"),
        ({"slots": ("A", "B", "C", "d")}, "Strand 4: 'd'"),
        ({"slots": ("A", "B", "C", "AB")}, "Strand 4: 'AB'"),
        ({"slots": ("A", "B", "C", "")}, "Strand 4: ''"),
        ({"slots": ("A", "B", "C", None)}, "Strand 4"),
        ({"slots": ["A", "B", "C", "D"]}, "tuple"),
        ({"rows": ()}, "2 to 400 rows"),
        ({"rows": ((F, F), (B,)) * 201}, "2 to 400 rows"),
        ({"rows": ((F, F), (B,), (F, F))}, "even number of rows"),
        ({"rows": [(F, F), (B,)]}, "tuple"),
        ({"rows": ((F, F), [B])}, "Row 2 has to be"),
        ({"rows": ((F, F), ("f",))}, "Row 2, knot 1: 'f' is not a knot"),
        ({"finish": "exact"}, "no finish called"),
    ],
)
def test_pattern_refused(change, message):
    with pytest.raises(PatternError, match=message):
        DiagonalPattern(**(GOOD | change))


@pytest.mark.parametrize(
    ("rows", "row", "knot", "message"),
    [
        (
            ((F,), (B,)),
            1,
            2,
            "Row 1 has 1 knot; 4 strands need 2 there, because odd rows pair strands 1-2, 3-4.",
        ),
        (
            ((F, F), (B, B)),
            2,
            2,
            "Row 2 has 2 knots; 4 strands need 1 there, because even rows pair strands 2-3.",
        ),
        (((F, F), ()), 2, 1, "Row 2 has no knots; 4 strands need 1 there"),
    ],
)
def test_pattern_error_names_row_and_knot(rows, row, knot, message):
    with pytest.raises(PatternError) as caught:
        DiagonalPattern(**(GOOD | {"rows": rows}))
    assert (caught.value.row, caught.value.knot) == (row, knot)
    assert str(caught.value).startswith(message)


@pytest.mark.parametrize("name", ["  Ebbe & Flut  ", "שָׁלוֹם", "نوار", "x" * 80, "10 % <b>"])
def test_pattern_name_kept_without_blanks(name):
    assert DiagonalPattern(**(GOOD | {"name": name})).name == name.strip()


def test_pattern_technique():
    assert DiagonalPattern(**GOOD).technique == "diagonal"
