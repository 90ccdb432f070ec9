"""The graph, the two integer programmes and their limits, against brute force."""

from collections import Counter
from itertools import product

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.cutting.flow_graph import flow_graph, paths
from planner.cutting.flow_model import Pool, Wanted, cheapest_flow
from planner.cutting.highs import Limits, Programme, solve_whole
from planner.cutting.linear import linear_bound
from planner.cutting.packs import SoldAs
from planner.cutting.pattern_model import cheapest_by_patterns

FAR_AWAY = Limits(deadline=float("inf"))
PAST = Limits(deadline=0.0)
small_demands = st.dictionaries(st.integers(1, 9), st.integers(1, 3), min_size=1, max_size=3)


def fillings(demand: dict[int, int], capacity: int) -> set[tuple[tuple[int, int], ...]]:
    ranges = [range(count + 1) for count in demand.values()]
    found = set()
    for taken in product(*ranges):
        if sum(map(int.__mul__, demand, taken)) <= capacity:
            found.add(tuple((length, n) for length, n in zip(demand, taken, strict=True) if n))
    return found


@settings(deadline=None)
@given(small_demands, st.integers(1, 25))
def test_every_filling_is_a_path_longest_first(demand: dict[int, int], capacity: int) -> None:
    graph = flow_graph(demand, capacity, 10_000)
    assert graph is not None
    arcs, nodes = set(graph.arcs), set(graph.nodes)
    for filling in fillings(demand, capacity):
        node = 0
        for length in sorted(Counter(dict(filling)).elements(), reverse=True):
            assert (node, length) in arcs
            node += length
            assert node in nodes
    assert all(node + length <= capacity for node, length in graph.arcs)


def test_graph_that_would_be_too_large_is_not_built() -> None:
    assert flow_graph(dict.fromkeys(range(10, 60), 5), 500, 100) is None


def test_flow_that_is_none_is_refused() -> None:
    with pytest.raises(ValueError, match="does not come out"):
        paths({(0, 3): 1}, {5: 1})
    with pytest.raises(ValueError, match="circle"):
        paths({(0, 5): 1, (7, 2): 1}, {5: 1})


def best_split(kinds: list[tuple[int, ...]], rooms: list[int], sold: SoldAs) -> int | None:
    """The fewest put-ups over every way to give kinds to lots of one piece each, or to new thread."""
    best: int | None = None
    for places in product(range(len(rooms) + 1), repeat=len(kinds)):
        used = [0] * len(rooms)
        new: list[int] = []
        for kind, place in zip(kinds, places, strict=True):
            if place < len(rooms):
                used[place] += sum(kind)
            else:
                new += kind
        if any(u > room for u, room in zip(used, rooms, strict=True)):
            continue
        bins = fewest_bins(tuple(sorted(new, reverse=True)), sold.size)
        if bins is not None and (best is None or bins < best):
            best = bins
    return best


def fewest_bins(pieces: tuple[int, ...], size: int) -> int | None:
    if any(piece > size for piece in pieces):
        return None
    best = [len(pieces)]

    def place(index: int, rooms: list[int]) -> None:
        if len(rooms) >= best[0] and index < len(pieces):
            return
        if index == len(pieces):
            best[0] = min(best[0], len(rooms))
            return
        for which in {room: i for i, room in enumerate(rooms) if room >= pieces[index]}.values():
            place(index + 1, [r - pieces[index] * (i == which) for i, r in enumerate(rooms)])
        place(index + 1, [*rooms, size - pieces[index]])

    place(0, [])
    return best[0]


@settings(deadline=None, max_examples=80)
@given(
    st.lists(st.lists(st.integers(1, 9), min_size=1, max_size=3), min_size=1, max_size=4),
    st.lists(st.integers(1, 20), max_size=2),
    st.integers(9, 15),
)
def test_spreading_over_lots_agrees_with_brute_force(
    groups: list[list[int]], rooms: list[int], size: int
) -> None:
    kinds = [tuple(sorted(group)) for group in groups]
    sold = SoldAs(size, size, 10)
    wanted = [Wanted(Counter(kind), count) for kind, count in sorted(Counter(kinds).items())]
    pools = [Pool({room: 1}) for room in rooms] + [Pool({}, (sold,))]
    found = cheapest_flow(wanted, pools, 0, 1_000, FAR_AWAY)
    assert found.verdict == "optimal"
    assert found.cost == 10 * (best_split(kinds, rooms, sold) or 0) == found.bound
    made = [sum(pool.made[i] for pool in found.pools) for i in range(len(wanted))]
    assert made == [kind.count for kind in wanted]
    for pool, plan in zip(pools, found.pools, strict=True):
        cut = Counter(piece for _, pieces in (*plan.from_shelf, *plan.bought) for piece in pieces)
        assert cut == sum(
            (
                Counter({length: n * count for length, n in kind.pieces.items()})
                for kind, count in zip(wanted, plan.made, strict=True)
            ),
            Counter(),
        )
        assert Counter(size for size, _ in plan.from_shelf) <= Counter(pool.shelf)


@settings(deadline=None, max_examples=80)
@given(small_demands, st.lists(st.integers(1, 14), max_size=3), st.integers(9, 16))
def test_patterns_settle_what_the_arcs_settle(
    demand: dict[int, int], remnants: list[int], size: int
) -> None:
    sold = [SoldAs(size, size, 10)]
    shelf = dict(Counter(remnants))
    bound = linear_bound(demand, shelf, sold, FAR_AWAY)
    assert bound is not None
    wanted = [Wanted({length: 1}, count) for length, count in demand.items()]
    arcs = cheapest_flow(wanted, [Pool(shelf, tuple(sold))], 0, 1_000, FAR_AWAY)
    assert arcs.cost is not None
    assert bound.bounds.cost <= arcs.cost
    one_less = cheapest_by_patterns(demand, shelf, sold, bound.weights, arcs.cost - 10, FAR_AWAY)
    assert one_less.verdict == "impossible"
    enough = cheapest_by_patterns(demand, shelf, sold, bound.weights, arcs.cost, FAR_AWAY)
    assert enough.verdict == "optimal"
    assert 10 * sum(n for column, n in enough.opened if column.put_up is not None) == arcs.cost
    held: Counter[int] = Counter()
    for column, times in enough.opened:
        assert sum(length * count for length, count in column.pieces) <= column.size
        for length, count in column.pieces:
            held[length] += count * times
    assert all(held[length] >= count for length, count in demand.items())


def test_nothing_is_claimed_where_there_was_no_time() -> None:
    wanted = [Wanted({5: 1}, 4)]
    assert cheapest_flow(wanted, [Pool({}, (SoldAs(9, 9, 1),))], 0, 9, PAST).verdict == "unknown"
    programme = Programme()
    programme.column({programme.row(1, 2): 1}, cost=1)
    assert solve_whole(programme, PAST).verdict == "unknown"
    stopped = Limits(deadline=float("inf"), stop=lambda: True)
    assert solve_whole(programme, stopped).verdict == "unknown"
    assert solve_whole(programme, FAR_AWAY).values == (1,)


def test_what_highs_prints_stays_out_of_the_output(capfd: pytest.CaptureFixture[str]) -> None:
    programme = Programme()
    programme.column({programme.row(1, 2): 1}, cost=1)
    solve_whole(programme, FAR_AWAY)
    assert capfd.readouterr() == ("", "")
