"""The bounds and the parts they stand on, against brute force."""

from itertools import product

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from planner.cutting import purchase
from planner.cutting.bounds import Bounds, length_bounds, rounded_bounds, usable_lengths
from planner.cutting.knapsack import Fullest, LongestFirst, MostValuable, most_valuable
from planner.cutting.packs import SoldAs
from planner.cutting.purchase import cheapest_purchase, fewest_put_ups, purchases_between

small_demands = st.dictionaries(st.integers(1, 15), st.integers(1, 3), min_size=1, max_size=4)


def all_sums(demand: dict[int, int]) -> set[int]:
    ranges = [range(count + 1) for count in demand.values()]
    return {sum(map(int.__mul__, demand, taken)) for taken in product(*ranges)}


@settings(deadline=None)
@given(small_demands, st.lists(st.integers(0, 60), min_size=1, max_size=4))
def test_usable_length_agrees_with_brute_force(
    demand: dict[int, int], capacities: list[int]
) -> None:
    usable = usable_lengths(demand, capacities)
    sums = all_sums(demand)
    for capacity in capacities:
        assert usable[capacity] == max(s for s in sums if s <= capacity)


@settings(deadline=None)
@given(small_demands, st.integers(1, 60))
def test_fullest_filling_agrees_with_brute_force(demand: dict[int, int], capacity: int) -> None:
    lengths = sorted(demand)
    counts = [demand[length] for length in lengths]
    pattern = Fullest().fill(lengths, counts, capacity)
    assert all(0 < taken <= counts[index] for index, taken in pattern)
    used = sum(lengths[index] * taken for index, taken in pattern)
    assert used == max(s for s in all_sums(demand) if s <= capacity)


@settings(deadline=None)
@given(small_demands, st.integers(1, 60), st.lists(st.integers(1, 9), min_size=4, max_size=4))
def test_most_valuable_filling_agrees_with_brute_force(
    demand: dict[int, int], capacity: int, worth: list[int]
) -> None:
    lengths = sorted(demand)
    counts = [demand[length] for length in lengths]
    values = [float(value) for value in worth[: len(lengths)]]
    pattern = dict(most_valuable(lengths, counts, values, capacity))
    assert all(0 < taken <= counts[index] for index, taken in pattern.items())
    assert sum(lengths[index] * taken for index, taken in pattern.items()) <= capacity
    best = max(
        sum(map(float.__mul__, values, map(float, taken)))
        for taken in product(*(range(count + 1) for count in counts))
        if sum(map(int.__mul__, lengths, taken)) <= capacity
    )
    assert sum(values[index] * taken for index, taken in pattern.items()) == pytest.approx(best)


@pytest.mark.parametrize("filler", [Fullest(), LongestFirst(), MostValuable(1_600, 1.03)])
def test_filling_of_a_very_long_spool_is_valid_and_nearly_full(
    filler: Fullest | LongestFirst | MostValuable,
) -> None:
    lengths = list(range(301, 1_600, 7))
    counts = [9] * len(lengths)
    capacity = 1_000_000
    pattern = filler.fill(lengths, counts, capacity)
    assert len({index for index, _ in pattern}) == len(pattern)
    assert all(0 < taken <= counts[index] for index, taken in pattern)
    used = sum(lengths[index] * taken for index, taken in pattern)
    assert capacity - 301 < used <= capacity


def test_longest_first_filling_skips_what_does_not_fit() -> None:
    assert LongestFirst().fill([3, 5, 7], [2, 2, 1], 13) == [(2, 1), (1, 1)]
    assert LongestFirst().fill([3, 5, 7], [2, 2, 1], 11) == [(2, 1), (0, 1)]


@st.composite
def put_ups(draw: st.DrawFn) -> SoldAs:
    packs = [draw(st.sampled_from([1, 1, 2, 3])) for _ in range(3)]
    return SoldAs(1, draw(st.integers(0, 12)), draw(st.integers(0, 20)), *packs)


offers = st.lists(put_ups(), min_size=1, max_size=3)


def sold(*sizes_and_prices: tuple[int, int]) -> list[SoldAs]:
    return [SoldAs(size, size, price) for size, price in sizes_and_prices]


def all_purchases(offers: list[SoldAs], need: int) -> list[tuple[int, int, int]]:
    """What can be bought: (cost, put-ups, what they hold), counting packs one by one."""
    ranges = []
    for one in offers:
        packs = range(-(-max(0, need) // max(1, one.size * one.pack_size)) + 20)
        ranges.append(
            [0, *(n for n in packs if n >= one.minimum_packs and n % one.pack_step == 0)]
            if one.size
            else [0]
        )
    found = []
    for counts in product(*ranges):
        singles = [n * one.pack_size for n, one in zip(counts, offers, strict=True)]
        holds = sum(n * one.size for n, one in zip(singles, offers, strict=True))
        cost = sum(n * one.price for n, one in zip(counts, offers, strict=True))
        if holds >= need:
            found.append((cost, sum(singles), holds))
    return found


def cost_and_hold(offers: list[SoldAs], counts: tuple[int, ...]) -> tuple[int, int]:
    packs = [n // one.pack_size for n, one in zip(counts, offers, strict=True)]
    assert all(n % one.pack_size == 0 for n, one in zip(counts, offers, strict=True))
    assert all(
        n == 0 or (n >= one.minimum_packs and n % one.pack_step == 0)
        for n, one in zip(packs, offers, strict=True)
    )
    cost = sum(n * one.price for n, one in zip(packs, offers, strict=True))
    return cost, sum(n * one.size for n, one in zip(counts, offers, strict=True))


@settings(deadline=None, max_examples=300)
@given(offers, st.integers(-3, 24))
@example(sold((7, 484), (10, 537), (9, 485)), 11)
def test_cheapest_purchase_agrees_with_brute_force(offers: list[SoldAs], need: int) -> None:
    sizes = [one.size for one in offers]
    found = cheapest_purchase(offers, sizes, need)
    choices = all_purchases(offers, need)
    if not choices:
        assert found is None
        return
    assert found is not None
    cost, holds = cost_and_hold(offers, found.counts)
    assert found.bound == min(choices)[0] == cost
    assert holds >= need
    assert fewest_put_ups(offers, sizes, need) == min(count for _, count, _ in choices)


@settings(deadline=None)
@given(offers, st.integers(1, 400))
def test_purchase_bound_is_valid_when_the_search_is_cut_short(
    offers: list[SoldAs], need: int
) -> None:
    sizes = [one.size for one in offers]
    exact = cheapest_purchase(offers, sizes, need)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(purchase, "STEP_LIMIT", 0)
        short = cheapest_purchase(offers, sizes, need)
    assert (exact is None) == (short is None)
    if exact is not None and short is not None:
        cost, holds = cost_and_hold(offers, short.counts)
        assert short.bound <= exact.bound <= cost
        assert holds >= need


@settings(deadline=None)
@given(offers, st.integers(1, 24), st.integers(0, 30), st.integers(1, 30))
def test_purchases_in_a_range_are_real_and_cheapest_first(
    offers: list[SoldAs], need: int, least: int, more: int
) -> None:
    sizes = [one.size for one in offers]
    found = purchases_between(offers, sizes, need, least, least + more, 50)
    costs = [cost_and_hold(offers, counts)[0] for counts in found]
    assert costs == sorted(costs)
    assert all(least <= cost < least + more for cost in costs)
    assert all(cost_and_hold(offers, counts)[1] >= need for counts in found)
    cheapest = min((cost for cost, _, _ in all_purchases(offers, need)), default=None)
    if cheapest is not None and least <= cheapest < least + more and len(found) < 50:
        assert costs[0] == cheapest


def test_rounded_bound_sees_that_long_pieces_do_not_share() -> None:
    # 5 pieces of 55 in stock of 100: by length 3 would do, but no two share one.
    assert length_bounds({55: 5}, {}, sold((100, 1))).cost == 5  # 55 is all that can be used of 100
    assert length_bounds({55: 5, 45: 1}, {}, sold((100, 1))).cost == 4
    assert rounded_bounds({55: 5, 45: 1}, {}, sold((100, 1))).cost == 5
    assert rounded_bounds({55: 5, 45: 1}, {60: 2, 54: 7}, sold((100, 1))).cost == 3


def test_bound_without_anything_to_buy_proves_that_no_plan_exists() -> None:
    assert not length_bounds({6: 11}, {11: 10}, []).possible
    assert length_bounds({6: 10}, {11: 10}, []).possible


def test_rounded_bound_without_anything_to_buy_measures_by_the_shelf() -> None:
    assert length_bounds({55: 5, 45: 1}, {100: 4}, []).possible
    assert not rounded_bounds({55: 5, 45: 1}, {100: 4}, []).possible


def test_bounds_combined_keep_the_stronger_of_each() -> None:
    joined = Bounds(5, 1, (1, 0)).combined(Bounds(4, 2, (0, 2)))
    assert joined == Bounds(5, 2, (1, 0))
    assert Bounds(5, 2, (1, 0)).combined(Bounds(6, 1, (0, 2), False)) == Bounds(6, 2, (0, 2), False)
