"""A shade's problem in cells and smallest units of money, and its bounds."""

from collections import Counter, defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import gcd

from planner.cutting.bounds import Bounds, bounds_for_need, rounded_bounds, usable_lengths
from planner.cutting.filling import Supply
from planner.cutting.highs import Limits
from planner.cutting.lot_choice import Kind, most_from_lot, pieces_of
from planner.cutting.lot_problem import Group, Lot, Offer
from planner.cutting.packs import SoldAs, worth_buying
from planner.cutting.problem import MAXIMUM_PIECES, MAXIMUM_PUT_UPS, CuttingError, Money
from planner.cutting.task import Task


@dataclass(frozen=True)
class LotTask:
    """A shade in cells and smallest units of money.

    Parameters
    ----------
    kinds
        The groups by what they need, with how many of each.
    lots
        The shelf with its stock.
    suppliers
        What each supplier sells; `SoldAs.number` is the offer's place in the list of offers.
    cell_mm
        Length of a cell [mm].
    money
        Prices in smallest units.
    limits
        When to stop.
    keep_length_mm
        What is left and shorter is waste [mm].
    """

    kinds: Counter[Kind]
    lots: list[tuple[Lot, tuple[Supply, ...]]]
    suppliers: Mapping[str, list[SoldAs]]
    cell_mm: int
    money: Money
    limits: Limits
    keep_length_mm: int

    @classmethod
    def of(
        cls,
        groups: Sequence[Group],
        lots: Sequence[Lot],
        offers: Sequence[Offer],
        limits: Limits,
        keep_length_mm: int,
    ) -> "LotTask":
        """Check keys, merge equal groups and change units."""
        _check(groups, lots, offers)
        cell_mm = gcd(*{length for group in groups for length in group.pieces_mm}) or 1
        money = Money.of([offer.price for offer in offers])
        suppliers: dict[str, list[SoldAs]] = defaultdict(list)
        for number, offer in enumerate(offers):
            if offer.length_mm >= cell_mm:
                suppliers[offer.supplier].append(_sold_as(offer, number, cell_mm, money))
        return cls(
            Counter(kind_of(group, cell_mm) for group in groups if group.pieces_mm),
            [(lot, supplies_of(lot, cell_mm)) for lot in lots],
            {supplier: worth_buying(sold) for supplier, sold in suppliers.items()},
            cell_mm,
            money,
            limits,
            keep_length_mm,
        )

    @property
    def sold(self) -> list[SoldAs]:
        """What is sold by anybody."""
        return [item for sold in self.suppliers.values() for item in sold]

    def longest_sold(self, supplier: str) -> int:
        """The longest put-up of a supplier [cells]."""
        return max(item.size for item in self.suppliers[supplier])

    def fits_nowhere(self, kind: Kind) -> bool:
        """Whether neither a lot nor a supplier can serve a group, even were it the only one."""
        if any(kind.longest <= self.longest_sold(supplier) for supplier in self.suppliers):
            return False
        only = Counter({kind: 1})
        return all(most_from_lot(only, supplies) < kind.total for _, supplies in self.lots)

    def part(
        self,
        kinds: Counter[Kind],
        supplies: Sequence[Supply],
        sold: Sequence[SoldAs],
        limits: Limits | None = None,
    ) -> Task:
        """Give the plain problem of some groups and some of the stock."""
        return Task(
            dict(pieces_of(kinds)),
            list(supplies),
            list(sold),
            self.cell_mm,
            self.money,
            limits or self.limits,
            self.keep_length_mm,
        )

    def pooled(self, kinds: Counter[Kind], limits: Limits) -> Task:
        """Give the problem of some groups with all stock thrown together."""
        counts: Counter[tuple[int, int]] = Counter()
        for _, supplies in self.lots:
            for supply in supplies:
                counts[supply.length_mm, supply.size] += supply.count
        shelf = [Supply(mm, size, count) for (mm, size), count in sorted(counts.items())]
        return self.part(kinds, shelf, worth_buying(self.sold), limits)

    def bounds(self, kinds: Counter[Kind], *, rounded: bool = False) -> Bounds:
        """Bound the cost of some groups, over any mix of suppliers.

        A lot serves whole groups only, so no plan takes more of it than `most_from_lot`; that is
        stronger than pooling the shelf, and proven in the same way.
        """
        demand = pieces_of(kinds)
        need = sum(kind.total * count for kind, count in kinds.items())
        need -= sum(most_from_lot(kinds, supplies) for _, supplies in self.lots)
        bounds = bounds_of_need(need, demand, self.sold)
        if rounded:
            shelf = self.pooled(kinds, self.limits).shelf_counts()
            bounds = bounds.combined(rounded_bounds(demand, shelf, self.sold))
        return bounds if bounds.possible else Bounds(0, 0, ())


def bounds_of_need(need: int, demand: Counter[int], sold: Sequence[SoldAs]) -> Bounds:
    """Bound what a length of thread costs, counting of each put-up only what pieces can fill.

    Parameters
    ----------
    need
        The length [cells].
    demand
        The pieces: length [cells] to count.
    sold
        The put-ups.

    Returns
    -------
    Bounds
        What is proven.
    """
    usable = usable_lengths(demand, [item.size for item in sold])
    return bounds_for_need(need, [usable[item.size] for item in sold], sold)


def kind_of(group: Group, cell_mm: int) -> Kind:
    """Give what a group needs, in cells.

    Parameters
    ----------
    group
        The group.
    cell_mm
        Length of a cell [mm].

    Returns
    -------
    Kind
        Equal for groups that need the same.
    """
    return Kind(tuple(sorted((mm // cell_mm for mm in group.pieces_mm), reverse=True)))


def _sold_as(offer: Offer, number: int, cell_mm: int, money: Money) -> SoldAs:
    return SoldAs(
        offer.length_mm,
        offer.length_mm // cell_mm,
        money.units(offer.price),
        offer.pack_size,
        offer.minimum_packs,
        offer.pack_step,
        number,
    )


def supplies_of(lot: Lot, cell_mm: int) -> tuple[Supply, ...]:
    """Give the stock of a lot in cells.

    Parameters
    ----------
    lot
        The lot.
    cell_mm
        Length of a cell [mm].

    Returns
    -------
    tuple of Supply
        By length; stock without length is left out.
    """
    counts = Counter(stock.length_mm for stock in lot.stock if stock.length_mm)
    return tuple(Supply(mm, mm // cell_mm, count) for mm, count in sorted(counts.items()))


def _check(groups: Sequence[Group], lots: Sequence[Lot], offers: Sequence[Offer]) -> None:
    _check_keys("group", [group.key for group in groups])
    _check_keys("lot", [lot.key for lot in lots])
    _check_keys("stock piece", [stock.key for lot in lots for stock in lot.stock])
    _check_keys("offer", [offer.key for offer in offers])
    if len(offers) > MAXIMUM_PUT_UPS:
        raise CuttingError(f"Too many put-ups to buy: at most {MAXIMUM_PUT_UPS}.")
    if sum(len(group.pieces_mm) for group in groups) > MAXIMUM_PIECES:
        raise CuttingError(f"Too many pieces to cut: at most {MAXIMUM_PIECES} in all.")


def _check_keys(what: str, keys: list[str]) -> None:
    if len(keys) > MAXIMUM_PIECES:
        raise CuttingError(f"Too many {what}s: at most {MAXIMUM_PIECES}.")
    twice = [key for key, count in Counter(keys).items() if count > 1]
    if twice:
        raise CuttingError(f"The {what} {twice[0]!r} stands twice.")
