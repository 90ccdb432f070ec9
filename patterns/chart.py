"""The working chart: a pattern row by row, as it is read while it is tied."""

from collections.abc import Mapping, Sequence

from patterns.diagonal_chart import draw_diagonal_chart
from patterns.drawing import MAX_DRAWN_ROWS, slot_colours
from patterns.grid import GridPattern
from patterns.grid_chart import draw_grid_chart
from patterns.grid_lengths import Run
from patterns.reading import read_rows
from patterns.shapes import Chart, DrawingError
from patterns.techniques import Pattern


def draw_chart(
    pattern: Pattern,
    colours: Mapping[str, str],
    numbers: range,
    rows: int,
    *,
    with_words: bool = True,
    counted: bool = False,
    runs: Sequence[Run] = (),
) -> Chart:
    """Draw the working chart of some rows of a band.

    Parameters
    ----------
    pattern
        The pattern.
    colours
        "#rrggbb" for every slot of the pattern.
    numbers
        Which rows of the band, one after the other, counted from 1.
    rows
        Rows of the whole band, at least as many.
    with_words
        Whether each row's knots stand beside it in words; without, its number stands there.
    counted
        Whether equal knots that follow each other are counted in these words.
    runs
        In a grid, the runs whose beginnings and ends are marked.

    Returns
    -------
    The chart. Of a diagonal pattern it has a square for every knot, through which the way of
    the strand that ties is drawn: straight for f and b, bent back for fb and bf. Strands run
    between the squares; their letters and numbers stand where they begin and end. A grid has a
    cell for every knot, numbered columns, and a bar where a run comes in or is cut off.

    Raises
    ------
    DrawingError
        When there is no row to draw, a row is not of the band, or a slot has no colour.
    ColourError
        When a colour is not written as #rrggbb.
    """
    if not numbers or numbers.step != 1 or numbers.start < 1 or numbers[-1] > rows:
        raise DrawingError(
            f"A band of {rows} rows has no rows {numbers.start} to {numbers.stop - 1}."
        )
    if len(numbers) > MAX_DRAWN_ROWS:
        raise DrawingError(f"Draw at most {MAX_DRAWN_ROWS} rows, not {len(numbers)}.")
    chosen = slot_colours(pattern, colours)
    written = read_rows(pattern, numbers, rows, counted=counted)
    if isinstance(pattern, GridPattern):
        return draw_grid_chart(pattern, chosen, written, rows, with_words=with_words, runs=runs)
    return draw_diagonal_chart(pattern, chosen, written, with_words=with_words)
