"""Cut tags: one a bracelet, several a page, to cut apart along dashed lines.

All coordinates are points.
"""

from collections.abc import Iterator
from dataclasses import dataclass

from inventory.measures import format_length, format_number
from planner.sheets.bracelet import DrawingForms, fitted_size
from planner.sheets.codes import code_for, draw_code
from planner.sheets.contents import Tag, TagPiece, TagSheet
from planner.sheets.fonts import REGULAR, STRONG, printable
from planner.sheets.pages import draw_foot
from planner.sheets.paper import Paper, paper_named
from planner.sheets.pen import INK, MADDER, QUIET, RULE, Pen
from planner.sheets.piece_columns import PieceColumns, columns_for
from planner.sheets.tag_layouts import (
    FINISH_PT,
    LEAST_ROW_PT,
    MOST_ROW_PT,
    PADDING_PT,
    PICTURE_PT,
    SIDE_PT,
    SMALL_ROW_PT,
    SMALL_SIZE_PT,
    TABLE_HEAD_PT,
    TOP_PT,
    TagRow,
    arrange,
    header_height,
    small_print,
    tag_width,
    tags_height,
)
from planner.sheets.wording import batch_words, counted, joined, plain_text, short_date

_NUMBER_PT = 31.0
_CODE_INSET = 3.5
_PICTURE_SHARE = 0.2
_PICTURE_AIR_PT = 12.0


def build_tag_sheet(sheet: TagSheet, paper: Paper | str) -> bytes:
    """Draw the cut tags as PDF.

    Parameters
    ----------
    sheet
        The tags, with the unit the maker measures in.
    paper
        The format to draw them on, or its key in `PAPERS`.

    Returns
    -------
    bytes
        The same bytes for the same sheet.

    Raises
    ------
    PaperError
        When there is no such paper.
    CodeTextError
        When a tag's `code_text` is empty or too long for its code.
    TagError
        When a tag has more pieces than a page holds.
    """
    return b"".join(tag_sheet_parts(sheet, paper))


def tag_sheet_parts(sheet: TagSheet, paper: Paper | str) -> Iterator[bytes]:
    """Draw the cut tags, and give the document away page by page.

    What may be wrong with a sheet is raised here, before the first part, as by
    `build_tag_sheet`.
    """
    form = paper_named(paper)
    pages = arrange(sheet.tags, form) or [[]]
    return _tag_pages(sheet, form, pages)


def _tag_pages(sheet: TagSheet, form: Paper, pages: list[list[TagRow]]) -> Iterator[bytes]:
    title = f"Tags for {batch_words(sheet.head.batch)}"
    pen = Pen(form, title, sheet.head)
    forms = DrawingForms(pen.canvas)
    for number, rows in enumerate(pages, start=1):
        if not rows:
            words = "No tags: this plan has no bracelets to make."
            pen.text(SIDE_PT, form.height_pt - TOP_PT - 24, words, 14, font=STRONG)
        top = form.height_pt - TOP_PT
        for row in rows:
            top = _draw_row(pen, forms, row, sheet.unit, top)
        draw_foot(pen, sheet.head, number, len(pages), SIDE_PT)
        pen.next_page()
        yield pen.taken()
    yield pen.finish()


def _draw_row(pen: Pen, forms: DrawingForms, row: TagRow, unit: str, top: float) -> float:
    """Draw tags side by side with the lines to cut; return the row's foot."""
    width = tag_width(row.layout, pen.paper)
    foot = top - tags_height(pen.paper) * row.height_share
    right = SIDE_PT + len(row.tags) * width
    for y in (top, foot):
        pen.cut_line(SIDE_PT, y, right, y)
    for place in range(len(row.tags) + 1):
        pen.cut_line(SIDE_PT + place * width, top, SIDE_PT + place * width, foot)
    for place, tag in enumerate(row.tags):
        frame = _Frame(SIDE_PT + place * width, foot, width, top - foot)
        _TagDrawing(pen, forms, tag, unit, frame, row.layout.piece_columns).draw()
    return foot


@dataclass(frozen=True)
class _Frame:
    """A tag from cut line to cut line."""

    x: float
    y: float
    width: float
    height: float

    @property
    def left(self) -> float:
        return self.x + PADDING_PT

    @property
    def right(self) -> float:
        return self.x + self.width - PADDING_PT

    @property
    def inner_width(self) -> float:
        return self.width - 2 * PADDING_PT


class _TagDrawing:
    """One tag, drawn from its head down and from its foot up to meet in the list."""

    def __init__(
        self,
        pen: Pen,
        forms: DrawingForms,
        tag: Tag,
        unit: str,
        frame: _Frame,
        piece_columns: int,
    ) -> None:
        self.pen = pen
        self.forms = forms
        self.tag = tag
        self.unit = unit
        self.frame = frame
        self.piece_columns = piece_columns

    def draw(self) -> None:
        """Draw in reading order, so that the text of the page reads as it looks."""
        lines = small_print(self.tag, self.frame.inner_width)
        small_top = self.frame.y + PADDING_PT + (len(lines) * SMALL_ROW_PT + 3 if lines else 0)
        foot = small_top + FINISH_PT
        top = self._draw_head()
        rows = -(-len(self.tag.pieces) // self.piece_columns)
        spare = max(0.0, top - foot - PICTURE_PT - TABLE_HEAD_PT - rows * LEAST_ROW_PT)
        row_pt = min(MOST_ROW_PT, LEAST_ROW_PT + spare / max(rows, 1))
        spare -= rows * (row_pt - LEAST_ROW_PT)
        picture = min(PICTURE_PT + spare, self._picture_height())
        self._draw_picture(top, picture)
        self._draw_pieces(top - picture, rows, row_pt)
        self._draw_finish(small_top)
        for place, line in enumerate(lines, start=1):
            base = small_top - 1.5 - place * SMALL_ROW_PT
            self.pen.text(self.frame.left, base, line, SMALL_SIZE_PT)

    def _draw_head(self) -> float:
        pen, tag, frame = self.pen, self.tag, self.frame
        top = frame.y + frame.height
        code = code_for(tag.code_text)
        draw_code(pen, code, frame.x + frame.width - _CODE_INSET, top - _CODE_INSET)
        number = str(tag.number)
        size = _NUMBER_PT if len(number) < 4 else _NUMBER_PT * 3 / len(number)
        used = pen.text(frame.left, top - PADDING_PT - 22, number, size, font=STRONG, colour=MADDER)
        x = frame.left + max(used, 34) + 9
        room = frame.x + frame.width - _CODE_INSET - code.side_pt - 4 - x
        y = top - PADDING_PT - 11
        for text, size, font in self._head_lines():
            pen.text(x, y, text, size, font=font, room=room)
            y -= 13
        return top - PADDING_PT - header_height(code.side_pt)

    def _head_lines(self) -> list[tuple[str, float, str]]:
        tag = self.tag
        for_whom, size = plain_text(tag.for_whom), plain_text(tag.size)
        lines = [
            (plain_text(tag.pattern), 12.5, STRONG),
            (joined((size, plain_text(tag.colourway))), 9.5, REGULAR),
            (f"for {for_whom}" if for_whom else "", 10.5, STRONG),
            (f"due {short_date(tag.due)}" if tag.due else "", 9.5, REGULAR),
        ]
        return [line for line in lines if line[0]]

    def _draw_finish(self, foot: float) -> None:
        """Write what to tie and how it ends."""
        tag, pen = self.tag, self.pen
        self.pen.rule(self.frame.left, foot + FINISH_PT - 2.5, self.frame.inner_width, RULE, 0.4)
        length = format_length(tag.knotted_length_mm, self.unit)
        words = f"Tie {counted(tag.rows, 'row')} to {length}"
        if tag.distinct_lengths is not None:
            words += f", cut in {counted(tag.distinct_lengths, 'length')}"
        used = pen.text(self.frame.left, foot + 3, words, 9.5, font=STRONG)
        ending = plain_text(tag.ending)
        if ending:
            room = self.frame.inner_width - used - 10
            pen.text(self.frame.right, foot + 3, ending, 9.5, room=room, align="right")

    def _picture_height(self) -> float:
        """Choose the picture's height: as wide as the tag allows, but no fifth of its height."""
        most = self.frame.height * _PICTURE_SHARE
        fitted = fitted_size(self.tag.drawing, self.frame.inner_width, most)[1]
        return max(PICTURE_PT, fitted + _PICTURE_AIR_PT)

    def _draw_picture(self, top: float, height: float) -> None:
        """Show the bracelet lying along the tag."""
        self.forms.show(
            self.tag.drawing, self.frame.left, top - height + 4, self.frame.inner_width, height - 8
        )

    def _draw_pieces(self, top: float, rows: int, row_pt: float) -> None:
        gap = 16.0
        width = (self.frame.inner_width - gap * (self.piece_columns - 1)) / self.piece_columns
        columns = columns_for(self.tag.pieces, self.unit, width, row_pt)
        for number in range(self.piece_columns):
            pieces = self.tag.pieces[number * rows : (number + 1) * rows]
            if pieces:
                x = self.frame.left + number * (width + gap)
                self._draw_list_head(x, top, width, columns)
                for place, piece in enumerate(pieces):
                    base = top - TABLE_HEAD_PT - (place + 0.72) * row_pt
                    self._draw_piece(piece, x, base, columns)

    def _draw_list_head(self, x: float, top: float, width: float, columns: PieceColumns) -> None:
        pen, y, unit = self.pen, top - 7.5, printable(self.unit)
        pen.text(x + columns.strand, y, "strand", 7, colour=QUIET)
        pen.text(x + columns.code, y, "shade", 7, colour=QUIET)
        right = x + columns.cut + columns.cut_tail
        pen.text(right, y, f"cut, {unit}", 7, colour=QUIET, align="right")
        if columns.folded:
            pen.text(x + width, y, f"fold, {unit}", 7, colour=QUIET, align="right")
        pen.rule(x, top - TABLE_HEAD_PT + 1.5, width, INK, 0.5)

    def _draw_piece(self, piece: TagPiece, x: float, base: float, columns: PieceColumns) -> None:
        pen, size, unit = self.pen, columns.size, self.unit
        half = columns.knot_half
        letter = plain_text(piece.slot)
        pen.knot(x + size * 0.62, base + size * 0.32, half, piece.shade_colour, letter, STRONG)
        room = columns.code - columns.strand - 3
        pen.text(x + columns.strand, base, piece.label, size, room=room)
        room = columns.name - columns.code - 3
        pen.text(x + columns.code, base, piece.shade_code, size, font=STRONG, room=room)
        pen.text(x + columns.name, base, piece.shade_name, size, room=columns.name_room)
        cut = format_number(piece.cut_mm, unit)
        pen.figure(x + columns.cut, base, cut, size, font=STRONG)
        if piece.fold_mm is not None:
            pen.figure(x + columns.fold, base, format_number(piece.fold_mm, unit), size)
