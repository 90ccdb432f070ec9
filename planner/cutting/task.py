"""A cutting problem in cells and smallest units of money, and the plans for it."""

from collections import Counter
from dataclasses import dataclass
from math import gcd

from planner.cutting.bounds import Bounds, length_bounds, rounded_bounds
from planner.cutting.filling import Filling, Supply
from planner.cutting.highs import Limits
from planner.cutting.packs import SoldAs, worth_buying
from planner.cutting.problem import CuttingError, Money, Problem


@dataclass(frozen=True)
class Plan:
    """Fillings and what they come to: the fewer, in the order of `rank`, the better."""

    fillings: list[Filling]
    cost: int
    waste_mm: int
    leftovers: int
    more_pieces: int
    opened: int
    bought: tuple[int, ...]

    @property
    def rank(self) -> tuple[int, int, int, int]:
        """Least money, least waste, fewest pieces on the shelf afterwards, fewest opened."""
        return self.cost, self.waste_mm, self.more_pieces, self.opened


@dataclass(frozen=True)
class Task:
    """A problem in cells and smallest units of money."""

    demand: dict[int, int]
    shelf: list[Supply]
    sold: list[SoldAs]
    cell_mm: int
    money: Money
    limits: Limits
    keep_length_mm: int

    @classmethod
    def of(cls, problem: Problem, limits: Limits, keep_length_mm: int) -> "Task":
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
            worth_buying(_sold(problem, cell_mm, money)),
            cell_mm,
            money,
            limits,
            keep_length_mm,
        )

    @property
    def deadline(self) -> float:
        """Reading of the monotonic clock at which quick rules take over [s]."""
        return self.limits.deadline

    @property
    def need(self) -> int:
        """All pieces together [cells]."""
        return sum(length * count for length, count in self.demand.items())

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

    def shelf_counts(self) -> dict[int, int]:
        """Give the shelf as length [cells] to count."""
        shelf: Counter[int] = Counter()
        for supply in self.shelf:
            shelf[supply.size] += supply.count
        return dict(shelf)

    def length_bounds(self) -> Bounds:
        """Bound by total length."""
        return length_bounds(self.demand, self.shelf_counts(), self.sold)

    def rounded_bounds(self) -> Bounds:
        """Bound by rounded weights."""
        return rounded_bounds(self.demand, self.shelf_counts(), self.sold)

    def plan(self, fillings: list[Filling]) -> Plan:
        """Add up what fillings come to."""
        waste_mm = leftovers = opened = from_shelf = 0
        new = [0] * len(self.sold)
        for filling in fillings:
            opened += filling.repeats
            left_mm = filling.length_mm - filling.used * self.cell_mm
            if left_mm < self.keep_length_mm:
                waste_mm += left_mm * filling.repeats
            else:
                leftovers += filling.repeats
            if filling.put_up is None:
                from_shelf += filling.repeats
            else:
                new[filling.put_up] += filling.repeats
        bought = tuple(item.bought_for(count) for item, count in zip(self.sold, new, strict=True))
        cost = sum(item.cost_of(count) for item, count in zip(self.sold, bought, strict=True))
        return Plan(fillings, cost, waste_mm, leftovers, leftovers - from_shelf, opened, bought)


def _sold(problem: Problem, cell_mm: int, money: Money) -> list[SoldAs]:
    return [
        SoldAs(
            put_up.reckoned_mm,
            put_up.reckoned_mm // cell_mm,
            money.units(put_up.price),
            put_up.pack_size,
            put_up.minimum_packs,
            put_up.pack_step,
            index,
        )
        for index, put_up in enumerate(problem.buy)
        if put_up.reckoned_mm >= cell_mm
    ]
