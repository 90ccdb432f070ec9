"""Pages of a card: what is added flows from page to page. All coordinates are points."""

from collections.abc import Callable

from planner.sheets.contents import SheetHead
from planner.sheets.fonts import REGULAR, STRONG, wrapped
from planner.sheets.pages import FOOT_PT, draw_foot
from planner.sheets.paper import Paper, millimetres
from planner.sheets.pen import INK, RULE, Pen

SIDE_PT = millimetres(9)
TOP_PT = millimetres(9)
TEXT_PT = 8.6
LINE_PT = 10.8
_BODY_FOOT_PT = FOOT_PT + 12.0
HEADING_PT = 22.0
_MOST_LINES = 60

Draw = Callable[[Pen, float], None]


class CardPages:
    """Collects what is drawn, page by page, so that every page can say how many there are."""

    def __init__(self, paper: Paper) -> None:
        self.paper = paper
        self.width = paper.width_pt - 2 * SIDE_PT
        self.height = paper.height_pt - TOP_PT - _BODY_FOOT_PT
        self._pages: list[list[tuple[float, Draw]]] = [[]]
        self._top = paper.height_pt - TOP_PT

    @property
    def room(self) -> float:
        """Height that is left on this page."""
        return self._top - _BODY_FOOT_PT

    @property
    def is_begun(self) -> bool:
        """Whether anything stands on this page."""
        return bool(self._pages[-1])

    def add(self, height: float, draw: Draw) -> None:
        """Add something whole; `draw` gets the pen and its upper edge."""
        self.keep(height)
        self._pages[-1].append((self._top, draw))
        self._top -= height

    def skip(self, height: float) -> None:
        """Leave air, but never at the head of a page."""
        if self.is_begun:
            self._top -= height

    def new_page(self) -> None:
        """Go on with another page."""
        self._pages.append([])
        self._top = self.paper.height_pt - TOP_PT

    def keep(self, height: float) -> None:
        """Go on with another page where less than this height is left."""
        if height > self.room and self.is_begun:
            self.new_page()

    def heading(self, question: str, needed: float) -> None:
        """Add a heading, on the page where `needed` more height is free below it."""
        self.keep(HEADING_PT + needed)

        def draw(pen: Pen, top: float) -> None:
            pen.rule(SIDE_PT, top - 4, self.width, RULE, 0.5)
            pen.text(SIDE_PT, top - 16, question, 10.5, font=STRONG, room=self.width)

        self.add(HEADING_PT, draw)

    def text(
        self, words: str, size: float = TEXT_PT, *, font: str = REGULAR, colour: str = INK
    ) -> None:
        """Add a paragraph, line by line."""
        line_pt = size * LINE_PT / TEXT_PT
        for line in wrapped(words, font, size, self.width, _MOST_LINES):
            self.add(line_pt, _line(line, size, font, colour))

    def draw(self, pen: Pen, head: SheetHead) -> bytes:
        """Draw all pages and return the document."""
        for number, page in enumerate(self._pages, start=1):
            for top, draw in page:
                draw(pen, top)
            draw_foot(pen, head, number, len(self._pages), SIDE_PT)
            pen.next_page()
        return pen.finish()


def _line(words: str, size: float, font: str, colour: str) -> Draw:
    def draw(pen: Pen, top: float) -> None:
        pen.text(SIDE_PT, top - size, words, size, font=font, colour=colour)

    return draw
