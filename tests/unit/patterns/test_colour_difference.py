"""Differences of thread colours, against the published pairs and the published matrices."""

import subprocess
import sys
from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from patterns.colour_difference import (
    HARD_TO_TELL_BELOW,
    Sight,
    as_seen,
    difference,
    difference_as_seen,
    difference_words,
    hard_to_tell,
    lab,
    lab_difference,
    nearest_shades,
)
from patterns.colours import ColourError

colours = st.integers(0, 0xFFFFFF).map(lambda number: f"#{number:06x}")

# G. Sharma, W. Wu, E. N. Dalal, The CIEDE2000 color-difference formula: implementation notes,
# supplementary test data, and mathematical observations, Color Res. Appl. 30 (2005) 21-30, Table 1.
SHARMA_PAIRS = [
    ((50, 2.6772, -79.7751), (50, 0, -82.7485), 2.0425),
    ((50, 0, 0), (50, -1, 2), 2.3669),
    ((50, 2.49, -0.001), (50, -2.49, 0.0009), 7.1792),
    ((50, 2.49, -0.001), (50, -2.49, 0.0011), 7.2195),
    ((50, 2.5, 0), (73, 25, -18), 27.1492),
    ((60.2574, -34.0099, 36.2677), (60.4626, -34.1751, 39.4387), 1.2644),
    ((2.0776, 0.0795, -1.135), (0.9033, -0.0636, -0.5514), 0.9082),
]

# G. M. Machado, M. M. Oliveira, L. A. F. Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009)
# 1291-1298, the matrices for severity 1.0 in linear RGB; written down from memory.
MACHADO = {
    Sight.PROTAN: (
        (0.152286, 1.052583, -0.204868),
        (0.114503, 0.786281, 0.099216),
        (-0.003882, -0.048116, 1.051998),
    ),
    Sight.DEUTAN: (
        (0.367322, 0.860646, -0.227968),
        (0.280085, 0.672501, 0.047413),
        (-0.011820, 0.042940, 0.968881),
    ),
    Sight.TRITAN: (
        (1.255528, -0.076749, -0.178779),
        (-0.078411, 0.930809, 0.147602),
        (0.004733, 0.691367, 0.303900),
    ),
}


def channels_of(colour: str) -> list[float]:
    return [int(colour[place : place + 2], 16) / 255 for place in (1, 3, 5)]


def linear_of(colour: str) -> list[float]:
    """The sRGB curve, IEC 61966-2-1."""
    return [
        c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels_of(colour)
    ]


def encoded(value: float) -> float:
    """The sRGB curve back, 0 to 1 and no further."""
    value = min(1.0, max(0.0, value))
    return 12.92 * value if value <= 0.0031308 else 1.055 * value ** (1 / 2.4) - 0.055


def times(matrix, vector) -> list[float]:
    return [sum(a * b for a, b in zip(row, vector, strict=True)) for row in matrix]


@pytest.mark.parametrize(("first", "second", "published"), SHARMA_PAIRS)
def test_lab_difference_as_published(first, second, published):
    assert lab_difference(first, second) == pytest.approx(published, abs=5e-5)
    assert lab_difference(second, first) == pytest.approx(published, abs=5e-5)


@given(colours)
def test_lab_is_that_of_d65(colour):
    # IEC 61966-2-1 (sRGB to XYZ) and CIE 15 (XYZ to L*a*b*), figures from memory.
    to_xyz = (
        (0.4124, 0.3576, 0.1805),
        (0.2126, 0.7152, 0.0722),
        (0.0193, 0.1192, 0.9505),
    )
    shares = zip(times(to_xyz, linear_of(colour)), (0.9505, 1.0, 1.0890), strict=True)
    x, y, z = (
        share ** (1 / 3) if share > (6 / 29) ** 3 else share * (29 / 6) ** 2 / 3 + 4 / 29
        for share in (value / white for value, white in shares)
    )
    assert lab(colour) == pytest.approx((116 * y - 16, 500 * (x - y), 200 * (y - z)), abs=0.05)


def test_difference_of_black_and_white():
    # Both are grey, so C' = 0 and S_L at the mean lightness 50 is 1: the difference is that of L*.
    assert difference("#000000", "#FFFFFF") == pytest.approx(100, abs=1e-3)


@given(colours, colours)
def test_difference_is_symmetric_and_zero_for_equal_colours_alone(first, second):
    assert difference(first, second) == pytest.approx(difference(second, first), abs=1e-9)
    assert difference(first, first) == 0
    assert (difference(first, second) == 0) == (first == second)


@pytest.mark.parametrize("sight", list(MACHADO))
@given(colours)
def test_as_seen_follows_the_published_matrices(sight, colour):
    expected = [encoded(value) for value in times(MACHADO[sight], linear_of(colour))]
    # A channel is rounded to one of 256 steps.
    assert channels_of(as_seen(colour, sight)) == pytest.approx(expected, abs=0.51 / 255)


@given(colours)
def test_as_seen_by_usual_eyes_is_the_colour(colour):
    assert as_seen(colour.upper(), Sight.USUAL) == colour


@given(colours, colours)
def test_hard_to_tell_below_the_threshold(first, second):
    found = hard_to_tell(first, second)
    assert set(found) == set(hard_to_tell(second, first))
    assert (Sight.USUAL in found) == (difference(first, second) < HARD_TO_TELL_BELOW)
    for sight in Sight:
        assert (sight in found) == (difference_as_seen(first, second, sight) < HARD_TO_TELL_BELOW)


@pytest.mark.parametrize(
    ("first", "second", "alike"),
    # Which hues are confused: common knowledge of colour blindness, no source.
    [
        ("#aa1122", "#aa1122", set(Sight)),
        ("#aa1122", "#2e7d32", {Sight.DEUTAN}),
        ("#8e44ad", "#2c5aa0", {Sight.PROTAN, Sight.DEUTAN}),
        ("#2f6f8f", "#3d7f70", {Sight.TRITAN}),
        ("#000000", "#ffffff", set()),
    ],
    ids=["equal", "red and green", "purple and blue", "blue and green", "black and white"],
)
def test_hard_to_tell_of_thread(first, second, alike):
    assert set(hard_to_tell(first, second)) == alike


@given(colours, st.dictionaries(st.integers(), colours, max_size=12), st.integers(-1, 14))
def test_nearest_shades_are_the_nearest(wanted, shades, most):
    found = nearest_shades(wanted, shades, most)
    assert len(found) == max(0, min(most, len(shades)))
    for near in found:
        assert near.difference == difference(wanted, shades[near.key])
    assert all(first.difference <= second.difference for first, second in pairwise(found))
    left_out = set(shades) - {near.key for near in found}
    if found:
        assert all(difference(wanted, shades[key]) >= found[-1].difference for key in left_out)


def test_nearest_shades_of_equal_difference_keep_their_order():
    shades = {"R2": "#aa1122", "R1": "#aa1122", "R3": "#aa1122"}
    assert [near.key for near in nearest_shades("#bb1122", shades, 2)] == ["R2", "R1"]


def test_difference_words_grow_with_the_difference():
    words = [difference_words(amount) for amount in (0, 1, 4, HARD_TO_TELL_BELOW, 16, 30, 100)]
    assert words[0] == "the same to the eye"
    assert words[2] == "close"
    assert words[-1] == "another colour altogether"
    assert len(dict.fromkeys(words)) == 6


@pytest.mark.parametrize("wrong", ["", "red", "#fff", "#gggggg", "rgb(1,2,3)", "#ffffff80"])
def test_colour_that_is_no_colour_is_refused(wrong):
    for ask in (
        lambda: difference("#ffffff", wrong),
        lambda: as_seen(wrong, Sight.USUAL),
        lambda: as_seen(wrong, Sight.TRITAN),
        lambda: hard_to_tell(wrong, "#ffffff"),
        lambda: nearest_shades("#ffffff", {"T1": wrong}, 1),
    ):
        with pytest.raises(ColourError, match="#rrggbb"):
            ask()


def test_importing_it_does_not_import_the_colour_library():
    check = "import sys, patterns.colour_difference; sys.exit('coloraide' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", check], check=False).returncode == 0
