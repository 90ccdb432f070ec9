"""Drawings written as SVG."""

import re
from collections.abc import Iterable
from functools import lru_cache
from xml.sax.saxutils import escape, quoteattr

from patterns.colours import working_colours
from patterns.shapes import (
    OUTLINE_WIDTH,
    Block,
    Chart,
    Drawing,
    Knotted,
    Label,
    Line,
    ShapeKind,
    Stroke,
)

_NOT_IN_XML = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def to_svg(
    drawing: Drawing,
    *,
    title: str,
    height_px: float | None = None,
    width_px: float | None = None,
) -> str:
    """Write a drawing as one SVG element.

    Parameters
    ----------
    drawing
        The drawing.
    title
        What it shows, for people who do not see it.
    height_px, width_px
        One of the two sizes [px]; the other follows. With neither, the picture fills its box.

    Returns
    -------
    `<svg>...</svg>` with presentation attributes only, which a strict content policy allows.

    Notes
    -----
    The knots of one colour are one path: a long band stays small. Lines come first, as a
    wide stroke in the outline's tone under a narrower one in the colour.
    """
    parts = [_opening(drawing, title, _size(drawing, height_px, width_px))]
    lines = [shape for shape in drawing.shapes if isinstance(shape, Line)]
    knotted = [shape for shape in drawing.shapes if not isinstance(shape, Line)]
    for colour, same_colour in _by_colour(lines).items():
        parts.extend(_line_paths(colour, same_colour))
    for colour, knots in _by_colour(knotted).items():
        parts.append(_knotted_path(colour, knots))
    return "".join([*parts, "</svg>"])


def chart_to_svg(chart: Chart, *, title: str, unit_px: float) -> str:
    """Write a working chart as one SVG element.

    Parameters
    ----------
    chart
        The chart.
    title
        What it shows, for people who do not see it.
    unit_px
        Size of the chart's unit [px].

    Returns
    -------
    `<svg>...</svg>` with presentation attributes only; its words are in the colour and the
    typeface of the text around it.
    """
    size = _size(chart, None, chart.width * unit_px)
    parts = [_opening(chart, title, size)]
    for colour, threads in _by_colour(chart.threads).items():
        parts.extend(_thread_paths(colour, threads))
    for colour, knots in _by_colour(chart.knots).items():
        parts.append(_knotted_path(colour, knots))
    for way in _alike(chart.ways):
        parts.append(_stroke_path(_points(way), way[0].colour, way[0].width))
    parts.extend(_text(label) for label in chart.labels)
    return "".join([*parts, "</svg>"])


def _opening(ground: Drawing | Chart, title: str, size: str) -> str:
    words = _NOT_IN_XML.sub("", title)
    return (
        '<svg xmlns="http://www.w3.org/2000/svg" role="img"'
        f" aria-label={quoteattr(words)}{size}"
        f' viewBox="0 0 {_short(ground.width)} {_short(ground.height)}">'
        f"<title>{escape(words)}</title>"
    )


def _alike(strokes: Iterable[Stroke]) -> Iterable[list[Stroke]]:
    grouped: dict[tuple[str, float], list[Stroke]] = {}
    for stroke in strokes:
        grouped.setdefault((stroke.colour, stroke.width), []).append(stroke)
    return grouped.values()


def _thread_paths(colour: str, threads: list[Stroke]) -> list[str]:
    path, width = _points(threads), threads[0].width
    return [
        _stroke_path(path, working_colours(colour), width + OUTLINE_WIDTH),
        _stroke_path(path, colour, width - OUTLINE_WIDTH),
    ]


def _points(strokes: list[Stroke]) -> str:
    return "".join(
        ["M" + "L".join([f"{_short(x)} {_short(y)}" for x, y in s.points]) for s in strokes]
    )


def _stroke_path(path: str, colour: str, width: float) -> str:
    return (
        f'<path d="{path}" fill="none" stroke="{colour}" stroke-width="{_short(width)}"'
        ' stroke-linejoin="round" stroke-linecap="round"/>'
    )


def _text(label: Label) -> str:
    anchor = "" if label.anchor == "start" else f' text-anchor="{label.anchor}"'
    return (
        f'<text x="{_short(label.x)}" y="{_short(label.y)}" font-size="{_short(label.size)}"'
        f'{anchor} fill="{label.colour or "currentColor"}">{escape(label.text)}</text>'
    )


def _size(drawing: Drawing | Chart, height_px: float | None, width_px: float | None) -> str:
    if height_px is not None:
        width_px = height_px * drawing.width / drawing.height
    elif width_px is not None:
        height_px = width_px * drawing.height / drawing.width
    else:
        return ""
    return f' width="{_short(width_px)}" height="{_short(height_px)}"'


def _by_colour(shapes: Iterable[ShapeKind]) -> dict[str, list[ShapeKind]]:
    grouped: dict[str, list[ShapeKind]] = {}
    for shape in shapes:
        grouped.setdefault(shape.colour, []).append(shape)
    return grouped


def _line_paths(colour: str, lines: list[Line]) -> list[str]:
    path = "".join(
        f"M{_short(line.x1)} {_short(line.y1)}L{_short(line.x2)} {_short(line.y2)}"
        for line in lines
    )
    width = lines[0].width
    strokes = (
        (working_colours(colour), width + OUTLINE_WIDTH),
        (colour, width - OUTLINE_WIDTH),
    )
    return [
        f'<path d="{path}" fill="none" stroke="{tone}" stroke-width="{_short(stroke)}"/>'
        for tone, stroke in strokes
    ]


def _knotted_path(colour: str, knots: list[Knotted]) -> str:
    path = "".join(_outline(knot) for knot in knots)
    return (
        f'<path d="{path}" fill="{colour}" stroke="{working_colours(colour)}"'
        f' stroke-width="{_short(OUTLINE_WIDTH)}" stroke-linejoin="round"/>'
    )


def _outline(knot: Knotted) -> str:
    if isinstance(knot, Block):
        width, height = _short(knot.width), _short(knot.height)
        return f"M{_short(knot.x)} {_short(knot.y)}h{width}v{height}h-{width}z"
    square = knot
    half = _short(square.half)
    top = f"M{_short(square.cx)} {_short(square.cy - square.half)}"
    return f"{top}l{half} {half}-{half} {half}-{half}-{half}z"


@lru_cache(maxsize=8192)
def _short(number: float) -> str:
    """Write a coordinate with at most two places and no trailing zeros."""
    return f"{number:.2f}".rstrip("0").rstrip(".")
