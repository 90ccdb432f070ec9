"""The cutting sheet: what to cut, skein by skein. All coordinates are points."""

from collections.abc import Iterator
from dataclasses import dataclass

from inventory.measures import format_length, format_number
from planner.sheets.bars import BAR_STEP_PT, draw_bar, hatch_gap, row_length_mm, rows_of
from planner.sheets.contents import CuttingSheet, ShadeCuts, SheetCut, StockCut
from planner.sheets.fonts import REGULAR, STRONG, printable
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
from planner.sheets.pen import INK, QUIET, RULE, Pen
from planner.sheets.wording import batch_words, counted, joined, plain_text

_HEADING_PT = 40.0
_NOTE_PT = 18.0
_SOURCE_PT = 19.0
_CUT_PT = 17.0
_LIST_HEAD_PT = 11.0
_AFTER_PT = 14.0
_LEFT_PT = 16.0
_COLUMNS = 2
_COLUMN_GAP = 18.0
# A longer list of cuts is continued in a block of its own, so that every block fits a page.
_MOST_CUTS = 36


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
        heading = _shade_heading(shade, paper)
        for stock in shade.stock:
            chunks = [
                stock.cuts[start : start + _MOST_CUTS]
                for start in range(0, len(stock.cuts), _MOST_CUTS)
            ] or [()]
            for number, chunk in enumerate(chunks):
                yield _StockBlock(sheet, shade, stock, paper, row_mm).block(
                    chunk,
                    number * _MOST_CUTS,
                    is_last=number == len(chunks) - 1,
                    heading=heading,
                )


def _note(sheet: CuttingSheet, row_mm: int, paper: Paper) -> Block:
    """Say how to read the sheet, once, and only what it needs."""
    folded = any(
        cut.fold_mm is not None
        for shade in sheet.shades
        for stock in shade.stock
        for cut in stock.cuts
    )
    words = joined(
        (
            f"A bar as wide as this page is {format_length(row_mm, sheet.unit)} of thread",
            "numbers in it are tags",
            "measure the fold from the end of the first strand named" if folded else "",
        )
    )

    def draw(pen: Pen, top: float) -> None:
        pen.text(SIDE_PT, top - 6, words, 9, colour=QUIET, room=body_width(paper))

    return Block(_NOTE_PT, draw)


def _shade_heading(shade: ShadeCuts, paper: Paper) -> Heading:
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

    return Heading(_HEADING_PT, draw)


@dataclass(frozen=True)
class _Columns:
    """Columns of a list of cuts, from its left edge: where units end, where words begin."""

    cut: float
    tail: float
    tag: float
    strands: float
    fold: float
    width: float


def _columns_for(unit: str, width: float) -> _Columns:
    """Leave more room behind inches: " 13/16" is longer than ".5"."""
    is_imperial = unit in ("in", "ft", "yd")
    cut, tail = 52.0, 35.0 if is_imperial else 12.0
    tag = cut + tail + (32 if is_imperial else 36)
    return _Columns(cut, tail, tag, tag + 12, width - (31 if is_imperial else 11), width)


class _StockBlock:
    """One skein or remnant: its bar, its cuts in order, what is left."""

    def __init__(
        self, sheet: CuttingSheet, shade: ShadeCuts, stock: StockCut, paper: Paper, row_mm: int
    ) -> None:
        self.unit = sheet.unit
        self.shade = shade
        self.stock = stock
        self.paper = paper
        self.row_mm = row_mm

    def block(
        self, cuts: tuple[SheetCut, ...], offset: int, *, is_last: bool, heading: Heading
    ) -> Block:
        """Make the block of some of the cuts; only the first draws the bar."""
        bars = rows_of(self.stock, self.row_mm) * BAR_STEP_PT if not offset else 0.0
        rows = -(-len(cuts) // _COLUMNS)
        height = _SOURCE_PT + bars + _LIST_HEAD_PT + rows * _CUT_PT + _AFTER_PT + _LEFT_PT * is_last

        def draw(pen: Pen, top: float) -> None:
            self._draw_source(pen, top, continued=bool(offset))
            top -= _SOURCE_PT
            if not offset:
                draw_bar(
                    pen,
                    self.stock,
                    self.shade.shade_colour,
                    SIDE_PT,
                    top,
                    body_width(self.paper),
                    self.row_mm,
                )
                top -= bars
            self._draw_cuts(pen, cuts, offset, top)
            if is_last:
                self._draw_left(pen, top - _LIST_HEAD_PT - rows * _CUT_PT)

        return Block(height, draw, heading)

    def _draw_source(self, pen: Pen, top: float, *, continued: bool) -> None:
        base, right = top - 11, self.paper.width_pt - SIDE_PT
        length = format_length(self.stock.reckoned_mm, self.unit)
        kind = "new" if self.stock.is_new else "from the shelf"
        label = joined((kind, f"{length} to count on"))
        used = pen.text(right, base, label, 9.5, colour=QUIET, align="right")
        source = plain_text(self.stock.source) or "Thread"
        if continued:
            source = f"{source} (continued)"
        pen.text(SIDE_PT, base, source, 11, font=STRONG, room=body_width(self.paper) - used - 12)

    def _draw_cuts(self, pen: Pen, cuts: tuple[SheetCut, ...], offset: int, top: float) -> None:
        """List the cuts in order, down the first column, then down the second."""
        rows = -(-len(cuts) // _COLUMNS)
        width = (body_width(self.paper) - _COLUMN_GAP * (_COLUMNS - 1)) / _COLUMNS
        columns = _columns_for(self.unit, width)
        for start in range(0, len(cuts), max(rows, 1)):
            x = SIDE_PT + start // rows * (width + _COLUMN_GAP)
            column = cuts[start : start + rows]
            self._draw_list_head(pen, column, x, top - 8, columns)
            for place, cut in enumerate(column):
                base = top - _LIST_HEAD_PT - place * _CUT_PT - 12
                self._draw_cut(pen, cut, offset + start + place + 1, x, base, columns)

    def _draw_list_head(
        self, pen: Pen, cuts: tuple[SheetCut, ...], x: float, y: float, columns: _Columns
    ) -> None:
        unit = printable(self.unit)
        right = x + columns.cut + columns.tail
        pen.text(right, y, f"cut, {unit}", 7.5, colour=QUIET, align="right")
        pen.text(x + columns.tag, y, "tag", 7.5, colour=QUIET, align="right")
        pen.text(x + columns.strands, y, "strands", 7.5, colour=QUIET)
        if any(cut.fold_mm is not None for cut in cuts):
            right = x + columns.width
            pen.text(right, y, f"fold, {unit}", 7.5, colour=QUIET, align="right")

    def _draw_cut(
        self, pen: Pen, cut: SheetCut, order: int, x: float, base: float, columns: _Columns
    ) -> None:
        pen.rule(x + columns.cut - 24, base - 4.5, columns.width - columns.cut + 24, RULE, 0.3)
        pen.text(x + 11, base, str(order), 8.5, colour=QUIET, align="right", room=14)
        pen.tick_box(x + 15, base - 1, 10)
        pen.figure(x + columns.cut, base, format_number(cut.cut_mm, self.unit), 12.5, font=STRONG)
        pen.text(x + columns.tag, base, str(cut.tag_number), 12.5, align="right")
        strands = joined((cut.label, plain_text(cut.slot)), "  ")
        room = columns.width - columns.strands
        if cut.fold_mm is not None:
            room = columns.fold - columns.strands - 24
        pen.text(x + columns.strands, base, strands, 11, room=room)
        if cut.fold_mm is not None:
            pen.figure(x + columns.fold, base, format_number(cut.fold_mm, self.unit), 11)

    def _draw_left(self, pen: Pen, top: float) -> None:
        left = format_length(self.stock.left_mm, self.unit)
        if not self.stock.left_mm:
            words = "Nothing left."
        elif self.stock.goes_back:
            words = f"{left} goes back on the shelf"
        else:
            words = f"{left} left: waste"
        y = top - 13
        if self.stock.left_mm:
            pen.hatch(SIDE_PT + 15, y - 1, 10, 10, hatch_gap(self.stock))
        pen.text(SIDE_PT + 32, y, words, 11, font=STRONG if self.stock.goes_back else REGULAR)
