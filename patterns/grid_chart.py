"""The working chart of a grid pattern: cells, their rows and columns numbered, runs marked.

The unit is that of the drawn band, sqrt(2) thread diameters.
"""

from collections.abc import Mapping, Sequence

from patterns.colours import ink_on
from patterns.drawing import COLUMN_WIDTH, GRID_ROW_HEIGHT
from patterns.grid import GridPattern, band_rows, is_from_left
from patterns.grid_lengths import Run
from patterns.reading import WrittenRow
from patterns.shapes import THREAD_WIDTH, Block, Chart, Label, Stroke

_LETTER_SIZE = 0.95
_FIRST_SIZE = 0.8
_TEXT_SIZE = 0.95
_COLUMN_SIZE = 0.8
_CHARACTER_WIDTH = 0.58
_MARK_WIDTH = 0.26
_MARK_INSET = 0.2
_LOOSE = 0.8
_HEAD = 1.2
_GAP = 0.5
# How far a base line lies below the middle of capitals, as a share of the type size.
_MIDDLE = 0.34


def draw_grid_chart(
    pattern: GridPattern,
    colours: Mapping[str, str],
    written: Sequence[WrittenRow],
    rows: int,
    *,
    with_words: bool,
    runs: Sequence[Run],
) -> Chart:
    """Draw the rows that are written; see `patterns.chart.draw_chart`."""
    return _GridChart(pattern, colours, written, rows, with_words, runs).chart()


class _GridChart:
    """Collects the parts of a chart row by row."""

    def __init__(
        self,
        pattern: GridPattern,
        colours: Mapping[str, str],
        written: Sequence[WrittenRow],
        rows: int,
        with_words: bool,
        runs: Sequence[Run],
    ) -> None:
        self.pattern = pattern
        self.colours = colours
        self.inks = {slot: ink_on(colours[slot]) for slot in pattern.used_slots}
        self.written = written
        self.rows = rows
        self.with_words = with_words
        self.begins = {(run.first.row, run.first.column): run for run in runs}
        self.ends = {(run.last.row, run.last.column) for run in runs}
        longest = max(len(self._name(row)) for row in written)
        self.left = longest * _CHARACTER_WIDTH * _TEXT_SIZE + 2 * _GAP
        self.right = self.left + pattern.columns * COLUMN_WIDTH
        self.top = _HEAD + _LOOSE
        self.foot = self.top + len(written) * GRID_ROW_HEIGHT

    def _name(self, row: WrittenRow) -> str:
        return row.name if self.with_words else str(row.row)

    def chart(self) -> Chart:
        self.knots: list[Block] = []
        self.ways: list[Stroke] = []
        self.labels = self._column_labels()
        cells = list(band_rows(self.pattern, self.rows))
        for place, written in enumerate(self.written):
            y = self.top + place * GRID_ROW_HEIGHT
            self._label_row(written, y)
            for column, slot in enumerate(cells[written.row - 1], start=1):
                self._draw_cell(written.row, column, slot, y)
        return Chart(
            width=self._width(),
            height=self.foot + _LOOSE + 0.2,
            threads=self._base_strands(),
            knots=tuple(self.knots),
            ways=tuple(self.ways),
            labels=tuple(self.labels),
        )

    def _width(self) -> float:
        if not self.with_words:
            return self.right + self.left
        longest = max(len(row.words) for row in self.written)
        return self.right + _GAP * 2 + longest * _CHARACTER_WIDTH * _TEXT_SIZE

    def _x(self, column: int) -> float:
        return self.left + (column - 1) * COLUMN_WIDTH

    def _column_labels(self) -> list[Label]:
        return [
            Label(
                self._x(column) + COLUMN_WIDTH / 2, _HEAD - 0.4, str(column), _COLUMN_SIZE, "middle"
            )
            for column in range(1, self.pattern.columns + 1)
        ]

    def _base_strands(self) -> tuple[Stroke, ...]:
        colour = self.colours[self.pattern.background]
        centres = (
            self._x(column) + COLUMN_WIDTH / 2 for column in range(1, self.pattern.columns + 1)
        )
        return tuple(
            Stroke(((x, _HEAD + 0.3), (x, self.foot + _LOOSE)), THREAD_WIDTH, colour)
            for x in centres
        )

    def _label_row(self, written: WrittenRow, y: float) -> None:
        """With words, on both sides; without, where the row begins."""
        base = y + GRID_ROW_HEIGHT / 2 + _MIDDLE * _TEXT_SIZE
        if self.with_words or is_from_left(written.row):
            x = self.left - _GAP
            self.labels.append(Label(x, base, self._name(written), _TEXT_SIZE, "end"))
        if self.with_words or not is_from_left(written.row):
            words = written.words if self.with_words else str(written.row)
            self.labels.append(Label(self.right + _GAP, base, words, _TEXT_SIZE))

    def _draw_cell(self, row: int, column: int, slot: str, y: float) -> None:
        x = self._x(column)
        self.knots.append(Block(x, y, COLUMN_WIDTH, GRID_ROW_HEIGHT, self.colours[slot], slot))
        run = self.begins.get((row, column))
        text, size = (f"{slot}{run.number}", _FIRST_SIZE) if run else (slot, _LETTER_SIZE)
        base = y + GRID_ROW_HEIGHT / 2 + _MIDDLE * size
        self.labels.append(Label(x + COLUMN_WIDTH / 2, base, text, size, "middle", self.inks[slot]))
        if run:
            self._mark(x, y, slot, at_right=not is_from_left(row))
        if (row, column) in self.ends:
            self._mark(x, y, slot, at_right=is_from_left(row))

    def _mark(self, x: float, y: float, slot: str, *, at_right: bool) -> None:
        """A bar inside the cell, at the side where the run comes in or is cut off."""
        bar = x + (COLUMN_WIDTH - _MARK_INSET if at_right else _MARK_INSET)
        points = ((bar, y + 0.25), (bar, y + GRID_ROW_HEIGHT - 0.25))
        self.ways.append(Stroke(points, _MARK_WIDTH, self.inks[slot]))
