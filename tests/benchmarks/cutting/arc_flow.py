"""The plain arc-flow model in HiGHS: a rival for the benchmark, without anything of the solver.

Nodes are the places in a stock piece that a cut can reach, arcs the pieces laid from one place to
another; every unit of flow from 0 to the end of a stock piece is one that is cut. Pieces are laid
longest first, so only places that can be reached that way become nodes.

J. M. Valerio de Carvalho, Annals of Operations Research 86 (1999) 629-659 (from memory).
"""

import time
from collections import Counter, defaultdict
from dataclasses import dataclass
from typing import Any

import highspy
import numpy as np

from planner.cutting import Problem
from tests.cutting_greedy import ReferenceCut, ReferencePlan, cost_of

PRICE_UNITS = 10_000
MOST_ARCS = 3_000_000
"""A larger graph is given up: it would take gigabytes."""


@dataclass(frozen=True)
class Graph:
    """Arcs from `tails` to `heads` (indices of places); `pieces` tells which length, -1 for a loss.

    Arcs stand by length, longest first, then by tail; losses from each place to the next come last.
    `ends` are the stock lengths, `most` and `units` how many of each and what one costs.
    """

    wanted: dict[int, int]
    places: np.ndarray
    tails: np.ndarray
    heads: np.ndarray
    pieces: np.ndarray
    ends: list[tuple[int, int | None]]
    most: list[float]
    units: list[int]


def arc_flow_plan(problem: Problem, time_limit_s: float, seed: int = 0) -> ReferencePlan | None:
    """Find the least money with single put-ups; None where it finds no plan in time.

    HiGHS looks at its clock seldom: what it finds after the limit is taken as well. It is not given
    a plan to start from: with one, its root took twenty seconds beyond a limit of one.
    """
    if any(sold.pack_size * sold.minimum_packs * sold.pack_step > 1 for sold in problem.buy):
        raise ValueError("The plain arc-flow model knows no packs.")
    deadline = time.monotonic() + time_limit_s
    graph = _graph(problem)
    if graph is None:
        return None
    highs = _model(graph, seed)
    highs.setOptionValue("time_limit", max(0.01, deadline - time.monotonic()))
    highs.run()
    status = highs.getModelStatus()
    solution = highs.getInfo().primal_solution_status
    if solution != highspy.SolutionStatus.kSolutionStatusFeasible:
        return None
    flow = np.rint(np.array(highs.getSolution().col_value)).astype(int)
    cuts = tuple(_cuts(graph, flow))
    bought = Counter(cut.put_up for cut in cuts if cut.put_up is not None)
    proven = status == highspy.HighsModelStatus.kOptimal
    return ReferencePlan(cost_of(problem, bought), proven, cuts)


def _graph(problem: Problem) -> Graph | None:
    wanted: dict[int, int] = Counter()
    for piece in problem.demand:
        wanted[piece.length_mm] += piece.count
    wanted = {length: wanted[length] for length in sorted(wanted, reverse=True) if wanted[length]}
    ends, most, units = _ends(problem)
    longest = max((length for length, _ in ends), default=0)
    reached, arcs = _arcs(wanted, longest)
    if sum(len(starts) for _, starts in arcs) > MOST_ARCS:
        return None
    reached[[length for length, _ in ends]] = True
    places = np.flatnonzero(reached)
    tails = [np.searchsorted(places, starts) for _, starts in arcs]
    heads = [np.searchsorted(places, starts + length) for length, starts in arcs]
    pieces = [np.full(len(starts), number) for number, (_, starts) in enumerate(arcs)]
    losses = np.arange(len(places) - 1)
    return Graph(
        wanted,
        places,
        np.concatenate([*tails, losses]),
        np.concatenate([*heads, losses + 1]),
        np.concatenate([*pieces, np.full(len(losses), -1)]),
        ends,
        most,
        units,
    )


def _ends(problem: Problem) -> tuple[list[tuple[int, int | None]], list[float], list[int]]:
    shelf: Counter[int] = Counter()
    for stock in problem.stock:
        shelf[stock.length_mm] += stock.count
    ends: list[tuple[int, int | None]] = [(length, None) for length in shelf]
    ends += [(put_up.reckoned_mm, index) for index, put_up in enumerate(problem.buy)]
    most = [float(count) for count in shelf.values()] + [float("inf")] * len(problem.buy)
    units = [0] * len(shelf) + [int(put_up.price * PRICE_UNITS) for put_up in problem.buy]
    return ends, most, units


def _arcs(wanted: dict[int, int], longest: int) -> tuple[np.ndarray, list[tuple[int, np.ndarray]]]:
    """Every place reached, longest piece first, and where pieces of each length may begin."""
    reached = np.zeros(longest + 1, dtype=bool)
    reached[0] = True
    arcs = []
    for length, count in wanted.items():
        begins = np.zeros_like(reached)
        front = reached.copy()
        for _ in range(min(count, longest // length)):
            front[longest + 1 - length :] = False
            begins |= front
            moved = np.zeros_like(front)
            moved[length:] = front[: longest + 1 - length]
            front = moved
            reached |= front
        arcs.append((length, np.flatnonzero(begins)))
    return reached, arcs


def _model(graph: Graph, seed: int) -> Any:
    """Rows: a balance for each place, then the count of each length. Columns: arcs, then ends."""
    places, arcs, ends = len(graph.places), len(graph.tails), len(graph.ends)
    numbers = np.arange(arcs)
    laid = graph.pieces >= 0
    end_rows = np.searchsorted(graph.places, [length for length, _ in graph.ends])
    end_columns = arcs + np.arange(ends)
    # An arc leaves its tail and enters its head; an end leaves its place and enters place 0 again.
    rows = np.concatenate(
        [graph.tails, graph.heads, places + graph.pieces[laid], end_rows, np.zeros(ends, int)]
    )
    columns = np.concatenate([numbers, numbers, numbers[laid], end_columns, end_columns])
    values = np.concatenate(
        [-np.ones(arcs), np.ones(arcs), np.ones(laid.sum()), -np.ones(ends), np.ones(ends)]
    )
    order = np.lexsort((rows, columns))
    counts = np.array(list(graph.wanted.values()), dtype=float)
    model = highspy.HighsLp()
    model.num_col_, model.num_row_ = arcs + ends, places + len(counts)
    model.col_cost_ = np.concatenate([np.zeros(arcs), np.array(graph.units, dtype=float)])
    model.col_lower_ = np.zeros(arcs + ends)
    model.col_upper_ = np.concatenate([np.full(arcs, np.inf), np.array(graph.most)])
    model.row_lower_ = model.row_upper_ = np.concatenate([np.zeros(places), counts])
    model.integrality_ = [highspy.HighsVarType.kInteger] * (arcs + ends)
    model.a_matrix_.format_ = highspy.MatrixFormat.kColwise
    model.a_matrix_.start_ = np.concatenate([[0], np.cumsum(np.bincount(columns))])
    model.a_matrix_.index_ = rows[order]
    model.a_matrix_.value_ = values[order]
    highs = highspy.Highs()
    options = {"output_flag": False, "threads": 1, "random_seed": seed, "mip_rel_gap": 0.0}
    for name, value in options.items():
        highs.setOptionValue(name, value)
    highs.setOptionValue("mip_abs_gap", 0.5)  # costs are whole
    highs.passModel(model)
    return highs


def _cuts(graph: Graph, flow: np.ndarray) -> list[ReferenceCut]:
    """Take the flow apart, path by path from place 0 to the end of a stock piece."""
    lengths = list(graph.wanted)
    arcs = len(graph.tails)
    onward: dict[int, list[int]] = defaultdict(list)
    for arc in np.flatnonzero(flow[:arcs]):
        onward[int(graph.tails[arc])] += [int(arc)] * int(flow[arc])
    exits: dict[int, list[int | None]] = defaultdict(list)
    for (length, put_up), count in zip(graph.ends, flow[arcs:], strict=True):
        exits[int(np.searchsorted(graph.places, length))] += [put_up] * int(count)
    cuts = []
    while onward[0]:
        place, pieces = 0, []
        while not exits[place]:
            arc = onward[place].pop(0)
            if graph.pieces[arc] >= 0:
                pieces.append(lengths[graph.pieces[arc]])
            place = int(graph.heads[arc])
        put_up = exits[place].pop()
        if pieces:
            cuts.append(ReferenceCut(int(graph.places[place]), put_up, tuple(pieces)))
    return cuts
