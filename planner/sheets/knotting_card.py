"""The knotting card: all that a maker needs at the knots. All coordinates are points."""

from dataclasses import replace
from itertools import groupby

from patterns.drawing import draw_band
from patterns.reading import again_words, colour_words, read_rows, repeat_words, written_range
from planner.sheets.bracelet import draw_on_canvas, fitted_size
from planner.sheets.card_chart import ChartFit, ChartPart
from planner.sheets.card_contents import CardRun, KnottingCard
from planner.sheets.card_pages import (
    HEADING_PT,
    LINE_PT,
    SIDE_PT,
    TEXT_PT,
    CardPages,
    Draw,
)
from planner.sheets.card_pieces import add_pieces
from planner.sheets.card_words import (
    answer_words,
    choice_words,
    reading_words,
    scrap_words,
)
from planner.sheets.chart import draw_chart_on_page
from planner.sheets.contents import SheetHead
from planner.sheets.fonts import REGULAR, STRONG, width_of
from planner.sheets.paper import CARD_PAPERS, Paper, PaperError
from planner.sheets.pen import INK, MADDER, QUIET, WHITE, Pen
from planner.sheets.wording import joined, plain_text, short_date

_TITLE_PT = 19.0
_BAND_PT = 46.0
_MOST_BAND_ROWS = 300
_GAP_PT = 14.0


def build_knotting_card(card: KnottingCard, paper: Paper | str) -> bytes:
    """Draw a knotting card as PDF.

    Parameters
    ----------
    card
        The pattern in one size, ending and colourway.
    paper
        The format to draw it on, or its key in `CARD_PAPERS`.

    Returns
    -------
    bytes
        The same bytes for the same card.

    Raises
    ------
    PaperError
        When there is no such paper.
    """
    form = card_paper_named(paper)
    foot_head = replace(card.head, batch=joined((card.size, card.pattern.name)), market_date=None)
    pen = Pen(form, f"Knotting card of {card.pattern.name}", foot_head)
    pages = CardPages(form)
    _add_opening(pages, card)
    add_pieces(pages, card)
    _add_reading(pages, card)
    _add_chart(pages, card)
    _add_runs(pages, card)
    pages.skip(6)
    pages.text(" ".join(card.cautions), 7, colour=QUIET)
    return pages.draw(pen, foot_head)


def card_paper_named(paper: Paper | str) -> Paper:
    """Find a card's paper by its key; a `Paper` is returned as it is.

    Raises
    ------
    PaperError
        When there is no such format; the message lists those that exist.
    """
    if isinstance(paper, Paper):
        return paper
    try:
        return CARD_PAPERS[paper.lower()]
    except KeyError:
        known = ", ".join(CARD_PAPERS)
        raise PaperError(f"No card paper called {paper[:20]!r}. Choose one of: {known}.") from None


def _add_opening(pages: CardPages, card: KnottingCard) -> None:
    pages.add(20, lambda pen, top: _draw_letterhead(pen, card.head, top, pages.width))
    pages.text(plain_text(card.pattern.name), _TITLE_PT, font=STRONG)
    pages.skip(1)
    pages.text(choice_words(card), 9.5)
    band = draw_band(
        card.pattern, min(card.rows, _MOST_BAND_ROWS), card.colours, layout="horizontal"
    )
    height = fitted_size(band, pages.width, _BAND_PT)[1] + 8
    pages.add(
        height,
        lambda pen, top: draw_on_canvas(
            pen.canvas, band, SIDE_PT, top - height, pages.width, height - 4
        ),
    )
    pages.skip(5)
    pages.text(answer_words(card), 11, font=STRONG, colour=MADDER)
    pages.skip(1)
    for sentence in repeat_words(card.pattern, card.rows):
        pages.text(sentence, 9.3)
    pages.text(colour_words(card.pattern, card.rows), 9.3)


def _draw_letterhead(pen: Pen, head: SheetHead, top: float, width: float) -> None:
    for place, colour in enumerate((MADDER, WHITE, MADDER)):
        pen.knot(SIDE_PT + 4 + place * 8, top - 5.6, 4, colour)
    label = joined(("knotting card", plain_text(head.plan_label), short_date(head.plan_date)))
    used = pen.text(
        SIDE_PT + width, top - 9, label, 8.5, colour=QUIET, align="right", room=width * 0.6
    )
    pen.text(SIDE_PT + 30, top - 9, head.workshop, 9.5, font=STRONG, room=width - used - 40)
    pen.rule(SIDE_PT, top - 15, width, INK, 0.7)


def _add_reading(pages: CardPages, card: KnottingCard) -> None:
    pages.skip(4)
    pages.heading("How do I read it?", 4 * LINE_PT)
    for words in reading_words(card):
        pages.text(words)
    pages.text(again_words(card.pattern, card.rows))


def _add_chart(pages: CardPages, card: KnottingCard) -> None:
    fit = ChartFit(card, pages.width, pages.height - HEADING_PT)
    pages.skip(4)
    first = fit.numbers.start
    while first < fit.numbers.stop:
        if fit.is_lying:
            pages.keep(pages.height)
            part = fit.part(first, pages.width)
            height = pages.height - HEADING_PT
        else:
            pages.keep(HEADING_PT + fit.wanted_height(first, pages.height - HEADING_PT))
            part = fit.part(first, pages.room - HEADING_PT)
            height = part.height
        pages.heading(_chart_heading(fit, part), height)
        pages.add(height, _lying(part, height) if fit.is_lying else _upright(part))
        first = part.numbers.stop
    if not fit.with_words:
        _add_written_rows(pages, card)


def _chart_heading(fit: ChartFit, part: ChartPart) -> str:
    if part.numbers == fit.numbers:
        return "Which knots do I tie?"
    return f"Which knots do I tie? Rows {part.numbers.start} to {part.numbers.stop - 1}"


def _upright(part: ChartPart) -> Draw:
    return lambda pen, top: draw_chart_on_page(pen, part.chart, SIDE_PT, top, part.unit_pt)


def _lying(part: ChartPart, height: float) -> Draw:
    """A chart wider than the page, turned by a quarter to the left, so that it begins at the left."""

    def draw(pen: Pen, top: float) -> None:
        pen.canvas.saveState()
        pen.canvas.translate(SIDE_PT, top - height)
        pen.canvas.rotate(90)
        draw_chart_on_page(pen, part.chart, 0, 0, part.unit_pt)
        pen.canvas.restoreState()

    return draw


def _add_written_rows(pages: CardPages, card: KnottingCard) -> None:
    """In columns where they are short; they are read down, page by page."""
    lines = _written_lines(card, pages.width)
    widest = max(width_of(line, REGULAR, TEXT_PT) for line in lines)
    columns = max(1, int((pages.width + _GAP_PT) // (widest + _GAP_PT)))
    pages.skip(4)
    pages.heading("How are the rows written?", min(len(lines), 4) * LINE_PT)
    if columns == 1:
        for line in lines:
            pages.text(line)
        return
    while lines:
        pages.keep(LINE_PT)
        high = min(int(pages.room // LINE_PT), -(-len(lines) // columns))
        shown, lines = lines[: high * columns], lines[high * columns :]
        pages.add(high * LINE_PT, _columns(shown, high, (pages.width + _GAP_PT) / columns))


def _written_lines(card: KnottingCard, width: float) -> list[str]:
    """Each knot by itself where a row fits a line so, else counted."""
    numbers = written_range(card.pattern, card.rows)
    for counted in (False, True):
        rows = read_rows(card.pattern, numbers, card.rows, counted=counted)
        lines = [row.text for row in rows]
        if all(width_of(line, REGULAR, TEXT_PT) <= width for line in lines):
            break
    return lines


def _columns(lines: list[str], high: int, step: float) -> Draw:
    def draw(pen: Pen, top: float) -> None:
        for place, line in enumerate(lines):
            x = SIDE_PT + place // high * step
            pen.text(x, top - TEXT_PT - place % high * LINE_PT, line, TEXT_PT)

    return draw


def _add_runs(pages: CardPages, card: KnottingCard) -> None:
    if not card.runs:
        return
    pages.skip(4)
    pages.heading("Which scraps do I need?", 4 * LINE_PT)
    pages.text(
        "A run is one thread of a colour; it comes in at its first cell and is cut off at its last."
    )
    for _, runs in groupby(card.runs, key=lambda each: each.run.slot):
        _add_runs_of_a_slot(pages, card, list(runs))


def _add_runs_of_a_slot(pages: CardPages, card: KnottingCard, runs: list[CardRun]) -> None:
    first = runs[0]
    pages.skip(2)
    pages.keep(3 * LINE_PT)
    pages.add(LINE_PT + 3, lambda pen, top: _draw_slot(pen, first, top, pages.width))
    for each in runs:
        words = scrap_words(each, card.unit)
        pages.text(words[0].upper() + words[1:])


def _draw_slot(pen: Pen, run: CardRun, top: float, width: float) -> None:
    pen.knot(SIDE_PT + 6, top - 7, 5.6, run.shade_colour, run.run.slot, STRONG)
    name = joined((plain_text(run.shade_code), plain_text(run.shade_name)), " ")
    pen.text(SIDE_PT + 16, top - 10, name, 9.5, font=STRONG, room=width - 16)
