"""Ways to make a batch, and what each comes to: compared before anything is bought."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from typing import Any

from planner.planning.demand import Order
from planner.planning.netting import NettedShade, ShelfThread, ThreadOffer

AS_ORDERED = ""
STARTS = (AS_ORDERED, "folded", "straight")
OWN_LENGTHS = "own"
LENGTHS = (AS_ORDERED, OWN_LENGTHS, "1", "2", "3", "4", "5")
MOST_SUBSTITUTES = 100
LONGEST_NAME = 80
HIGHEST_KEY = 2**63 - 1


class ChoiceError(ValueError):
    """This is no choice; the text says what is wrong with it."""


@dataclass(frozen=True)
class Choice:
    """A way to make a batch.

    Parameters
    ----------
    remnants : whether started skeins and remnants of the shelf are used; whole skeins always are.
    start : "" as ordered, or "folded" or "straight" for every bracelet that can.
    lengths : "" as ordered, "own" for each piece its own, or in how many lengths a bracelet's
        pieces are cut at the most, "1" to "5".
    supplier : the one supplier of all new thread; "" for the cheapest mix.
    substitutes : pairs of shade keys: the second stands in for the first.

    Raises
    ------
    ChoiceError
        When a value is none of these.
    """

    remnants: bool = True
    start: str = AS_ORDERED
    lengths: str = AS_ORDERED
    supplier: str = ""
    substitutes: tuple[tuple[int, int], ...] = ()

    def __post_init__(self) -> None:
        if not isinstance(self.remnants, bool):
            raise ChoiceError("With or without remnants: true or false.")
        if self.start not in STARTS:
            raise ChoiceError("The start is folded or straight, or as ordered.")
        if self.lengths not in LENGTHS:
            raise ChoiceError("A bracelet is cut in 1 to 5 lengths, each its own, or as ordered.")
        name = self.supplier
        if not isinstance(name, str) or len(name) > LONGEST_NAME or "\x00" in name:
            raise ChoiceError("No supplier has such a name.")
        if len(self.substitutes) > MOST_SUBSTITUTES:
            raise ChoiceError(f"At most {MOST_SUBSTITUTES} shades can be replaced.")
        for pair in self.substitutes:
            if len(pair) != 2 or not all(_is_key(key) for key in pair):
                raise ChoiceError("A substitute is a shade for another shade.")

    @property
    def is_plain(self) -> bool:
        """Whether everything is as it stands."""
        return self == Choice()

    def as_json(self) -> dict[str, Any]:
        """Give what `read_choice` reads; only what differs from the batch as it stands."""
        plain = Choice()
        values: dict[str, Any] = {}
        for name in ("remnants", "start", "lengths", "supplier"):
            if getattr(self, name) != getattr(plain, name):
                values[name] = getattr(self, name)
        if self.substitutes:
            values["substitutes"] = [list(pair) for pair in self.substitutes]
        return values


def read_choice(values: object) -> Choice:
    """Read a choice from data that came from outside.

    Parameters
    ----------
    values : as `Choice.as_json` gives them.

    Returns
    -------
    The choice.

    Raises
    ------
    ChoiceError
        When they are anything else.
    """
    if not isinstance(values, Mapping):
        raise ChoiceError("A choice is an object.")
    unknown = sorted(str(key)[:40] for key in values if key not in Choice.__dataclass_fields__)
    if unknown:
        raise ChoiceError(f"A choice has no “{unknown[0]}”.")
    known = dict(values)
    pairs = known.pop("substitutes", [])
    if not isinstance(pairs, list) or not all(isinstance(pair, list) for pair in pairs):
        raise ChoiceError("Substitutes are pairs of shades.")
    return Choice(substitutes=tuple(tuple(pair) for pair in pairs), **known)


def with_substitutes(orders: Sequence[Order], choice: Choice) -> tuple[Order, ...]:
    """Put the substitutes into the orders.

    Parameters
    ----------
    orders : as they are loaded.
    choice : with pairs of shades.

    Returns
    -------
    The same orders; every slot that took a replaced shade takes the other one.
    """
    instead = dict(choice.substitutes)
    if not instead:
        return tuple(orders)
    return tuple(
        replace(
            order,
            kind=replace(
                order.kind,
                shades=tuple((slot, instead.get(key, key)) for slot, key in order.kind.shades),
            ),
        )
        for order in orders
    )


def threads_for(threads: Iterable[ShelfThread], choice: Choice) -> tuple[ShelfThread, ...]:
    """Leave remnants and started skeins out where the choice does.

    Parameters
    ----------
    threads : the shelf.
    choice : with or without remnants.

    Returns
    -------
    What may be cut from.
    """
    return tuple(one for one in threads if choice.remnants or one.kind == "whole")


def offers_for(offers: Iterable[ThreadOffer], choice: Choice) -> tuple[ThreadOffer, ...]:
    """Leave other suppliers out where all is to come from one.

    Parameters
    ----------
    offers : all put-ups.
    choice : with a supplier or none.

    Returns
    -------
    What may be bought.
    """
    return tuple(
        one for one in offers if not choice.supplier or one.supplier_name == choice.supplier
    )


@dataclass(frozen=True)
class ChoiceSum:
    """What a way comes to, all shades together.

    Parameters
    ----------
    cost, lower_bound : money, and what no plan can do without.
    bought : single skeins, hanks and so on.
    waste_mm : left over and shorter than the keep length [mm].
    cuts : pieces to cut.
    shelf_pieces : pieces that lie on the shelf afterwards, remnants and skeins, from the keep
        length on.
    missing : shades for which some bracelet has no thread.
    proven : whether nothing cheaper is possible.
    """

    cost: Decimal
    lower_bound: Decimal
    bought: int
    waste_mm: int
    cuts: int
    shelf_pieces: int
    missing: tuple[int, ...]
    proven: bool


def sum_up(
    netted: Sequence[NettedShade], threads: Sequence[ShelfThread], keep_length_mm: int
) -> ChoiceSum:
    """Sum up what a way comes to.

    Parameters
    ----------
    netted : every shade of it.
    threads : the whole shelf of these shades, used or not.
    keep_length_mm : shorter pieces are waste [mm].

    Returns
    -------
    The sums.
    """
    results = [one.result for one in netted]
    opened = [one for result in results for one in result.opened]
    bought = sum(count for result in results for _, count in result.bought)
    new = sum(one.offer_key is not None for one in opened)
    kept = sum(one.left_mm >= keep_length_mm for one in opened)
    untouched = len(threads) - (len(opened) - new)
    return ChoiceSum(
        cost=sum((result.cost for result in results), Decimal(0)),
        lower_bound=sum((result.lower_bound for result in results), Decimal(0)),
        bought=bought,
        waste_mm=sum(result.waste_mm for result in results),
        cuts=sum(len(one.pieces) for one in opened),
        shelf_pieces=untouched + kept + bought - new,
        missing=tuple(one.shade for one in netted if one.result.unplaced),
        proven=all(result.status == "optimal" and not result.unplaced for result in results),
    )


def _is_key(key: object) -> bool:
    return isinstance(key, int) and not isinstance(key, bool) and 0 < key <= HIGHEST_KEY
