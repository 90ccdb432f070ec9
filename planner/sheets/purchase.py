"""The purchase sheet: what to buy, by supplier. All coordinates are points."""

from dataclasses import dataclass

from inventory.measures import format_length
from planner.sheets.contents import PurchaseRow, PurchaseSheet, SupplierOrder
from planner.sheets.fonts import REGULAR, STRONG, printable, shortened, width_of
from planner.sheets.pages import (
    SIDE_PT,
    Block,
    Heading,
    Opening,
    body_width,
    draw_document,
    notice_blocks,
)
from planner.sheets.paper import Paper, paper_named
from planner.sheets.pen import INK, QUIET, RULE, Pen
from planner.sheets.wording import batch_words, counted, joined, money, plain_text

_ROW_PT = 37.0
_HEADING_PT = 52.0
_TOTAL_PT = 34.0
_LEAST_PRICE_PT = 58.0
_COLUMN_GAP_PT = 16.0


@dataclass(frozen=True)
class _Columns:
    """Widths from the right margin to where figures end, and the room codes take."""

    price: float
    skeins: float
    code_room: float


def build_purchase_sheet(sheet: PurchaseSheet, paper: Paper | str) -> bytes:
    """Draw the purchase sheet as PDF.

    Parameters
    ----------
    sheet
        What to buy.
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
    form = paper_named(paper)
    title = f"What to buy for {batch_words(sheet.head.batch)}"
    pen = Pen(form, title, sheet.head)
    opening = Opening(title, _answer(sheet))
    return draw_document(pen, sheet.head, opening, _blocks(sheet, form))


def _answer(sheet: PurchaseSheet) -> str:
    bought = sum(row.count for order in sheet.suppliers for row in order.rows)
    if sheet.missing:
        missing = counted(len(sheet.missing), "shade")
        so_far = _bought(sheet, bought) if bought else "nothing to buy."
        return f"Not the whole purchase: {missing} without a plan. So far {so_far}"
    if not bought:
        return "Nothing to buy: the thread on your shelf is enough."
    return _bought(sheet, bought)


def _bought(sheet: PurchaseSheet, bought: int) -> str:
    suppliers = sum(1 for order in sheet.suppliers if order.rows)
    names = [row.put_up for order in sheet.suppliers for row in order.rows]
    word = "skein" if all("skein" in name.casefold() for name in names) else "put-up"
    return (
        f"{counted(bought, word)} from {counted(suppliers, 'supplier')}, "
        f"{_with_currency(sheet)} in all."
    )


def _with_currency(sheet: PurchaseSheet) -> str:
    return joined((money(sheet.cost), plain_text(sheet.currency)), "\u00a0")


def _blocks(sheet: PurchaseSheet, paper: Paper) -> list[Block]:
    blocks = notice_blocks(sheet.notices, paper)
    orders = [order for order in sheet.suppliers if order.rows]
    columns = _columns_for(orders)
    for order in orders:
        heading = _supplier_heading(order, sheet.currency, columns, paper)
        for row in order.rows:
            blocks.append(_row_block(row, heading, columns, paper))
        # The sum stays with its last row, so that no page holds a sum alone.
        last = blocks.pop()
        blocks.append(_row_with_sum(last, order, columns, paper))
    if len(orders) > 1:
        blocks.append(_grand_total(sheet, paper))
    return blocks


def _columns_for(orders: list[SupplierOrder]) -> _Columns:
    """Make the columns as wide as the widest code and figures, the same for all suppliers."""
    rows = [row for order in orders for row in order.rows]
    costs = [money(row.cost) for row in rows] + [money(order.cost) for order in orders]
    prices = [money(row.unit_price) for row in rows]
    cost = max([_LEAST_PRICE_PT, *(width_of(each, STRONG, 11) for each in costs)])
    price = max([_LEAST_PRICE_PT, *(width_of(each, REGULAR, 11) for each in prices)])
    codes = [24.0, *(width_of(printable(row.shade_code), STRONG, 11) for row in rows)]
    price_edge = cost + _COLUMN_GAP_PT
    return _Columns(price_edge, price_edge + price + _COLUMN_GAP_PT, min(max(codes), 72.0))


def _supplier_heading(
    order: SupplierOrder, currency: str, columns: _Columns, paper: Paper
) -> Heading:
    def draw(pen: Pen, top: float, continued: bool) -> None:
        right = paper.width_pt - SIDE_PT
        label = "(continued)" if continued else ""
        room = body_width(paper) - (70 if continued else 0)
        name = plain_text(order.supplier) or "Supplier not named"
        used = pen.text(SIDE_PT, top - 24, name, 14, font=STRONG, room=room)
        pen.text(SIDE_PT + used + 8, top - 24, label, 10, colour=QUIET)
        unit = f" ({plain_text(currency)})" if plain_text(currency) else ""
        for text, edge in (
            ("how many", columns.skeins),
            ("each" + unit, columns.price),
            ("cost" + unit, 0),
        ):
            pen.text(
                right - edge, top - 41, text, 8.5, colour=QUIET, align="right", room=_LEAST_PRICE_PT
            )
        pen.text(
            SIDE_PT + 20,
            top - 41,
            "shade and put-up \u00b7 ask for one dye lot of each shade",
            8.5,
            colour=QUIET,
        )
        pen.rule(SIDE_PT, top - 46, body_width(paper), INK, 0.8)

    return Heading(_HEADING_PT, draw)


def _put_up_words(row: PurchaseRow) -> str:
    """The put-up with its length, unless its name tells a length already."""
    words = row.put_up
    if not any(character.isdigit() for character in words):
        words = f"{words}, {format_length(row.length_mm, 'm')}"
    if row.pack_size == 1:
        return words
    spare = f", {row.spare} spare" if row.spare else ""
    return f"pack of {row.pack_size}: {words}{spare}"


def _row_block(row: PurchaseRow, heading: Heading, columns: _Columns, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        right = paper.width_pt - SIDE_PT
        base = top - 15
        pen.tick_box(SIDE_PT, base - 1.5, 10)
        pen.knot(SIDE_PT + 28, base + 3.5, 7.5, row.shade_colour)
        code_x = SIDE_PT + 44
        pen.text(code_x, base, row.shade_code, 11, font=STRONG, room=columns.code_room)
        name_x = code_x + columns.code_room + 10
        name_room = right - columns.skeins - 40 - name_x
        pen.text(name_x, base, row.shade_name, 11, room=name_room)
        # The proof is what the maker trusts the number by: a long put-up gives way to it.
        room = right - name_x
        proof = printable(row.proof)
        put_up_room = max(room - width_of(proof, REGULAR, 9) - 12, room / 3)
        put_up = shortened(_put_up_words(row), REGULAR, 9, put_up_room)
        pen.text(name_x, base - 13, joined((put_up, proof)), 9, colour=QUIET, room=room)
        pen.text(right - columns.skeins, base, str(row.packs), 13, font=STRONG, align="right")
        pen.text(right - columns.price, base, money(row.unit_price), 11, align="right")
        pen.text(right, base, money(row.cost), 11, align="right")
        pen.rule(SIDE_PT, top - _ROW_PT + 2, body_width(paper), RULE, 0.4)

    return Block(_ROW_PT, draw, heading)


def _row_with_sum(last: Block, order: SupplierOrder, columns: _Columns, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        last.draw(pen, top)
        base = top - last.height - 12
        right = paper.width_pt - SIDE_PT
        count = sum(row.packs for row in order.rows)
        pen.text(right - columns.price, base, "together", 9, colour=QUIET, align="right")
        pen.text(right - columns.skeins, base, str(count), 11, font=STRONG, align="right")
        pen.text(right, base, money(order.cost), 11, font=STRONG, align="right")

    return Block(last.height + _TOTAL_PT, draw, last.heading)


def _grand_total(sheet: PurchaseSheet, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        right = paper.width_pt - SIDE_PT
        pen.rule(SIDE_PT, top - 2, body_width(paper), INK, 0.8)
        pen.text(SIDE_PT, top - 19, "All suppliers", 12, font=STRONG)
        room = body_width(paper) - 100
        words = _with_currency(sheet)
        pen.text(right, top - 19, words, 13, font=STRONG, align="right", room=room)

    return Block(30.0, draw)
