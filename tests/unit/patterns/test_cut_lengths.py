from fractions import Fraction
from math import ceil, floor

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same

from inventory.measures import format_length, parse_length
from patterns.cut_lengths import CutRule, Ending, EndingError, pieces_for
from patterns.geometry import Gauge, StrandLength, StrandTable
from patterns.techniques import strand_table

PLAITED = {
    "name": "Plaited",
    "start": "straight",
    "start_tie_mm": 80,
    "end_tie_mm": 80,
    "take_up": 1.25,
    "closing_knot_mm": 30,
    "grip_mm": 90,
    "fold_loop_mm": 0,
    "single_start_mm": 0,
    "sliding_piece_mm": 0,
}
FOLDED = PLAITED | {"start": "folded", "start_tie_mm": 0, "fold_loop_mm": 50, "single_start_mm": 60}
METRIC = CutRule(0.1, 10)
HALF_INCH_MM = Fraction(127, 10)  # an inch is 25.4 mm exactly
INCHES = CutRule(0.1, HALF_INCH_MM)


def table_of(*strands):
    """Strands as (slot, knotted_mm); the counts play no part in cutting."""
    return StrandTable(
        rows=118,
        strands=tuple(
            StrandLength(number, slot, 0, 0, 0, float(knotted_mm))
            for number, (slot, knotted_mm) in enumerate(strands, start=1)
        ),
        band_length_mm=150,
        band_width_mm=8,
    )


tables = st.lists(
    st.tuples(st.sampled_from("ABC"), st.floats(100, 3000)), min_size=2, max_size=14
).map(lambda strands: table_of(*strands))
endings = st.builds(
    Ending,
    name=st.just("Any"),
    start=st.sampled_from(["straight", "folded"]),
    start_tie_mm=st.integers(0, 300),
    end_tie_mm=st.integers(0, 300),
    take_up=st.sampled_from([1, 1.0, 1.1, 1.25, 1.3]),
    closing_knot_mm=st.integers(0, 60),
    grip_mm=st.integers(0, 120),
    fold_loop_mm=st.integers(0, 101),
    single_start_mm=st.integers(0, 100),
    sliding_piece_mm=st.sampled_from([0, 0, 395, 400]),
)
rules = st.builds(
    CutRule,
    safety_share=st.sampled_from([0.0, 0.05, 0.1, 0.15, 1 / 3]),
    rounding_step_mm=st.sampled_from([1, 5, 10, 25, HALF_INCH_MM]),
)


def parts_mm(piece, ending, rule):
    """What the piece is made of, exactly; the fold's halves apart."""
    share = Fraction(str(rule.safety_share))
    knotted = [Fraction(part) * (1 + share) for part in piece.knotted_mm]
    if len(piece.strands) == 2:
        half = ending.end_allowance_mm + Fraction(ending.fold_loop_mm, 2)
        return [part + half for part in knotted]
    return [sum(knotted, Fraction(0)) + piece.ends_mm]


# --- worked examples with their arithmetic ---------------------------------------------------


def test_pieces_for_straight_ties_by_hand():
    # End: 80 x 1.25 + 30 + 90 = 220 mm, twice 440. Strand 1: 626.498 x 1.1 + 440 = 1129.1 -> 1130.
    table = strand_table(all_same(6), 150, Gauge(0.9))
    first = pieces_for(table, Ending(**PLAITED), METRIC)[0]
    assert (first.slot, first.strands, first.cut_mm, first.fold_mm) == ("A", (1,), 1130, None)
    assert first.ends_mm == 440
    assert first.knotted_mm == (pytest.approx(626.498, abs=1e-3),)


def test_pieces_for_folded_start_by_hand():
    # End 220 mm, half the loop 25. 600 x 1.1 + 245 = 905; 500 x 1.1 + 245 = 795; together
    # 1700, a multiple of 10 already: no slack, so the fold is at 905.
    (piece,) = pieces_for(table_of(("A", 500), ("A", 600)), Ending(**FOLDED), METRIC)
    assert (piece.strands, piece.cut_mm, piece.fold_mm) == ((2, 1), 1700, 905)
    assert piece.knotted_mm == (600, 500)
    assert piece.ends_mm == 2 * 220 + 50


def test_pieces_for_fold_on_the_step_when_one_fits():
    # 602 x 1.1 + 245 = 907.2 -> 908; 502 x 1.1 + 245 = 797.2 -> 798; 1706 -> 1710: the fold may
    # lie at 908 to 912, and 910 is a mark of the ruler.
    (piece,) = pieces_for(table_of(("A", 602), ("A", 502)), Ending(**FOLDED), METRIC)
    assert (piece.cut_mm, piece.fold_mm) == (1710, 910)


@pytest.mark.parametrize(
    ("longer", "shorter", "fold_mm"),
    # Safety 0, end 220, half the loop 25, cut 1700: 901 + 795 may fold at 901 to 905, and 905
    # is a multiple of 5; 902 + 796 at 902 to 904, where the middle is all there is.
    [(656, 550, 905), (657, 551, 903)],
)
def test_pieces_for_fold_between_marks(longer, shorter, fold_mm):
    table = table_of(("A", longer), ("A", shorter))
    (piece,) = pieces_for(table, Ending(**FOLDED), CutRule(0, 10))
    assert (piece.cut_mm, piece.fold_mm) == (1700, fold_mm)


def test_pieces_for_fold_in_inches():
    # 12.7 mm steps. 400 + 245 = 645 and 390 + 245 = 635: 1280 -> 101 half inches = 1282.7 ->
    # 1283. The fold may lie at 645 to 648; 51 half inches are 647.7 mm.
    (piece,) = pieces_for(
        table_of(("A", 400), ("A", 390)), Ending(**FOLDED), CutRule(0, HALF_INCH_MM)
    )
    assert (piece.cut_mm, piece.fold_mm) == (1283, 648)


def test_pieces_for_fold_in_inches_takes_no_half_inch_more_than_needed():
    # No ends but half a loop of 25: 133.3 + 25 = 158.3 twice is 316.6 -> 25 half inches = 317.5
    # -> 318; a fold at 159 leaves both enough, though two halves of 159 are over 317.5.
    short = Ending(**(FOLDED | {"end_tie_mm": 0, "closing_knot_mm": 0, "grip_mm": 0}))
    table = table_of(("A", 133.3), ("A", 133.3))
    (piece,) = pieces_for(table, short, CutRule(0, HALF_INCH_MM))
    assert (piece.cut_mm, piece.fold_mm) == (318, 159)


@pytest.mark.parametrize(
    ("longer", "shorter", "step_mm", "cut_mm", "fold_mm"),
    # Safety 0, end 220, half the loop 25. The coarser mark wins over one nearer the middle:
    [
        (651, 539, 25, 1700, 900),  # 896 to 916: 900 is on the step, 905 would be nearer
        (607, 166, HALF_INCH_MM, 1270, 857),  # 852 to 859: 135 quarter inches are 857.25 mm
    ],
)
def test_pieces_for_fold_prefers_the_coarser_mark(longer, shorter, step_mm, cut_mm, fold_mm):
    table = table_of(("A", longer), ("A", shorter))
    (piece,) = pieces_for(table, Ending(**FOLDED), CutRule(0, step_mm))
    assert (piece.cut_mm, piece.fold_mm) == (cut_mm, fold_mm)


def test_pieces_for_uneven_strands_pair_longest_with_shortest():
    table = table_of(("A", 500), ("A", 900), ("B", 700), ("A", 600), ("A", 800), ("B", 650))
    pieces = pieces_for(table, Ending(**FOLDED), METRIC)
    assert [piece.strands for piece in pieces] == [(2, 1), (3, 6), (5, 4)]


def test_pieces_for_odd_strand_of_a_slot_is_cut_alone():
    # Three of slot A: the longest alone, 900 x 1.1 + 60 + 220 = 1270.
    table = table_of(("A", 500), ("A", 900), ("A", 600))
    pieces = pieces_for(table, Ending(**FOLDED), METRIC)
    assert [piece.strands for piece in pieces] == [(3, 1), (2,)]
    assert (pieces[1].cut_mm, pieces[1].fold_mm, pieces[1].ends_mm) == (1270, None, 280)


def test_pieces_for_sliding_closure_adds_a_piece_of_strand_one():
    ending = Ending(**(PLAITED | {"sliding_piece_mm": 395}))
    pieces = pieces_for(table_of(("C", 500), ("A", 500)), ending, METRIC)
    assert len(pieces) == 3
    sliding = pieces[-1]
    assert (sliding.slot, sliding.strands, sliding.cut_mm, sliding.role) == (
        "C",
        (),
        400,
        "sliding",
    )
    assert not any(piece.role == "sliding" for piece in pieces[:-1])


@pytest.mark.parametrize(
    ("knotted_mm", "rule", "cut_mm"),
    [
        (900, CutRule(0.1, 10), 990),  # in binary 900 x 1.1 is a hair over 990
        (900.01, CutRule(0.1, 10), 1000),
        (635, CutRule(0, HALF_INCH_MM), 635),  # 50 half inches exactly
        (635.1, CutRule(0, HALF_INCH_MM), 648),  # 51 half inches are 647.7 mm
        (635.1, CutRule(0, 1), 636),
    ],
)
def test_pieces_for_rounds_up_to_the_step(knotted_mm, rule, cut_mm):
    bare = Ending(
        **(PLAITED | dict.fromkeys(("start_tie_mm", "end_tie_mm", "closing_knot_mm", "grip_mm"), 0))
    )
    assert pieces_for(table_of(("A", knotted_mm)), bare, rule)[0].cut_mm == cut_mm


@pytest.mark.parametrize(
    ("tie_mm", "take_up", "allowance_mm"), [(110, 1.1, 241), (70, 1.25, 208), (80, 1, 200)]
)
def test_ending_allowance_is_whole_millimetres(tie_mm, take_up, allowance_mm):
    # tie x take-up + 30 + 90: 121 (in binary a hair over), 87.5 -> 88, 80.
    ending = Ending(**(PLAITED | {"end_tie_mm": tie_mm, "take_up": take_up}))
    assert ending.end_allowance_mm == allowance_mm


# --- invariants ------------------------------------------------------------------------------


@given(tables, endings, rules)
def test_pieces_for_never_short_and_at_most_a_step_long(table, ending, rule):
    for piece in pieces_for(table, ending, rule):
        parts = parts_mm(piece, ending, rule)
        # A fold is measured in whole millimetres, so each of its halves may gain one.
        rounding = 2 if piece.fold_mm is not None else 0
        if isinstance(rule.rounding_step_mm, Fraction):
            rounding += 1
        assert piece.cut_mm >= sum(parts)
        assert piece.cut_mm < sum(parts) + rule.rounding_step_mm + rounding
        if not isinstance(rule.rounding_step_mm, Fraction):
            assert piece.cut_mm % rule.rounding_step_mm == 0


@given(tables, endings, rules)
def test_pieces_for_gains_a_step_only_where_no_fold_fits(table, ending, rule):
    for piece in pieces_for(table, ending, rule):
        first, *second = parts_mm(piece, ending, rule)
        if not second:
            continue
        tight_mm = rule.round_up_mm(first + second[0])
        if piece.cut_mm > tight_mm:
            # No whole mark from the first half's end on to the second half's.
            assert ceil(first) > floor(tight_mm - second[0])


@given(tables, endings, rules)
def test_pieces_for_cuts_each_strand_once_from_its_slot(table, ending, rule):
    pieces = pieces_for(table, ending, rule)
    slots = {strand.strand: strand.slot for strand in table.strands}
    cut = [strand for piece in pieces for strand in piece.strands]
    assert sorted(cut) == sorted(slots)
    assert all(slots[strand] == piece.slot for piece in pieces for strand in piece.strands)
    leftmost = [min(piece.strands) for piece in pieces if piece.strands]
    assert leftmost == sorted(leftmost)
    assert sum(piece.role == "sliding" for piece in pieces) == (ending.sliding_piece_mm > 0)


@given(tables, endings, rules)
def test_pieces_for_folds_leave_both_strands_enough(table, ending, rule):
    for piece in pieces_for(table, ending, rule):
        if len(piece.strands) != 2:
            assert piece.fold_mm is None
            continue
        first, second = parts_mm(piece, ending, rule)
        assert piece.knotted_mm[0] >= piece.knotted_mm[1]
        assert 0 <= piece.fold_mm <= piece.cut_mm
        assert piece.fold_mm >= first
        assert piece.cut_mm - piece.fold_mm >= second


@given(tables, endings, rules)
def test_pieces_for_folds_all_it_can(table, ending, rule):
    pieces = [piece for piece in pieces_for(table, ending, rule) if piece.role != "sliding"]
    single_slots = [piece.slot for piece in pieces if len(piece.strands) == 1]
    if ending.start == "straight":
        assert len(single_slots) == len(table.strands)
    else:
        odd = [s for s in "ABC" if sum(strand.slot == s for strand in table.strands) % 2]
        assert sorted(single_slots) == odd


# --- refused ---------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "change",
    [
        {"name": ""},
        {"name": "  "},
        {"name": None},
        {"start": "sideways"},
        {"start": None},
        {"take_up": 0.9},
        {"take_up": 3.1},
        {"take_up": float("nan")},
        {"take_up": "1.2"},
        {"take_up": True},
    ]
    + [
        {field: bad}
        for field in PLAITED
        if field.endswith("_mm")
        for bad in (-1, 3001, 1.5, True, "80", None)
    ],
)
def test_ending_refused(change):
    with pytest.raises(EndingError):
        Ending(**(PLAITED | change))


@pytest.mark.parametrize(
    ("share", "step"),
    [(bad, 10) for bad in (-0.1, 1.1, float("nan"), float("inf"), "0.1", None, True)]
    + [(0.1, bad) for bad in (0, -5, 201, 0.5, Fraction(1, 2), "10", None, True)],
)
def test_cut_rule_refused(share, step):
    with pytest.raises(EndingError):
        CutRule(share, step)


@given(st.integers(1, 10_000_000), st.sampled_from([Fraction(127, 10), Fraction(254, 10)]))
def test_inch_steps_read_as_whole_steps_and_never_fall_short(tenths: int, step: Fraction) -> None:
    """1 in = 25.4 mm exactly (international yard and pound agreement of 1959)."""
    length_mm = Fraction(tenths, 1000)
    rounded_mm = CutRule(safety_share=0.1, rounding_step_mm=step).round_up_mm(length_mm)
    assert length_mm <= rounded_mm < length_mm + 2 * step
    steps = Fraction(parse_length(format_length(rounded_mm, "in"))) / step
    assert steps.denominator == 1
