"""The graph behind the arc-flow models: every way to fill a stock piece is a path in it.

Nodes are what has been cut so far; an arc of length l leads from u to u + l. Pieces are taken
longest first, so only lengths that such an order can reach become nodes.

References
----------
J. M. Valerio de Carvalho, "Exact solution of bin-packing problems using column generation and
branch-and-bound", Annals of Operations Research 86 (1999) 629-659 (from memory).
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class FlowGraph:
    """Nodes and arcs.

    Parameters
    ----------
    nodes
        What can have been cut, ascending, from 0 [cells].
    arcs
        Pairs of (node it leaves, length of the piece) [cells].
    """

    nodes: tuple[int, ...]
    arcs: tuple[tuple[int, int], ...]


def flow_graph(demand: Mapping[int, int], capacity: int, most_arcs: int) -> FlowGraph | None:
    """Build the graph of all fillings up to a capacity.

    Parameters
    ----------
    demand
        Length [cells] to count; more of a length than that is in no filling of its own.
    capacity
        The longest stock piece [cells].
    most_arcs
        The largest graph wanted.

    Returns
    -------
    FlowGraph or None
        None where it would have more arcs.
    """
    reached = {0}
    arcs: set[tuple[int, int]] = set()
    for length in sorted(demand, reverse=True):
        ends = set()
        for start in reached:
            node = start
            for _ in range(min(demand[length], (capacity - start) // length)):
                arcs.add((node, length))
                node += length
                ends.add(node)
        reached |= ends
        if len(arcs) > most_arcs:
            return None
    return FlowGraph(tuple(sorted(reached)), tuple(sorted(arcs)))


def paths(
    flow: dict[tuple[int, int], int], ends: dict[int, int]
) -> list[tuple[int, tuple[int, ...]]]:
    """Take a flow apart into fillings.

    Parameters
    ----------
    flow
        (node, step) to how often the arc is used; a negative step stands for a loss of that length.
        It is used up.
    ends
        Length of a stock piece [cells] to how many are used. It is used up.

    Returns
    -------
    list of (int, tuple of int)
        For every stock piece its length and its pieces [cells].

    Raises
    ------
    ValueError
        When it is no flow from 0 to the ends.
    """
    leaving: dict[int, list[tuple[int, int]]] = {}
    for node, step in flow:
        leaving.setdefault(node, []).append((node, step))
    found = []
    for _ in range(sum(ends.values())):
        node, pieces = 0, []
        while not ends.get(node):
            arc = next((arc for arc in leaving.get(node, ()) if flow[arc]), None)
            if arc is None:
                raise ValueError("What goes into a node does not come out of it.")
            flow[arc] -= 1
            node += abs(arc[1])
            if arc[1] > 0:
                pieces.append(arc[1])
        ends[node] -= 1
        found.append((node, tuple(pieces)))
    if any(flow.values()):
        raise ValueError("The flow goes round in a circle.")
    return found


def counted(pieces: Sequence[int]) -> tuple[tuple[int, int], ...]:
    """Count pieces by length, longest first.

    Parameters
    ----------
    pieces
        The pieces [cells].

    Returns
    -------
    tuple of (int, int)
        Pairs of (length, count).
    """
    counts: dict[int, int] = {}
    for piece in pieces:
        counts[piece] = counts.get(piece, 0) + 1
    return tuple(sorted(counts.items(), reverse=True))
