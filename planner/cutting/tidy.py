"""Least waste, fewest pieces on the shelf, fewest pieces handled, at a cost that is settled."""

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field, replace

from planner.cutting.filling import Filling, Supply, fill_all, hold_long_pieces
from planner.cutting.flow_graph import FlowGraph, counted, flow_graph
from planner.cutting.highs import Limits, Programme, solve_whole
from planner.cutting.knapsack import Filler, Fullest, LongestFirst, MostValuable
from planner.cutting.supplies import bought_supplies
from planner.cutting.task import Plan, Task

MOST_PIECES = 500
"""With more pieces one order of the stock is tried only."""
MOST_ARCS = 500
MOST_ENDS = 600
"""Larger models are left alone: what is left settles in a fraction of a second (measured)."""
MOST_NODES = 5
"""Nodes of the search tree: work, not time, so that plans repeat."""
SHARE = 0.15
"""Of the time left: a shade of two lots is tidied in three parts."""


def tidied(task: Task, plan: Plan) -> tuple[Plan, bool]:
    """Recut what is bought and the shelf so that less is wasted and less lies about.

    Parameters
    ----------
    task
        The problem.
    plan
        A plan for it; what it buys is kept.

    Returns
    -------
    tuple of (Plan, bool)
        A plan no worse by `Plan.rank`, and whether it is proven that none with this purchase is
        better.
    """
    supplies = [*task.shelf, *bought_supplies(task.sold, plan.bought)]
    for fillings in _refilled(task, supplies):
        if fillings is not None:
            plan = min(plan, task.plan(fillings), key=lambda plan: plan.rank)
    if not task.demand:
        return plan, True
    model = _Model.of(task, supplies)
    if model is None or task.limits.are_over:
        return plan, False
    return model.improved(plan)


def _refilled(task: Task, supplies: list[Supply]) -> Iterator[list[Filling] | None]:
    longest_sold = max((item.size for item in task.sold), default=task.longest_stock)
    held = hold_long_pieces(task.demand, supplies, longest_sold)
    if held is None:
        return
    orders = [held, held[::-1]]
    longest = max(task.demand, default=1)
    fillers: list[Filler] = [Fullest(), LongestFirst(), MostValuable(longest, 1.03)]
    if sum(task.demand.values()) > MOST_PIECES:
        orders, fillers = orders[:1], fillers[:2]
    for order in orders:
        for filler in fillers:
            if task.limits.are_over:
                return
            yield fill_all(task.demand, order, [], filler, task.deadline)


@dataclass
class _Model:
    """Arcs as in the exact search, and an end for each filling and each stock length."""

    task: Task
    supplies: list[Supply]
    graph: FlowGraph
    arcs: dict[int, tuple[int, int]] = field(default_factory=dict)
    ends: dict[int, tuple[int, int]] = field(default_factory=dict)

    @classmethod
    def of(cls, task: Task, supplies: list[Supply]) -> "_Model | None":
        graph = flow_graph(task.demand, max(supply.size for supply in supplies), MOST_ARCS)
        if graph is None or len(graph.nodes) * len(supplies) > MOST_ENDS:
            return None
        return cls(task, supplies, graph)

    def improved(self, plan: Plan) -> tuple[Plan, bool]:
        """Waste first; then, with no more waste, the pieces that lie on the shelf afterwards."""
        limits = self.task.limits.at_most(SHARE * self.task.limits.left_s)
        plan, is_least = self._better(plan, limits, None)
        if not is_least:
            return plan, False
        return self._better(plan, limits, plan.waste_mm)

    def _better(self, plan: Plan, limits: Limits, most_waste: int | None) -> tuple[Plan, bool]:
        programme = self._programme(plan, most_waste)
        answer = solve_whole(programme, limits, most_nodes=MOST_NODES)
        # What a clock has cut short would be another plan on another day.
        if answer.values and not limits.are_over:
            found = self.task.plan(list(self._fillings(answer.values)))
            plan = min(plan, found, key=lambda plan: plan.rank)
        return plan, answer.verdict == "optimal"

    def _programme(self, plan: Plan, most_waste: int | None) -> Programme:
        programme = Programme()
        self.arcs, self.ends = {}, {}
        rows = {length: programme.row(count, count) for length, count in self.task.demand.items()}
        balance = {node: programme.row(0, 0) for node in self.graph.nodes}
        opened = [programme.row(0, supply.count) for supply in self.supplies]
        waste = programme.row(0, plan.waste_mm if most_waste is None else most_waste)
        for node, length in self.graph.arcs:
            entries = {balance[node]: -1.0, balance[node + length]: 1.0, rows[length]: 1.0}
            self.arcs[programme.column(entries)] = (node, length)
        for index, supply in enumerate(self.supplies):
            for node in self.graph.nodes:
                if 0 < node <= supply.size:
                    wasted_mm, cost = self._ending(supply, node, is_second=most_waste is not None)
                    entries = {balance[node]: -1, balance[0]: 1, opened[index]: 1}
                    entries[waste] = wasted_mm
                    self.ends[programme.column(entries, cost=cost)] = (index, node)
        return programme

    def _ending(self, supply: Supply, node: int, *, is_second: bool) -> tuple[int, int]:
        """What a filling that ends here wastes, and what it counts in the objective."""
        left_mm = supply.length_mm - node * self.task.cell_mm
        is_kept = left_mm >= self.task.keep_length_mm
        wasted_mm = 0 if is_kept else left_mm
        if not is_second:
            return wasted_mm, wasted_mm
        heaviest = sum(supply.count for supply in self.supplies) + 1
        more_pieces = int(is_kept) - int(supply.put_up is None)
        # Shifted by one, so that no cost is negative: opened pieces are counted once more for it.
        return wasted_mm, heaviest * more_pieces + 1

    def _fillings(self, values: tuple[int, ...]) -> Iterator[Filling]:
        flow = {arc: values[column] for column, arc in self.arcs.items() if values[column]}
        ends: dict[int, list[int]] = {}
        for column, (index, node) in self.ends.items():
            ends.setdefault(node, []).extend([index] * values[column])
        counts: Counter[tuple[int, tuple[int, ...]]] = Counter()
        for node, indexes in ends.items():
            for index in indexes:
                counts[index, _path_to(flow, node)] += 1
        for (index, pieces), repeats in counts.items():
            supply = self.supplies[index]
            yield replace(
                Filling(supply.length_mm, supply.put_up, counted(pieces), 1), repeats=repeats
            )


def _path_to(flow: dict[tuple[int, int], int], node: int) -> tuple[int, ...]:
    """Take one path from 0 to a node out of a flow, backwards."""
    pieces = []
    while node:
        start, length = next(arc for arc in flow if sum(arc) == node and flow[arc])
        flow[start, length] -= 1
        pieces.append(length)
        node = start
    return tuple(pieces)
