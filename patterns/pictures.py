"""Bands as pictures for pages: in a colourway's shades, or in neutral tones where there are none."""

from collections.abc import Mapping
from functools import lru_cache

from patterns.drawing import draw_band
from patterns.grid import GridPattern
from patterns.svg import to_svg
from patterns.techniques import Pattern

LIGHTEST_TONE = (0xF1, 0xE9, 0xDA)
DARKEST_TONE = (0x5C, 0x54, 0x48)
MOST_PICTURE_ROWS = 300
_FEWEST_THUMBNAIL_ROWS = 22
_THUMBNAIL_KNOTS = 600
_SHORT_UNIT_PX = 14


def neutral_colours(definition: Pattern) -> dict[str, str]:
    """Return a tone of undyed thread for every slot, light to dark."""
    slots = definition.used_slots
    steps = max(1, len(slots) - 1)
    return {slot: _tone(number / steps) for number, slot in enumerate(slots)}


def _tone(share: float) -> str:
    channels = zip(LIGHTEST_TONE, DARKEST_TONE, strict=True)
    return "#" + "".join(f"{round(light + (dark - light) * share):02x}" for light, dark in channels)


def band_picture(definition: Pattern, rows: int, colours: Mapping[str, str], *, title: str) -> str:
    """Return the band as SVG, lying, the start at the left; slots without a colour stay neutral.

    Parameters
    ----------
    definition : the pattern.
    rows : rows to draw; `MOST_PICTURE_ROWS` are the most.
    colours : "#rrggbb" by slot.
    title : what the picture shows.
    """
    shown = neutral_colours(definition) | dict(colours)
    drawn = min(rows, MOST_PICTURE_ROWS)
    return _picture(definition, drawn, tuple(sorted(shown.items())), title)


def thumbnail(definition: Pattern, colours: Mapping[str, str], *, title: str) -> str:
    """Return a short run of the band as SVG, longer than wide but for the widest bands."""
    rows = _thumbnail_rows(definition)
    return band_picture(definition, rows, colours, title=title)


def _thumbnail_rows(definition: Pattern) -> int:
    """Of a picture that stands once, all of it where there is room."""
    strands = definition.strands
    rows = max(_FEWEST_THUMBNAIL_ROWS, min(3 * strands, 2 * _THUMBNAIL_KNOTS // strands))
    if isinstance(definition, GridPattern):
        return max(rows, min(len(definition.rows), MOST_PICTURE_ROWS))
    return rows


@lru_cache(maxsize=256)
def _picture(
    definition: Pattern, rows: int, colours: tuple[tuple[str, str], ...], title: str
) -> str:
    return to_svg(draw_band(definition, rows, dict(colours), layout="horizontal"), title=title)


def short_picture(definition: Pattern, rows: int, *, title: str) -> str:
    """Return a few rows of the band as SVG, knots of one size however few they are."""
    drawing = draw_band(definition, rows, neutral_colours(definition), layout="horizontal")
    return to_svg(drawing, title=title, height_px=_SHORT_UNIT_PX * drawing.height)
