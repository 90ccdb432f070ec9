"""A cutting problem with dye lots and its answer."""

from dataclasses import dataclass
from decimal import Decimal
from typing import Literal

from planner.cutting.problem import MAXIMUM_LENGTH_MM, Status, check_packs, check_price, check_whole

LotStatus = Status | Literal["stopped", "failed"]


@dataclass(frozen=True)
class Group:
    """The pieces of one shade in one bracelet (or matched set), to be cut from one lot.

    Parameters
    ----------
    key
        The caller's name for it.
    pieces_mm
        The pieces [mm].
    """

    key: str
    pieces_mm: tuple[int, ...]

    def __post_init__(self) -> None:
        for length_mm in self.pieces_mm:
            check_whole(length_mm, "length_mm of a piece", 1, MAXIMUM_LENGTH_MM)


@dataclass(frozen=True)
class LotStock:
    """One piece of thread on the shelf.

    Parameters
    ----------
    key
        The caller's name for it.
    length_mm
        What is trusted to be on it [mm]; 0 takes it out of the plan.
    """

    key: str
    length_mm: int

    def __post_init__(self) -> None:
        check_whole(self.length_mm, "length_mm of a stock piece", 0, MAXIMUM_LENGTH_MM)


@dataclass(frozen=True)
class Lot:
    """Thread of one dye lot on the shelf.

    Parameters
    ----------
    key
        The caller's name for it.
    stock
        The thread.
    """

    key: str
    stock: tuple[LotStock, ...]


@dataclass(frozen=True)
class Offer:
    """A put-up that a supplier sells.

    Parameters
    ----------
    key
        The caller's name for it.
    supplier
        Who sells it; the new thread of each supplier is a lot of its own.
    length_mm
        What is trusted to be on one [mm].
    price
        What a pack costs.
    pack_size
        How many come in a pack.
    minimum_packs
        The fewest packs taken, where any are.
    pack_step
        Packs are taken in multiples of it.
    """

    key: str
    supplier: str
    length_mm: int
    price: Decimal
    pack_size: int = 1
    minimum_packs: int = 1
    pack_step: int = 1

    def __post_init__(self) -> None:
        check_whole(self.length_mm, "length_mm of a put-up", 0, MAXIMUM_LENGTH_MM)
        check_price(self.price)
        check_packs(self.pack_size, self.minimum_packs, self.pack_step)


@dataclass(frozen=True)
class CutPiece:
    """A piece of a group, as it is cut.

    Parameters
    ----------
    group_key
        The group.
    index
        Which of its pieces, from 0.
    length_mm
        Its length [mm].
    """

    group_key: str
    index: int
    length_mm: int


@dataclass(frozen=True)
class Opened:
    """A stock piece or a new put-up, and what is cut from it.

    Parameters
    ----------
    stock_key
        The stock piece, or None when it is new.
    offer_key
        The offer it is bought by, or None when it is from the shelf.
    lot_key
        Its lot, or None when it is new: the new thread of a supplier is one lot.
    length_mm
        Its length [mm].
    pieces
        The pieces in the order of the cuts, longest first.
    left_mm
        What is left [mm].
    """

    stock_key: str | None
    offer_key: str | None
    lot_key: str | None
    length_mm: int
    pieces: tuple[CutPiece, ...]
    left_mm: int


@dataclass(frozen=True)
class LotResult:
    """A cutting plan for one shade.

    Parameters
    ----------
    status
        ``"optimal"`` when `cost` equals `lower_bound` and nothing that might fit is unplaced;
        ``"stopped"`` or ``"failed"`` when no plan was made and every group is unplaced.
    cost
        What the new thread costs.
    bought
        Offer keys with how many of each to buy: single put-ups, also where they come in packs;
        those that are not opened are spare.
    lower_bound
        No plan that keeps the lots costs less.
    bought_lower_bound
        No plan that keeps the lots buys fewer.
    opened
        What is cut, shelf first, lot by lot.
    unplaced
        Keys of groups that found no place: nothing is sold that holds their longest piece.
    seconds
        How long it took [s].
    cost_without_lots, bought_without_lots
        What the plan found would cost, and how many it buys, were all thread one lot; at most
        `cost`.
    lower_bound_without_lots
        No plan costs less, whatever the lots.
    waste_mm
        What is left of opened pieces and shorter than the keep length [mm].
    message
        Why there is no plan, where there is none.
    """

    status: LotStatus
    cost: Decimal
    bought: tuple[tuple[str, int], ...]
    lower_bound: Decimal
    bought_lower_bound: int
    opened: tuple[Opened, ...]
    unplaced: tuple[str, ...]
    seconds: float
    cost_without_lots: Decimal = Decimal(0)
    bought_without_lots: int = 0
    lower_bound_without_lots: Decimal = Decimal(0)
    waste_mm: int = 0
    message: str = ""
