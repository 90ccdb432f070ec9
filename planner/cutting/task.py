"""A cutting problem in cells and smallest units of money, and the plans for it."""

from collections import Counter
from dataclasses import dataclass
from math import gcd

from planner.cutting.bounds import Bounds, length_bounds, rounded_bounds
from planner.cutting.filling import Filling, SoldAs, Supply
from planner.cutting.problem import CuttingError, Money, Problem


@dataclass(frozen=True)
class Plan:
    """Fillings and what they come to: the fewer, in the order of `rank`, the better."""

    fillings: list[Filling]
    cost: int
    waste_mm: int
    opened: int
    bought: int

    @property
    def rank(self) -> tuple[int, int, int]:
        """Least money, then least waste, then fewest stock pieces to handle."""
        return self.cost, self.waste_mm, self.opened


@dataclass(frozen=True)
class Task:
    """A problem in cells and smallest units of money."""

    demand: dict[int, int]
    shelf: list[Supply]
    sold: list[SoldAs]
    cell_mm: int
    money: Money
    deadline: float
    seed: int
    keep_length_mm: int

    @classmethod
    def of(cls, problem: Problem, deadline: float, seed: int, keep_length_mm: int) -> "Task":
        """Merge equal lengths and change units."""
        wanted: Counter[int] = Counter()
        for piece in problem.demand:
            wanted[piece.length_mm] += piece.count
        lengths = [length for length, count in wanted.items() if count]
        cell_mm = gcd(*lengths) or 1
        stock: Counter[int] = Counter()
        for stock_piece in problem.stock:
            stock[stock_piece.length_mm] += stock_piece.count
        money = Money.of([put_up.price for put_up in problem.buy])
        return cls(
            {length // cell_mm: wanted[length] for length in lengths},
            [Supply(mm, mm // cell_mm, count) for mm, count in sorted(stock.items()) if count],
            _worth_buying(problem, cell_mm, money),
            cell_mm,
            money,
            deadline,
            seed,
            keep_length_mm,
        )

    @property
    def longest_stock(self) -> int:
        """The longest stock piece or put-up [cells]."""
        sizes = [supply.size for supply in self.shelf] + [item.size for item in self.sold]
        return max(sizes, default=0)

    def check_lengths(self) -> None:
        """Refuse a piece that fits into nothing."""
        too_long = max(self.demand, default=0)
        if too_long > self.longest_stock:
            raise CuttingError(
                f"A piece of {too_long * self.cell_mm} mm is longer than every stock piece "
                "and every put-up."
            )

    def length_bounds(self) -> Bounds:
        """Bound by total length."""
        return length_bounds(self.demand, *self._sizes())

    def rounded_bounds(self) -> Bounds:
        """Bound by rounded weights."""
        return rounded_bounds(self.demand, *self._sizes())

    def _sizes(self) -> tuple[dict[int, int], list[int], list[int]]:
        shelf: Counter[int] = Counter()
        for supply in self.shelf:
            shelf[supply.size] += supply.count
        return dict(shelf), [item.size for item in self.sold], [item.price for item in self.sold]

    def plan(self, fillings: list[Filling]) -> Plan:
        """Add up what fillings come to."""
        cost = bought = waste_mm = opened = 0
        for filling in fillings:
            opened += filling.repeats
            left_mm = filling.length_mm - filling.used * self.cell_mm
            if left_mm < self.keep_length_mm:
                waste_mm += left_mm * filling.repeats
            if filling.put_up is not None:
                cost += self.sold[filling.put_up].price * filling.repeats
                bought += filling.repeats
        return Plan(fillings, cost, waste_mm, opened, bought)


def _worth_buying(problem: Problem, cell_mm: int, money: Money) -> list[SoldAs]:
    """Leave out put-ups that another one, no dearer and no shorter, makes pointless."""
    sold: list[SoldAs] = []
    for put_up in sorted(problem.buy, key=lambda item: (item.price, -item.length_mm)):
        if not sold or put_up.length_mm > sold[-1].length_mm:
            size = put_up.length_mm // cell_mm
            sold.append(SoldAs(put_up.length_mm, size, money.units(put_up.price)))
    return sold
