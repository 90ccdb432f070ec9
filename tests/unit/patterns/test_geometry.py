from math import inf, nan, pi, sqrt
from statistics import mean

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import DIAGONAL_FINISHES, all_same, make_pattern, patterns

from patterns.geometry import (
    MAX_ROWS,
    Gauge,
    GaugeError,
    LengthError,
    band_length_mm,
    band_width_mm,
    diagonal_table,
    rows_for,
)
from patterns.knots import DiagonalPattern, Finish

gauges = st.builds(
    Gauge,
    thread_diameter_mm=st.floats(0.3, 3),
    loop_ratio=st.floats(1, 2),
    idle_run=st.just(sqrt(2)),
)
# d such that 118 and 236 rows are 150 mm exactly; the published means do not depend on d.
EXACT_DIAMETERS_MM = (150 / (118 * sqrt(2)), 150 / (236 * sqrt(2)))


def with_finish(pattern, finish):
    return DiagonalPattern(pattern.name, pattern.slots, pattern.rows, finish)


# --- thread of one knot: derived, see the Notes of patterns/geometry.py; checked with sympy ---


@pytest.mark.parametrize("diameter_mm", [0.5, 0.9, 1.0, 2.0])
def test_gauge_thread_of_a_knot(diameter_mm):
    gauge = Gauge(diameter_mm)
    assert gauge.knotting_mm == pytest.approx(11.424778 * diameter_mm, abs=1e-6)
    assert gauge.base_mm == pytest.approx(2 * diameter_mm)
    assert gauge.row_mm == pytest.approx(sqrt(2) * diameter_mm)


def test_gauge_loops_as_a_helix_are_longer():
    loops_mm = Gauge(1.0).knotting_mm - 2
    helix_mm = 2 * sqrt((loops_mm / 2) ** 2 + 1)
    assert helix_mm / loops_mm == pytest.approx(1.022, abs=5e-4)


def test_gauge_rigid_thread():
    assert Gauge(1.0, loop_ratio=2).knotting_mm == pytest.approx(14.566, abs=5e-4)


@pytest.mark.parametrize(
    ("idle_run", "diameters"), [(sqrt(2), 1.414214), (pi / 2, 1.570796), (2, 2.0), (0, 0.0)]
)
def test_gauge_idle_row(idle_run, diameters):
    # Straight chord, tangent arc, square corner; 0 is the simpler published form.
    assert Gauge(0.9, idle_run=idle_run).idle_mm == pytest.approx(diameters * 0.9, abs=1e-6)
    assert Gauge().idle_run == pytest.approx(1.414214, abs=1e-6)


def test_gauge_knot_at_one_millimetre():
    # Common practice, no source: about 11.4 mm of the knotting strand and 2 mm of the base.
    assert Gauge(1.0).knotting_mm == pytest.approx(11.4, abs=0.05)
    assert Gauge(1.0).base_mm == pytest.approx(2)


def test_gauge_default_diameter_is_above_peirce():
    # F. T. Peirce, The Geometry of Cloth Structure, J. Text. Inst. 28 (1937) T45 (from memory):
    # d = 1 / (28 sqrt Ne) inch = 0.0373294 sqrt(tex) mm, a lower bound. Floss of at most 2 g for
    # 8 m: common practice, no source.
    heaviest_floss_tex = 2.0 / 8 * 1000
    assert 0.0373294 * sqrt(heaviest_floss_tex) == pytest.approx(0.59, abs=0.005)
    assert Gauge().thread_diameter_mm > 0.0373294 * sqrt(heaviest_floss_tex)


@pytest.mark.parametrize(
    "values",
    [
        {"thread_diameter_mm": bad}
        for bad in (0, -1, 0.09, 10.1, 1e9, nan, inf, -inf, None, "0.9", True)
    ]
    + [{"loop_ratio": bad} for bad in (0, 0.4, 5.1, nan, inf, None, "1.5", True)]
    + [{"idle_run": bad} for bad in (-0.1, 10.1, nan, inf, None, "0", False)],
)
def test_gauge_refused(values):
    with pytest.raises(GaugeError, match=r"has to be (a number|from)"):
        Gauge(**values)


# --- rows and sizes of the band --------------------------------------------------------------


def test_rows_for_150_mm():
    # Common practice, no source: 150 mm at 0.9 mm is 118 rows.
    assert rows_for(all_same(6), 150, Gauge(0.9)) == 118


@pytest.mark.parametrize("rows", [4, 5, 117, 118, 119, 1000, 1234])
@pytest.mark.parametrize("diameter_mm", [0.3, 0.7, 0.9, 1.1])
def test_rows_for_exact_multiple_takes_no_row_more(rows, diameter_mm):
    gauge = Gauge(diameter_mm)
    assert rows_for(all_same(6), rows * gauge.row_mm, gauge) == rows
    assert rows_for(all_same(6), rows * gauge.row_mm + 0.01, gauge) == rows + 1


@pytest.mark.parametrize(
    ("finish", "rows_wanted", "expected"),
    # A repeat of 10 rows; the arithmetic: repeats = rows / 10, rounded as the finish says.
    [
        ("exact", 24, 24),
        ("nearest", 24, 20),
        ("nearest", 25, 30),  # half way goes up
        ("nearest", 26, 30),
        ("nearest", 3, 10),  # never less than one repeat
        ("at_least", 20, 20),
        ("at_least", 21, 30),
        ("at_least", 1, 10),
        ("at_most", 20, 20),
        ("at_most", 29, 20),
        ("at_most", 10, 10),
    ],
)
def test_rows_for_finish(finish, rows_wanted, expected):
    pattern = with_finish(all_same(4, rows=10), Finish(finish))
    gauge = Gauge(1.0)
    assert rows_for(pattern, rows_wanted * gauge.row_mm, gauge) == expected


def test_rows_for_at_most_with_less_than_one_repeat():
    pattern = with_finish(all_same(4, rows=10), Finish.AT_MOST)
    with pytest.raises(LengthError, match="One repeat of 10 rows is 14 mm, longer than 12 mm"):
        rows_for(pattern, 12, Gauge(1.0))


@pytest.mark.parametrize("length_mm", [0, -1, 0.5, 5001, 1e9, nan, inf, -inf])
def test_rows_for_length_refused(length_mm):
    with pytest.raises(LengthError, match="has to be from 1 mm to 5000 mm"):
        rows_for(all_same(4), length_mm, Gauge())


@pytest.mark.parametrize("finish", DIAGONAL_FINISHES)
def test_rows_for_too_many_rows(finish):
    with pytest.raises(LengthError, match=f"{MAX_ROWS} is the most"):
        rows_for(with_finish(all_same(4), finish), 5000, Gauge(0.1))


def test_rows_for_whole_repeats_beyond_the_most_rows():
    gauge = Gauge(0.15)
    length_mm = (MAX_ROWS - 1) * gauge.row_mm
    pattern = with_finish(all_same(4, rows=398), Finish.AT_LEAST)
    with pytest.raises(LengthError, match=f"{MAX_ROWS} is the most"):
        rows_for(pattern, length_mm, gauge)


def test_band_measures():
    # Derived, see patterns/geometry.py: N sqrt 2 d, for 6 strands at 0.9 mm 7.637 mm wide.
    gauge = Gauge(0.9)
    assert band_width_mm(6, gauge) == pytest.approx(7.637, abs=5e-4)
    assert band_length_mm(118, gauge) == pytest.approx(118 * sqrt(2) * 0.9)


# --- strand lengths --------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("strands", "without_cm", "with_cm"),
    # Derived: see the Notes of `diagonal_table` in patterns/geometry.py; these figures were worked
    # out of that formula with sympy, without / with idle runs.
    [
        (4, 53.397, 57.147),
        (6, 59.330, 61.830),
        (8, 62.296, 64.171),
        (10, 64.076, 65.576),
        (12, 65.263, 66.513),
        (16, 66.746, 67.683),
        (20, 67.636, 68.386),
    ],
)
@pytest.mark.parametrize("diameter_mm", EXACT_DIAMETERS_MM)
@pytest.mark.parametrize("knot", ["f", "bf"])
def test_diagonal_table_mean_strand(strands, without_cm, with_cm, diameter_mm, knot):
    pattern = all_same(strands, knot)
    for idle_run, expected_cm in ((0, without_cm), (sqrt(2), with_cm)):
        table = diagonal_table(pattern, 150, Gauge(diameter_mm, idle_run=idle_run))
        mean_mm = mean(strand.knotted_mm for strand in table.strands)
        assert mean_mm / 10 == pytest.approx(expected_cm, abs=6e-4)


@given(patterns(max_strands=20).filter(lambda p: p.strands % 2 == 0))
def test_diagonal_table_mean_strand_is_the_closed_form(pattern):
    # Derived: see the Notes of `diagonal_table` in patterns/geometry.py; idle run 0, loop ratio 1.5.
    pattern = with_finish(pattern, Finish.EXACT)
    table = diagonal_table(pattern, 150, Gauge(EXACT_DIAMETERS_MM[0], idle_run=0))
    strands = pattern.strands
    closed_mm = 150 * (4 + 3 * pi) / sqrt(2) * (strands - 1) / (2 * strands)
    assert mean(strand.knotted_mm for strand in table.strands) == pytest.approx(closed_mm)


def test_diagonal_table_six_strand_stripe():
    # Common practice, no source: about 0.6 m a strand before ends, idle run 0.
    table = diagonal_table(all_same(6), 150, Gauge(0.9, idle_run=0))
    assert all(0.57 < strand.knotted_mm / 1000 < 0.63 for strand in table.strands)


def test_diagonal_table_by_hand():
    # 118 rows of six forward strands: strand 1 ties 5 and is base in 5 of every 12 rows and
    # idle in 2; 9 times, and 5, 4 and 1 in the last 10 rows. 50 x 10.28230 + 49 x 1.8
    # + 19 x 1.27279 = 514.115 + 88.2 + 24.183 mm.
    strand = diagonal_table(all_same(6), 150, Gauge(0.9)).strands[0]
    assert (strand.tied, strand.base, strand.idle) == (50, 49, 19)
    assert strand.knotted_mm == pytest.approx(626.498, abs=1e-3)


def test_diagonal_table_base_strand_at_the_edge():
    # By hand: base in 59 of 118 rows is 59 x 1.8 = 106.2 mm, shorter than the 150 mm band, which
    # cannot be; 59 idle runs of 1.2728 mm more make 181.3 mm.
    pattern = make_pattern(["bf f f", "f f"])
    bare = diagonal_table(pattern, 150, Gauge(0.9, idle_run=0)).strands[0]
    full = diagonal_table(pattern, 150, Gauge(0.9)).strands[0]
    assert (full.tied, full.base, full.idle) == (0, 59, 59)
    assert bare.knotted_mm == pytest.approx(106, abs=0.5)
    assert full.knotted_mm == pytest.approx(181, abs=0.5)


@given(patterns(), gauges, st.integers(150, 400))
def test_diagonal_table_no_strand_shorter_than_the_band(pattern, gauge, length_mm):
    table = diagonal_table(pattern, length_mm, gauge)
    band_mm = band_length_mm(table.rows, gauge)
    assert all(strand.knotted_mm >= band_mm - 1e-6 for strand in table.strands)
    if pattern.finish in (Finish.EXACT, Finish.AT_LEAST):
        assert band_mm >= length_mm - 1e-6


@given(patterns(), gauges, st.integers(150, 400))
def test_diagonal_table_idle_runs_make_the_length(pattern, gauge, length_mm):
    # Derived: one strand sits out a row on average, for a straight sqrt 2 d, just what a row adds
    # to the band; so all idle runs together are exactly the length. With N even an odd last row has no idle strand yet, so there they are one row shorter.
    table = diagonal_table(pattern, length_mm, gauge)
    idle_mm = sum(strand.idle for strand in table.strands) * gauge.idle_mm
    missing = table.rows % 2 if pattern.strands % 2 == 0 else 0
    assert idle_mm == pytest.approx(band_length_mm(table.rows - missing, gauge))
