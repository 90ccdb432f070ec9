"""Invented sheets for the tests: a small workshop, its shades, its tags."""

from datetime import date
from decimal import Decimal
from functools import cache

from patterns.drawing import draw_band
from patterns.knots import DiagonalPattern, Finish, Knot
from patterns.shapes import Drawing
from planner.sheets.contents import (
    CuttingSheet,
    PurchaseRow,
    PurchaseSheet,
    ShadeCuts,
    SheetCut,
    SheetHead,
    StackCut,
    StockCut,
    SupplierOrder,
    Tag,
    TagPiece,
    TagSheet,
)

SHADES = (
    ("T04", "Tarred rope", "#2b2622"),
    ("S11", "Sea pea", "#7a9b58"),
    ("L02", "Lantern", "#e2a23b"),
    ("M07", "Mussel", "#35476b"),
    ("F01", "Foam", "#f4f1e6"),
    ("R09", "Rowan", "#b23a34"),
)

HEAD = SheetHead(
    workshop="Two Tides Thread Stall",
    batch="Saltmarch harbour fair",
    market_date=date(2026, 12, 5),
    plan_label="Plan 3",
    plan_date=date(2026, 11, 28),
)


@cache
def band(strands: int, rows: int = 118) -> Drawing:
    slots = tuple("ABCDEF"[strand * 6 // max(strands, 6)] for strand in range(strands))
    knots = tuple(
        tuple(Knot.F for _ in range((strands - row % 2) // 2 if strands % 2 == 0 else strands // 2))
        for row in range(2)
    )
    pattern = DiagonalPattern("Slipway", slots, knots, Finish.EXACT)
    colours = {slot: SHADES["ABCDEF".index(slot)][2] for slot in slots}
    return draw_band(pattern, rows, colours, layout="horizontal")


def piece(strands: tuple[int, ...], shade: int = 0, cut_mm: int = 1240, **changes) -> TagPiece:
    code, name, colour = SHADES[shade % len(SHADES)]
    fields = {
        "label": " + ".join(str(strand) for strand in strands),
        "slot": "ABCDEF"[shade % 6],
        "shade_code": code,
        "shade_name": name,
        "shade_colour": colour,
        "cut_mm": cut_mm,
        "fold_mm": None if len(strands) == 1 else cut_mm // 2 + 20,
    }
    return TagPiece(**(fields | changes))


def tag(number: int = 1, count: int = 3, **changes) -> Tag:
    fields = {
        "number": number,
        "code_text": f"http://192.168.178.24:8000/t/{number:06d}",
        "pattern": "Slipway chevron",
        "colourway": "Harbour lights",
        "size": "Adult M",
        "ending": "folded start, plaited ties",
        "for_whom": "Saltmarch rowing club",
        "due": date(2026, 12, 4),
        "pieces": tuple(
            piece((2 * place + 2, 2 * place + 1), place, 1240 + 65 * place)
            for place in range(count)
        ),
        "rows": 118,
        "knotted_length_mm": 150,
        "drawing": band(6),
        "cautions": (),
    }
    return Tag(**(fields | changes))


CAUTIONS = (
    "Not for children under 3: small parts and long ties.",
    "Take off for sleep, sport, machines and playgrounds.",
    "Colours may run when wet.",
    "Metal parts: ask your supplier for nickel and lead papers.",
    "Rules differ by country: check before you sell to children.",
)


def single_pieces(count: int) -> tuple[TagPiece, ...]:
    return tuple(piece((place + 1,), place, 625 + 10 * place) for place in range(count))


def tag_sheet(*tags: Tag, unit: str = "cm") -> TagSheet:
    return TagSheet(HEAD, unit, tags)


def _label(place: int) -> str:
    return f"{2 * place + 1} + {2 * place + 2}" if place % 2 else f"{place + 1}"


def stock(
    first_tag: int, count: int, reckoned_mm: int = 7840, *, is_new: bool = True, **changes
) -> StockCut:
    most = reckoned_mm // max(count, 1)
    lengths = [min(most, 1245 - 65 * place) for place in range(count)]
    left_mm = reckoned_mm - sum(lengths)
    fields = {
        "source": "New skein 1 of 3, lot bought now" if is_new else "Remnant, lot 41-B",
        "is_new": is_new,
        "reckoned_mm": reckoned_mm,
        "cuts": tuple(
            SheetCut(
                first_tag + place,
                "sliding piece" if place == 4 else _label(place),
                "ABCDEF"[place % 6],
                length,
                length // 2 if place % 2 else None,
            )
            for place, length in enumerate(lengths)
        ),
        "left_mm": left_mm,
        "goes_back": left_mm >= 300,
    }
    return StockCut(**(fields | changes))


def shade_cuts(shade: int, *pieces: StockCut) -> ShadeCuts:
    stacks = tuple(StackCut(piece.source, (piece,)) for piece in pieces)
    return ShadeCuts(*SHADES[shade % len(SHADES)], stacks)


def cutting_sheet(*shades: ShadeCuts, unit: str = "cm") -> CuttingSheet:
    return CuttingSheet(HEAD, unit, shades)


def purchase_row(shade: int = 0, count: int = 3, price: str = "1.20", **changes) -> PurchaseRow:
    code, name, colour = SHADES[shade % len(SHADES)]
    fields = {
        "shade_code": code,
        "shade_name": name,
        "shade_colour": colour,
        "put_up": "skein of 8 m",
        "length_mm": 8000,
        "count": count,
        "unit_price": Decimal(price),
        "cost": Decimal(price) * count,
        "proof": f"fewer than {count} is impossible",
    }
    return PurchaseRow(**(fields | changes))


def order(supplier: str, *rows: PurchaseRow) -> SupplierOrder:
    return SupplierOrder(supplier, rows, sum((row.cost for row in rows), Decimal(0)))


def purchase_sheet(*orders: SupplierOrder, currency: str = "EUR") -> PurchaseSheet:
    cost = sum((each.cost for each in orders), Decimal(0))
    return PurchaseSheet(HEAD, currency, orders, cost)
