"""A cutting problem and its answer: pieces to cut, thread on the shelf, put-ups to buy."""

from dataclasses import dataclass
from decimal import Decimal
from typing import Literal

MAXIMUM_LENGTH_MM = 100_000_000
MAXIMUM_PIECES = 200_000
MAXIMUM_PUT_UPS = 100
MAXIMUM_PACKS = 1_000
MAXIMUM_PRICE = Decimal(1_000_000)
MAXIMUM_PRICE_PLACES = 4

Status = Literal["optimal", "feasible"]


class CuttingError(ValueError):
    """A problem that is not one, or that no stock can satisfy; the message says why."""


def check_whole(value: object, name: str, minimum: int, maximum: int) -> None:
    """Refuse everything but a whole number in range (a bool is none).

    Parameters
    ----------
    value
        What was given.
    name
        What it is, for the message.
    minimum, maximum
        The smallest and the largest value taken.

    Raises
    ------
    CuttingError
        When `value` is not an int from `minimum` to `maximum`.
    """
    if isinstance(value, bool) or not isinstance(value, int):
        raise CuttingError(f"{name} must be a whole number.")
    if not minimum <= value <= maximum:
        raise CuttingError(f"{name} must be from {minimum} to {maximum}.")


@dataclass(frozen=True)
class Demand:
    """Pieces of one length to cut.

    Parameters
    ----------
    length_mm
        Length of a piece [mm].
    count
        How many; 0 asks for nothing.
    """

    length_mm: int
    count: int

    def __post_init__(self) -> None:
        check_whole(self.length_mm, "length_mm of a piece", 1, MAXIMUM_LENGTH_MM)
        check_whole(self.count, "count of a piece", 0, MAXIMUM_PIECES)


@dataclass(frozen=True)
class StockPiece:
    """Thread on the shelf, pieces of one length.

    Parameters
    ----------
    length_mm
        Length that can be cut from one [mm].
    count
        How many lie there.
    lot
        Their dye lot, as the caller names it; it is told again with every cut. Pieces that have to
        stay in one lot are the business of `solve_with_lots`.
    """

    length_mm: int
    count: int
    lot: str = ""

    def __post_init__(self) -> None:
        check_whole(self.length_mm, "length_mm of a stock piece", 1, MAXIMUM_LENGTH_MM)
        check_whole(self.count, "count of a stock piece", 0, MAXIMUM_PIECES)


def check_packs(pack_size: object, minimum_packs: object, pack_step: object) -> None:
    """Refuse packs that nobody sells.

    Parameters
    ----------
    pack_size
        How many put-ups come in a pack.
    minimum_packs
        The fewest packs taken, where any are.
    pack_step
        Packs are taken in multiples of it.

    Raises
    ------
    CuttingError
        When one of them is not a whole number from 1 to 1,000.
    """
    check_whole(pack_size, "pack_size of a put-up", 1, MAXIMUM_PACKS)
    check_whole(minimum_packs, "minimum_packs of a put-up", 1, MAXIMUM_PACKS)
    check_whole(pack_step, "pack_step of a put-up", 1, MAXIMUM_PACKS)


@dataclass(frozen=True)
class PutUp:
    """A way thread is sold.

    Parameters
    ----------
    length_mm
        Length of one as it is sold [mm].
    price
        What a pack costs, with at most four decimal places.
    pack_size
        How many come in a pack.
    minimum_packs
        The fewest packs taken, where any are.
    pack_step
        Packs are taken in multiples of it.
    supplier
        Who sells it, as the caller names it.
    short_measure_share
        What one may lack: it is trusted to hold `reckoned_mm`.
    """

    length_mm: int
    price: Decimal
    pack_size: int = 1
    minimum_packs: int = 1
    pack_step: int = 1
    supplier: str = ""
    short_measure_share: Decimal = Decimal(0)

    @property
    def reckoned_mm(self) -> int:
        """What one is trusted to hold [mm]."""
        return int(self.length_mm * (1 - self.short_measure_share))

    def __post_init__(self) -> None:
        check_whole(self.length_mm, "length_mm of a put-up", 1, MAXIMUM_LENGTH_MM)
        check_price(self.price)
        check_packs(self.pack_size, self.minimum_packs, self.pack_step)
        share = self.short_measure_share
        if not isinstance(share, Decimal) or not share.is_finite() or not 0 <= share < 1:
            raise CuttingError("short_measure_share must be a decimal number from 0 to below 1.")


def check_price(price: object) -> None:
    """Refuse a price that is not a plain, exact amount.

    Parameters
    ----------
    price
        What was given.

    Raises
    ------
    CuttingError
        When it is not a finite Decimal from 0 to a million with at most four decimal places.
    """
    if not isinstance(price, Decimal) or not price.is_finite():
        raise CuttingError("price must be a decimal number.")
    if not 0 <= price <= MAXIMUM_PRICE:
        raise CuttingError(f"price must be from 0 to {MAXIMUM_PRICE}.")
    if _places(price) > MAXIMUM_PRICE_PLACES:
        raise CuttingError(f"price takes at most {MAXIMUM_PRICE_PLACES} decimal places.")


@dataclass(frozen=True)
class Problem:
    """What to cut, from what.

    Parameters
    ----------
    demand
        The pieces to cut; equal lengths may stand more than once.
    stock
        The thread on the shelf.
    buy
        The put-ups that can be bought.
    """

    demand: tuple[Demand, ...]
    stock: tuple[StockPiece, ...] = ()
    buy: tuple[PutUp, ...] = ()

    def __post_init__(self) -> None:
        if sum(piece.count for piece in self.demand) > MAXIMUM_PIECES:
            raise CuttingError(f"Too many pieces to cut: at most {MAXIMUM_PIECES} in all.")
        if sum(piece.count for piece in self.stock) > MAXIMUM_PIECES:
            raise CuttingError(f"Too many stock pieces: at most {MAXIMUM_PIECES} in all.")
        if len(self.buy) > MAXIMUM_PUT_UPS:
            raise CuttingError(f"Too many put-ups to buy: at most {MAXIMUM_PUT_UPS}.")


@dataclass(frozen=True)
class Cut:
    """One stock piece and what is cut from it.

    Parameters
    ----------
    length_mm
        What the stock piece is trusted to hold [mm].
    new
        Whether it has to be bought.
    pieces_mm
        The pieces, longest first [mm].
    left_mm
        What is left of it [mm].
    lot
        The dye lot of a piece from the shelf.
    put_up
        Which of the problem's put-ups a new one is, from 0; None from the shelf.
    """

    length_mm: int
    new: bool
    pieces_mm: tuple[int, ...]
    left_mm: int
    lot: str = ""
    put_up: int | None = None

    def __post_init__(self) -> None:
        if self.left_mm < 0 or sum(self.pieces_mm) + self.left_mm != self.length_mm:
            raise CuttingError("A stock piece is cut into more or less than it holds.")


@dataclass(frozen=True)
class Result:
    """A cutting plan and what was proven about it.

    Parameters
    ----------
    status
        ``"optimal"`` when `cost` equals `lower_bound`, else ``"feasible"``.
    cost
        What the new thread costs.
    bought
        How many put-ups are bought: single ones, also where they come in packs.
    lower_bound
        No plan can cost less.
    bought_lower_bound
        No plan can buy fewer put-ups.
    cuts
        The stock pieces opened, shelf first.
    seconds
        How long it took [s].
    purchase
        How many of each of the problem's put-ups are bought; those not opened are spare.
    waste_mm
        What is left of opened pieces and shorter than the keep length [mm].
    leftovers
        How many pieces of the keep length or more are left of opened ones.
    tidiest
        Whether it is proven that with this purchase no plan has less waste, nor, with as little,
        leaves fewer pieces on the shelf, nor, with as few, opens fewer stock pieces.
    """

    status: Status
    cost: Decimal
    bought: int
    lower_bound: Decimal
    bought_lower_bound: int
    cuts: tuple[Cut, ...]
    seconds: float
    purchase: tuple[int, ...] = ()
    waste_mm: int = 0
    leftovers: int = 0
    tidiest: bool = False


@dataclass(frozen=True)
class Money:
    """Turns prices into whole numbers of their smallest unit and back, so that sums stay exact.

    Parameters
    ----------
    places
        Decimal places of the smallest unit, at least 2.
    """

    places: int

    @classmethod
    def of(cls, prices: "list[Decimal]") -> "Money":
        """Find the smallest unit that holds all prices.

        Parameters
        ----------
        prices
            The prices.

        Returns
        -------
        Money
            With at least two decimal places.
        """
        return cls(max([2, *(_places(price) for price in prices)]))

    def units(self, price: Decimal) -> int:
        """Give a price in smallest units.

        Parameters
        ----------
        price
            The price, with at most `places` decimal places.

        Returns
        -------
        int
            The number of smallest units.
        """
        return int(price.scaleb(self.places))

    def amount(self, units: int) -> Decimal:
        """Give an amount with `places` decimal places.

        Parameters
        ----------
        units
            The number of smallest units.

        Returns
        -------
        Decimal
            The amount.
        """
        return Decimal(units).scaleb(-self.places)


def _places(price: Decimal) -> int:
    # Not normalize(): it would round away digits beyond the context's precision.
    _, digits, exponent = price.as_tuple()
    zeros = len(digits) - len("".join(map(str, digits)).rstrip("0"))
    return max(0, -exponent - zeros) if isinstance(exponent, int) and any(digits) else 0
