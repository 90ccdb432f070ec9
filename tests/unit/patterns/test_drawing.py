from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, make_pattern, patterns

from patterns.colours import ColourError, working_colours
from patterns.drawing import draw_band
from patterns.shapes import LOOSE_END, MARGIN, DrawingError, Line, Square
from patterns.svg import to_svg
from patterns.tying import mirrored, order_after, tie_rows

SVG = "{http://www.w3.org/2000/svg}"
COLOURS = {
    "A": "#ffffff",
    "B": "#aa3322",
    "C": "#101018",
    "D": "#ffcc00",
    "E": "#3366cc",
    "F": "#228844",
    "Z": "#888888",
}
SLANT = make_pattern(["f f f", "f f"], slots="AABBCC")


def squares(drawing):
    return [shape for shape in drawing.shapes if isinstance(shape, Square)]


def lines(drawing):
    return [shape for shape in drawing.shapes if isinstance(shape, Line)]


def placed(drawing):
    """Squares as (position, row, colour), free of margins."""
    return {
        (square.cx - MARGIN, square.cy - MARGIN - LOOSE_END, square.colour)
        for square in squares(drawing)
    }


# --- squares ---------------------------------------------------------------------------------


def test_draw_band_by_hand():
    # Row 1: strands 1, 3, 5 (A, B, C) tie on 1-2, 3-4, 5-6. The strands then stand 2 1 4 3 6 5;
    # row 2 pairs 1-4 and 3-6 and the left one ties: strands 1 (A) and 3 (B).
    assert placed(draw_band(SLANT, 2, COLOURS)) == {
        (1, 1, COLOURS["A"]),
        (3, 1, COLOURS["B"]),
        (5, 1, COLOURS["C"]),
        (2, 2, COLOURS["A"]),
        (4, 2, COLOURS["B"]),
    }


@given(patterns(), st.integers(1, 40))
def test_draw_band_shows_the_colour_that_ties(pattern, rows):
    expected = [
        (knot.left, row, pattern.slots[knot.tying - 1])
        for row, knots in enumerate(tie_rows(pattern, rows), start=1)
        for knot in knots
    ]
    drawn = squares(draw_band(pattern, rows, COLOURS))
    assert [(s.cx - MARGIN, s.cy - MARGIN - LOOSE_END, s.slot) for s in drawn] == expected
    assert all(square.colour == COLOURS[square.slot] for square in drawn)


@given(patterns(), st.integers(1, 40))
def test_draw_band_of_mirrored_is_the_mirror_image(pattern, rows):
    # An odd number of strands: the image starts at row 2 (see `mirrored`).
    skipped = pattern.strands % 2
    band = placed(draw_band(pattern, rows + skipped, COLOURS))
    image = {
        (pattern.strands - x, row - skipped, colour) for x, row, colour in band if row > skipped
    }
    assert placed(draw_band(mirrored(pattern), rows, COLOURS)) == image


@given(patterns(), st.integers(1, 40), st.sampled_from(["vertical", "horizontal"]))
def test_draw_band_stays_on_its_ground(pattern, rows, layout):
    drawing = draw_band(pattern, rows, COLOURS, layout=layout)
    for square in squares(drawing):
        assert MARGIN <= square.cx - 1 <= square.cx + 1 <= drawing.width - MARGIN
        assert MARGIN <= square.cy - 1 <= square.cy + 1 <= drawing.height - MARGIN
    for line in lines(drawing):
        assert 0 <= min(line.x1, line.x2) <= max(line.x1, line.x2) <= drawing.width
        assert 0 <= min(line.y1, line.y2) <= max(line.y1, line.y2) <= drawing.height


def test_draw_band_measures_as_the_geometry_says():
    # Derived: knots are squares of side 2 d on a corner (Notes of patterns/geometry.py), their
    # diagonal is 2 sqrt 2 d, two units. N strands side by side are N units wide, and R rows half
    # a diagonal apart are R + 1 units from tip to tip.
    drawn = squares(draw_band(SLANT, 11, COLOURS))
    assert max(s.cx for s in drawn) - min(s.cx for s in drawn) + 2 == 6
    assert max(s.cy for s in drawn) - min(s.cy for s in drawn) + 2 == 12


def test_draw_band_horizontal_is_turned_not_flipped():
    # All forward slants down to the right; turned to the left by a quarter, up to the right.
    band = squares(draw_band(SLANT, 2, COLOURS, layout="horizontal"))
    first, second = (square for square in band if square.slot == "A")
    assert second.cx > first.cx
    assert second.cy < first.cy
    # Strand 1 lies lowest, and the start is at the left.
    assert first.cy == max(square.cy for square in band)


# --- loose threads ---------------------------------------------------------------------------


@given(patterns(), st.integers(1, 40))
def test_draw_band_loose_ends_in_the_order_of_the_strands(pattern, rows):
    drawing = draw_band(pattern, rows, COLOURS)
    top, foot = MARGIN, drawing.height - MARGIN
    at_start = sorted((line.x1, line.slot) for line in lines(drawing) if line.y1 == top)
    at_end = sorted((line.x1, line.slot) for line in lines(drawing) if line.y2 == foot)
    assert tuple(slot for _, slot in at_start) == pattern.slots
    order = order_after(pattern, rows)
    assert tuple(slot for _, slot in at_end) == tuple(pattern.slots[s - 1] for s in order)
    assert all(line.colour == COLOURS[line.slot] for line in lines(drawing))


def test_draw_band_idle_strand_runs_along_the_edge():
    # Strands 1 and 6 sit row 2 out: bare from the lower side of the knot in row 1 to the upper
    # side of that in row 3. Half a unit from the edge of the band, a side is half a unit from
    # its centre line, so 2 - 2 x 1/2 = 1 unit is bare: sqrt 2 d, the idle run (derived).
    drawing = draw_band(make_pattern(["bf fb fb", "fb fb"], slots="ABCDEF"), 3, COLOURS)
    between = [
        line for line in lines(drawing) if line.y1 > MARGIN and line.y2 < drawing.height - MARGIN
    ]
    assert [(line.x1 - MARGIN, line.slot) for line in between] == [(0.5, "A"), (5.5, "F")]
    assert all(line.y2 - line.y1 - 2 * 0.5 == 1 for line in between)


# --- refused ---------------------------------------------------------------------------------


@pytest.mark.parametrize("rows", [0, -1, 2001])
def test_draw_band_rows_refused(rows):
    with pytest.raises(DrawingError, match="Draw 1 to 2000 rows"):
        draw_band(SLANT, rows, COLOURS)


def test_draw_band_slot_without_colour():
    with pytest.raises(DrawingError, match="Slot C has no colour"):
        draw_band(SLANT, 2, {"A": "#000000", "B": "#000000"})


@pytest.mark.parametrize("colour", ["red", "#fff", "#12345g", '#000000"/>', "#000000\n", "", None])
def test_draw_band_colour_refused(colour):
    with pytest.raises(ColourError, match="#rrggbb"):
        draw_band(SLANT, 2, COLOURS | {"A": colour})


# --- SVG -------------------------------------------------------------------------------------


def svg(title="A band", **sizes):
    text = to_svg(draw_band(SLANT, 4, COLOURS), title=title, **sizes)
    return text, ElementTree.fromstring(text)


def test_to_svg_is_an_image_with_a_name():
    _, root = svg("Harbour stripes, 4 rows")
    assert root.tag == SVG + "svg"
    assert root.get("role") == "img"
    assert root.get("aria-label") == "Harbour stripes, 4 rows"
    assert root.find(SVG + "title").text == "Harbour stripes, 4 rows"
    assert root.get("width") is None


@pytest.mark.parametrize("title", ["<script>&\"'", "שלום", "a\x00\x07\ufffe\ud800b", ""])
def test_to_svg_escapes_the_title(title):
    _, root = svg(title)
    shown = (
        title.replace("\x00", "").replace("\x07", "").replace("\ufffe", "").replace("\ud800", "")
    )
    assert (root.find(SVG + "title").text or "") == shown
    assert root.get("aria-label") == shown


def test_to_svg_has_presentation_attributes_only():
    text, root = svg()
    allowed = {"d", "fill", "stroke", "stroke-width", "stroke-linejoin"}
    for element in root.iter(SVG + "path"):
        assert set(element.keys()) <= allowed
    assert "style" not in text


def test_to_svg_one_path_of_squares_a_colour():
    _, root = svg()
    filled = [path for path in root.iter(SVG + "path") if path.get("fill") != "none"]
    assert sorted(path.get("fill") for path in filled) == sorted(COLOURS[slot] for slot in "ABC")
    # 3 + 2 + 3 + 2 knots, each one closed subpath.
    assert sum(path.get("d").count("z") for path in filled) == 10
    assert all(path.get("stroke") == working_colours(path.get("fill")) for path in filled)


def test_to_svg_size_follows_the_other():
    drawing = draw_band(SLANT, 4, COLOURS)
    _, root = svg(height_px=200)
    assert root.get("height") == "200"
    assert float(root.get("width")) == pytest.approx(200 * drawing.width / drawing.height, abs=0.01)
    _, root = svg(width_px=50)
    assert root.get("width") == "50"
    assert float(root.get("height")) == pytest.approx(50 * drawing.height / drawing.width, abs=0.01)
    assert root.get("viewBox") == f"0 0 {drawing.width:g} {drawing.height:g}"


def test_to_svg_of_the_largest_tag_picture_is_compact():
    text = to_svg(draw_band(all_same(24, slots="ABCDEF" * 4), 200, COLOURS), title="Large")
    assert text.count("<path") == 6 + 2 * 6
    assert len(text) < 100_000
