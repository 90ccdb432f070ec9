from itertools import combinations, combinations_with_replacement

import pytest
from hypothesis import given
from hypothesis import strategies as st

from patterns.grouping import Grouping, costs_by_count, group_lengths

lengths = st.lists(st.integers(1, 3_000), min_size=1, max_size=30)


def brute_force(needed, most):
    """The least over every choice of levels; a level that is no piece's length never helps."""
    distinct = sorted(set(needed))
    best = None
    for count in range(1, min(most, len(distinct)) + 1):
        for others in combinations(distinct[:-1], count - 1):
            levels = (*others, distinct[-1])
            added = sum(min(level for level in levels if level >= need) - need for need in needed)
            best = added if best is None else min(best, added)
    return best


def partitions(pieces):
    """Every way to put pieces into groups, without regard to their order."""
    if not pieces:
        yield []
        return
    first, *others = pieces
    for rest in partitions(others):
        yield [[first], *rest]
        for place in range(len(rest)):
            yield [*rest[:place], [first, *rest[place]], *rest[place + 1 :]]


def test_group_lengths_by_hand():
    # 100 100 110 130 in one length adds 30 + 30 + 20 = 80. In two lengths {100 100 110} {130} adds
    # 10 + 10; {100 100} {110 130} adds 20 too, and makes the longest group larger.
    assert group_lengths([100, 130, 100, 110], 2) == Grouping((110, 130), 20)
    assert group_lengths([100, 130, 100, 110], 1) == Grouping((130,), 80)
    assert costs_by_count([100, 130, 100, 110]) == ((1, 80), (2, 20), (3, 0))


def test_every_case_of_up_to_eight_strands_is_the_brute_force():
    """All multisets of up to 8 strands over 6 unequal lengths: 3,002 cases, each for every k."""
    values = (100, 110, 140, 150, 250, 270)
    cases = 0
    for count in range(1, 9):
        for needed in combinations_with_replacement(values, count):
            cases += 1
            for most in range(1, count + 1):
                assert group_lengths(needed, most).added_mm == brute_force(needed, most)
    assert cases == 3_002


@pytest.mark.parametrize("needed", [(100, 105, 240, 250, 251, 400, 401), (7, 7, 8, 20, 21, 22, 60)])
def test_no_partition_at_all_is_cheaper(needed):
    """Groups need not be neighbours in the sorted order here: every set partition is tried."""
    least = {}
    for groups in partitions(list(needed)):
        added = sum(max(group) * len(group) - sum(group) for group in groups)
        least[len(groups)] = min(added, least.get(len(groups), added))
    for most in range(1, len(needed) + 1):
        assert group_lengths(needed, most).added_mm == min(
            added for count, added in least.items() if count <= most
        )


@given(lengths, st.integers(1, 10))
def test_no_piece_is_shorter_than_it_needs(needed, most):
    grouping = group_lengths(needed, most)
    cut = [grouping.level_of(need) for need in needed]
    assert all(level >= need for level, need in zip(cut, needed, strict=True))
    assert len(set(cut)) <= most
    assert sum(cut) - sum(needed) == grouping.added_mm
    assert set(cut) == set(grouping.levels_mm) <= set(needed)


@given(lengths)
def test_more_lengths_never_cost_more(needed):
    costs = costs_by_count(needed)
    added = [cost for _, cost in costs]
    assert [count for count, _ in costs] == list(range(1, len(set(needed)) + 1))
    assert added == sorted(added, reverse=True)
    assert added[-1] == 0
    assert all(group_lengths(needed, count).added_mm == cost for count, cost in costs)


def test_fewest_levels_where_more_save_nothing():
    assert group_lengths([50, 50], 5) == Grouping((50,), 0)


def test_no_pieces():
    assert group_lengths([], 3) == Grouping((), 0)
    assert costs_by_count([]) == ()


@pytest.mark.parametrize(("needed", "most"), [([100], 0), ([0], 1), ([-5, 10], 2)])
def test_nonsense_is_refused(needed, most):
    with pytest.raises(ValueError, match=r"has to be|at least"):
        group_lengths(needed, most)


def test_longer_than_every_level_is_refused():
    with pytest.raises(ValueError, match="No length is as long as 200 mm"):
        Grouping((100,), 0).level_of(200)
