"""Netting as pieces, not as metres; lots kept; sums that close."""

from collections import Counter

from hypothesis import given, settings
from hypothesis import strategies as st

from planner.cutting import Group
from planner.planning.demand import Order, explode
from planner.planning.netting import (
    groups_by_shade,
    net,
    usable_on_shelf,
)
from tests.plain import make_kind, make_offer, make_thread


def test_usable_on_shelf_is_not_a_total_in_metres() -> None:
    """10 strands of 1.2 m do not come out of 12 m in 0.9 m remnants (common practice, no source)."""
    groups = [Group("1", (1_200,) * 10)]
    remnants = [make_thread(number, 900) for number in range(14)]
    assert sum(thread.length_mm for thread in remnants) > 12_000
    assert usable_on_shelf(groups, remnants) == 0


def test_usable_on_shelf_counts_whole_pieces_only() -> None:
    """Only 6 strands of 1.2 m come out of an 8 m skein (common practice, no source)."""
    assert usable_on_shelf([Group("1", (1_200,) * 10)], [make_thread(1, 8_000)]) == 6 * 1_200


def test_net_buys_what_the_remnants_cannot_give() -> None:
    kinds, bracelets = explode((Order(1, make_kind("A A A A A A"), 2),))
    shelf = [make_thread(number, 900) for number in range(20)]
    (shade,) = net(kinds, bracelets, shelf, (make_offer(),))
    assert {piece.cut_mm for piece in kinds[0].pieces} <= set(range(900, 2_000))
    assert shade.usable_mm == 0
    assert shade.result.bought
    assert all(opened.offer_key is not None for opened in shade.result.opened)


def test_net_without_anything_to_buy_names_the_bracelets_left_out() -> None:
    kinds, bracelets = explode((Order(1, make_kind("A A B B"), 2),))
    shelf = [make_thread(1, 8_000, shade=1)]
    first, second = net(kinds, bracelets, shelf, ())
    assert first.result.unplaced == ()
    assert set(second.result.unplaced) == {"1", "2"}
    assert second.left_mm == second.shelf_mm == 0


@settings(max_examples=60, deadline=None)
@given(
    quantities=st.lists(st.integers(1, 6), min_size=1, max_size=3),
    remnants=st.lists(st.tuples(st.integers(300, 8_000), st.integers(1, 3)), max_size=8),
)
def test_net_cuts_every_piece_once_and_keeps_lots(
    quantities: list[int], remnants: list[tuple[int, int]]
) -> None:
    patterns = ("A A B B", "A A A B B B", "A B A B A")
    orders = tuple(
        Order(number, make_kind(patterns[number]), quantity)
        for number, quantity in enumerate(quantities)
    )
    kinds, bracelets = explode(orders)
    shelf = [
        make_thread(number, length, shade=1 + number % 2, lot=10 * (number % 2) + lot)
        for number, (length, lot) in enumerate(remnants)
    ]
    wanted = groups_by_shade(kinds, bracelets)
    for shade in net(kinds, bracelets, shelf, (make_offer(),)):
        opened = shade.result.opened
        cut = Counter(
            (piece.group_key, piece.index, piece.length_mm)
            for stock in opened
            for piece in stock.pieces
        )
        assert cut == Counter(
            (group.key, index, length)
            for group in wanted[shade.shade]
            for index, length in enumerate(group.pieces_mm)
        )
        lots: dict[str, set[str | None]] = {}
        for stock in opened:
            assert sum(piece.length_mm for piece in stock.pieces) + stock.left_mm == stock.length_mm
            for piece in stock.pieces:
                lots.setdefault(piece.group_key, set()).add(stock.lot_key)
        assert all(len(found) == 1 for found in lots.values())
        new_mm = sum(stock.length_mm for stock in opened if stock.offer_key is not None)
        assert shade.left_mm == shade.shelf_mm + new_mm - shade.need_mm
        assert shade.result.cost >= shade.result.lower_bound
