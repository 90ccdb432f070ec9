"""Working charts as pictures for pages."""

from collections.abc import Mapping
from functools import lru_cache

from patterns.chart import draw_chart
from patterns.grid_lengths import Run
from patterns.pictures import neutral_colours
from patterns.reading import chart_range
from patterns.svg import chart_to_svg
from patterns.techniques import Pattern

# A page that draws more knots than these becomes slow to scroll on a phone.
_MOST_KNOTS = 1500
_FEWEST_ROWS = 20
_UNIT_PX = {"diagonal": 22.0, "grid": 15.0}


def rows_on_a_page(pattern: Pattern, rows: int) -> range:
    """Return the rows of the band that a page charts: no more than it can show quickly."""
    numbers = chart_range(pattern, rows)
    knots_a_row = pattern.strands / 2 if pattern.technique == "diagonal" else pattern.strands
    return numbers[: max(_FEWEST_ROWS, int(_MOST_KNOTS / knots_a_row))]


def chart_picture(
    pattern: Pattern, rows: int, colours: Mapping[str, str], runs: tuple[Run, ...] = ()
) -> str:
    """Return the working chart of a band as SVG, as many rows as `rows_on_a_page` says.

    Parameters
    ----------
    pattern : the pattern.
    rows : rows of the whole band.
    colours : "#rrggbb" by slot; slots without one stay neutral.
    runs : in a grid, the runs to mark.
    """
    shown = neutral_colours(pattern) | dict(colours)
    return _picture(pattern, rows, tuple(sorted(shown.items())), runs)


@lru_cache(maxsize=64)
def _picture(
    pattern: Pattern, rows: int, colours: tuple[tuple[str, str], ...], runs: tuple[Run, ...]
) -> str:
    numbers = rows_on_a_page(pattern, rows)
    chart = draw_chart(pattern, dict(colours), numbers, rows, runs=runs)
    title = f"Working chart of {pattern.name}, rows {numbers.start} to {numbers[-1]}"
    return chart_to_svg(chart, title=title, unit_px=_UNIT_PX[pattern.technique])
