"""Even-use variants, held against a plain walk, brute force and a bound derived here."""

from itertools import product
from math import sqrt
from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pattern_factories import all_same, make_pattern, patterns

from patterns.even_use import (
    MOST_CHOICES_TRIED,
    MOST_EVALUATIONS,
    _Band,
    even_use,
    free_places,
    repeats_to_write_out,
)
from patterns.geometry import Gauge
from patterns.knots import DiagonalPattern, Finish, Knot, knots_in_row
from patterns.pattern_file import read_pattern, write_pattern
from patterns.variants import LEAST_SAVING_SHARE, find_variants

GAUGE = Gauge(thread_diameter_mm=1.0)
# (2 + 3 pi) d tied, 2 d as base, sqrt 2 d idle, written out once more.
TIED_MM, BASE_MM, IDLE_MM = 2 + 3 * 3.141592653589793, 2.0, sqrt(2)


def plain_walk(pattern, rows, start=None):
    """Reference: what shows at every knot, and the thread of each strand by its number."""
    hanging = list(start or range(pattern.strands))
    thread = [0.0] * pattern.strands
    shows = []
    for row in range(rows):
        resting = set(hanging)
        shown = []
        for place, knot in enumerate(pattern.rows[row % len(pattern.rows)]):
            left = 2 * place + row % 2
            one, two = hanging[left], hanging[left + 1]
            tying, base = (one, two) if knot.value in ("f", "fb") else (two, one)
            thread[tying] += TIED_MM
            thread[base] += BASE_MM
            shown.append(pattern.slots[tying])
            resting -= {one, two}
            if knot.value in ("f", "b"):
                hanging[left], hanging[left + 1] = two, one
        for strand in resting:
            thread[strand] += IDLE_MM
        shows.append(shown)
    return shows, thread


def free_by_walking(pattern):
    """Reference: knots between strands of one slot every time, until the slots are back."""
    hanging = list(pattern.slots)
    free = {
        (row, place): True for row, knots in enumerate(pattern.rows) for place in range(len(knots))
    }
    while True:
        for row, knots in enumerate(pattern.rows):
            for place, knot in enumerate(knots):
                left = 2 * place + row % 2
                free[row, place] &= hanging[left] == hanging[left + 1]
                if knot.value in ("f", "b"):
                    hanging[left], hanging[left + 1] = hanging[left + 1], hanging[left]
        if tuple(hanging) == pattern.slots:
            return [place for place, is_free in free.items() if is_free]


def random_pattern(random, strands, rows, slots):
    return DiagonalPattern(
        "Random",
        tuple(random.choice(slots) for _ in range(strands)),
        tuple(
            tuple(random.choice(tuple(Knot)) for _ in range(knots_in_row(strands, row)))
            for row in range(1, rows + 1)
        ),
    )


def tiny_patterns(count, seed):
    """Patterns with 1 to 5 free knots, so that all choices can be tried."""
    random = Random(seed)
    while count:
        pattern = random_pattern(random, random.randint(3, 7), 2 * random.randint(1, 3), "AB")
        if 1 <= len(free_by_walking(pattern)) <= 5:
            count -= 1
            yield pattern, random.randint(20, 110)


def shortest_longest(pattern, rows):
    """Brute force: the longest strand [mm] of the best of all choices, and its unevenness."""
    places = free_by_walking(pattern)
    found = []
    for choice in product(Knot, repeat=len(places)):
        knots = [list(row) for row in pattern.rows]
        for (row, place), knot in zip(places, choice, strict=True):
            knots[row][place] = knot
        tried = DiagonalPattern(pattern.name, pattern.slots, tuple(tuple(row) for row in knots))
        thread = plain_walk(tried, rows)[1]
        found.append((max(thread), sum(mm * mm for mm in thread)))
    least = min(longest for longest, _ in found)
    return least, min(squares for longest, squares in found if longest < least + 1e-6)


# --- what does not help ----------------------------------------------------------------------


@given(patterns(min_strands=3, max_strands=8), st.integers(1, 80), st.data())
def test_exchanging_strands_of_one_colour_at_the_start_only_renumbers(pattern, rows, data):
    one = data.draw(st.integers(0, pattern.strands - 1))
    same = [place for place, slot in enumerate(pattern.slots) if slot == pattern.slots[one]]
    two = data.draw(st.sampled_from(same))
    start = list(range(pattern.strands))
    start[one], start[two] = two, one
    shows, thread = plain_walk(pattern, rows)
    shows_then, thread_then = plain_walk(pattern, rows, start)
    assert shows_then == shows
    thread_then[one], thread_then[two] = thread_then[two], thread_then[one]
    assert thread_then == thread


# --- choosing at knots between strands of one colour -----------------------------------------


@given(patterns(max_strands=9))
def test_free_places_equal_a_plain_walk(pattern):
    assert list(free_places(pattern)) == sorted(free_by_walking(pattern))


def test_even_use_by_hand():
    # Two strands of one colour, fb in each odd row: strand 1 ties all. With f they tie by turns.
    pattern = make_pattern(["fb", ""], slots="AA")
    found = even_use(pattern, 8, GAUGE)
    assert found.tried_all
    assert found.pattern.rows[0][0] in (Knot.F, Knot.B)
    # Rows 1, 3, 5, 7: each ties twice, is base twice, and sits out four rows.
    assert plain_walk(found.pattern, 8)[1] == pytest.approx([2 * TIED_MM + 2 * 2 + 4 * IDLE_MM] * 2)
    assert found.bound_mm == pytest.approx(2 * TIED_MM + 4 + 4 * IDLE_MM)
    assert [(change.row, change.place, change.before) for change in found.changes] == [
        (1, 1, Knot.FB)
    ]


@given(patterns(max_strands=8, max_double_rows=3), st.integers(1, 60), st.randoms())
def test_looks_and_changes_without_a_walk_equal_a_walk(pattern, rows, random):
    # The search works a change out from two strands; here each is walked from the start instead.
    places = free_by_walking(pattern)
    band = _Band(pattern, rows, GAUGE)
    for place in random.choices(places, k=6) if places else []:
        knot = random.choice(tuple(Knot))
        expected = band.key_with(place, knot)
        band.put(place, knot)
        changed = tuple(tuple(row) for row in band.knots)
        thread = plain_walk(DiagonalPattern("Now", pattern.slots, changed), rows)[1]
        for longest, squares in (expected, band.key()):
            assert longest == pytest.approx(max(thread), abs=1e-5)
            assert squares == pytest.approx(sum(mm * mm for mm in thread), abs=1e-3)


def test_even_use_leaves_what_is_even_already():
    pattern = make_pattern(["f", ""], slots="AA")
    found = even_use(pattern, 8, GAUGE)
    assert found.pattern == pattern
    assert found.changes == ()


@pytest.mark.parametrize("seed", range(3))
def test_even_use_finds_the_optimum_where_all_choices_can_be_tried(seed):
    for pattern, rows in tiny_patterns(12, seed):
        found = even_use(pattern, rows, GAUGE)
        assert found.tried_all
        thread = plain_walk(found.pattern, rows)[1]
        longest, squares = shortest_longest(pattern, rows)
        assert max(thread) == pytest.approx(longest, abs=1e-5)
        assert sum(mm * mm for mm in thread) == pytest.approx(squares, rel=1e-9)
        assert found.bound_mm <= longest + 1e-6


def test_even_use_by_search_is_near_the_optimum():
    # So few looks that it must search; measured 1.1 % at the most, on 150 other patterns.
    for pattern, rows in tiny_patterns(30, seed=20):
        choices = 4 ** len(free_by_walking(pattern))
        found = even_use(pattern, rows, GAUGE, most_evaluations=min(choices - 1, 300))
        assert not found.tried_all
        longest, _ = shortest_longest(pattern, rows)
        assert longest - 1e-6 <= max(plain_walk(found.pattern, rows)[1]) <= 1.03 * longest


@settings(max_examples=60, deadline=None)
@given(patterns(max_strands=9, max_double_rows=3), st.integers(2, 90), st.integers(1, 3))
def test_even_use_shows_the_same_and_is_no_longer(pattern, rows, repeats):
    found = even_use(pattern, rows, GAUGE, repeats=repeats, most_evaluations=300)
    shows, thread = plain_walk(pattern, rows)
    shows_then, thread_then = plain_walk(found.pattern, rows)
    assert shows_then == shows
    assert max(thread_then) <= max(thread) + 1e-6
    assert found.bound_mm <= max(thread_then) + 1e-6
    # The choice is made for one length; every other length still looks the same.
    assert plain_walk(found.pattern, 200)[0] == plain_walk(pattern, 200)[0]
    changed = {(change.row - 1, change.place - 1) for change in found.changes}
    written_out = DiagonalPattern("Out", pattern.slots, pattern.rows * repeats)
    assert changed <= set(free_by_walking(written_out))


@given(patterns(max_strands=8, max_double_rows=3), st.integers(2, 80))
def test_no_choice_beats_the_bound(pattern, rows):
    # Derived here: colours stand the same whatever is chosen at the free knots, so the thread of
    # one colour's strands together is the same too; any choice's longest strand is over its mean.
    random = Random(3)
    bound_mm = even_use(pattern, rows, GAUGE, most_evaluations=1).bound_mm
    for _ in range(4):
        knots = [list(row) for row in pattern.rows]
        for row, place in free_by_walking(pattern):
            knots[row][place] = random.choice(tuple(Knot))
        tried = DiagonalPattern("Tried", pattern.slots, tuple(tuple(row) for row in knots))
        assert max(plain_walk(tried, rows)[1]) >= bound_mm - 1e-6


def test_the_same_input_gives_the_same_variants():
    pattern = random_pattern(Random(12), 12, 12, "AB")
    assert find_variants(pattern, 150, GAUGE, most_evaluations=900) == find_variants(
        pattern, 150, GAUGE, most_evaluations=900
    )


def test_looks_are_bounded_for_24_strands_of_60_rows():
    random = Random(24)
    for slots in ("A", "AB", "ABCD"):
        pattern = random_pattern(random, 24, 60, slots)
        found = find_variants(pattern, 150, GAUGE)
        # Two ways to write it out; at the end each changed knot may be looked at twice more.
        assert found.evaluations <= 2 * (MOST_EVALUATIONS + 2 * 12 * 400)
    assert MOST_CHOICES_TRIED <= MOST_EVALUATIONS


def test_repeats_to_write_out_by_hand():
    # Six strands A B C C B A all forward: colours are back after 3 repeats (computed with sympy).
    assert list(repeats_to_write_out(all_same(6, slots="ABCCBA"))) == [3, 1]
    # Back after 6 repeats; 6 x 80 rows would be 480, and 400 is the most, so 3 x 80.
    long = make_pattern(["f f f", "f f"] + ["fb fb fb", "fb fb"] * 39, slots="AABBCC")
    assert list(repeats_to_write_out(long)) == [3, 2, 1]


# --- the variants ----------------------------------------------------------------------------


@settings(max_examples=80, deadline=None)
@given(patterns(max_strands=10, max_double_rows=4), st.integers(40, 160))
def test_every_variant_is_what_it_says(pattern, length_mm):
    pattern = DiagonalPattern(pattern.name, pattern.slots, pattern.rows)
    found = find_variants(pattern, length_mm, GAUGE, most_evaluations=200)
    shows, thread = plain_walk(pattern, found.rows)
    assert found.longest.knotted_mm == pytest.approx(max(thread))
    for variant in found.variants:
        shows_then, thread_then = plain_walk(variant.pattern, found.rows)
        assert variant.longest.knotted_mm == pytest.approx(max(thread_then))
        assert variant.shortest.knotted_mm == pytest.approx(min(thread_then))
        assert 1 - max(thread_then) / max(thread) >= LEAST_SAVING_SHARE - 1e-9
        assert (variant.picture == "same") == (shows_then == shows)
        if variant.kind == "shifted":
            far = plain_walk(pattern, found.rows + 400)[0]
            assert any(far[k : k + found.rows] == shows_then for k in range(2, 400, 2))
        # An ordinary pattern: its file gives it back.
        assert read_pattern(write_pattern(variant.pattern)) == variant.pattern
    pictures = [variant.picture != "same" for variant in found.variants]
    assert pictures == sorted(pictures)


def test_shifted_variant_takes_the_best_even_row():
    # Brute force over every even row to begin at, until all strands are back.
    random = Random(11)
    seen = 0
    for _ in range(40):
        pattern = random_pattern(random, 6, 8, "ABCDEF")
        back = next(k for k in range(8, 10_000, 8) if _hanging(pattern, k) == list(range(6)))
        found = find_variants(pattern, 60, GAUGE)
        taken = [[0.0] * 6]
        for row in _thread_row_by_row(pattern, back + found.rows):
            taken.append([had + more for had, more in zip(taken[-1], row, strict=True)])
        best = min(
            max(b - a for a, b in zip(taken[k], taken[k + found.rows], strict=True))
            for k in range(0, back, 2)
        )
        shifted = [variant for variant in found.variants if variant.kind == "shifted"]
        if shifted:
            seen += 1
            assert shifted[0].longest.knotted_mm == pytest.approx(best)
        else:
            assert best > 0.99 * max(taken[found.rows]) - 1e-6
    assert seen > 5


def _thread_row_by_row(pattern, rows):
    """Reference: what each strand takes in each row."""
    hanging = list(range(pattern.strands))
    for row in range(rows):
        takes = [IDLE_MM] * pattern.strands
        for place, knot in enumerate(pattern.rows[row % len(pattern.rows)]):
            left = 2 * place + row % 2
            ties = (TIED_MM, BASE_MM) if knot.value in ("f", "fb") else (BASE_MM, TIED_MM)
            takes[hanging[left]], takes[hanging[left + 1]] = ties
            if knot.value in ("f", "b"):
                hanging[left], hanging[left + 1] = hanging[left + 1], hanging[left]
        yield takes


def _hanging(pattern, rows):
    hanging = list(range(pattern.strands))
    for row in range(rows):
        for place, knot in enumerate(pattern.rows[row % len(pattern.rows)]):
            left = 2 * place + row % 2
            if knot.value in ("f", "b"):
                hanging[left], hanging[left + 1] = hanging[left + 1], hanging[left]
    return hanging


@pytest.mark.parametrize(
    # In each, one strand right of the middle ties in every row, and its counterpart in none.
    ("rows", "slots"),
    [(["fb fb", "bf"], "ABBA"), (["fb bf", "bf fb"], "ABCBA")],
)
def test_mirrored_variant_shows_the_mirror_image_by_turns(rows, slots):
    pattern = make_pattern(rows, slots=slots)
    found = find_variants(pattern, 200, GAUGE)
    variant = next(variant for variant in found.variants if variant.kind == "mirrored")
    assert variant.picture == "mirrored"
    assert len(variant.pattern.rows) == 4
    shows = plain_walk(variant.pattern, 8)[0]
    first, second, third, fourth = shows[:4]
    assert [first, second] == plain_walk(pattern, 2)[0]
    # With an odd number of strands the image begins with row 2, which then stands on the left.
    image = [first, second] if len(slots) % 2 == 0 else [second, first]
    assert [third, fourth] == [row[::-1] for row in image]
    assert shows[4:] == shows[:4]
    # The greedy strand and its counterpart take turns: each ties in half the rows.
    thread = plain_walk(variant.pattern, 40)[1]
    assert max(thread) == pytest.approx(20 * TIED_MM + 20 * BASE_MM)


def test_mirrored_is_not_offered_where_colours_would_stand_elsewhere():
    # A B B C has no mirror image in its own colours.
    found = find_variants(make_pattern(["fb fb", "bf"], slots="ABBC"), 200, GAUGE)
    assert [variant for variant in found.variants if variant.kind == "mirrored"] == []


def test_whole_repeats_keep_their_rows():
    # Written out, the repeat of 6 x 2 rows would end a bracelet elsewhere: 120 mm are 85 rows,
    # nearest 86 by repeats of two and 84 by repeats of twelve.
    pattern = all_same(6, slots="AABBCC")
    pattern = DiagonalPattern(pattern.name, pattern.slots, pattern.rows, Finish.NEAREST)
    found = find_variants(pattern, 120, GAUGE)
    assert found.rows == 86
    assert all(
        len(variant.pattern.rows) == 2 for variant in found.variants if variant.kind == "even"
    )
    for variant in found.variants:
        assert variant.pattern.finish is Finish.NEAREST


def test_as_many_repeats_are_written_out_as_end_on_the_same_row():
    # 127 mm are 90 rows: whole repeats of 2 and of 6 rows, not of 12, the colour repeat.
    pattern = all_same(6, slots="AABBCC")
    pattern = DiagonalPattern(pattern.name, pattern.slots, pattern.rows, Finish.NEAREST)
    three, six = (
        len(free_by_walking(DiagonalPattern("Out", pattern.slots, pattern.rows * repeats)))
        for repeats in (3, 6)
    )
    assert three < six
    assert find_variants(pattern, 127, GAUGE).free_knots == three
    # 118.5 mm are 83.8, so 84 rows by repeats of 2 and of 12.
    assert find_variants(pattern, 118.5, GAUGE).free_knots == six


def test_the_same_picture_comes_first_even_where_another_saves_more():
    pattern = make_pattern(["f f", "f", "fb f", "b", "f f", "bf"], slots="BABC")
    even, shifted = find_variants(pattern, 60, GAUGE).variants
    assert (even.kind, even.picture) == ("even", "same")
    assert (shifted.kind, shifted.picture) == ("shifted", "shifted")
    assert shifted.saving_share > even.saving_share


def test_nothing_to_choose_gives_no_variant():
    found = find_variants(all_same(2, slots="AB"), 100, GAUGE)
    assert found.free_knots == 0
    assert [variant for variant in found.variants if variant.kind == "even"] == []
