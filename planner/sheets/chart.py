"""A working chart on paper: the same shapes as on the screen. All coordinates are points."""

from reportlab.pdfgen.canvas import Canvas
from reportlab.pdfgen.pathobject import PDFPathObject

from patterns.colours import working_colours
from patterns.shapes import OUTLINE_WIDTH, Chart, Stroke
from planner.sheets.bracelet import draw_knots
from planner.sheets.pen import INK, Pen, thread_colour


def draw_chart_on_page(pen: Pen, chart: Chart, x: float, top: float, unit_pt: float) -> None:
    """Draw a chart, its upper left corner at (x, top), its unit so many points.

    Letters are written at their own size rather than scaled, so that a reader of the page finds
    them at the size at which they stand there.
    """
    canvas = pen.canvas
    canvas.saveState()
    canvas.translate(x, top - chart.height * unit_pt)
    canvas.scale(unit_pt, unit_pt)
    canvas.setLineJoin(1)
    canvas.setLineCap(1)
    for (colour, width), threads in _alike(chart.threads).items():
        path = _path_of(canvas, threads, chart.height)
        _draw_path(canvas, path, working_colours(colour), width + OUTLINE_WIDTH)
        _draw_path(canvas, path, colour, width - OUTLINE_WIDTH)
    draw_knots(canvas, chart.knots, chart.height)
    for (colour, width), ways in _alike(chart.ways).items():
        _draw_path(canvas, _path_of(canvas, ways, chart.height), colour, width)
    canvas.restoreState()
    for label in chart.labels:
        pen.text(
            x + label.x * unit_pt,
            top - label.y * unit_pt,
            label.text,
            label.size * unit_pt,
            colour=label.colour or INK,
            align=_ALIGN[label.anchor],
        )


_ALIGN = {"start": "left", "middle": "centre", "end": "right"}


def _alike(strokes: tuple[Stroke, ...]) -> dict[tuple[str, float], list[Stroke]]:
    grouped: dict[tuple[str, float], list[Stroke]] = {}
    for stroke in strokes:
        grouped.setdefault((stroke.colour, stroke.width), []).append(stroke)
    return grouped


def _path_of(canvas: Canvas, strokes: list[Stroke], ground_height: float) -> PDFPathObject:
    path = canvas.beginPath()
    for stroke in strokes:
        (first_x, first_y), *others = stroke.points
        path.moveTo(first_x, ground_height - first_y)
        for x, y in others:
            path.lineTo(x, ground_height - y)
    return path


def _draw_path(canvas: Canvas, path: PDFPathObject, colour: str, width: float) -> None:
    canvas.setStrokeColor(thread_colour(colour))
    canvas.setLineWidth(width)
    canvas.drawPath(path, stroke=1, fill=0)
