"""Turns counts of kinds and lengths back into groups, pieces and stock by their keys."""

from collections import Counter, defaultdict, deque
from collections.abc import Iterator, Sequence

from planner.cutting.filling import Filling
from planner.cutting.lot_choice import Kind
from planner.cutting.lot_plans import FromLot, FromSupplier, LotPlan
from planner.cutting.lot_problem import CutPiece, Group, Lot, Offer, Opened
from planner.cutting.lot_task import LotTask, kind_of


class Naming:
    """Hands out the groups of each kind in their order, each once."""

    def __init__(self, task: LotTask, groups: Sequence[Group], offers: Sequence[Offer]) -> None:
        self.task = task
        self.offers = offers
        self.waiting: dict[Kind, deque[Group]] = defaultdict(deque)
        kinds: dict[tuple[int, ...], Kind] = {}
        for group in groups:
            if group.pieces_mm not in kinds:
                kinds[group.pieces_mm] = kind_of(group, task.cell_mm)
            self.waiting[kinds[group.pieces_mm]].append(group)
        self.order = {group.key: number for number, group in enumerate(groups)}

    def of(self, plan: LotPlan) -> tuple[tuple[Opened, ...], tuple[str, ...]]:
        """Name everything a plan opens, and the groups without a place."""
        opened: list[Opened] = []
        for part in plan.shelf:
            opened += self._from_lot(part)
        for bought in plan.new:
            opened += self._from_supplier(bought)
        unplaced = self._take(plan.unplaced)
        return tuple(opened), tuple(group.key for group in unplaced)

    def _take(self, kinds: Counter[Kind]) -> list[Group]:
        taken = [self.waiting[kind].popleft() for kind in kinds for _ in range(kinds[kind])]
        return sorted(taken, key=lambda group: self.order[group.key])

    def _from_lot(self, part: FromLot) -> Iterator[Opened]:
        keys = _stock_keys(part.lot)
        pieces = _Pieces(self._take(part.kinds))
        for one in part.fillings:
            for cut, left_mm in pieces.cut_alike(one, self.task.cell_mm):
                key = keys[one.length_mm].popleft()
                yield Opened(key, None, part.lot.key, one.length_mm, cut, left_mm)

    def _from_supplier(self, part: FromSupplier) -> Iterator[Opened]:
        pieces = _Pieces(self._take(part.kinds))
        sold = self.task.suppliers[part.supplier]
        for one in part.plan.fillings:
            assert one.put_up is not None
            offer = self.offers[sold[one.put_up].number]
            for cut, left_mm in pieces.cut_alike(one, self.task.cell_mm):
                yield Opened(None, offer.key, None, one.length_mm, cut, left_mm)


def _stock_keys(lot: Lot) -> dict[int, deque[str]]:
    keys: dict[int, deque[str]] = defaultdict(deque)
    for stock in lot.stock:
        keys[stock.length_mm].append(stock.key)
    return keys


class _Pieces:
    """The pieces of some groups, by length, each to be cut once."""

    def __init__(self, groups: Sequence[Group]) -> None:
        self.waiting: dict[int, deque[CutPiece]] = defaultdict(deque)
        for group in groups:
            for index, length_mm in enumerate(group.pieces_mm):
                self.waiting[length_mm].append(CutPiece(group.key, index, length_mm))

    def cut_alike(
        self, filling: Filling, cell_mm: int
    ) -> Iterator[tuple[tuple[CutPiece, ...], int]]:
        """Cut stock pieces alike, longest first; give the pieces and what is left [mm] of each."""
        pieces = sorted(filling.pieces, reverse=True)
        left_mm = filling.length_mm - filling.used * cell_mm
        for _ in range(filling.repeats):
            cut = tuple(
                self.waiting[length * cell_mm].popleft()
                for length, count in pieces
                for _ in range(count)
            )
            yield cut, left_mm
