"""Cutting plans with dye lots: invariants under Hypothesis, exact answers on tiny cases, refusals."""

import random
from collections import Counter
from collections.abc import Sequence
from decimal import Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from ortools.sat.python import cp_model

from planner.cutting import (
    CuttingError,
    Group,
    Lot,
    LotResult,
    LotStock,
    Offer,
    Problem,
    lower_bounds,
    solve_with_lots,
)
from planner.cutting.filling import Supply
from planner.cutting.lot_choice import Kind, most_from_lot
from planner.cutting.problem import Demand, PutUp, StockPiece

Shade = tuple[tuple[Group, ...], tuple[Lot, ...], tuple[Offer, ...]]


def make_groups(*pieces: Sequence[int]) -> tuple[Group, ...]:
    return tuple(Group(f"bracelet {n}", tuple(one)) for n, one in enumerate(pieces, start=1))


def make_lots(*stock: Sequence[int]) -> tuple[Lot, ...]:
    return tuple(
        Lot(f"lot {n}", tuple(LotStock(f"{n}.{m}", length) for m, length in enumerate(one)))
        for n, one in enumerate(stock, start=1)
    )


SKEIN = Offer("skein", "Quay Street", 8000, Decimal("1.20"))


def check_lots(shade: Shade, result: LotResult) -> None:
    """Every piece once, from one lot a group, from stock that exists, in whole packs; sums right."""
    groups, lots, offers = shade
    wanted = {
        (group.key, index): length
        for group in groups
        if group.key not in result.unplaced
        for index, length in enumerate(group.pieces_mm)
    }
    cut = [piece for one in result.opened for piece in one.pieces]
    assert len(cut) == len(wanted)
    assert {(piece.group_key, piece.index): piece.length_mm for piece in cut} == wanted
    by_key = {offer.key: offer for offer in offers}
    lot_of: dict[str, set[str | None]] = {}
    for one in result.opened:
        lengths = [piece.length_mm for piece in one.pieces]
        assert lengths
        assert lengths == sorted(lengths, reverse=True)
        assert sum(lengths) + one.left_mm == one.length_mm
        assert one.left_mm >= 0
        for piece in one.pieces:
            lot = one.lot_key if one.offer_key is None else by_key[one.offer_key].supplier
            lot_of.setdefault(piece.group_key, set()).add(lot)
    assert all(len(found) == 1 for found in lot_of.values())
    shelf = {stock.key: (lot.key, stock.length_mm) for lot in lots for stock in lot.stock}
    old = [one for one in result.opened if one.stock_key is not None]
    assert len({one.stock_key for one in old}) == len(old)
    for one in old:
        assert shelf[str(one.stock_key)] == (one.lot_key, one.length_mm)
        assert one.offer_key is None
    new = [one for one in result.opened if one.stock_key is None]
    assert all(one.lot_key is None for one in new)
    assert Counter(one.offer_key for one in new) <= Counter(dict(result.bought))
    assert all(by_key[str(one.offer_key)].length_mm == one.length_mm for one in new)
    cost = Decimal(0)
    for key, count in result.bought:
        offer = by_key[key]
        packs, rest = divmod(count, offer.pack_size)
        assert rest == 0
        assert packs >= offer.minimum_packs
        assert packs % offer.pack_step == 0
        cost += packs * offer.price
    assert result.cost == cost
    assert result.lower_bound_without_lots <= result.cost_without_lots <= result.cost
    assert result.cost >= result.lower_bound
    assert sum(n for _, n in result.bought) >= result.bought_lower_bound
    if result.status == "optimal":
        assert result.cost == result.lower_bound


lengths = st.integers(1, 30)
some_groups = st.lists(st.lists(lengths, max_size=4), max_size=8)
some_lots = st.lists(st.lists(st.integers(0, 90), max_size=3), max_size=3)
some_packs = st.one_of(
    st.just((1, 1, 1)), st.tuples(st.integers(1, 4), st.integers(1, 3), st.integers(1, 2))
)
some_offers = st.lists(
    st.tuples(st.sampled_from("AB"), st.integers(0, 60), st.decimals(0, 9, places=2), some_packs),
    max_size=3,
)


@st.composite
def shades(draw: st.DrawFn) -> Shade:
    scale = draw(st.sampled_from([1, 10, 127]))
    groups = [[length * scale for length in one] for one in draw(some_groups)]
    groups += draw(st.lists(st.sampled_from(groups), max_size=4)) if groups else []
    lots = [[length * scale for length in one] for one in draw(some_lots)]
    offers = tuple(
        Offer(f"offer {n}", supplier, length * scale, price, *packs)
        for n, (supplier, length, price, packs) in enumerate(draw(some_offers))
    )
    return make_groups(*groups), make_lots(*lots), offers


def pooled_bound(shade: Shade, result: LotResult) -> Decimal:
    """The bound with the lots of the shelf, and the suppliers, thrown together."""
    groups, lots, offers = shade
    placed = [group for group in groups if group.key not in result.unplaced]
    problem = Problem(
        tuple(Demand(length, 1) for group in placed for length in group.pieces_mm),
        tuple(StockPiece(s.length_mm, 1) for lot in lots for s in lot.stock if s.length_mm),
        tuple(
            PutUp(o.length_mm, o.price, o.pack_size, o.minimum_packs, o.pack_step)
            for o in offers
            if o.length_mm
        ),
    )
    return lower_bounds(problem)[0]


def test_suppliers_are_mixed_where_that_is_cheaper() -> None:
    """A bracelet from each supplier costs 3 + 2 = 5; either supplier alone costs 6 or more."""
    groups = make_groups((4, 1), (2, 4))
    offers = (
        Offer("long", "X", 9, Decimal(3)),
        Offer("longer", "Y", 11, Decimal(8)),
        Offer("short", "Y", 5, Decimal(2)),
    )
    result = solve_with_lots(groups, (), offers)
    check_lots((groups, (), offers), result)
    assert result.cost == 5
    assert result.status == "optimal"


def test_keeping_lots_apart_costs_a_skein_and_says_so() -> None:
    """Two remnants of 1.5 m and a bracelet of two strands of 1.4 m: together they would do."""
    groups = make_groups((1400, 1400))
    lots = make_lots((1500,), (1500,))
    result = solve_with_lots(groups, lots, (SKEIN,))
    check_lots((groups, lots, (SKEIN,)), result)
    assert (result.status, result.cost, result.lower_bound) == (
        "optimal",
        Decimal("1.20"),
        Decimal("1.20"),
    )
    assert result.bought == (("skein", 1),)
    assert (result.cost_without_lots, result.bought_without_lots) == (0, 0)
    assert result.lower_bound_without_lots == 0


def test_pack_of_twelve_is_bought_only_where_it_pays() -> None:
    pack = Offer("pack", "Harbour Row", 8000, Decimal("9.00"), pack_size=12)
    seven = make_groups(*[(4000, 4000)] * 7)
    few = solve_with_lots(seven, (), (SKEIN, pack))
    assert (few.bought, few.cost, few.status) == ((("skein", 7),), Decimal("8.40"), "optimal")
    eight = make_groups(*[(4000, 4000)] * 8)
    many = solve_with_lots(eight, (), (SKEIN, pack))
    assert (many.bought, many.cost, many.status) == ((("pack", 12),), Decimal("9.00"), "optimal")
    assert len(many.opened) == 8


def test_minimum_and_steps_of_packs_are_kept() -> None:
    offer = Offer("pair", "X", 8000, Decimal("2.00"), pack_size=2, minimum_packs=3, pack_step=2)
    result = solve_with_lots(make_groups((7000,)), (), (offer,))
    # Three packs at least, and only two or four at a time: four packs are eight skeins.
    assert (result.bought, result.cost, result.status) == ((("pair", 8),), 8, "optimal")
    nine = solve_with_lots(make_groups(*[(7000,)] * 9), (), (offer,))
    assert (nine.bought, nine.cost) == ((("pair", 12),), 12)


@settings(deadline=None, max_examples=200)
@given(shades())
def test_plan_with_lots_keeps_every_group_in_one_lot(shade: Shade) -> None:
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.cost >= pooled_bound(shade, result)
    longest = max((offer.length_mm for offer in shade[2]), default=0)
    for group in shade[0]:
        if group.key in result.unplaced:
            assert max(group.pieces_mm) > longest


@settings(deadline=None, max_examples=30)
@given(shades())
def test_plan_with_lots_is_the_same_each_time(shade: Shade) -> None:
    assert solve_with_lots(*shade).opened == solve_with_lots(*shade).opened


@settings(deadline=None, max_examples=100)
@given(shades())
def test_shelf_never_costs_one_put_up_more(shade: Shade) -> None:
    groups, lots, offers = shade
    with_shelf = solve_with_lots(groups, lots, offers)
    without = solve_with_lots(groups, (), offers)
    if len(with_shelf.unplaced) == len(without.unplaced):
        assert with_shelf.cost <= without.cost
    else:
        assert len(with_shelf.unplaced) < len(without.unplaced)


def random_shade(seed: int) -> Shade:
    rng = random.Random(seed)
    groups = [[rng.randrange(10, 40) for _ in range(rng.randrange(1, 4))] for _ in range(4)]
    lots = [[rng.randrange(20, 90) for _ in range(rng.randrange(1, 3))] for _ in range(2)]
    offer = Offer("new", "A", rng.randrange(60, 100), Decimal(1))
    return make_groups(*groups), make_lots(*lots), (offer,)


def fewest_bought(shade: Shade) -> int:
    """Assign pieces to stock and groups to lots by CP-SAT (OR-Tools), the reference solver."""
    groups, lots, offers = shade
    model = cp_model.CpModel()
    stock = [(n, s.length_mm) for n, lot in enumerate(lots) for s in lot.stock]
    stock += [(len(lots), offers[0].length_mm) for _ in range(8)]
    opened = [model.new_bool_var("") for _ in stock]
    loads: list[list[cp_model.LinearExpr]] = [[] for _ in stock]
    for group in groups:
        in_lot = [model.new_bool_var("") for _ in range(len(lots) + 1)]
        model.add_exactly_one(in_lot)
        for length in group.pieces_mm:
            placed = [model.new_bool_var("") for _ in stock]
            model.add_exactly_one(placed)
            for index, (lot, _) in enumerate(stock):
                model.add_implication(placed[index], in_lot[lot])
                loads[index].append(length * placed[index])
    for index, (_, length) in enumerate(stock):
        model.add(sum(loads[index]) <= length * opened[index])
    model.minimize(sum(o for (lot, _), o in zip(stock, opened, strict=True) if lot == len(lots)))
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    assert solver.solve(model) == cp_model.OPTIMAL
    return round(solver.objective_value)


def test_plan_with_lots_of_tiny_shades_agrees_with_exact_solver() -> None:
    for seed in range(30):
        shade = random_shade(seed)
        result = solve_with_lots(*shade, time_limit_s=60)
        check_lots(shade, result)
        assert result.cost == fewest_bought(shade), seed
        assert result.status == "optimal", seed


def test_group_is_not_split_over_two_lots() -> None:
    # 2 m lie on the shelf and 2 m are wanted, but half of it in each of two lots.
    shade = (make_groups([1000, 1000]), make_lots([1000], [1000]), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.bought == (("skein", 1),)
    assert result.lower_bound == Decimal("1.20")  # a lot serves whole groups: proven
    assert result.status == "optimal"


def test_groups_fill_the_shelf_before_new_thread() -> None:
    shade = (make_groups([600, 400], [600, 400], [700, 300]), make_lots([2000], [1100]), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.bought == ()
    assert result.status == "optimal"
    assert {one.lot_key for one in result.opened} == {"lot 1", "lot 2"}


def test_shelf_is_used_where_it_saves_nothing() -> None:
    # One skein is needed either way; the remnant in the hand goes first.
    shade = (make_groups([3000], [3000], [1000], [3000]), make_lots([1200]), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.bought == (("skein", 2),)
    assert [one.stock_key for one in result.opened] == ["1.0", None, None]


def test_all_new_thread_comes_from_the_cheapest_supplier() -> None:
    offers = (
        Offer("dear skein", "A", 8000, Decimal("1.30")),
        Offer("cheap skein", "B", 8000, Decimal("1.20")),
        Offer("card", "A", 1000, Decimal("0.10")),
    )
    # 9 m: A 1.30 + 0.10 (a skein and a card), B 2 skeins for 2.40.
    groups = make_groups(*[[1000]] * 9)
    result = solve_with_lots(groups, (), offers)
    check_lots((groups, (), offers), result)
    assert result.cost == Decimal("0.90")  # nine cards of A are cheaper still
    result = solve_with_lots(groups, (), offers[:2])
    assert result.bought == (("cheap skein", 2),)


def test_equal_offers_of_two_suppliers_take_the_first() -> None:
    offers = (SKEIN, Offer("other", "Mole Road", 8000, Decimal("1.20")))
    assert solve_with_lots(make_groups([1000]), (), offers).bought == (("skein", 1),)


def test_groups_without_anything_to_buy_are_unplaced() -> None:
    shade = (make_groups([900, 900], [900], [900]), make_lots([1800]), ())
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.unplaced == ("bracelet 1",)  # two bracelets are more than one
    assert (result.cost, result.lower_bound) == (0, 0)
    assert result.status == "feasible"


def test_piece_longer_than_everything_is_unplaced_and_the_rest_planned() -> None:
    shade = (make_groups([9000, 500], [1000], [500]), make_lots([400]), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.unplaced == ("bracelet 1",)
    assert result.bought == (("skein", 1),)
    assert result.status == "optimal"


def test_piece_longer_than_every_put_up_goes_to_the_shelf_first() -> None:
    shade = (make_groups([5000, 5000], [9000, 900]), make_lots([10000]), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.unplaced == ()
    assert result.opened[0].pieces[0].length_mm == 9000
    assert result.bought == (("skein", 2),)


def test_plan_of_no_groups_is_empty() -> None:
    result = solve_with_lots((), make_lots([500]), (SKEIN,))
    assert (result.opened, result.bought, result.unplaced, result.status) == ((), (), (), "optimal")
    empty = solve_with_lots(make_groups([]), (), ())
    assert (empty.opened, empty.unplaced) == ((), ())


def test_stock_and_offers_without_length_are_left_out() -> None:
    offers = (Offer("none", "A", 0, Decimal(0)), SKEIN)
    shade = (make_groups([500]), make_lots([0]), offers)
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert result.bought == (("skein", 1),)


def test_cheaper_of_two_offers_of_one_length_is_bought() -> None:
    offers = (SKEIN, Offer("sale", "Quay Street", 8000, Decimal("0.99")))
    assert solve_with_lots(make_groups([500]), (), offers).bought == (("sale", 1),)


@pytest.mark.parametrize(
    ("groups", "lots", "offers", "message"),
    [
        (make_groups([500]) * 2, (), (), "group 'bracelet 1' stands twice"),
        ((), make_lots([500]) * 2, (), "lot 'lot 1' stands twice"),
        ((), (), (SKEIN, SKEIN), "offer 'skein' stands twice"),
    ],
)
def test_key_that_stands_twice_is_refused(
    groups: tuple[Group, ...], lots: tuple[Lot, ...], offers: tuple[Offer, ...], message: str
) -> None:
    with pytest.raises(CuttingError, match=message):
        solve_with_lots(groups, lots, offers)


@pytest.mark.parametrize("length", [0, -1, True, 10**30, 1.5, "5"])
def test_piece_that_is_no_length_is_refused(length: int) -> None:
    with pytest.raises(CuttingError):
        Group("bracelet", (length,))


def used_of_shelf(result: LotResult) -> int:
    return sum(piece.length_mm for one in result.opened if one.stock_key for piece in one.pieces)


def test_lot_of_remnants_is_filled_with_what_fits_them() -> None:
    # Three remnants of 1 m hold two of 450 mm each; one of 600 mm each would leave 400.
    shade = (make_groups(*[[600]] * 20, *[[450]] * 20), make_lots([1000] * 3), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert used_of_shelf(result) == 2700


def test_lot_whose_fullest_choice_does_not_fit_is_tried_with_less() -> None:
    # By length 9.9 m could come of ten remnants of 1 m, but a piece of 510 mm needs its own.
    shade = (make_groups(*[[510, 330]] * 20, *[[330] * 3] * 3), make_lots([1000] * 10), (SKEIN,))
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert used_of_shelf(result) >= 8 * 840 + 2 * 990


def test_room_in_a_lot_is_topped_up() -> None:
    groups = make_groups(
        [32, 47, 11], [11], [33, 14], [29, 31], [47], [19, 16, 27], [49, 10], [58], [15, 13, 33]
    )
    shade = (groups, make_lots([85, 22, 64], [90]), ())
    result = solve_with_lots(*shade)
    check_lots(shade, result)
    assert len(result.unplaced) == 4  # 5 without


def test_lot_gives_at_most_whole_groups() -> None:
    kinds = Counter({Kind((5, 4)): 2, Kind((20,)): 1})
    assert most_from_lot(kinds, [Supply(17, 17, 1)]) == 9
    assert most_from_lot(kinds, [Supply(18, 18, 1)]) == 18
    assert most_from_lot(kinds, [Supply(20, 20, 1), Supply(9, 9, 1)]) == 29
    assert most_from_lot(kinds, []) == 0
