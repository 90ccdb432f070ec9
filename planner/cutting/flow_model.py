"""The exact search: cheapest cutting plans as an integer programme over arcs.

Stock that may not be mixed (dye lots, the new thread of each supplier) forms *pools*. Kinds of
bracelets are spread over the pools, and in every pool the pieces of its bracelets flow through the
graph of its own stock.
"""

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import gcd

from planner.cutting.flow_graph import FlowGraph, flow_graph, paths
from planner.cutting.highs import INFINITY, Limits, Programme, Verdict, solve_whole
from planner.cutting.packs import SoldAs
from planner.cutting.put_up_columns import add_put_up

MOST_ARCS = 60_000
"""Beyond so many arcs HiGHS does not get far in seconds (measured)."""


@dataclass(frozen=True)
class Pool:
    """Stock that is one lot.

    Parameters
    ----------
    shelf
        Length of a stock piece [cells] to count.
    sold
        The put-ups that belong to it.
    """

    shelf: Mapping[int, int]
    sold: tuple[SoldAs, ...] = ()

    @property
    def longest(self) -> int:
        """The longest stock piece or put-up [cells]."""
        return max([*self.shelf, *(item.size for item in self.sold)], default=0)


@dataclass(frozen=True)
class Wanted:
    """Bracelets that need the same pieces.

    Parameters
    ----------
    pieces
        What one needs: length [cells] to count.
    count
        How many bracelets.
    """

    pieces: Mapping[int, int]
    count: int


@dataclass(frozen=True)
class PoolPlan:
    """What is made from one pool.

    Parameters
    ----------
    made
        How many bracelets of each kind, in their order.
    from_shelf
        Length of a stock piece and its pieces [cells], one entry for each opened.
    bought
        Index of the put-up and the pieces of it [cells], one entry for each opened.
    """

    made: tuple[int, ...]
    from_shelf: tuple[tuple[int, tuple[int, ...]], ...]
    bought: tuple[tuple[int, tuple[int, ...]], ...]


@dataclass(frozen=True)
class FlowPlan:
    """The answer of the exact search.

    Parameters
    ----------
    verdict
        ``"optimal"``: `pools` is the cheapest plan within the range of costs; ``"impossible"``:
        proven that no plan costs so little; ``"unknown"``: not settled.
    cost
        What the plan costs [smallest units of money]; None where there is no plan.
    pools
        The plan; empty where there is none.
    bound
        No plan costs less than this [smallest units of money]; never below the least asked for.
    """

    verdict: Verdict
    cost: int | None
    pools: tuple[PoolPlan, ...]
    bound: int


def cheapest_flow(
    wanted: Sequence[Wanted],
    pools: Sequence[Pool],
    least: int,
    most: int,
    limits: Limits,
    *,
    most_arcs: int = MOST_ARCS,
) -> FlowPlan:
    """Search for the cheapest plan that costs at least `least` and at most `most`.

    Parameters
    ----------
    wanted
        The bracelets; single pieces are bracelets of one piece.
    pools
        The stock.
    least
        A proven bound [smallest units of money].
    most
        Only plans up to this cost are of interest [smallest units of money].
    limits
        When to stop.
    most_arcs
        Larger models are not tried.

    Returns
    -------
    FlowPlan
        ``"unknown"`` also where the model would be too large.
    """
    nothing = FlowPlan("unknown", None, (), least)
    if most < least:
        return FlowPlan("impossible", None, (), most + 1)
    model = _Model.of(wanted, pools, least, most, most_arcs)
    if model is None:
        return nothing
    answer = solve_whole(model.programme, limits)
    if answer.verdict == "impossible":
        return FlowPlan("impossible", None, (), most + 1)
    if not answer.values:
        return nothing
    try:
        plans = tuple(part.plan(answer.values) for part in model.parts)
    except ValueError:
        return nothing  # rounded values that do not fit together
    cost = sum(part.cost(answer.values) for part in model.parts)
    is_best = answer.verdict == "optimal"
    return FlowPlan(answer.verdict, cost, plans, cost if is_best else least)


@dataclass
class PoolPart:
    """The columns of one pool in a programme.

    Parameters
    ----------
    pool
        The stock.
    made
        For each kind the column that says how many are made from it; None where that is `fixed`.
    fixed
        How many of each kind where there is only one pool.
    arcs, shelf, opened, bundles
        Columns: of arcs (node, step), of shelf pieces opened by size, of put-ups opened and of
        steps of packs bought by the put-up's index.
    """

    pool: Pool
    made: list[int] | None
    fixed: tuple[int, ...]
    arcs: dict[int, tuple[int, int]] = field(default_factory=dict)
    shelf: dict[int, int] = field(default_factory=dict)
    opened: dict[int, int] = field(default_factory=dict)
    bundles: dict[int, int] = field(default_factory=dict)

    def cost(self, values: Sequence[int]) -> int:
        """Give what is spent on this pool [smallest units of money]."""
        return sum(
            self.pool.sold[index].bundle_price * values[column]
            for column, index in self.bundles.items()
        )

    def plan(self, values: Sequence[int]) -> PoolPlan:
        """Take the flow apart; ValueError where rounded values do not fit together."""
        flow = {arc: values[column] for column, arc in self.arcs.items() if values[column]}
        counts = {size: values[column] for column, size in self.shelf.items() if values[column]}
        new = {index: values[column] for column, index in self.opened.items() if values[column]}
        ends: Counter[int] = Counter(counts)
        for index, count in new.items():
            ends[self.pool.sold[index].size] += count
        from_shelf, bought = [], []
        for size, pieces in paths(flow, ends):
            if counts.get(size):
                counts[size] -= 1
                from_shelf.append((size, pieces))
            else:
                index = next(i for i in new if new[i] and self.pool.sold[i].size == size)
                new[index] -= 1
                bought.append((index, pieces))
        made = (
            tuple(values[column] for column in self.made) if self.made is not None else self.fixed
        )
        return PoolPlan(made, tuple(from_shelf), tuple(bought))


@dataclass
class _Model:
    programme: Programme
    parts: list[PoolPart]

    @classmethod
    def of(
        cls,
        wanted: Sequence[Wanted],
        pools: Sequence[Pool],
        least: int,
        most: int,
        most_arcs: int,
    ) -> "_Model | None":
        """Write the programme down; None where it would be too large."""
        graphs = []
        for pool in pools:
            graph = flow_graph(_demand(wanted, pool.longest), pool.longest, most_arcs)
            if graph is None:
                return None
            graphs.append(graph)
            most_arcs -= len(graph.arcs)
        unit = gcd(*(item.bundle_price for pool in pools for item in pool.sold)) or 1
        programme = Programme()
        money = programme.row(-(-least // unit), most // unit)
        spread = None
        if len(pools) > 1:
            spread = [programme.row(kind.count, kind.count) for kind in wanted]
        parts = [
            _add_pool(programme, wanted, pool, graph, money, unit, spread)
            for pool, graph in zip(pools, graphs, strict=True)
        ]
        return cls(programme, parts)


def _demand(wanted: Sequence[Wanted], longest: int) -> Counter[int]:
    """The most that one pool can be asked for: only bracelets that fit into it as a whole."""
    demand: Counter[int] = Counter()
    for kind in wanted:
        if max(kind.pieces) <= longest:
            for length, count in kind.pieces.items():
                demand[length] += count * kind.count
    return demand


def _add_pool(
    programme: Programme,
    wanted: Sequence[Wanted],
    pool: Pool,
    graph: FlowGraph,
    money: int,
    unit: int,
    spread: list[int] | None,
) -> PoolPart:
    fixed = tuple(kind.count for kind in wanted)
    demand = _demand(wanted, pool.longest)
    if spread is None:
        rows = {length: programme.row(count, count) for length, count in demand.items()}
        part = PoolPart(pool, None, fixed)
    else:
        rows = {length: programme.row(0, 0) for length in demand}
        part = PoolPart(pool, _add_made(programme, wanted, pool, rows, spread), fixed)
    add_flow(programme, part, graph, rows, money, unit)
    return part


def _add_made(
    programme: Programme,
    wanted: Sequence[Wanted],
    pool: Pool,
    rows: Mapping[int, int],
    spread: list[int],
) -> list[int]:
    """A variable for each kind: how many bracelets of it are made from this pool."""
    made = []
    for kind, row in zip(wanted, spread, strict=True):
        fits = max(kind.pieces) <= pool.longest
        entries: dict[int, float] = {row: 1}
        if fits:
            entries |= {rows[length]: -count for length, count in kind.pieces.items()}
        made.append(programme.column(entries, upper=kind.count if fits else 0))
    return made


def add_flow(
    programme: Programme,
    part: PoolPart,
    graph: FlowGraph,
    rows: Mapping[int, int],
    money: int,
    unit: int,
) -> None:
    """Add the columns of a pool's graph, its stock and its put-ups.

    Parameters
    ----------
    programme
        What they are added to.
    part
        The pool; it learns its columns.
    graph
        Its graph, for lengths up to its longest stock piece.
    rows
        Length [cells] to the row that counts how often it is cut.
    money
        The row of all that is spent [units]; not used where nothing is sold.
    unit
        Smallest units of money in a unit of that row.
    """
    sizes = {*part.pool.shelf, *(item.size for item in part.pool.sold)}
    points = sorted({*graph.nodes, *sizes} - {0})
    balance = {0: programme.row(0, 0)} | {point: programme.row(0, 0) for point in points}
    for node, length in graph.arcs:
        entries = {balance[node]: -1.0, balance[node + length]: 1.0, rows[length]: 1.0}
        part.arcs[programme.column(entries)] = (node, length)
    for here, there in zip([0, *points], points, strict=False):
        if here:
            entries = {balance[here]: -1.0, balance[there]: 1.0}
            part.arcs[programme.column(entries, whole=False)] = (here, here - there)
    for size, count in part.pool.shelf.items():
        column = programme.column({balance[size]: -1, balance[0]: 1}, upper=count)
        part.shelf[column] = size
    for index, item in enumerate(part.pool.sold):
        _add_put_up(
            programme, part, index, item, {balance[item.size]: -1, balance[0]: 1}, money, unit
        )


def _add_put_up(
    programme: Programme,
    part: PoolPart,
    index: int,
    item: SoldAs,
    opened: dict[int, float],
    money: int,
    unit: int,
) -> None:
    price = item.bundle_price // unit
    if item.is_single:
        column = programme.column({**opened, money: price}, cost=price)
        part.opened[column] = part.bundles[column] = index
        return
    enough = programme.row(-INFINITY, 0)
    part.opened[programme.column({**opened, enough: 1})] = index
    part.bundles[add_put_up(programme, item, enough, money, unit)] = index
