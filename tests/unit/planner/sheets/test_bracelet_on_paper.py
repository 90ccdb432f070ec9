"""A bracelet's drawing on paper: bracelet.py."""

from io import BytesIO

import numpy as np
import pypdfium2
import pytest
from reportlab.pdfgen.canvas import Canvas
from sheet_factories import band

from patterns.shapes import Drawing, Line, Square
from planner.sheets.bracelet import draw_on_canvas, fitted_size


def pixels_of(drawing, box=(20, 30, 100, 40)):
    buffer = BytesIO()
    canvas = Canvas(buffer, pagesize=(160, 100))
    draw_on_canvas(canvas, drawing, *box)
    canvas.save()
    page = pypdfium2.PdfDocument(buffer.getvalue())[0]
    return np.array(page.render(scale=2).to_pil().convert("RGB"))


def test_drawing_fits_its_box_and_keeps_its_proportions():
    assert fitted_size(Drawing(20, 2, ()), 100, 40) == (100, 10)
    assert fitted_size(Drawing(2, 20, ()), 100, 40) == (4, 40)
    assert fitted_size(Drawing(0, 0, ()), 100, 40) == (0, 0)


def test_drawing_stands_upside_up_at_its_place():
    # Two knots: red in the upper left, blue in the lower right of a ground of 8 by 4.
    shapes = (Square(1, 1, 1, "#ff0000", "A"), Square(7, 3, 1, "#0000ff", "B"))
    pixels = pixels_of(Drawing(8, 4, shapes), box=(20, 30, 80, 40))
    # The box begins 20 pt from the left, 30 pt from the foot of a page of 100 pt; 2 pixels a pt.
    assert tuple(pixels[2 * (100 - 60), 2 * 30]) == (255, 0, 0)
    assert tuple(pixels[2 * (100 - 40), 2 * 90]) == (0, 0, 255)
    assert tuple(pixels[2 * (100 - 40), 2 * 30]) == (255, 255, 255)


def test_knots_hide_the_threads_under_them():
    shapes = (Square(2, 2, 1, "#ff0000", "A"), Line(0, 2, 4, 2, 0.5, "#00ff00", "B"))
    pixels = pixels_of(Drawing(4, 4, shapes), box=(20, 30, 40, 40))
    assert tuple(pixels[2 * (100 - 50), 2 * 40]) == (255, 0, 0)
    assert tuple(pixels[2 * (100 - 50), 2 * 22]) == (0, 255, 0)


@pytest.mark.parametrize("colour", ["#ffffff", "#f4f1e6", "#fefefe"])
def test_white_thread_is_outlined_on_white_paper(colour):
    pixels = pixels_of(Drawing(2, 2, (Square(1, 1, 1, colour, "A"),)), box=(20, 30, 40, 40))
    assert pixels.min() < 160


def test_drawing_of_unknown_colour_is_drawn():
    shapes = (Square(1, 1, 1, "teal-ish", "A"), Line(0, 1, 2, 1, 0.5, "", "B"))
    assert pixels_of(Drawing(2, 2, shapes)).min() < 250


def test_band_stays_inside_its_box():
    pixels = pixels_of(band(12))
    inked = np.argwhere(pixels.min(axis=2) < 250)
    top, left = inked.min(axis=0) / 2
    bottom, right = inked.max(axis=0) / 2
    assert left >= 19.5
    assert right <= 120.5
    assert top >= 29.5
    assert bottom <= 70.5
