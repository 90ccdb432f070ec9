"""How a working chart is fitted on the pages of a card. All coordinates are points."""

from dataclasses import dataclass
from functools import cached_property

from patterns.chart import draw_chart
from patterns.reading import chart_range, read_rows
from patterns.shapes import Chart
from planner.sheets.card_contents import KnottingCard

_FEWEST_ROWS_BEGUN = 6


@dataclass(frozen=True)
class _Units:
    """Sizes of a chart's unit [pt]: the most, and the least with words beside and without."""

    most: float
    least_with_words: float
    least: float


# At the least with words, letters in the squares stand at 5.5 pt; without, at 4.3 pt.
_UNITS = {"diagonal": _Units(14.0, 11.0, 8.5), "grid": _Units(8.5, 6.0, 5.0)}


@dataclass(frozen=True)
class ChartPart:
    """Some rows of the chart, as they stand on one page."""

    chart: Chart
    numbers: range
    unit_pt: float

    @property
    def height(self) -> float:
        """Height on the page [pt]."""
        return self.chart.height * self.unit_pt


class ChartFit:
    """A card's chart, with words beside if they fit, lying on its side if it must.

    Parameters
    ----------
    card
        The card.
    width, height
        Room for it on a page of its own [pt].
    """

    def __init__(self, card: KnottingCard, width: float, height: float) -> None:
        self._card = card
        self.numbers = chart_range(card.pattern, card.rows)
        self.is_lying = False
        units = _UNITS[card.pattern.technique]
        self.with_words, self.counted = True, False
        for self.counted in (False, True):
            self.unit_pt = min(units.most, width / self._chart_width())
            if self.unit_pt >= units.least_with_words:
                return
        self.with_words = False
        self.unit_pt = min(units.most, width / self._chart_width())
        if self.unit_pt < units.least:
            self.is_lying = True
            self.unit_pt = min(units.most, height / self._chart_width())

    def _chart_width(self) -> float:
        """Width of the chart; the longest words and the last number set it."""
        card = self._card
        written = read_rows(card.pattern, self.numbers, card.rows, counted=self.counted)
        longest = max(written, key=lambda row: len(row.words)).row
        rows = (longest, self.numbers[-1])
        return max(self._drawn(range(row, row + 1)).width for row in rows)

    def _drawn(self, numbers: range) -> Chart:
        card = self._card
        return draw_chart(
            card.pattern,
            card.colours,
            numbers,
            card.rows,
            with_words=self.with_words,
            counted=self.counted,
            runs=[each.run for each in card.runs],
        )

    def wanted_height(self, first: int, most: float) -> float:
        """Height to keep for the rows from `first` on: for all of them, if a page holds them.

        Parameters
        ----------
        first
            The first row.
        most
            Height for a chart on a page of its own [pt].
        """
        left = range(first, self.numbers.stop)
        if self._height(len(left)) <= most:
            return self._height(len(left))
        return self._height(_FEWEST_ROWS_BEGUN)

    def _height(self, rows: int) -> float:
        single, more = self._row_heights
        return (single + (rows - 1) * more) * self.unit_pt

    def part(self, first: int, room: float) -> ChartPart:
        """Return the rows from `first` on that fit in the room, one at the least.

        Parameters
        ----------
        first
            The first row.
        room
            Height for them, or width where the chart lies on its side [pt].
        """
        single, more = self._row_heights
        fitting = 1 + int((room / self.unit_pt - single) / more + 1e-6)
        numbers = range(first, min(first + max(1, fitting), self.numbers.stop))
        return ChartPart(self._drawn(numbers), numbers, self.unit_pt)

    @cached_property
    def _row_heights(self) -> tuple[float, float]:
        """Of a chart of one row, and of every row more, in the chart's unit."""
        single = self._drawn(self.numbers[:1]).height
        if len(self.numbers) == 1:
            return single, 1.0
        return single, self._drawn(self.numbers[:2]).height - single
