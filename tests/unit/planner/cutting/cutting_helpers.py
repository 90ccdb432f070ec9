"""What the cutting tests share: an independent check of a plan, and first-fit decreasing."""

import json
from collections import Counter
from decimal import Decimal
from pathlib import Path
from typing import Any

from hypothesis import strategies as st

from planner.cutting import Demand, Problem, PutUp, Result, StockPiece

DATA = Path(__file__).parents[3] / "data" / "cutting_problems.json"


def published_problems() -> dict[str, dict[str, Any]]:
    return {row["id"]: row for row in json.loads(DATA.read_text())["problems"]}


def as_problem(row: dict[str, Any]) -> Problem:
    return Problem(
        tuple(Demand(part["length_mm"], part["count"]) for part in row["demand"]),
        tuple(StockPiece(part["length_mm"], part["count"]) for part in row["stock"]),
        tuple(PutUp(part["length_mm"], Decimal(part["price"])) for part in row["buy"]),
    )


def make_problem(
    demand: dict[int, int],
    stock: dict[int, int] | None = None,
    buy: dict[int, str] | None = None,
) -> Problem:
    return Problem(
        tuple(Demand(length, count) for length, count in demand.items()),
        tuple(StockPiece(length, count) for length, count in (stock or {}).items()),
        tuple(PutUp(length, Decimal(price)) for length, price in (buy or {}).items()),
    )


def check_plan(problem: Problem, result: Result) -> None:
    """Every piece is cut once, from stock that exists, and the sums are right."""
    wanted: Counter[int] = Counter()
    for piece in problem.demand:
        wanted[piece.length_mm] += piece.count
    shelf: Counter[int] = Counter()
    for stock in problem.stock:
        shelf[stock.length_mm] += stock.count
    cut: Counter[int] = Counter()
    for one in result.cuts:
        assert one.pieces_mm, "a stock piece is opened for nothing"
        assert sum(one.pieces_mm) + one.left_mm == one.length_mm
        assert one.left_mm >= 0
        assert list(one.pieces_mm) == sorted(one.pieces_mm, reverse=True)
        cut.update(one.pieces_mm)
    assert cut == +wanted
    assert not Counter(one.length_mm for one in result.cuts if not one.new) - shelf
    new = Counter(one.put_up for one in result.cuts if one.new)
    assert all(
        one.length_mm == problem.buy[one.put_up].reckoned_mm
        for one in result.cuts
        if one.put_up is not None
    )
    assert all((one.put_up is not None) == one.new for one in result.cuts)
    cost = Decimal(0)
    for index, (put_up, bought) in enumerate(zip(problem.buy, result.purchase, strict=True)):
        packs, rest = divmod(bought, put_up.pack_size)
        assert rest == 0
        assert not packs or packs >= put_up.minimum_packs
        assert packs % put_up.pack_step == 0
        assert new[index] <= bought
        cost += packs * put_up.price
    assert result.cost == cost
    assert result.bought == sum(result.purchase) >= result.bought_lower_bound
    assert result.cost >= result.lower_bound
    assert (result.status == "optimal") == (result.cost == result.lower_bound)


def first_fit_decreasing_cost(problem: Problem, put_up: PutUp) -> Decimal | None:
    """Written apart from the project's own: piece by piece into the first stock that has room."""
    stock = sorted(s.length_mm for s in problem.stock for _ in range(s.count))
    room, bought = list(stock), 0
    pieces = sorted((d.length_mm for d in problem.demand for _ in range(d.count)), reverse=True)
    for length in pieces:
        for index, free in enumerate(room):
            if free >= length:
                room[index] -= length
                break
        else:
            if length > put_up.length_mm:
                return None
            room.append(put_up.length_mm - length)
            bought += 1
    return bought * put_up.price


def demands(longest: int = 40, most: int = 8) -> st.SearchStrategy[dict[int, int]]:
    return st.dictionaries(st.integers(1, longest), st.integers(1, 6), max_size=most)


@st.composite
def problems(draw: st.DrawFn) -> Problem:
    """Problems that always have a plan: the longest piece fits into a put-up."""
    demand = draw(demands())
    stock = draw(st.dictionaries(st.integers(1, 120), st.integers(1, 3), max_size=5))
    prices = st.decimals(0, 30, places=2)
    buy = draw(st.dictionaries(st.integers(40, 130), prices, min_size=1, max_size=3))
    scale = draw(st.sampled_from([1, 10, 127]))
    return Problem(
        tuple(Demand(length * scale, count) for length, count in demand.items()),
        tuple(StockPiece(length * scale + 3, count) for length, count in stock.items()),
        tuple(PutUp(length * scale + 1, price) for length, price in buy.items()),
    )
