"""What can be made of the shelf: against CP-SAT, against brute force, and its invariants."""

from collections import Counter
from decimal import Decimal
from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from ortools.sat.python import cp_model

from planner.cutting import (
    CuttingError,
    Lot,
    LotStock,
    Makeable,
    ScrapsProblem,
    ScrapsResult,
    make_from_scraps,
    scraps_words,
)


def shelf_of(**lots: list[list[int]]) -> dict[str, tuple[Lot, ...]]:
    return {
        shade: tuple(
            Lot(f"{shade}{n}", tuple(LotStock(f"{shade}{n}.{m}", mm) for m, mm in enumerate(one)))
            for n, one in enumerate(found)
        )
        for shade, found in lots.items()
    }


def kind(key: str, most: int = 3, value: str = "1", **pieces: tuple[int, ...]) -> Makeable:
    return Makeable(key, pieces, Decimal(value), most)


def check(problem: ScrapsProblem, result: ScrapsResult) -> None:
    """Every piece of every bracelet once, a shade of a bracelet from one lot, sums right."""
    by_key = {one.key: one for one in problem.kinds}
    made = dict(result.made)
    assert all(0 < count <= by_key[key].most for key, count in made.items())
    value = sum((by_key[key].value * count for key, count in made.items()), Decimal(0))
    assert result.value == value <= result.upper_bound
    assert (result.status == "optimal") == (result.value == result.upper_bound)
    for shade in {shade for one in problem.kinds for shade in one.pieces_mm}:
        opened = result.opened.get(shade, ())
        lots = {
            stock.key: (lot.key, stock.length_mm)
            for lot in problem.shelf.get(shade, ())
            for stock in lot.stock
        }
        assert len({one.stock_key for one in opened}) == len(opened)
        lot_of: dict[str, set[str | None]] = {}
        cut: Counter[tuple[str, int, int]] = Counter()
        for one in opened:
            assert one.offer_key is None
            assert lots[str(one.stock_key)] == (one.lot_key, one.length_mm)
            assert sum(piece.length_mm for piece in one.pieces) + one.left_mm == one.length_mm
            assert one.left_mm >= 0
            for piece in one.pieces:
                lot_of.setdefault(piece.group_key, set()).add(one.lot_key)
                cut[piece.group_key, piece.index, piece.length_mm] += 1
        assert all(len(found) == 1 for found in lot_of.values())
        assert cut == Counter(
            (f"{key}#{number}", index, length)
            for key, count in made.items()
            for number in range(1, count + 1)
            for index, length in enumerate(by_key[key].pieces_mm.get(shade, ()))
        )


def random_problem(seed: int) -> ScrapsProblem:
    random = Random(seed)
    shades = ["A", "B"][: random.randint(1, 2)]
    kinds = []
    for number in range(random.randint(1, 3)):
        pieces = {
            shade: tuple(random.randrange(20, 60, 5) for _ in range(random.randint(1, 3)))
            for shade in shades
            if random.random() < 0.8
        }
        if pieces:
            value = random.choice(["1", "4.50", "6.00", "7.25"])
            kinds.append(Makeable(f"k{number}", pieces, Decimal(value), random.randint(0, 4)))
    shelf = {
        shade: [
            [random.randint(20, 150) for _ in range(random.randint(1, 3))]
            for _ in range(random.randint(0, 2))
        ]
        for shade in shades
    }
    return ScrapsProblem(tuple(kinds), shelf_of(**shelf))


def cp_sat_value(problem: ScrapsProblem) -> Decimal:
    """Assign every piece of every single bracelet to a stock piece (CP-SAT of OR-Tools)."""
    model = cp_model.CpModel()
    objective = []
    loads: dict[str, list[cp_model.LinearExprT]] = {}
    for one in problem.kinds:
        for number in range(one.most):
            made = model.new_bool_var(f"{one.key}#{number}")
            objective.append(made * int(one.value * 100))
            for shade, pieces in one.pieces_mm.items():
                lots = problem.shelf.get(shade, ())
                in_lot = [model.new_bool_var("") for _ in lots]
                model.add(sum(in_lot) == made)
                for length in pieces:
                    places = []
                    for lot, chosen in zip(lots, in_lot, strict=True):
                        here = [model.new_bool_var("") for _ in lot.stock]
                        model.add(sum(here) == chosen)
                        for stock, place in zip(lot.stock, here, strict=True):
                            loads.setdefault(stock.key, []).append(length * place)
                        places += here
                    model.add(sum(places) == made)
    lengths = {
        s.key: s.length_mm for lots in problem.shelf.values() for lot in lots for s in lot.stock
    }
    for key, load in loads.items():
        model.add(sum(load) <= lengths[key])
    model.maximize(sum(objective))
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    assert solver.solve(model) == cp_model.OPTIMAL
    return Decimal(round(solver.objective_value)) / 100


@pytest.mark.parametrize("part", range(4))
def test_value_agrees_with_cp_sat(part: int) -> None:
    for seed in range(30 * part, 30 * part + 30):
        problem = random_problem(seed)
        result = make_from_scraps(problem, time_limit_s=60)
        check(problem, result)
        assert (result.value, result.status) == (cp_sat_value(problem), "optimal"), seed


def test_total_length_is_not_enough_and_lots_are_kept() -> None:
    # Two remnants of 15 hold 30, but a bracelet of two strands of 14 takes both from one lot.
    two_lots = ScrapsProblem((kind("pair", A=(14, 14)),), shelf_of(A=[[15], [15]]))
    assert make_from_scraps(two_lots).made == ()
    assert make_from_scraps(two_lots).status == "optimal"
    one_lot = ScrapsProblem((kind("pair", A=(14, 14)),), shelf_of(A=[[15, 15]]))
    assert make_from_scraps(one_lot).made == (("pair", 1),)


def test_many_small_ones_or_few_dear_ones() -> None:
    shelf = shelf_of(A=[[100]])
    small, large = {"A": (30,)}, {"A": (90,)}
    many = ScrapsProblem((kind("small", 9, **small), kind("large", 9, **large)), shelf)
    assert make_from_scraps(many).made == (("small", 3),)
    dear = ScrapsProblem(
        (kind("small", 9, "3.00", **small), kind("large", 9, "12.00", **large)), shelf
    )
    result = make_from_scraps(dear)
    assert (result.made, result.value, result.status) == ((("large", 1),), 12, "optimal")


def test_shade_that_is_not_there_makes_nothing() -> None:
    result = make_from_scraps(ScrapsProblem((kind("two", A=(5,), B=(5,)),), shelf_of(A=[[50]])))
    assert (result.made, result.value, result.status) == ((), 0, "optimal")


@settings(deadline=None, max_examples=60)
@given(st.integers(0, 10_000))
def test_plan_without_time_is_valid_and_bounded(seed: int) -> None:
    problem = random_problem(seed)
    quick = make_from_scraps(problem, time_limit_s=0)
    check(problem, quick)
    patient = make_from_scraps(problem, time_limit_s=60)
    check(problem, patient)
    assert quick.value <= patient.value <= patient.upper_bound <= quick.upper_bound


def test_realistic_shelf_is_settled() -> None:
    """Five kinds of two shades from 20 remnants each of 0.4 to 3 m in two lots."""
    random = Random(4)
    kinds = tuple(
        kind(
            f"k{n}",
            30,
            A=tuple(random.randrange(450, 1_300, 10) for _ in range(3)),
            B=tuple(random.randrange(450, 1_300, 10) for _ in range(2)),
        )
        for n in range(5)
    )
    lots = [[random.randint(400, 3_000) for _ in range(10)] for _ in range(2)]
    problem = ScrapsProblem(kinds, shelf_of(A=lots, B=[list(reversed(one)) for one in lots]))
    result = make_from_scraps(problem, time_limit_s=60)
    check(problem, result)
    assert result.count > 0
    assert result.upper_bound - result.value <= 1


def test_nonsense_is_refused() -> None:
    with pytest.raises(CuttingError, match="without pieces"):
        Makeable("none", {"A": ()}, Decimal(1), 3)
    with pytest.raises(CuttingError, match="the most of a kind must be from 0 to 1000"):
        kind("many", 1_001, A=(5,))
    with pytest.raises(CuttingError, match="price must be from 0"):
        kind("debt", 1, "-1", A=(5,))
    with pytest.raises(CuttingError, match="length_mm of a piece must be from 1"):
        kind("short", 1, A=(0,))
    with pytest.raises(CuttingError, match="stands twice"):
        ScrapsProblem((kind("a", A=(5,)), kind("a", A=(6,))), {})
    with pytest.raises(CuttingError, match="Too many kinds"):
        ScrapsProblem(tuple(kind(f"k{n}", A=(5,)) for n in range(201)), {})


def test_words_say_what_is_proven() -> None:
    def money(amount: Decimal) -> str:
        return f"€{amount:.2f}"

    proven = ScrapsResult("optimal", Decimal(12), Decimal(12), (("a", 12),))
    assert scraps_words(proven, of_money=False, money=money) == "12 bracelets; more is impossible."
    one = ScrapsResult("feasible", Decimal("9.50"), Decimal("19.00"), (("a", 1),), seconds=9.7)
    assert scraps_words(one, of_money=True, money=money) == (
        "1 bracelet for €9.50; at most €19.00; not settled in 10 s."
    )
