"""The working chart of a diagonal pattern.

A unit is half the pitch of the knots: a strand is one unit wide, a row one unit high. Knots are
drawn a little smaller than they lie, so that the strands can be seen to run between them.
"""

from collections.abc import Iterable, Mapping, Sequence
from itertools import islice
from math import cos, radians, sin

from patterns.colours import ink_on
from patterns.knots import DiagonalPattern, Knot
from patterns.reading import WrittenRow
from patterns.shapes import Chart, Label, Square, Stroke
from patterns.tying import TiedKnot, tie_rows

HALF = 0.8
_EDGE = HALF / 2
_BEND = 0.14
_WAY_WIDTH = 0.17
_THREAD_WIDTH = 0.44
_LETTER_SIZE = 0.5
_NUMBER_SIZE = 0.68
_HEAD_LETTER_SIZE = 0.8
_HEAD_NUMBER_SIZE = 0.52
_NUMBERS_WIDTH = 2.0
_WORD_WIDTH = 0.38
_MARGIN = 0.3
_HEAD = 2.0
_LOOSE = 0.75
# How far a base line lies below the middle of capitals, as a share of the type size.
_MIDDLE = 0.34

# The ways from the middle of one edge of the square to that of another: straight, or round half
# an ellipse, which no one takes for the point of something.
_ROUND = tuple(
    ((_EDGE + _BEND) * cos(radians(angle)) - _EDGE, _EDGE * sin(radians(angle)))
    for angle in range(-90, 91, 30)
)
_WAYS = {
    Knot.F: ((-_EDGE, -_EDGE), (_EDGE, _EDGE)),
    Knot.B: ((_EDGE, -_EDGE), (-_EDGE, _EDGE)),
    Knot.FB: _ROUND,
    Knot.BF: tuple((-across, down) for across, down in _ROUND),
}
# Where its letter has room beside the way.
_LETTER_PLACES = {
    Knot.F: (0.25, -0.24),
    Knot.B: (-0.25, -0.24),
    Knot.FB: (0.43, 0.0),
    Knot.BF: (-0.43, 0.0),
}


def draw_diagonal_chart(
    pattern: DiagonalPattern,
    colours: Mapping[str, str],
    written: Sequence[WrittenRow],
    *,
    with_words: bool,
) -> Chart:
    """Draw the rows that are written; see `patterns.chart.draw_chart`."""
    return _DiagonalChart(pattern, colours, written, with_words).chart()


class _DiagonalChart:
    """Collects the parts of a chart row by row."""

    def __init__(
        self,
        pattern: DiagonalPattern,
        colours: Mapping[str, str],
        written: Sequence[WrittenRow],
        with_words: bool,
    ) -> None:
        self.pattern = pattern
        self.written = written
        self.with_words = with_words
        self.first = written[0].row
        self.slots = ["", *pattern.slots]  # strands count from 1
        self.colours = ["", *(colours[slot] for slot in pattern.slots)]
        self.inks = ["", *(ink_on(colours[slot]) for slot in pattern.slots)]
        self.left = _NUMBERS_WIDTH + _MARGIN
        self.right = self.left + pattern.strands
        self.top = _HEAD + _LOOSE
        self.foot = self.top + len(written) + 1
        self.threads: list[Stroke] = []
        self.knots: list[Square] = []
        self.ways: list[Stroke] = []
        self.labels: list[Label] = []

    def chart(self) -> Chart:
        rows = tie_rows(self.pattern, self.written[-1].row)
        order = self._order_at_the_start(islice(rows, self.first - 1))
        self._label_ends(order, _HEAD - 0.4, _HEAD - 1.2)
        # What hangs at each position: the points of its run so far, from its last knot on.
        runs = [[(self.left + place + 0.5, _HEAD)] for place in range(self.pattern.strands)]
        for written, tied in zip(self.written, rows, strict=True):
            y = self.top + written.row - self.first + 1
            self._label_row(written, y)
            for knot in tied:
                self._tie(knot, y, order, runs)
        for place, run in enumerate(runs):
            run.append((self.left + place + 0.5, self.foot + _LOOSE))
            self._add_thread(run, order[place])
        self._label_ends(order, self.foot + _LOOSE + 0.95, self.foot + _LOOSE + 1.55)
        return Chart(
            width=self._width(),
            height=self.foot + _LOOSE + 1.75,
            threads=tuple(self.threads),
            knots=tuple(self.knots),
            ways=tuple(self.ways),
            labels=tuple(self.labels),
        )

    def _order_at_the_start(self, rows_before: Iterable[list[TiedKnot]]) -> list[int]:
        order = list(range(1, self.pattern.strands + 1))
        for tied in rows_before:
            for knot in tied:
                _trade_places(knot, order)
        return order

    def _width(self) -> float:
        if not self.with_words:
            return self.right + self.left
        return self.right + 2 * _MARGIN + _WORD_WIDTH * max(len(row.words) for row in self.written)

    def _tie(
        self, knot: TiedKnot, y: float, order: list[int], runs: list[list[tuple[float, float]]]
    ) -> None:
        x = self.left + knot.left
        self._draw_knot(knot, x, y)
        for place, side in ((knot.left - 1, x - _EDGE), (knot.left, x + _EDGE)):
            hanging = self.left + place + 0.5
            run = runs[place]
            # Between neighbouring rows a run goes straight from edge to edge.
            bends = run[:1] if run[-1] == (hanging, y - 0.5) else [*run, (hanging, y - 0.5)]
            self._add_thread([*bends, (side, y - _EDGE)], order[place])
            runs[place] = [(side, y + _EDGE), (hanging, y + 0.5)]
        _trade_places(knot, order)

    def _draw_knot(self, knot: TiedKnot, x: float, y: float) -> None:
        slot, ink = self.slots[knot.tying], self.inks[knot.tying]
        self.knots.append(Square(x, y, HALF, self.colours[knot.tying], slot))
        way = tuple([(x + across, y + down) for across, down in _WAYS[knot.knot]])
        self.ways.append(Stroke(way, _WAY_WIDTH, ink))
        across, down = _LETTER_PLACES[knot.knot]
        base = y + down + _MIDDLE * _LETTER_SIZE
        self.labels.append(Label(x + across, base, slot, _LETTER_SIZE, "middle", ink))

    def _add_thread(self, points: list[tuple[float, float]], strand: int) -> None:
        self.threads.append(Stroke(tuple(points), _THREAD_WIDTH, self.colours[strand]))

    def _label_ends(self, order: list[int], letter_y: float, number_y: float) -> None:
        for place, strand in enumerate(order):
            x = self.left + place + 0.5
            self.labels += [
                Label(x, letter_y, self.slots[strand], _HEAD_LETTER_SIZE, "middle"),
                Label(x, number_y, str(strand), _HEAD_NUMBER_SIZE, "middle"),
            ]

    def _label_row(self, written: WrittenRow, y: float) -> None:
        base = y + _MIDDLE * _NUMBER_SIZE
        self.labels.append(Label(_NUMBERS_WIDTH, base, written.name, _NUMBER_SIZE, "end"))
        words = written.words if self.with_words else written.name
        self.labels.append(Label(self.right + _MARGIN, base, words, _NUMBER_SIZE))


def _trade_places(knot: TiedKnot, order: list[int]) -> None:
    if knot.knot.swaps:
        first, second = order[knot.left - 1 : knot.left + 1]
        order[knot.left - 1 : knot.left + 1] = second, first
