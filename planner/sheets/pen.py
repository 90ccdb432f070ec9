"""The hand that draws every sheet: ink, letters, thread and boxes on a page.

All coordinates are points from the lower left corner of the paper.
"""

import re
from functools import lru_cache
from io import BytesIO

from reportlab.lib.colors import Color, HexColor
from reportlab.pdfgen.canvas import Canvas

from patterns.colours import ink_on
from planner.sheets.contents import SheetHead
from planner.sheets.fonts import MISSING, REGULAR, printable, ready_fonts, shortened, width_of
from planner.sheets.page_stream import PageStream
from planner.sheets.paper import Paper
from planner.sheets.wording import plain_text, whole_part

INK = "#1d2230"
QUIET = "#5d5a55"
RULE = "#b8b1a4"
MADDER = "#9b2d30"
WHITE = "#ffffff"
UNDYED = "#cfc8ba"

_COLOUR = re.compile("#[0-9a-fA-F]{6}")


@lru_cache(maxsize=1024)
def thread_colour(colour: str) -> Color:
    """Read "#rrggbb"; anything else is drawn as undyed thread."""
    return HexColor(colour if _COLOUR.fullmatch(colour) else UNDYED)


def letter_colour_on(colour: str) -> str:
    """Choose black or white for letters on a thread colour, whichever contrasts more."""
    return ink_on(colour if _COLOUR.fullmatch(colour) else UNDYED)


class Pen:
    """A reportlab canvas in the workshop's own hand.

    Parameters
    ----------
    paper
        The format of every page.
    title
        What the document is called in a reader's window.
    head
        Whose document it is; the workshop becomes its author.
    """

    def __init__(self, paper: Paper, title: str, head: SheetHead) -> None:
        ready_fonts()
        self.paper = paper
        # invariant: the same sheet gives the same bytes, so that files can be compared.
        self.canvas = Canvas(
            BytesIO(),
            pagesize=(paper.width_pt, paper.height_pt),
            invariant=1,
            pageCompression=1,
            lang="en",
            initialFontName=REGULAR,
        )
        self.canvas.setTitle(plain_text(title))
        self.canvas.setAuthor(plain_text(head.workshop))
        self.canvas.setSubject(plain_text(head.batch))
        self.canvas.setCreator("Flosswright")
        self.canvas.setProducer("Flosswright")
        self._stream = PageStream(self.canvas)
        self.lacks_letters = False

    def text(
        self,
        x: float,
        y: float,
        text: str,
        size: float,
        *,
        font: str = REGULAR,
        colour: str = INK,
        room: float | None = None,
        align: str = "left",
    ) -> float:
        """Write one line and tell how wide it came out [pt].

        Parameters
        ----------
        x, y
            Where the line begins (or ends, or has its middle, by `align`), on the base line.
        text
            Any text; what the typeface lacks becomes an open box.
        size
            Type size [pt].
        room
            Width after which it is shortened with an ellipsis [pt].
        align
            "left", "right" or "centre".
        """
        words = printable(text) if room is None else shortened(text, font, size, room)
        if not words:
            return 0.0
        self.lacks_letters = self.lacks_letters or MISSING in words
        width = width_of(words, font, size)
        start = x - width * {"left": 0.0, "right": 1.0, "centre": 0.5}[align]
        self.canvas.setFillColor(thread_colour(colour))
        self.canvas.setFont(font, size)
        self.canvas.drawString(start, y, words)
        return width

    def figure(
        self,
        x: float,
        y: float,
        figure: str,
        size: float,
        *,
        font: str = REGULAR,
        colour: str = INK,
    ) -> None:
        """Write a figure so that its whole number ends at x, whatever stands behind it."""
        start = x - width_of(whole_part(figure), font, size)
        self.text(start, y, figure, size, font=font, colour=colour)

    def rule(
        self, x: float, y: float, width: float, colour: str = RULE, thickness: float = 0.5
    ) -> None:
        """Draw a level line."""
        self.canvas.setStrokeColor(thread_colour(colour))
        self.canvas.setLineWidth(thickness)
        self.canvas.line(x, y, x + width, y)

    def cut_line(self, x1: float, y1: float, x2: float, y2: float) -> None:
        """Draw a dashed line to cut along."""
        self.canvas.saveState()
        self.canvas.setStrokeColor(thread_colour(QUIET))
        self.canvas.setLineWidth(0.4)
        self.canvas.setDash(4, 3)
        self.canvas.line(x1, y1, x2, y2)
        self.canvas.restoreState()

    def tick_box(self, x: float, y: float, side: float) -> None:
        """Draw an empty box to tick, its lower left corner at (x, y)."""
        self.canvas.setStrokeColor(thread_colour(INK))
        self.canvas.setLineWidth(0.8)
        self.canvas.rect(x, y, side, side, stroke=1, fill=0)

    def knot(
        self, cx: float, cy: float, half: float, colour: str, letter: str = "", font: str = REGULAR
    ) -> None:
        """Draw a shade as a knot: a square on its corner, outlined, with the slot's letter."""
        path = self.canvas.beginPath()
        path.moveTo(cx - half, cy)
        path.lineTo(cx, cy + half)
        path.lineTo(cx + half, cy)
        path.lineTo(cx, cy - half)
        path.close()
        self.canvas.setFillColor(thread_colour(colour))
        self.canvas.setStrokeColor(thread_colour(INK))
        self.canvas.setLineWidth(0.6)
        self.canvas.drawPath(path, stroke=1, fill=1)
        if letter:
            size = half * 1.2
            self.text(
                cx,
                cy - size * 0.34,
                letter[:1],
                size,
                font=font,
                colour=letter_colour_on(colour),
                align="centre",
            )

    def hatch(self, x: float, y: float, width: float, height: float, gap: float) -> None:
        """Hatch an upright rectangle with slanted lines, `gap` apart along its foot."""
        if width <= 0 or height <= 0:
            return
        canvas = self.canvas
        canvas.saveState()
        frame = canvas.beginPath()
        frame.rect(x, y, width, height)
        canvas.clipPath(frame, stroke=0, fill=0)
        canvas.setStrokeColor(thread_colour(QUIET))
        canvas.setLineWidth(0.45)
        lines = canvas.beginPath()
        offset = -height
        while offset < width:
            lines.moveTo(x + offset, y)
            lines.lineTo(x + offset + height, y + height)
            offset += gap
        canvas.drawPath(lines, stroke=1, fill=0)
        canvas.restoreState()

    def next_page(self) -> None:
        """Close this page and begin another."""
        self._stream.close_page()
        self.lacks_letters = False

    def taken(self) -> bytes:
        """Give away what was written of the document since it was last asked."""
        return self._stream.taken()

    def finish(self) -> bytes:
        """Return the document, or what was not taken of it yet; every page must be closed."""
        return self._stream.finish()
