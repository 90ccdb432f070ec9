import re
from xml.etree import ElementTree

import pytest

from patterns.pattern_file import read_pattern
from patterns.pictures import (
    MOST_PICTURE_ROWS,
    band_picture,
    neutral_colours,
    short_picture,
    thumbnail,
)
from tests.factories import pattern_text


@pytest.mark.parametrize(
    "slots", ["A A", "A B", "A B C D E F G H I J K L M N O P Q R S T U V W X Y Z"]
)
def test_neutral_colours_differ(slots):
    knots = len(slots.split()) // 2
    text = pattern_text(
        strands=slots, rows=(" ".join("f" * knots), " ".join("f" * (knots - 1)) or "-")
    )
    colours = neutral_colours(read_pattern(text))
    assert set(colours) == set(slots.split())
    assert len(set(colours.values())) == len(colours)
    assert all(re.fullmatch("#[0-9a-f]{6}", colour) for colour in colours.values())


def test_band_picture_uses_the_colours_given_and_neutral_ones_for_the_rest():
    definition = read_pattern(pattern_text())
    svg = band_picture(definition, 20, {"B": "#12ab34"}, title="Band")
    assert 'fill="#12ab34"' in svg
    assert f'fill="{neutral_colours(definition)["A"]}"' in svg


def test_band_picture_draws_every_knot_once():
    # 20 rows of 3 and 2 knots in turn.
    svg = band_picture(read_pattern(pattern_text()), 20, {}, title="Band")
    assert svg.count("z") == 50


def test_band_picture_of_a_long_band_stops():
    definition = read_pattern(pattern_text())
    shown = band_picture(definition, 7_000, {}, title="Band")
    assert shown == band_picture(definition, MOST_PICTURE_ROWS, {}, title="Band")


def test_band_picture_with_markup_in_its_title_stays_a_picture():
    title = '"/><script>alert(1)</script>'
    svg = band_picture(read_pattern(pattern_text()), 4, {}, title=title)
    root = ElementTree.fromstring(svg)
    assert root.attrib["aria-label"] == title
    assert "<script" not in svg


@pytest.mark.parametrize("strands", [2, 7, 24, 60])
def test_thumbnail_stays_small(strands):
    rows = tuple(" ".join("f" * ((strands - row) // 2)) or "-" for row in (0, 1))
    text = pattern_text(strands=" ".join("AB"[n % 2] for n in range(strands)), rows=rows)
    assert len(thumbnail(read_pattern(text), {}, title="Band")) < 40_000


@pytest.mark.parametrize("rows", [1, 2, 9])
def test_short_picture_has_knots_of_one_size_however_few(rows):
    """A knot is a unit of the drawing from its middle to its corner, 14 px."""
    svg = ElementTree.fromstring(
        short_picture(read_pattern(pattern_text()), rows, title="A beginning")
    )
    _, _, width, height = (float(number) for number in svg.attrib["viewBox"].split())
    assert float(svg.attrib["height"]) == pytest.approx(14 * height, rel=0.01)
    assert float(svg.attrib["width"]) == pytest.approx(14 * width, rel=0.01)
    assert width > rows
