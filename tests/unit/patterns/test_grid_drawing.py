from collections import Counter
from math import sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns
from test_drawing import COLOURS
from test_grid import make_grid

from patterns.drawing import draw_band
from patterns.geometry import Gauge
from patterns.grid import band_rows, mirrored_grid
from patterns.grid_lengths import grid_table
from patterns.shapes import LOOSE_END, MARGIN, Block, DrawingError, Line
from patterns.svg import to_svg

COLOURS = COLOURS | {"Z": "#00aa55"}
DIAMETERS_A_UNIT = sqrt(2)


def blocks(drawing):
    return [shape for shape in drawing.shapes if isinstance(shape, Block)]


@given(grid_patterns(), st.integers(1, 40))
def test_every_cell_is_drawn_in_its_colour_and_place(pattern, rows):
    drawn = {}
    for block in blocks(draw_band(pattern, rows, COLOURS)):
        # 2.5 diameters a column, 2 a row: found back from the corner of the block.
        column = round((block.x - MARGIN) * DIAMETERS_A_UNIT / 2.5)
        row = round((block.y - MARGIN - LOOSE_END) * DIAMETERS_A_UNIT / 2)
        drawn[row, column] = (block.slot, block.colour)
    assert drawn == {
        (row, column): (slot, COLOURS[slot])
        for row, slots in enumerate(band_rows(pattern, rows))
        for column, slot in enumerate(slots)
    }


def test_drawing_measures_as_the_table_says():
    # A thread diameter is 1 / sqrt(2) units in either technique, so bands compare to scale.
    drawn = blocks(draw_band(make_grid(), 10, COLOURS))
    width = max(b.x + b.width for b in drawn) - min(b.x for b in drawn)
    height = max(b.y + b.height for b in drawn) - min(b.y for b in drawn)
    table = grid_table(make_grid(), 20, Gauge(thread_diameter_mm=1))
    assert width * DIAMETERS_A_UNIT == pytest.approx(table.band_width_mm)
    assert height * DIAMETERS_A_UNIT == pytest.approx(table.band_length_mm)


def test_base_strands_hang_out_at_both_ends():
    drawing = draw_band(make_grid(), 4, COLOURS)
    lines = [shape for shape in drawing.shapes if isinstance(shape, Line)]
    assert len(lines) == 5
    assert {line.slot for line in lines} == {"A"}
    assert all(line.y1 < MARGIN + LOOSE_END for line in lines)
    assert all(line.y2 > drawing.height - MARGIN - LOOSE_END for line in lines)


@given(grid_patterns(), st.integers(1, 20))
def test_mirrored_band_is_the_mirror_image(pattern, rows):
    def seen(drawing):
        return Counter((round(b.x, 6), round(b.y, 6), b.slot) for b in blocks(drawing))

    drawing = draw_band(pattern, rows, COLOURS)
    image = Counter()
    for block in blocks(drawing):
        left = round(drawing.width - block.x - block.width, 6)
        image[left, round(block.y, 6), block.slot] += 1
    assert seen(draw_band(mirrored_grid(pattern), rows, COLOURS)) == image


@given(grid_patterns(), st.integers(1, 20), st.sampled_from(["vertical", "horizontal"]))
def test_drawing_stays_on_its_ground(pattern, rows, layout):
    drawing = draw_band(pattern, rows, COLOURS, layout=layout)
    for block in blocks(drawing):
        assert MARGIN - 1e-9 <= block.x <= block.x + block.width <= drawing.width - MARGIN + 1e-9
        assert MARGIN - 1e-9 <= block.y <= block.y + block.height <= drawing.height - MARGIN + 1e-9


def test_lying_band_starts_at_the_left_with_column_one_lowest():
    drawing = draw_band(make_grid("AB", "CA"), 2, COLOURS, layout="horizontal")
    by_slot = {block.slot: block for block in blocks(drawing)}
    assert by_slot["B"].x < by_slot["C"].x  # row 1 before row 2
    assert by_slot["B"].y < by_slot["C"].y  # column 2 above column 1


def test_slot_without_colour_is_refused():
    with pytest.raises(DrawingError, match="Slot Q has no colour"):
        draw_band(make_grid("QA"), 2, COLOURS)


def test_svg_has_one_path_of_cells_a_colour():
    svg = to_svg(draw_band(make_grid(), 12, COLOURS), title="Heart")
    assert svg.count("<path") == 2 + 2  # cells of A and B; base strands twice, for their outline
