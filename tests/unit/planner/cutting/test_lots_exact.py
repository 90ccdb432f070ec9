"""Lots, suppliers and packs together, against CP-SAT (OR-Tools)."""

from collections import defaultdict
from decimal import Decimal
from random import Random

import pytest
from ortools.sat.python import cp_model

from planner.cutting import Group, Lot, LotStock, Offer, solve_with_lots
from tests.unit.planner.cutting.test_cutting_lots import Shade, check_lots


def random_shade(seed: int) -> Shade:
    """Up to six groups, two lots and two suppliers, with packs at times; every piece fits a skein."""
    random = Random(seed)
    groups = tuple(
        Group(str(n), tuple(random.randrange(20, 70, 5) for _ in range(random.randint(1, 3))))
        for n in range(random.randint(1, 6))
    )
    lots = tuple(
        Lot(
            f"lot {n}",
            tuple(
                LotStock(f"{n}.{m}", random.randint(20, 130)) for m in range(random.randint(1, 2))
            ),
        )
        for n in range(random.randint(0, 2))
    )
    offers = []
    for supplier in "AB"[: random.randint(1, 2)]:
        for n in range(random.randint(1, 2)):
            packs = random.choice(
                [(1, 1, 1), (1, 1, 1), (2, 1, 1), (3, 1, 1), (1, 2, 2), (2, 2, 1)]
            )
            price = Decimal(random.randrange(100, 400, 10) * packs[0]) / 100
            offers.append(
                Offer(f"{supplier}{n}", supplier, random.randrange(70, 150), price, *packs)
            )
    return groups, lots, tuple(offers)


def cheapest_cost(shade: Shade) -> Decimal:
    """Each group into one pool (a lot or a supplier), each piece into one stock piece of it."""
    groups, lots, offers = shade
    model = cp_model.CpModel()
    most = sum(len(group.pieces_mm) for group in groups)
    stock: dict[str, list[tuple[str, int, str | None]]] = defaultdict(list)
    for lot in lots:
        stock["lot " + lot.key] += [(s.key, s.length_mm, None) for s in lot.stock]
    for offer in offers:
        stock[offer.supplier] += [
            (f"{offer.key}#{n}", offer.length_mm, offer.key) for n in range(most)
        ]
    loads: dict[str, list[cp_model.LinearExprT]] = defaultdict(list)
    for group in groups:
        chosen = {pool: model.new_bool_var("") for pool in stock}
        model.add_exactly_one(chosen.values())
        for length in group.pieces_mm:
            for pool, pieces in stock.items():
                places = [model.new_bool_var("") for _ in pieces]
                model.add(sum(places) == chosen[pool])
                for (key, _, _), place in zip(pieces, places, strict=True):
                    loads[key].append(length * place)
    opened: dict[str, list[cp_model.IntVar]] = defaultdict(list)
    for pieces in stock.values():
        for key, length, offer_key in pieces:
            used = model.new_bool_var("")
            model.add(sum(loads[key]) <= length * used)
            if offer_key is not None:
                opened[offer_key].append(used)
    cost = []
    for offer in offers:
        steps = model.new_int_var(0, 50, "")
        some = model.new_bool_var("")
        model.add(steps * offer.pack_step >= offer.minimum_packs).only_enforce_if(some)
        model.add(steps == 0).only_enforce_if(some.negated())
        model.add(sum(opened[offer.key]) <= steps * offer.pack_step * offer.pack_size)
        cost.append(steps * offer.pack_step * int(offer.price * 100))
    model.minimize(sum(cost))
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    assert solver.solve(model) == cp_model.OPTIMAL
    return Decimal(round(solver.objective_value)) / 100


@pytest.mark.parametrize("part", range(6))
def test_cost_over_lots_and_suppliers_is_the_least(part: int) -> None:
    for seed in range(15 * part, 15 * part + 15):
        shade = random_shade(seed)
        result = solve_with_lots(*shade, time_limit_s=60)
        check_lots(shade, result)
        assert not result.unplaced
        assert (result.cost, result.status) == (cheapest_cost(shade), "optimal"), seed
