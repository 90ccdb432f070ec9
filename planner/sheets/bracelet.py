"""A bracelet's `Drawing` on paper: the same shapes as on the screen.

All coordinates are points, except a drawing's own.
"""

from collections.abc import Iterable

from reportlab.lib.colors import Color
from reportlab.pdfgen.canvas import Canvas

from patterns.colours import ColourError, working_colours
from patterns.shapes import OUTLINE_WIDTH, Drawing, Knotted, Line
from planner.sheets.pen import thread_colour

# Room around the ground for half an outline, in the drawing's own unit.
_BLEED = 0.25


def _outline_of(colour: str) -> Color:
    try:
        return thread_colour(working_colours(colour))
    except ColourError:
        return thread_colour("#5d5a55")


def fitted_size(drawing: Drawing, width: float, height: float) -> tuple[float, float]:
    """Size of the picture in a box of `width` by `height`, its proportions kept [pt]."""
    if drawing.width <= 0 or drawing.height <= 0:
        return 0.0, 0.0
    scale = min(width / drawing.width, height / drawing.height)
    return drawing.width * scale, drawing.height * scale


def draw_shapes(canvas: Canvas, drawing: Drawing) -> None:
    """Draw the shapes in the drawing's own unit, upside up, its foot at the origin.

    Notes
    -----
    As on the screen: threads first, then knots, and one path a colour, which looks the same
    because knots of a band do not overlap, and is far smaller.
    """
    threads: dict[str, list[Line]] = {}
    knots: list[Knotted] = []
    for shape in drawing.shapes:
        if isinstance(shape, Line):
            threads.setdefault(shape.colour, []).append(shape)
        else:
            knots.append(shape)
    canvas.setLineJoin(1)
    for colour, lines in threads.items():
        _draw_threads(canvas, colour, lines, drawing.height)
    draw_knots(canvas, knots, drawing.height)


def _draw_threads(canvas: Canvas, colour: str, lines: list[Line], ground_height: float) -> None:
    width = lines[0].width
    for tone, stroke in (
        (_outline_of(colour), width + OUTLINE_WIDTH),
        (thread_colour(colour), width - OUTLINE_WIDTH),
    ):
        path = canvas.beginPath()
        for line in lines:
            path.moveTo(line.x1, ground_height - line.y1)
            path.lineTo(line.x2, ground_height - line.y2)
        canvas.setStrokeColor(tone)
        canvas.setLineWidth(stroke)
        canvas.drawPath(path, stroke=1, fill=0)


def draw_knots(canvas: Canvas, knots: Iterable[Knotted], ground_height: float) -> None:
    """Draw knots in their drawing's unit, one path a colour."""
    by_colour: dict[str, list[Knotted]] = {}
    for knot in knots:
        by_colour.setdefault(knot.colour, []).append(knot)
    for colour, same_colour in by_colour.items():
        _draw_knots(canvas, colour, same_colour, ground_height)


def _draw_knots(canvas: Canvas, colour: str, knots: list[Knotted], ground_height: float) -> None:
    path = canvas.beginPath()
    for knot in knots:
        first, *others = knot.corners
        path.moveTo(first[0], ground_height - first[1])
        for x, y in others:
            path.lineTo(x, ground_height - y)
        path.close()
    canvas.setFillColor(thread_colour(colour))
    canvas.setStrokeColor(_outline_of(colour))
    canvas.setLineWidth(OUTLINE_WIDTH)
    canvas.drawPath(path, stroke=1, fill=1)


def draw_on_canvas(
    canvas: Canvas, drawing: Drawing, x: float, y: float, width: float, height: float
) -> None:
    """Draw a bracelet into a box, its proportions kept, at the left and half way up.

    Parameters
    ----------
    canvas
        Where to draw.
    drawing
        The bracelet.
    x, y
        Lower left corner of the box [pt].
    width, height
        Size of the box [pt].
    """
    drawn_width, drawn_height = fitted_size(drawing, width, height)
    if not drawn_width:
        return
    canvas.saveState()
    canvas.translate(x, y + (height - drawn_height) / 2)
    canvas.scale(drawn_width / drawing.width, drawn_height / drawing.height)
    draw_shapes(canvas, drawing)
    canvas.restoreState()


class DrawingForms:
    """Bracelets drawn once in a document and shown on many tags."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._names: dict[Drawing, str] = {}
        self._by_identity: dict[int, str] = {}

    def _name_of(self, drawing: Drawing) -> str:
        # Hashing thousands of shapes is slow: ask by identity first.
        name = self._by_identity.get(id(drawing))
        if name is None:
            name = self._names.get(drawing) or self._define(drawing)
            self._by_identity[id(drawing)] = name
        return name

    def _define(self, drawing: Drawing) -> str:
        name = f"bracelet{len(self._names) + 1}"
        self._canvas.beginForm(
            name, -_BLEED, -_BLEED, drawing.width + _BLEED, drawing.height + _BLEED
        )
        draw_shapes(self._canvas, drawing)
        self._canvas.endForm()
        self._names[drawing] = name
        return name

    def show(self, drawing: Drawing, x: float, y: float, width: float, height: float) -> None:
        """Show a bracelet in a box, as `draw_on_canvas` does."""
        drawn_width, drawn_height = fitted_size(drawing, width, height)
        if not drawn_width:
            return
        name = self._name_of(drawing)
        self._canvas.saveState()
        self._canvas.translate(x, y + (height - drawn_height) / 2)
        self._canvas.scale(drawn_width / drawing.width, drawn_height / drawing.height)
        self._canvas.doForm(name)
        self._canvas.restoreState()
