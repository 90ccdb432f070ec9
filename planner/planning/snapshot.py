"""A plan as plain data: what is stored, shown and printed, with no link to what it came from."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date
from decimal import Decimal
from typing import Any


@dataclass(frozen=True)
class Habits:
    """The workshop's habits at the time of the plan."""

    workshop_name: str
    length_unit: str
    currency: str
    paper: str
    safety_share: Decimal
    rounding_step_mm: Decimal
    keep_length_mm: int
    short_measure_share: Decimal


@dataclass(frozen=True)
class SnapshotPiece:
    """A piece of a kind, in the order of the kind's pieces; `fold_from` names the fold's end."""

    slot: str
    shade_code: str
    strands: tuple[int, ...]
    cut_mm: int
    fold_mm: int | None
    role: str
    label: str
    short_label: str
    fold_from: str
    added_mm: int = 0


@dataclass(frozen=True)
class SnapshotKind:
    """All equal bracelets; `making` holds strands, gauge, ending and rule as JSON-ready data."""

    pattern_name: str
    pattern_text: str
    colourway_name: str
    size_name: str
    ending_name: str
    knotted_length_mm: int
    rows: int
    band_width_mm: float
    colours: dict[str, str]
    pieces: tuple[SnapshotPiece, ...]
    making: dict[str, Any]
    cautions: tuple[str, ...]
    pattern_key: int | None = None
    pattern_version: int | None = None

    @property
    def band_length_mm(self) -> int:
        """What the rows measure; a pattern that ends on whole repeats may miss the length asked."""
        return round(float(self.making["band_length_mm"]))

    @property
    def added_mm(self) -> int:
        """Thread that a bracelet takes more, so that its pieces share lengths [mm]."""
        return sum(piece.added_mm for piece in self.pieces)

    @property
    def distinct_lengths(self) -> int | None:
        """In how many lengths its pieces are cut at the most; None where each has its own."""
        lengths: int | None = self.making.get("distinct_lengths")
        return lengths


@dataclass(frozen=True, slots=True)
class SnapshotBracelet:
    """One bracelet; `key` is its page, None while the plan is not saved."""

    number: int
    kind_index: int
    for_whom: str
    due_date: date | None
    note: str
    key: int | None = None
    matched_set: str = ""


@dataclass(frozen=True, slots=True)
class SnapshotCut:
    """One cut: the piece `piece_index` of the bracelet with this tag number."""

    tag_number: int
    piece_index: int
    cut_mm: int


@dataclass(frozen=True, slots=True)
class SnapshotStock:
    """A skein or remnant that is cut from, its cuts in order, what is left of it."""

    source: str
    shelf_piece_number: int | None
    lot_name: str
    is_new: bool
    length_mm: int
    reckoned_mm: int
    left_mm: int
    goes_back: bool
    cuts: tuple[SnapshotCut, ...]


@dataclass(frozen=True)
class SnapshotThread:
    """A piece of thread that lay on the shelf, used or not."""

    number: int
    kind: str
    lot_name: str
    length_mm: int
    reckoned_mm: int


@dataclass(frozen=True)
class SnapshotPurchase:
    """So many single put-ups of one kind; `unit_price` is that of a pack."""

    supplier_name: str
    put_up_name: str
    length_mm: int
    reckoned_mm: int
    unit_price: Decimal
    count: int
    cost: Decimal
    pack_size: int = 1

    @property
    def packs(self) -> int:
        """How many packs are taken to the till."""
        return self.count // self.pack_size


@dataclass(frozen=True)
class ShadeProof:
    """How sure the plan of a shade is, and what keeping dye lots apart costs.

    The figures without lots are those of a plan that throws all thread together; None where the
    plan was made by a release that did not know them. `message` says why there is no plan.
    """

    seconds: float = 0.0
    cost_without_lots: Decimal | None = None
    bought_without_lots: int | None = None
    lower_bound_without_lots: Decimal | None = None
    waste_mm: int | None = None
    message: str = ""


@dataclass(frozen=True)
class SnapshotShade:
    """One shade: need, shelf, purchase, cuts, proof; `unplaced` are tag numbers without thread."""

    shade_key: int
    code: str
    name: str
    colour: str
    status: str
    piece_count: int
    need_mm: int
    shelf_mm: int
    usable_mm: int
    left_mm: int
    bought: int
    bought_lower_bound: int
    cost: Decimal
    lower_bound: Decimal
    purchases: tuple[SnapshotPurchase, ...]
    shelf: tuple[SnapshotThread, ...]
    stock: tuple[SnapshotStock, ...]
    unplaced: tuple[int, ...]
    proof: ShadeProof = ShadeProof()

    def spare(self, purchase: SnapshotPurchase) -> int:
        """How many of a purchase are not opened: a pack holds more than the plan cuts from."""
        opened = sum(
            stock.is_new
            and stock.length_mm == purchase.length_mm
            and stock.source.endswith(f": {purchase.put_up_name}")
            for stock in self.stock
        )
        return max(0, purchase.count - opened)

    @property
    def solving_seconds(self) -> float:
        """How long it was worked on [s]."""
        return self.proof.seconds


@dataclass(frozen=True)
class Snapshot:
    """The whole plan."""

    batch_name: str
    market_date: date | None
    plan_number: int
    plan_date: date
    habits: Habits
    kinds: tuple[SnapshotKind, ...]
    bracelets: tuple[SnapshotBracelet, ...]
    shades: tuple[SnapshotShade, ...]
    problems: tuple[str, ...]
    shelf_stamp: str
    orders_stamp: str
    choice: Mapping[str, Any] = field(default_factory=dict)

    @property
    def cost(self) -> Decimal:
        return sum((shade.cost for shade in self.shades), Decimal(0))

    @property
    def lower_bound(self) -> Decimal:
        return sum((shade.lower_bound for shade in self.shades), Decimal(0))

    @property
    def is_proven(self) -> bool:
        return all(shade.status == "optimal" and not shade.unplaced for shade in self.shades)

    @property
    def added_mm(self) -> int:
        """Thread that all bracelets take more, so that pieces share lengths [mm]."""
        return sum(self.kinds[bracelet.kind_index].added_mm for bracelet in self.bracelets)

    @property
    def piece_count(self) -> int:
        return sum(shade.piece_count for shade in self.shades)
