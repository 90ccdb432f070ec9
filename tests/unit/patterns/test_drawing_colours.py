import pytest
from hypothesis import given
from hypothesis import strategies as st

from patterns.colours import ColourError, contrast_ratio, relative_luminance, working_colours

colours = st.integers(0, 0xFFFFFF).map(lambda number: f"#{number:06x}")


@pytest.mark.parametrize(
    ("colour", "ratio"),
    # W3C, Web Content Accessibility Guidelines 2.2 (2023), definition of contrast ratio; values
    # computed from it apart from the code, on white.
    [
        ("#767676", 4.542225),
        ("#777777", 4.478089),
        ("#949494", 3.033470),
        ("#0000ff", 8.592471),
        ("#ff0000", 3.998477),
        ("#008000", 5.137403),
        ("#000000", 21.0),
    ],
)
def test_contrast_ratio_on_white(colour, ratio):
    assert contrast_ratio(colour, "#ffffff") == pytest.approx(ratio, abs=1e-6)
    assert contrast_ratio("#FFFFFF", colour.upper()) == pytest.approx(ratio, abs=1e-6)


@given(colours)
def test_working_colours_stand_out(colour):
    # WCAG 2.2, success criterion 1.4.11: graphics need 3 : 1.
    assert contrast_ratio(colour, working_colours(colour)) >= 3


@given(colours)
def test_working_colours_are_darker_unless_the_thread_is_near_black(colour):
    darker = relative_luminance(working_colours(colour)) < relative_luminance(colour)
    assert darker == (contrast_ratio(colour, "#000000") >= 3)


@given(colours)
def test_working_colours_move_no_further_than_needed(colour):
    # One more step back towards the thread's own colour (of 255) would not stand out 3 : 1.
    outline = working_colours(colour)
    assert contrast_ratio(colour, outline) < 3.6


def test_working_colours_of_white_shows_on_white_paper():
    assert contrast_ratio(working_colours("#ffffff"), "#ffffff") >= 3


@pytest.mark.parametrize(
    "colour", ["", "#fff", "ffffff", "#ffffff ", "#gggggg", "#ffffff\n", None, 7]
)
def test_colour_refused(colour):
    with pytest.raises(ColourError, match="#rrggbb"):
        working_colours(colour)
