"""The cutting sheet: what to cut, skein by skein. All coordinates are points."""

from collections import defaultdict
from collections.abc import Iterator

from inventory.measures import format_length, format_number
from planner.sheets.bars import BAR_STEP_PT, draw_bar, hatch_gap, row_length_mm, rows_of
from planner.sheets.contents import CuttingSheet, ShadeCuts, SheetCut, StackCut, StockCut
from planner.sheets.cut_list import (
    Columns,
    Line,
    columns_for,
    draw_list,
    draw_list_head,
    in_blocks,
    left_lines,
    lines_of,
    list_height,
)
from planner.sheets.cut_rows import rows_of_stack
from planner.sheets.fonts import REGULAR, STRONG, wrapped
from planner.sheets.pages import (
    SIDE_PT,
    Block,
    Heading,
    Opening,
    body_width,
    document_parts,
    notice_blocks,
)
from planner.sheets.paper import Paper, paper_named
from planner.sheets.pen import INK, QUIET, Pen
from planner.sheets.wording import batch_words, counted, joined, plain_text

_HEADING_PT = 48.0
_NOTE_PT = 18.0
_NOTE_LINE_PT = 12.0
_SOURCE_PT = 17.0
_AFTER_PT = 8.0


def build_cutting_sheet(sheet: CuttingSheet, paper: Paper | str) -> bytes:
    """Draw the cutting sheet as PDF.

    Parameters
    ----------
    sheet
        What to cut, with the unit the maker measures in.
    paper
        The format to draw it on, or its key in `PAPERS`.

    Returns
    -------
    bytes
        The same bytes for the same sheet.

    Raises
    ------
    PaperError
        When there is no such paper.
    """
    return b"".join(cutting_sheet_parts(sheet, paper))


def cutting_sheet_parts(sheet: CuttingSheet, paper: Paper | str) -> Iterator[bytes]:
    """Draw the cutting sheet, and give the document away page by page."""
    form = paper_named(paper)
    title = f"What to cut for {batch_words(sheet.head.batch)}"
    pen = Pen(form, title, sheet.head)
    return document_parts(
        pen, sheet.head, Opening(title, _answer(sheet)), list(_blocks(sheet, form))
    )


def _answer(sheet: CuttingSheet) -> str:
    stock = [piece for shade in sheet.shades for piece in shade.stock]
    pieces = sum(len(piece.cuts) for piece in stock)
    if not pieces:
        return "Nothing to cut: this plan has no pieces."
    new = sum(1 for piece in stock if piece.is_new)
    shelf = len(stock) - new
    sources = " and ".join(
        part
        for part in (
            counted(new, "new skein") if new else "",
            f"{shelf} from the shelf" if shelf else "",
        )
        if part
    )
    shades = counted(sum(1 for shade in sheet.shades if shade.stock), "shade")
    lengths = len({cut.cut_mm for piece in stock for cut in piece.cuts})
    return f"{counted(pieces, 'piece')} of {counted(lengths, 'length')} in {shades}: {sources}."


def _blocks(sheet: CuttingSheet, paper: Paper) -> Iterator[Block]:
    yield from notice_blocks(sheet.notices, paper)
    longest = max((stock.reckoned_mm for shade in sheet.shades for stock in shade.stock), default=0)
    if not longest:
        return
    row_mm = row_length_mm(longest)
    yield _note(sheet, row_mm, paper)
    for shade in sheet.shades:
        columns = columns_for(sheet.unit, shade, body_width(paper))
        heading = _shade_heading(shade, columns, paper)
        for stack in shade.stacks:
            drawn = _StackBlock(sheet.unit, shade, stack, paper, row_mm)
            lines = [
                *lines_of(rows_of_stack(stack), sheet.unit, columns),
                *drawn.left_lines(columns),
            ]
            for chunk, part in enumerate(in_blocks(lines)):
                yield drawn.block(part, columns, heading, continued=chunk > 0)


def _note(sheet: CuttingSheet, row_mm: int, paper: Paper) -> Block:
    """Say how to read the sheet, once, and only what it needs."""
    stacked = any(len(stack.skeins) > 1 for shade in sheet.shades for stack in shade.stacks)
    folded = any(
        cut.fold_mm is not None
        for shade in sheet.shades
        for stock in shade.stock
        for cut in stock.cuts
    )
    sentences = joined(
        (
            f"A bar as wide as this page is {format_length(row_mm, sheet.unit)} of thread",
            "numbers in it are tags",
            "measure the fold from the end of the first strand named" if folded else "",
        )
    )
    together = (
        "Skeins named together are cut alike and drawn once, with lengths in the bar: lay as many "
        "of them together as your shears cut cleanly. Any of their pieces of a length will do for "
        "any of its tags."
    )
    lines = wrapped(sentences, REGULAR, 9, body_width(paper), 2)
    lines += wrapped(together, REGULAR, 9, body_width(paper), 3) if stacked else []

    def draw(pen: Pen, top: float) -> None:
        for place, line in enumerate(lines):
            pen.text(SIDE_PT, top - 6 - place * _NOTE_LINE_PT, line, 9, colour=QUIET)

    return Block(_NOTE_PT + (len(lines) - 1) * _NOTE_LINE_PT, draw)


def _shade_heading(shade: ShadeCuts, columns: Columns, paper: Paper) -> Heading:
    def draw(pen: Pen, top: float, continued: bool) -> None:
        base = top - 24
        pen.knot(SIDE_PT + 9, base + 4.5, 9, shade.shade_colour)
        x = SIDE_PT + 26
        x += pen.text(x, base, shade.shade_code, 15, font=STRONG, room=110) + 9
        label = "(continued)" if continued else counted(len(shade.stock), "thread") + " to cut from"
        right = paper.width_pt - SIDE_PT
        used = pen.text(right, base, label, 9.5, colour=QUIET, align="right")
        pen.text(x, base, shade.shade_name, 15, room=right - used - 12 - x)
        pen.rule(SIDE_PT, base - 9, body_width(paper), INK, 0.8)
        draw_list_head(pen, columns, base - 18)

    return Heading(_HEADING_PT, draw)


class _StackBlock:
    """A skein or remnant, or several cut alike: the bar, the list of cuts, what is left."""

    def __init__(
        self, unit: str, shade: ShadeCuts, stack: StackCut, paper: Paper, row_mm: int
    ) -> None:
        self.unit = unit
        self.shade = shade
        self.stack = stack
        self.paper = paper
        self.row_mm = row_mm
        # The longest is drawn: alike skeins of a lot differ at most in what is left of them.
        self.drawn = max(stack.skeins, key=lambda skein: skein.reckoned_mm)

    def block(
        self, lines: list[Line], columns: Columns, heading: Heading, *, continued: bool
    ) -> Block:
        """Make the block of some of the lines; only the first draws the bar."""
        bars = 0.0 if continued else rows_of(self.drawn, self.row_mm) * BAR_STEP_PT
        height = _SOURCE_PT + bars + list_height(lines) + _AFTER_PT

        def draw(pen: Pen, top: float) -> None:
            self._draw_source(pen, top, continued=continued)
            if not continued:
                self._draw_bar(pen, top - _SOURCE_PT)
            draw_list(pen, lines, columns, top - _SOURCE_PT - bars)

        return Block(height, draw, heading)

    def _draw_source(self, pen: Pen, top: float, *, continued: bool) -> None:
        base, right = top - 11, self.paper.width_pt - SIDE_PT
        lengths = {skein.reckoned_mm for skein in self.stack.skeins}
        length = " or ".join(format_length(each, self.unit) for each in sorted(lengths))
        count = len(self.stack.skeins)
        label = joined(
            (
                f"{count} together" if count > 1 else "",
                "new" if self.drawn.is_new else "from the shelf",
                f"{length} {'each ' if count > 1 else ''}to count on",
            )
        )
        room = body_width(self.paper)
        used = pen.text(right, base, label, 9.5, colour=QUIET, align="right", room=room * 0.6)
        source = plain_text(self.stack.source) or "Thread"
        # A capital to begin with, whatever a name that follows is written like.
        source = source[:1].upper() + source[1:]
        if continued:
            source = f"{source} (continued)"
        pen.text(SIDE_PT, base, source, 11, font=STRONG, room=room - used - 12)

    def _draw_bar(self, pen: Pen, top: float) -> None:
        def label(cut: SheetCut) -> str:
            if len(self.stack.skeins) > 1:
                return format_number(cut.cut_mm, self.unit)
            return str(cut.tag_number)

        width = body_width(self.paper)
        colour = self.shade.shade_colour
        draw_bar(pen, self.drawn, colour, SIDE_PT, top, width, self.row_mm, label)

    def left_lines(self, columns: Columns) -> Iterator[Line]:
        """Say what is left of each skein; equal rests together."""
        rests: dict[tuple[int, bool], list[StockCut]] = defaultdict(list)
        for skein in self.stack.skeins:
            rests[skein.left_mm, skein.goes_back].append(skein)
        for (left_mm, goes_back), skeins in rests.items():
            hatch = hatch_gap(goes_back) if left_mm else None
            yield from left_lines(self._left_words(skeins), goes_back, hatch, columns)

    def _left_words(self, skeins: list[StockCut]) -> str:
        one, together = skeins[0], len(self.stack.skeins)
        of_which = " of each" if together > 1 and one.left_mm else ""
        if len(skeins) < together:
            names = (plain_text(skein.source).partition(":")[0] for skein in skeins)
            of_which = f" of {', '.join(names)}"
        if not one.left_mm:
            return f"Nothing left{of_which}."
        left = format_length(one.left_mm, self.unit)
        if one.goes_back:
            return f"{left}{of_which} goes back on the shelf"
        return f"{left}{of_which} left: waste"
