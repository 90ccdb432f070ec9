"""The purchase sheet: what to buy, by supplier. All coordinates are points."""

from planner.sheets.contents import PurchaseRow, PurchaseSheet, SupplierOrder
from planner.sheets.fonts import STRONG, printable, width_of
from planner.sheets.pages import (
    SIDE_PT,
    Block,
    Heading,
    Opening,
    body_width,
    draw_document,
    notice_blocks,
)
from planner.sheets.paper import Paper
from planner.sheets.pen import INK, QUIET, RULE, Pen
from planner.sheets.wording import counted, joined, market_words, money, plain_text

_ROW_PT = 37.0
_HEADING_PT = 52.0
_TOTAL_PT = 34.0
# Right edges, measured from the right margin: skeins, price, cost.
_SKEINS, _PRICE, _COST = 150.0, 74.0, 0.0


def build_purchase_sheet(sheet: PurchaseSheet, paper: Paper) -> bytes:
    """Draw the purchase sheet as PDF.

    Parameters
    ----------
    sheet
        What to buy.
    paper
        The format to draw it on.

    Returns
    -------
    bytes
        The same bytes for the same sheet.
    """
    title = f"What to buy for {market_words(sheet.head.batch, sheet.head.market_date)}"
    pen = Pen(paper, title, sheet.head)
    opening = Opening(title, _answer(sheet))
    return draw_document(pen, sheet.head, opening, _blocks(sheet, paper))


def _answer(sheet: PurchaseSheet) -> str:
    bought = sum(row.count for order in sheet.suppliers for row in order.rows)
    if not bought:
        return "Nothing to buy: the thread on your shelf is enough."
    suppliers = sum(1 for order in sheet.suppliers if order.rows)
    return (
        f"{counted(bought, 'skein')} from {counted(suppliers, 'supplier')}, "
        f"{_with_currency(sheet)} in all."
    )


def _with_currency(sheet: PurchaseSheet) -> str:
    return joined((money(sheet.cost), plain_text(sheet.currency)), "\u00a0")


def _blocks(sheet: PurchaseSheet, paper: Paper) -> list[Block]:
    blocks = notice_blocks(sheet.notices, paper)
    orders = [order for order in sheet.suppliers if order.rows]
    for order in orders:
        heading = _supplier_heading(order, sheet.currency, paper)
        code_room = _code_room(order)
        for row in order.rows:
            blocks.append(_row_block(row, heading, code_room, paper))
        # The sum stays with its last row, so that no page holds a sum alone.
        last = blocks.pop()
        blocks.append(_row_with_sum(last, order, paper))
    if len(orders) > 1:
        blocks.append(_grand_total(sheet, paper))
    return blocks


def _code_room(order: SupplierOrder) -> float:
    """Width of the code column: as wide as the longest code, within reason."""
    widest = max(width_of(printable(row.shade_code), STRONG, 11) for row in order.rows)
    return min(max(widest, 24.0), 72.0)


def _supplier_heading(order: SupplierOrder, currency: str, paper: Paper) -> Heading:
    def draw(pen: Pen, top: float, continued: bool) -> None:
        right = paper.width_pt - SIDE_PT
        label = "  (continued)" if continued else ""
        room = body_width(paper) - (70 if continued else 0)
        name = plain_text(order.supplier) or "Supplier not named"
        used = pen.text(SIDE_PT, top - 24, name, 14, font=STRONG, room=room)
        pen.text(SIDE_PT + used, top - 24, label, 10, colour=QUIET)
        unit = f" ({plain_text(currency)[:8]})" if currency else ""
        for text, offset in (("how many", _SKEINS), ("each" + unit, _PRICE), ("cost" + unit, 0)):
            pen.text(right - offset, top - 41, text, 8.5, colour=QUIET, align="right")
        pen.text(SIDE_PT + 20, top - 41, "shade and put-up", 8.5, colour=QUIET)
        pen.rule(SIDE_PT, top - 46, body_width(paper), INK, 0.8)

    return Heading(_HEADING_PT, draw)


def _row_block(row: PurchaseRow, heading: Heading, code_room: float, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        right = paper.width_pt - SIDE_PT
        base = top - 15
        pen.tick_box(SIDE_PT, base - 1.5, 10)
        pen.knot(SIDE_PT + 28, base + 3.5, 7.5, row.shade_colour)
        code_x = SIDE_PT + 44
        pen.text(code_x, base, row.shade_code, 11, font=STRONG, room=code_room)
        name_x = code_x + code_room + 10
        name_room = right - _SKEINS - 40 - name_x
        pen.text(name_x, base, row.shade_name, 11, room=name_room)
        under = joined((plain_text(row.put_up), plain_text(row.proof)))
        pen.text(name_x, base - 13, under, 9, colour=QUIET, room=right - name_x)
        pen.text(right - _SKEINS, base, str(row.count), 13, font=STRONG, align="right")
        pen.text(right - _PRICE, base, money(row.unit_price), 11, align="right")
        pen.text(right - _COST, base, money(row.cost), 11, align="right")
        pen.rule(SIDE_PT, top - _ROW_PT + 2, body_width(paper), RULE, 0.4)

    return Block(_ROW_PT, draw, heading)


def _row_with_sum(last: Block, order: SupplierOrder, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        last.draw(pen, top)
        base = top - last.height - 12
        right = paper.width_pt - SIDE_PT
        count = sum(row.count for row in order.rows)
        pen.text(right - _PRICE, base, "together", 9, colour=QUIET, align="right")
        pen.text(right - _SKEINS, base, str(count), 11, font=STRONG, align="right")
        pen.text(right, base, money(order.cost), 11, font=STRONG, align="right")

    return Block(last.height + _TOTAL_PT, draw, last.heading)


def _grand_total(sheet: PurchaseSheet, paper: Paper) -> Block:
    def draw(pen: Pen, top: float) -> None:
        right = paper.width_pt - SIDE_PT
        pen.rule(SIDE_PT, top - 2, body_width(paper), INK, 0.8)
        pen.text(SIDE_PT, top - 19, "All suppliers", 12, font=STRONG)
        pen.text(right, top - 19, _with_currency(sheet), 13, font=STRONG, align="right")

    return Block(30.0, draw)
