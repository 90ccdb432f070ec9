"""Cutting plans that keep every bracelet's pieces of a shade in one dye lot."""

import time
from collections import Counter, defaultdict, deque
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from math import gcd

from planner.cutting.bounds import Bounds, bounds_for_need, rounded_bounds, usable_lengths
from planner.cutting.filling import Supply
from planner.cutting.knapsack import Filler, Fullest
from planner.cutting.lot_choice import (
    Kind,
    LotFilling,
    ShortestFirst,
    fill_lot,
    most_from_lot,
    pieces_of,
    place_first,
)
from planner.cutting.lot_problem import CutPiece, Group, Lot, LotResult, Offer, Opened
from planner.cutting.packs import SoldAs
from planner.cutting.problem import (
    MAXIMUM_PIECES,
    CuttingError,
    Demand,
    Money,
    Problem,
    PutUp,
    Result,
)
from planner.cutting.solving import solve

WORK_LIMIT = 10_000_000
"""Table cells the learning passes may fill for one purchase, so that many shades stay quick."""


def solve_with_lots(
    groups: Sequence[Group],
    lots: Sequence[Lot],
    offers: Sequence[Offer],
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
) -> LotResult:
    """Find what to buy and how to cut it, with every group's pieces from one dye lot.

    Parameters
    ----------
    groups
        What each bracelet needs.
    lots
        The shelf.
    offers
        What can be bought; from one supplier only, whichever is cheapest.
    time_limit_s
        After this long quick rules finish the plan [s].
    seed
        Seed of the passes that use random weights.

    Returns
    -------
    LotResult
        The cheapest plan found. It stops at the first plan that costs its bound; of the plans
        looked at, the one that uses most of the shelf among equally cheap ones.

    Raises
    ------
    CuttingError
        When keys stand twice or there is more than the limits allow; never for want of thread.

    Notes
    -----
    Lots of the shelf are filled with whole groups, smallest lot first and largest lot first; the
    rest is cut from new thread. Using no shelf at all is compared, so that a remnant never costs
    one more put-up.
    """
    started = time.monotonic()
    shade = _Shade.of(groups, lots, offers, started + max(0.0, time_limit_s), seed)
    best, bounds = _search(shade)
    proven = best.cost == bounds.cost and all(
        shade.fits_nowhere(kind) for kind in best.shelf.unplaced
    )
    opened, unplaced = _Assignment(shade, groups).of(best)
    counts = Counter(one.offer_key for one in opened)
    return LotResult(
        status="optimal" if proven else "feasible",
        cost=shade.money.amount(best.cost),
        bought=tuple((offer.key, counts[offer.key]) for offer in offers if counts[offer.key]),
        lower_bound=shade.money.amount(bounds.cost),
        bought_lower_bound=bounds.bought,
        opened=opened,
        unplaced=unplaced,
        seconds=time.monotonic() - started,
    )


@dataclass(frozen=True)
class _Shade:
    """The problem in cells and smallest units of money."""

    kinds: Counter[Kind]
    lots: list[tuple[Lot, tuple[Supply, ...]]]
    suppliers: dict[str, list[Offer]]
    cell_mm: int
    money: Money
    deadline: float
    seed: int

    @classmethod
    def of(
        cls,
        groups: Sequence[Group],
        lots: Sequence[Lot],
        offers: Sequence[Offer],
        deadline: float,
        seed: int,
    ) -> "_Shade":
        _check(groups, lots, offers)
        cell_mm = gcd(*{length for group in groups for length in group.pieces_mm}) or 1
        suppliers: dict[str, list[Offer]] = defaultdict(list)
        for offer in offers:
            if offer.length_mm:
                suppliers[offer.supplier].append(offer)
        return cls(
            Counter(_kind_of(group, cell_mm) for group in groups if group.pieces_mm),
            [(lot, _supplies(lot, cell_mm)) for lot in lots],
            dict(suppliers),
            cell_mm,
            Money.of([offer.price for offer in offers]),
            deadline,
            seed,
        )

    def longest_sold(self, supplier: str) -> int:
        """The longest put-up of a supplier [cells]."""
        return max(offer.length_mm // self.cell_mm for offer in self.suppliers[supplier])

    def sold(self, offers: Sequence[Offer]) -> list[SoldAs]:
        """Give offers in cells and smallest units of money."""
        return [
            SoldAs(
                offer.length_mm,
                offer.length_mm // self.cell_mm,
                self.money.units(offer.price),
                offer.pack_size,
                offer.minimum_packs,
                offer.pack_step,
                index,
            )
            for index, offer in enumerate(offers)
        ]

    def fits_nowhere(self, kind: Kind) -> bool:
        """Whether neither a lot nor a supplier can serve a bracelet, even were it the only one."""
        if any(kind.longest <= self.longest_sold(supplier) for supplier in self.suppliers):
            return False
        only = Counter({kind: 1})
        return all(most_from_lot(only, supplies) < kind.total for _, supplies in self.lots)


@dataclass(frozen=True)
class _Shelf:
    """How the shelf is used, and what it leaves to others."""

    lots: list[tuple[Lot, LotFilling]]
    to_buy: Counter[Kind]
    unplaced: Counter[Kind]


@dataclass(frozen=True)
class _LotPlan:
    shelf: _Shelf
    supplier: str | None
    bought: Result | None
    cost: int

    @property
    def rank(self) -> tuple[int, int, int, int]:
        """Most groups placed, then least money, then most of the shelf, then fewest to handle."""
        used = sum(filling.used for _, filling in self.shelf.lots)
        opened = sum(one.repeats for _, lot in self.shelf.lots for one in lot.fillings)
        opened += len(self.bought.cuts) if self.bought else 0
        return self.shelf.unplaced.total(), self.cost, -used, opened


@dataclass(frozen=True)
class _Way:
    """A way to use the shelf: which lots first, and how bracelets are chosen for one."""

    largest_lot_first: bool
    choosers: tuple[Filler, ...]


_WAYS = (
    _Way(False, (Fullest(), ShortestFirst())),
    _Way(True, (Fullest(), ShortestFirst())),
    _Way(False, ()),
)
_WAYS_WITHOUT_BUYING = (
    _Way(False, (Fullest(),)),
    _Way(True, (Fullest(),)),
    _Way(False, (ShortestFirst(),)),
    _Way(True, (ShortestFirst(),)),
)


def _search(shade: _Shade) -> tuple[_LotPlan, Bounds]:
    """Compare the ways to use the shelf and the suppliers until the bound is reached."""
    bounds = _bounds(shade, shade.kinds)
    best: _LotPlan | None = None
    for plan in _plans(shade):
        if best is None or plan.rank < best.rank:
            best = plan
        if best.cost == bounds.cost and not best.shelf.unplaced:
            return best, bounds
    if best is None:
        raise AssertionError("every shade has a way")
    placed = shade.kinds - best.shelf.unplaced
    if placed != shade.kinds:
        bounds = _bounds(shade, placed)
    if best.cost > bounds.cost:
        bounds = _bounds(shade, placed, rounded=True)
    return best, bounds


def _plans(shade: _Shade) -> Iterator[_LotPlan]:
    if not shade.suppliers:
        for way in _WAYS_WITHOUT_BUYING:
            shelf = _use_shelf(shade, way, None)
            shelf = replace(shelf, to_buy=Counter(), unplaced=shelf.unplaced + shelf.to_buy)
            yield _LotPlan(shelf, None, None, 0)
        return
    best: tuple[int, int] | None = None
    for way in _WAYS:
        tried: set[int] = set()
        for least, supplier, shelf in _choices(shade, way):
            hope = (shelf.unplaced.total(), least)
            if best is not None and (hope > best or (hope == best and id(shelf) in tried)):
                continue
            plan = _buy(shade, supplier, shelf)
            tried.add(id(shelf))
            best = min(best or plan.rank[:2], plan.rank[:2])
            yield plan


def _choices(shade: _Shade, way: _Way) -> list[tuple[int, str, _Shelf]]:
    """Give the suppliers with the shelf as used beside them, by the least that they must cost."""
    shelves: dict[int, _Shelf] = {}
    choices = []
    for supplier, offers in shade.suppliers.items():
        longest = shade.longest_sold(supplier)
        if longest not in shelves:
            shelves[longest] = _use_shelf(shade, way, longest)
        shelf = shelves[longest]
        need = sum(kind.total * count for kind, count in shelf.to_buy.items())
        bounds = _offer_bounds(shade, offers, need, pieces_of(shelf.to_buy))
        choices.append((bounds.cost, supplier, shelf))
    return sorted(choices, key=lambda choice: choice[0])


def _use_shelf(shade: _Shade, way: _Way, longest_sold: int | None) -> _Shelf:
    lots = [(lot, LotFilling(supplies, shade.deadline)) for lot, supplies in shade.lots]
    smallest_first = sorted(lots, key=lambda pair: pair[1].size)
    left = shade.kinds
    unplaced: Counter[Kind] = Counter()
    if longest_sold is not None:
        only_here = Counter({kind: left[kind] for kind in left if kind.longest > longest_sold})
        unplaced = place_first(only_here, [filling for _, filling in smallest_first])
        left = left - only_here
    for _, filling in smallest_first[::-1] if way.largest_lot_first else smallest_first:
        left = fill_lot(left, filling, way.choosers)
    return _Shelf(lots, left, unplaced)


def _buy(shade: _Shade, supplier: str, shelf: _Shelf) -> _LotPlan:
    """Cut from new thread what the shelf does not serve."""
    if not shelf.to_buy:
        return _LotPlan(shelf, None, None, 0)
    problem = Problem(
        tuple(
            Demand(length * shade.cell_mm, count)
            for length, count in sorted(pieces_of(shelf.to_buy).items())
        ),
        (),
        tuple(PutUp(offer.length_mm, offer.price) for offer in shade.suppliers[supplier]),
    )
    left_s = max(0.0, shade.deadline - time.monotonic())
    bought = solve(problem, time_limit_s=left_s, seed=shade.seed, work_limit=WORK_LIMIT)
    return _LotPlan(shelf, supplier, bought, shade.money.units(bought.cost))


def _bounds(shade: _Shade, kinds: Counter[Kind], *, rounded: bool = False) -> Bounds:
    """Bound over any mix of suppliers, although a plan buys a shade from one of them.

    A lot serves whole bracelets only, so no plan takes more of it than `most_from_lot`; that is
    stronger than pooling the shelf, and proven in the same way.
    """
    demand = pieces_of(kinds)
    need = sum(kind.total * count for kind, count in kinds.items())
    need -= sum(most_from_lot(kinds, supplies) for _, supplies in shade.lots)
    pooled: Counter[int] = Counter()
    for _, supplies in shade.lots:
        for supply in supplies:
            pooled[supply.size] += supply.count
    offers = [offer for sold in shade.suppliers.values() for offer in sold]
    bounds = _offer_bounds(shade, offers, need, demand)
    if rounded:
        bounds = bounds.combined(rounded_bounds(demand, dict(pooled), shade.sold(offers)))
    return bounds if bounds.possible else Bounds(0, 0, ())


def _offer_bounds(
    shade: _Shade, offers: Sequence[Offer], need: int, demand: Counter[int]
) -> Bounds:
    sold = shade.sold(offers)
    usable = usable_lengths(demand, [item.size for item in sold])
    return bounds_for_need(need, [usable[item.size] for item in sold], sold)


class _Assignment:
    """Turns counts of kinds and lengths back into groups, pieces and stock by their keys."""

    def __init__(self, shade: _Shade, groups: Sequence[Group]) -> None:
        self.shade = shade
        self.waiting: dict[Kind, deque[Group]] = defaultdict(deque)
        for group in groups:
            self.waiting[_kind_of(group, shade.cell_mm)].append(group)
        self.order = {group.key: number for number, group in enumerate(groups)}

    def of(self, plan: _LotPlan) -> tuple[tuple[Opened, ...], tuple[str, ...]]:
        """Name everything a plan opens, and the groups without a place."""
        opened: list[Opened] = []
        for lot, filling in plan.shelf.lots:
            opened += self._from_lot(lot, filling)
        if plan.bought is not None and plan.supplier is not None:
            opened += self._bought(plan.bought, plan.supplier, plan.shelf.to_buy)
        unplaced = self._take(plan.shelf.unplaced)
        return tuple(opened), tuple(group.key for group in unplaced)

    def _take(self, kinds: Counter[Kind]) -> list[Group]:
        taken = [self.waiting[kind].popleft() for kind in kinds for _ in range(kinds[kind])]
        return sorted(taken, key=lambda group: self.order[group.key])

    def _from_lot(self, lot: Lot, filling: LotFilling) -> Iterator[Opened]:
        pieces = _Pieces(self._take(filling.chosen))
        keys: dict[int, deque[str]] = defaultdict(deque)
        for stock in lot.stock:
            keys[stock.length_mm].append(stock.key)
        for one in filling.fillings:
            lengths = [mm * self.shade.cell_mm for mm, count in one.pieces for _ in range(count)]
            for _ in range(one.repeats):
                cut, left_mm = pieces.cut(one.length_mm, lengths)
                key = keys[one.length_mm].popleft()
                yield Opened(key, None, lot.key, one.length_mm, cut, left_mm)

    def _bought(self, bought: Result, supplier: str, kinds: Counter[Kind]) -> Iterator[Opened]:
        pieces = _Pieces(self._take(kinds))
        offers = sorted(self.shade.suppliers[supplier], key=lambda offer: -offer.price)
        key_of = {offer.length_mm: offer.key for offer in offers}  # the cheapest of a length
        for one in bought.cuts:
            cut, left_mm = pieces.cut(one.length_mm, one.pieces_mm)
            yield Opened(None, key_of[one.length_mm], None, one.length_mm, cut, left_mm)


class _Pieces:
    """The pieces of some groups, by length, each to be cut once."""

    def __init__(self, groups: Sequence[Group]) -> None:
        self.waiting: dict[int, deque[CutPiece]] = defaultdict(deque)
        for group in groups:
            for index, length_mm in enumerate(group.pieces_mm):
                self.waiting[length_mm].append(CutPiece(group.key, index, length_mm))

    def cut(self, length_mm: int, lengths_mm: Sequence[int]) -> tuple[tuple[CutPiece, ...], int]:
        """Cut one stock piece, longest first; return the pieces and what is left [mm]."""
        ordered = sorted(lengths_mm, reverse=True)
        return tuple(self.waiting[mm].popleft() for mm in ordered), length_mm - sum(ordered)


def _kind_of(group: Group, cell_mm: int) -> Kind:
    return Kind(tuple(sorted((mm // cell_mm for mm in group.pieces_mm), reverse=True)))


def _supplies(lot: Lot, cell_mm: int) -> tuple[Supply, ...]:
    counts = Counter(stock.length_mm for stock in lot.stock if stock.length_mm)
    return tuple(Supply(mm, mm // cell_mm, count) for mm, count in sorted(counts.items()))


def _check(groups: Sequence[Group], lots: Sequence[Lot], offers: Sequence[Offer]) -> None:
    _check_keys("group", [group.key for group in groups])
    _check_keys("lot", [lot.key for lot in lots])
    _check_keys("stock piece", [stock.key for lot in lots for stock in lot.stock])
    _check_keys("offer", [offer.key for offer in offers])
    if sum(len(group.pieces_mm) for group in groups) > MAXIMUM_PIECES:
        raise CuttingError(f"Too many pieces to cut: at most {MAXIMUM_PIECES} in all.")


def _check_keys(what: str, keys: list[str]) -> None:
    if len(keys) > MAXIMUM_PIECES:
        raise CuttingError(f"Too many {what}s: at most {MAXIMUM_PIECES}.")
    twice = [key for key, count in Counter(keys).items() if count > 1]
    if twice:
        raise CuttingError(f"The {what} {twice[0]!r} stands twice.")
