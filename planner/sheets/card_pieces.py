"""What is cut for the bracelet of a knotting card. All coordinates are points."""

from inventory.measures import format_number
from planner.sheets.card_contents import KnottingCard
from planner.sheets.card_pages import SIDE_PT, CardPages, Draw
from planner.sheets.card_words import free_words, start_words
from planner.sheets.contents import TagPiece
from planner.sheets.fonts import STRONG, printable
from planner.sheets.pen import INK, QUIET, Pen
from planner.sheets.piece_columns import PieceColumns, columns_for
from planner.sheets.tag_layouts import FOLD_WORDS
from planner.sheets.wording import plain_text

_ROW_PT = 11.5
_HEAD_PT = 11.0
_MOST_IN_ONE_LIST = 8
_GAP_PT = 14.0
_LEAST_NAME_PT = 40.0
_FEWEST_LINES = 4


def add_pieces(pages: CardPages, card: KnottingCard) -> None:
    """Add the list of pieces, and how they lie at the start."""
    pages.skip(4)
    pages.heading("What do I cut?", _HEAD_PT + min(len(card.pieces), _FEWEST_LINES) * _ROW_PT)
    lists = _lists_side_by_side(card, pages.width)
    left = card.pieces
    while left:
        pages.keep(_HEAD_PT + _FEWEST_LINES * _ROW_PT)
        lines = min(-(-len(left) // lists), int((pages.room - _HEAD_PT) // _ROW_PT))
        shown, left = left[: lines * lists], left[lines * lists :]
        pages.add(_HEAD_PT + lines * _ROW_PT, _piece_lists(card, shown, lines, lists, pages.width))
    pages.skip(2)
    if any(piece.fold_mm is not None for piece in card.pieces):
        pages.text(FOLD_WORDS)
    if card.runs:
        slots = sorted({each.run.slot for each in card.runs})
        pages.text(f"Runs of {', '.join(slots)} come from scraps: the end of this card lists them.")
    pages.text(start_words(card))
    pages.text(free_words(card))


def _lists_side_by_side(card: KnottingCard, width: float) -> int:
    """Two where there are many pieces, unless the shades' names had no room then."""
    half = columns_for(card.pieces, card.unit, _list_width(width, 2), _ROW_PT)
    is_long = len(card.pieces) > _MOST_IN_ONE_LIST
    return 2 if is_long and half.name_room >= _LEAST_NAME_PT else 1


def _list_width(width: float, lists: int) -> float:
    return (width - _GAP_PT * (lists - 1)) / lists


def _piece_lists(
    card: KnottingCard, pieces: tuple[TagPiece, ...], lines: int, lists: int, width: float
) -> Draw:
    """Lists side by side, read down; all pieces of the card set the columns."""
    list_width = _list_width(width, lists)
    columns = columns_for(card.pieces, card.unit, list_width, _ROW_PT)

    def draw(pen: Pen, top: float) -> None:
        for start in range(0, len(pieces), lines):
            x = SIDE_PT + start // lines * (list_width + _GAP_PT)
            _draw_list_head(pen, x, top, list_width, columns, card.unit)
            for place, piece in enumerate(pieces[start : start + lines]):
                base = top - _HEAD_PT - (place + 0.76) * _ROW_PT
                _draw_piece(pen, piece, x, base, columns, card.unit)

    return draw


def _draw_list_head(
    pen: Pen, x: float, top: float, width: float, columns: PieceColumns, unit: str
) -> None:
    y = top - 7.5
    pen.text(x + columns.strand, y, "strand", 7, colour=QUIET)
    pen.text(x + columns.code, y, "shade", 7, colour=QUIET)
    right = x + columns.cut + columns.cut_tail
    pen.text(right, y, f"cut, {printable(unit)}", 7, colour=QUIET, align="right")
    if columns.folded:
        pen.text(x + width, y, f"fold, {printable(unit)}", 7, colour=QUIET, align="right")
    pen.rule(x, top - _HEAD_PT + 1, width, INK, 0.5)


def _draw_piece(
    pen: Pen, piece: TagPiece, x: float, base: float, columns: PieceColumns, unit: str
) -> None:
    size = columns.size
    letter = plain_text(piece.slot)
    middle = base + size * 0.32
    pen.knot(x + size * 0.62, middle, columns.knot_half, piece.shade_colour, letter, STRONG)
    room = columns.code - columns.strand - 3
    pen.text(x + columns.strand, base, piece.label, size, room=room)
    room = columns.name - columns.code - 3
    pen.text(x + columns.code, base, piece.shade_code, size, font=STRONG, room=room)
    pen.text(x + columns.name, base, piece.shade_name, size, room=columns.name_room)
    pen.figure(x + columns.cut, base, format_number(piece.cut_mm, unit), size, font=STRONG)
    if piece.fold_mm is not None:
        pen.figure(x + columns.fold, base, format_number(piece.fold_mm, unit), size)
