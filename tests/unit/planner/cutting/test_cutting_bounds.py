"""The bounds and the parts they stand on, against brute force."""

from itertools import product

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from planner.cutting import purchase
from planner.cutting.bounds import Bounds, length_bounds, rounded_bounds, usable_lengths
from planner.cutting.knapsack import Fullest, LongestFirst, MostValuable, most_valuable
from planner.cutting.purchase import cheapest_purchase

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


offers = st.lists(st.tuples(st.integers(0, 12), st.integers(0, 20)), min_size=1, max_size=4)


@settings(deadline=None, max_examples=300)
@given(offers, st.integers(-3, 30))
@example([(7, 484), (10, 537), (9, 485)], 11)
def test_cheapest_purchase_agrees_with_brute_force(
    offers: list[tuple[int, int]], need: int
) -> None:
    sizes = [size for size, _ in offers]
    prices = [price for _, price in offers]
    found = cheapest_purchase(sizes, prices, need)
    costs = [
        sum(map(int.__mul__, prices, counts))
        for counts in product(*(range(max(0, -(-need // s)) + 1 if s else 1) for s in sizes))
        if sum(map(int.__mul__, sizes, counts)) >= need
    ]
    if not costs:
        assert found is None
        return
    assert found is not None
    assert found.bound == min(costs) == sum(map(int.__mul__, prices, found.counts))
    assert sum(map(int.__mul__, sizes, found.counts)) >= need


@settings(deadline=None)
@given(offers, st.integers(1, 400))
def test_purchase_bound_is_valid_when_the_search_is_cut_short(
    offers: list[tuple[int, int]], need: int
) -> None:
    sizes = [size for size, _ in offers]
    prices = [price for _, price in offers]
    exact = cheapest_purchase(sizes, prices, need)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(purchase, "STEP_LIMIT", 0)
        short = cheapest_purchase(sizes, prices, need)
    assert (exact is None) == (short is None)
    if exact is not None and short is not None:
        assert short.bound <= exact.bound <= sum(map(int.__mul__, prices, short.counts))
        assert sum(map(int.__mul__, sizes, short.counts)) >= need


def test_rounded_bound_sees_that_long_pieces_do_not_share() -> None:
    # 5 pieces of 55 in stock of 100: by length 3 would do, but no two share one.
    assert length_bounds({55: 5}, {}, [100], [1]).cost == 5  # 55 is all that can be used of 100
    assert length_bounds({55: 5, 45: 1}, {}, [100], [1]).cost == 4
    assert rounded_bounds({55: 5, 45: 1}, {}, [100], [1]).cost == 5
    assert rounded_bounds({55: 5, 45: 1}, {60: 2, 54: 7}, [100], [1]).cost == 3


def test_bound_without_anything_to_buy_proves_that_no_plan_exists() -> None:
    assert not length_bounds({6: 11}, {11: 10}, [], []).possible
    assert length_bounds({6: 10}, {11: 10}, [], []).possible


def test_rounded_bound_without_anything_to_buy_measures_by_the_shelf() -> None:
    assert length_bounds({55: 5, 45: 1}, {100: 4}, [], []).possible
    assert not rounded_bounds({55: 5, 45: 1}, {100: 4}, [], []).possible


def test_bounds_combined_keep_the_stronger_of_each() -> None:
    joined = Bounds(5, 1, (1, 0)).combined(Bounds(4, 2, (0, 2)))
    assert joined == Bounds(5, 2, (1, 0))
    assert Bounds(5, 2, (1, 0)).combined(Bounds(6, 1, (0, 2), False)) == Bounds(6, 2, (0, 2), False)
