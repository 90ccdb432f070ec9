"""Pages of a sheet: head, foot, and blocks that stay whole when a page ends.

All heights and coordinates are points.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

from planner.sheets.contents import SheetHead
from planner.sheets.fonts import MISSING, STRONG, wrapped
from planner.sheets.paper import Paper, millimetres
from planner.sheets.pen import INK, MADDER, QUIET, RULE, WHITE, Pen
from planner.sheets.wording import joined, long_date, plain_text, short_date

SIDE_PT = millimetres(16)
TOP_PT = millimetres(14)
FOOT_PT = millimetres(8)
BODY_FOOT_PT = millimetres(16)
_OPENING_PT = 88.0
_RUNNING_PT = 34.0


@dataclass(frozen=True)
class Heading:
    """What stands above a group of blocks, and again where a page continues it."""

    height: float
    draw: Callable[[Pen, float, bool], None]


@dataclass(frozen=True)
class Block:
    """Something that is drawn whole; `draw` gets the pen and the block's upper edge."""

    height: float
    draw: Callable[[Pen, float], None]
    heading: Heading | None = None


@dataclass(frozen=True)
class Opening:
    """The question a sheet answers, and the answer, large."""

    title: str
    answer: str


def body_width(paper: Paper) -> float:
    """Width between the margins [pt]."""
    return paper.width_pt - 2 * SIDE_PT


def paginate(blocks: Sequence[Block], first: float, later: float) -> list[list[Block]]:
    """Put blocks on pages, none of them broken, headings never alone.

    Parameters
    ----------
    blocks
        In reading order; a block's heading is drawn where the heading changes or a page begins.
    first, later
        Room on the first page and on the others [pt].

    Notes
    -----
    A block that is higher than a page stands alone on one; the builders cut theirs smaller.
    """
    pages: list[list[Block]] = [[]]
    used, shown = 0.0, None
    for block in blocks:
        needed = block.height
        if block.heading is not None and block.heading is not shown:
            needed += block.heading.height
        room = first if len(pages) == 1 else later
        if pages[-1] and used + needed > room:
            pages.append([])
            used = 0.0
            needed = block.height + (block.heading.height if block.heading else 0.0)
        pages[-1].append(block)
        used += needed
        shown = block.heading
    return pages


def draw_document(pen: Pen, head: SheetHead, opening: Opening, blocks: Sequence[Block]) -> bytes:
    """Draw all blocks, page by page, and return the document."""
    return b"".join(document_parts(pen, head, opening, blocks))


def document_parts(
    pen: Pen, head: SheetHead, opening: Opening, blocks: Sequence[Block]
) -> Iterator[bytes]:
    """Draw all blocks, and give the document away page by page."""
    body = pen.paper.height_pt - TOP_PT - BODY_FOOT_PT
    pages = paginate(blocks, body - _OPENING_PT, body - _RUNNING_PT)
    seen: Heading | None = None
    for number, page in enumerate(pages, start=1):
        if number == 1:
            top = _draw_opening(pen, head, opening)
        else:
            top = _draw_running_head(pen, head, opening)
        drawn: Heading | None = None
        for block in page:
            if block.heading is not None and block.heading is not drawn:
                block.heading.draw(pen, top, block.heading is seen)
                top -= block.heading.height
                drawn = seen = block.heading
            block.draw(pen, top)
            top -= block.height
        draw_foot(pen, head, number, len(pages), SIDE_PT)
        pen.next_page()
        yield pen.taken()
    yield pen.finish()


def _draw_letterhead(pen: Pen, head: SheetHead, y: float) -> None:
    """Three knots in a row and the workshop's name: the sign over the stall."""
    for place, colour in enumerate((MADDER, WHITE, MADDER)):
        pen.knot(SIDE_PT + 4 + place * 8, y + 3.4, 4, colour)
    right = pen.text(
        pen.paper.width_pt - SIDE_PT,
        y,
        f"{head.plan_label}, made {short_date(head.plan_date)}",
        9,
        colour=QUIET,
        align="right",
        room=body_width(pen.paper) / 2,
    )
    room = body_width(pen.paper) - right - 44
    pen.text(SIDE_PT + 30, y, head.workshop, 10.5, font=STRONG, room=room)


def _draw_opening(pen: Pen, head: SheetHead, opening: Opening) -> float:
    """Draw the first page's head and return where its body begins."""
    top = pen.paper.height_pt - TOP_PT
    width = body_width(pen.paper)
    _draw_letterhead(pen, head, top - 9)
    pen.rule(SIDE_PT, top - 18, width, INK, 0.8)
    pen.text(SIDE_PT, top - 47, opening.title, 23, font=STRONG, room=width)
    for place, line in enumerate(wrapped(opening.answer, STRONG, 11.5, width, 2)):
        pen.text(SIDE_PT, top - 66 - place * 14, line, 11.5, font=STRONG, colour=MADDER)
    return top - _OPENING_PT


def _draw_running_head(pen: Pen, head: SheetHead, opening: Opening) -> float:
    """Draw a later page's head and return where its body begins."""
    top = pen.paper.height_pt - TOP_PT
    _draw_letterhead(pen, head, top - 9)
    pen.rule(SIDE_PT, top - 18, body_width(pen.paper), RULE, 0.6)
    return top - _RUNNING_PT


def draw_foot(pen: Pen, head: SheetHead, page: int, pages: int, side: float) -> None:
    """Draw batch, date and page below the body, outside the edge that printers miss."""
    width = pen.paper.width_pt
    count = pen.text(
        width - side, FOOT_PT, f"page {page} of {pages}", 8.5, colour=QUIET, align="right"
    )
    # A long batch name is shortened alone: the date must never be what is cut off.
    tail = long_date(head.market_date) if head.market_date else f"made {long_date(head.plan_date)}"
    if pen.lacks_letters:
        tail = joined((tail, f"{MISSING} is a letter this typeface lacks"))
    room = width - 2 * side - count - 20
    name = plain_text(head.batch)
    if not name:
        pen.text(side, FOOT_PT, tail, 8.5, colour=QUIET, room=room)
        return
    used = pen.text(side, FOOT_PT, name, 8.5, font=STRONG, colour=QUIET, room=room * 0.45)
    pen.text(side + used + 8, FOOT_PT, tail, 8.5, colour=QUIET, room=room - used - 8)


def notice_blocks(notices: Sequence[str], paper: Paper) -> list[Block]:
    """Draw what the plan could not provide for, before anything else."""
    return [_notice_block(notice, paper) for notice in notices if plain_text(notice)]


def _notice_block(notice: str, paper: Paper) -> Block:
    lines = wrapped(notice, STRONG, 10, body_width(paper) - 18, 4)

    def draw(pen: Pen, top: float) -> None:
        pen.rule(SIDE_PT, top - 2, body_width(paper), MADDER, 0.8)
        pen.text(SIDE_PT, top - 14, "!", 12, font=STRONG, colour=MADDER)
        for place, line in enumerate(lines):
            pen.text(SIDE_PT + 18, top - 14 - place * 13, line, 10, font=STRONG)

    return Block(12 + len(lines) * 13, draw)
