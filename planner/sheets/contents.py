"""What stands on each sheet: plain data, filled from a plan, drawn by the builders."""

from dataclasses import dataclass
from datetime import date
from decimal import Decimal

from patterns.shapes import Drawing


@dataclass(frozen=True)
class SheetHead:
    """What every page says about itself: whose sheet, for which market, from which plan."""

    workshop: str
    batch: str
    market_date: date | None
    plan_label: str
    plan_date: date


@dataclass(frozen=True)
class PurchaseRow:
    """One shade in one put-up to buy: `count` single ones, of which `spare` are not opened."""

    shade_code: str
    shade_name: str
    shade_colour: str
    put_up: str
    length_mm: int
    count: int
    unit_price: Decimal
    cost: Decimal
    proof: str
    pack_size: int = 1
    spare: int = 0

    @property
    def packs(self) -> int:
        """What is asked for at the till: packs, or single ones."""
        return self.count // self.pack_size


@dataclass(frozen=True)
class SupplierOrder:
    """Everything to buy from one supplier."""

    supplier: str
    rows: tuple[PurchaseRow, ...]
    cost: Decimal


@dataclass(frozen=True)
class MissingShade:
    """A shade that the plan has no purchase for, and why."""

    shade_code: str
    shade_name: str
    why: str


@dataclass(frozen=True)
class PurchaseSheet:
    """What to buy, by supplier; `notices` says what the plan could not provide for.

    With `missing` shades it is not the whole purchase, and says so.
    """

    head: SheetHead
    currency: str
    suppliers: tuple[SupplierOrder, ...]
    cost: Decimal
    notices: tuple[str, ...] = ()
    missing: tuple[MissingShade, ...] = ()


@dataclass(frozen=True, slots=True)
class SheetCut:
    """One piece on the cutting sheet: whose tag, which strands ("4 + 1"), how long, where to fold."""

    tag_number: int
    label: str
    slot: str
    cut_mm: int
    fold_mm: int | None


@dataclass(frozen=True, slots=True)
class StockCut:
    """One skein or remnant and its cuts in order; `left_mm` goes back or is waste."""

    source: str
    is_new: bool
    reckoned_mm: int
    cuts: tuple[SheetCut, ...]
    left_mm: int
    goes_back: bool


@dataclass(frozen=True)
class StackCut:
    """Skeins of one lot that are cut alike and laid together; mostly it is one alone."""

    source: str
    skeins: tuple[StockCut, ...]


@dataclass(frozen=True)
class ShadeCuts:
    """All cuts of one shade, lot by lot."""

    shade_code: str
    shade_name: str
    shade_colour: str
    stacks: tuple[StackCut, ...]

    @property
    def stock(self) -> tuple[StockCut, ...]:
        """All skeins and remnants, in the order of the cuts."""
        return tuple(skein for stack in self.stacks for skein in stack.skeins)


@dataclass(frozen=True)
class CuttingSheet:
    """What to cut, skein by skein; `notices` says what the plan could not provide for."""

    head: SheetHead
    unit: str
    shades: tuple[ShadeCuts, ...]
    notices: tuple[str, ...] = ()


@dataclass(frozen=True)
class TagPiece:
    """A piece as the tag shows it; its label names two strands where the piece is folded."""

    label: str
    slot: str
    shade_code: str
    shade_name: str
    shade_colour: str
    cut_mm: int
    fold_mm: int | None


@dataclass(frozen=True, slots=True)
class Tag:
    """One bracelet's tag."""

    number: int
    code_text: str
    pattern: str
    colourway: str
    size: str
    ending: str
    for_whom: str
    due: date | None
    pieces: tuple[TagPiece, ...]
    rows: int
    knotted_length_mm: int
    drawing: Drawing
    cautions: tuple[str, ...]
    distinct_lengths: int | None = None


@dataclass(frozen=True)
class TagSheet:
    """All tags of a plan."""

    head: SheetHead
    unit: str
    tags: tuple[Tag, ...]
