from itertools import pairwise

import pytest
from pattern_factories import all_same

from patterns.cut_lengths import CutRule, pieces_for
from patterns.defaults import BUTTONED_ENDINGS, DEFAULT_ENDINGS, DEFAULT_SIZES
from patterns.geometry import Gauge
from patterns.techniques import strand_table

ENDINGS = {ending.name: ending for ending in DEFAULT_ENDINGS}
ONE_FROM_95 = 1.645  # standard deviations, normal distribution


def test_default_sizes_cover_wrists():
    # p5 of six-year-old girls: 124.8 +- 9.3 mm, Oeztuerk et al., J. Clin. Res. Pediatr.
    # Endocrinol. 9 (2017) 329-336. p95 of men: 191 mm, ANSUR II (NATICK/TR-15/007, 2014;
    # soldiers aged 17 to 58).
    assert DEFAULT_SIZES[0].wrist_min_mm <= 124.8 - ONE_FROM_95 * 9.3
    assert DEFAULT_SIZES[-1].wrist_max_mm >= 191


def test_default_sizes_leave_no_gap():
    for smaller, larger in pairwise(DEFAULT_SIZES):
        assert smaller.wrist_max_mm == larger.wrist_min_mm
    assert len({size.name for size in DEFAULT_SIZES}) == 6


def test_default_sizes_for_children():
    # 16-to-17-year-olds fit adult sizes; six-year-olds (mean 124.8 and 130.0 mm, same source)
    # must fall into a size that carries the cautions.
    assert [size.is_child for size in DEFAULT_SIZES] == [True, True] + [False] * 4
    for mean_mm in (124.8, 130.0):
        (size,) = (s for s in DEFAULT_SIZES if s.wrist_min_mm <= mean_mm < s.wrist_max_mm)
        assert size.is_child


def test_default_sizes_middle_wrists():
    # ANSUR II medians: women 154 mm, men 176 mm.
    def named(wrist_mm):
        return next(s.name for s in DEFAULT_SIZES if s.wrist_min_mm <= wrist_mm < s.wrist_max_mm)

    assert (named(154), named(176)) == ("Medium", "Large")


@pytest.mark.parametrize("size", DEFAULT_SIZES, ids=lambda size: size.name)
@pytest.mark.parametrize("ending", DEFAULT_ENDINGS, ids=lambda ending: ending.name)
def test_default_knotted_length(size, ending):
    # Common practice, no source: wrist less 10 to 25 mm for ties, wrist and 5 to 15 mm for a
    # loop and button. A range of 15 mm cannot keep to 5 to 15: we go up to 20, never below 5.
    knotted_mm = size.knotted_length_for(ending.name)
    if ending.name in BUTTONED_ENDINGS:
        assert knotted_mm - size.wrist_max_mm == 5
        assert knotted_mm - size.wrist_min_mm <= 20
    else:
        assert size.wrist_min_mm - knotted_mm == 10
        assert size.wrist_max_mm - knotted_mm <= 25


def test_default_knotted_length_unknown_ending():
    with pytest.raises(KeyError):
        DEFAULT_SIZES[0].knotted_length_for("Glue")


def test_default_endings_names():
    assert list(ENDINGS) == [
        "Loose ties",
        "Plaited ties",
        "Folded start, plaited end",
        "Loop and button",
        "Sliding closure",
    ]


@pytest.mark.parametrize("ending", DEFAULT_ENDINGS, ids=lambda ending: ending.name)
def test_default_endings_within_common_practice(ending):
    # Common practice, no source: about 30 mm of closing knot, a grip of 80 to 100 mm, a loop of
    # 40 to 60 mm, a three-part plait takes up 1.2 to 1.3 times its length.
    assert ending.closing_knot_mm == 30
    assert 80 <= ending.grip_mm <= 100
    if ending.start == "folded":
        assert 40 <= ending.fold_loop_mm <= 60
    if "plaited" in ending.name.lower():
        assert 1.2 <= ending.take_up <= 1.3
    assert (ending.sliding_piece_mm > 0) == (ending.name == "Sliding closure")


@pytest.mark.parametrize("name", ["Loose ties", "Plaited ties", "Folded start, plaited end"])
def test_default_endings_cost_with_safety(name):
    # Common practice, no source: ends and safety together are 0.3 to 0.5 m a strand.
    table = strand_table(all_same(6, slots="AABBCC"), 150, Gauge(0.9))
    pieces = pieces_for(table, ENDINGS[name], CutRule(0.1, 10))
    extra_mm = sum(piece.cut_mm - sum(piece.knotted_mm) for piece in pieces) / 6
    assert 300 <= extra_mm <= 500


def test_default_sliding_closure_has_longer_ties():
    others = [e.end_tie_mm for e in DEFAULT_ENDINGS if e.name != "Sliding closure"]
    assert ENDINGS["Sliding closure"].end_tie_mm > max(others)
