"""Matched sets: one dye lot of each shade for all their bracelets, and the way back to tags."""

from collections import Counter
from decimal import Decimal

from hypothesis import given, settings
from hypothesis import strategies as st

from planner.cutting import Group
from planner.planning.demand import Bracelet, Order, explode
from planner.planning.netting import NettedShade, groups_by_shade, net
from planner.planning.sets import Together, set_key, sets_of
from tests.plain import make_kind, make_offer, make_thread


def bracelet(number: int, name: str = "") -> Bracelet:
    return Bracelet(number, 0, "", None, "", matched_set=name)


def test_capitals_and_blanks_do_not_make_two_sets() -> None:
    assert set_key(" The  Pair ") == set_key("the pair") != ""
    assert set_key("  ") == ""
    assert sets_of([bracelet(1, "Pair"), bracelet(2), bracelet(3, "PAIR")]) == {
        "1": "set pair",
        "3": "set pair",
    }


def test_set_called_like_a_number_is_not_taken_for_a_bracelet() -> None:
    groups = [Group("1", (10,)), Group("2", (20, 30)), Group("3", (40,))]
    together = Together.of(groups, sets_of([bracelet(2, "1"), bracelet(3, "1")]))
    assert {group.key: group.pieces_mm for group in together.groups} == {
        "1": (10,),
        "set 1": (20, 30, 40),
    }


def lots_of_bracelets(shade: NettedShade) -> dict[str, set[tuple[str | None, bool]]]:
    found: dict[str, set[tuple[str | None, bool]]] = {}
    for opened in shade.result.opened:
        for piece in opened.pieces:
            lot = (opened.lot_key, opened.offer_key is not None)
            found.setdefault(piece.group_key, set()).add(lot)
    return found


@settings(max_examples=60, deadline=None)
@given(
    sets=st.lists(st.sampled_from(["", "", "Pair", "pair ", "Crew"]), min_size=1, max_size=5),
    remnants=st.lists(st.tuples(st.integers(900, 8_000), st.integers(1, 3)), max_size=8),
    can_buy=st.booleans(),
)
def test_every_set_comes_from_one_lot_and_every_piece_is_cut_once(
    sets: list[str], remnants: list[tuple[int, int]], can_buy: bool
) -> None:
    patterns = ("A A B B", "A A A B B B", "A B A B A")
    orders = tuple(
        Order(number, make_kind(patterns[number % 3]), 1 + number % 2, matched_set=name)
        for number, name in enumerate(sets, start=1)
    )
    kinds, bracelets = explode(orders)
    shelf = [
        make_thread(number, length, shade=1 + number % 2, lot=10 * (1 + number % 2) + lot)
        for number, (length, lot) in enumerate(remnants, start=1)
    ]
    netted = net(kinds, bracelets, shelf, (make_offer(),) if can_buy else ())
    wanted = groups_by_shade(kinds, bracelets)
    of_set = sets_of(bracelets)
    for shade in netted:
        lots = lots_of_bracelets(shade)
        by_set: dict[str, set[tuple[str | None, bool]]] = {}
        for key, found in lots.items():
            by_set.setdefault(of_set.get(key, key), set()).update(found)
        assert all(len(found) == 1 for found in by_set.values())
        unplaced = set(shade.result.unplaced)
        for group in wanted[shade.shade]:
            assert (group.key in lots) != (group.key in unplaced)
        # A set is whole on one side: with thread, or without.
        for name in set(of_set.values()):
            keys = {g.key for g in wanted[shade.shade] if of_set.get(g.key) == name}
            assert keys <= unplaced or not keys & unplaced
        cut = Counter(
            (piece.group_key, piece.index, piece.length_mm)
            for opened in shade.result.opened
            for piece in opened.pieces
        )
        assert cut == Counter(
            (group.key, index, length)
            for group in wanted[shade.shade]
            if group.key not in unplaced
            for index, length in enumerate(group.pieces_mm)
        )


def test_set_costs_a_skein_where_its_lots_would_have_done_one_by_one() -> None:
    """Two lots with thread for a bracelet each; as a set both come from one, so one skein is bought."""
    alone = explode((Order(1, make_kind("A A A A"), 2),))
    need = sum(piece.cut_mm for piece in alone[0][0].pieces)
    shelf = [make_thread(1, need, lot=1), make_thread(2, need, lot=2)]
    (apart,) = net(*alone, shelf, (make_offer(),))
    assert apart.result.bought == ()
    as_set = explode((Order(1, make_kind("A A A A"), 2, matched_set="Pair"),))
    (together,) = net(*as_set, shelf, (make_offer(length_mm=10_000),))
    assert together.result.bought == (("1", 1),)
    assert together.result.status == "optimal"
    assert together.result.cost_without_lots == Decimal(0)
    assert {piece.group_key for one in together.result.opened for piece in one.pieces} == {"1", "2"}
