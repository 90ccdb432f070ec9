"""What is made of the shelf as an integer programme over bracelets, lots and arcs."""

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import floor

from planner.cutting.flow_graph import flow_graph
from planner.cutting.flow_model import Pool, PoolPart, PoolPlan, add_flow
from planner.cutting.highs import INFINITY, Limits, Programme, Verdict, solve_whole
from planner.cutting.lot_choice import Kind

MOST_ARCS = 40_000
Place = tuple[str, int]
"""A shade and the index of one of its lots."""


@dataclass(frozen=True)
class ScrapsTask:
    """The problem in cells and smallest units of money.

    Parameters
    ----------
    kinds
        For every kind of bracelet, shade to pieces.
    values
        What one of each is worth [smallest units].
    most
        How many of each are wanted at the most.
    pools
        For every place, its stock.
    rooms
        For every place, the most that whole bracelets can take of it [cells].
    """

    kinds: tuple[Mapping[str, Kind], ...]
    values: tuple[int, ...]
    most: tuple[int, ...]
    pools: Mapping[Place, Pool]
    rooms: Mapping[Place, int]

    def places_for(self, index: int, shade: str) -> list[Place]:
        """Give the lots that a bracelet's pieces of a shade may come from."""
        kind = self.kinds[index][shade]
        return [
            place
            for place, pool in self.pools.items()
            if place[0] == shade and kind.longest <= pool.longest
        ]


@dataclass(frozen=True)
class ScrapsAnswer:
    """What the programme says.

    Parameters
    ----------
    verdict
        ``"optimal"``, ``"impossible"`` (nothing is worth as much as was asked for) or
        ``"unknown"``.
    made
        How many of each kind; empty where there is no plan.
    plans
        For every place what is cut there; `PoolPlan.made` counts all kinds, those without the shade
        as 0. Empty where only the lengths were looked at.
    upper_bound
        Nobody can make more [smallest units].
    """

    verdict: Verdict
    made: tuple[int, ...]
    plans: Mapping[Place, PoolPlan]
    upper_bound: int


def best_by_length(task: ScrapsTask, limits: Limits, upper_bound: int) -> int:
    """Bound the value by what each lot holds in length alone.

    Parameters
    ----------
    task
        The problem.
    limits
        When to stop.
    upper_bound
        What is proven so far [smallest units].

    Returns
    -------
    int
        A bound that is no weaker.
    """
    model = _Model(task)
    answer = solve_whole(model.programme, limits)
    if answer.verdict == "impossible":
        return upper_bound
    return min(upper_bound, _worth(answer.bound, upper_bound))


def best_by_arcs(
    task: ScrapsTask, limits: Limits, least: int, upper_bound: int
) -> ScrapsAnswer | None:
    """Search for the most that can be made, worth at least so much.

    Parameters
    ----------
    task
        The problem.
    limits
        When to stop.
    least
        Less is of no interest [smallest units].
    upper_bound
        What is proven so far [smallest units].

    Returns
    -------
    ScrapsAnswer or None
        None where the model would be too large.
    """
    model = _Model(task, least, upper_bound)
    if not model.add_arcs(MOST_ARCS):
        return None
    answer = solve_whole(model.programme, limits)
    if answer.verdict == "impossible":
        return ScrapsAnswer("impossible", (), {}, least - 1)
    bound = min(upper_bound, _worth(answer.bound, upper_bound))
    if not answer.values:
        return ScrapsAnswer("unknown", (), {}, bound)
    made = tuple(answer.values[column] for column in model.made)
    try:
        plans = {place: part.plan(answer.values) for place, part in model.parts.items()}
    except ValueError:
        return ScrapsAnswer("unknown", (), {}, bound)
    if answer.verdict == "optimal":
        bound = sum(value * count for value, count in zip(task.values, made, strict=True))
    return ScrapsAnswer(answer.verdict, made, plans, bound)


def _worth(bound: float, otherwise: int) -> int:
    """HiGHS minimises the negative of the value; its bound may be infinite when it stops early."""
    return floor(-bound + 1e-6) if -INFINITY < bound < INFINITY else otherwise


@dataclass
class _Model:
    task: ScrapsTask
    least: int = 0
    upper_bound: int | None = None
    programme: Programme = field(default_factory=Programme)
    made: list[int] = field(default_factory=list)
    parts: dict[Place, PoolPart] = field(default_factory=dict)

    def __post_init__(self) -> None:
        """How many of each kind, and of each shade from which lot; lots hold so much length."""
        task, programme = self.task, self.programme
        most = INFINITY if self.upper_bound is None else self.upper_bound
        worth = programme.row(self.least, most)
        rooms = {place: programme.row(-INFINITY, room) for place, room in task.rooms.items()}
        self.from_place: dict[Place, list[int]] = {place: [] for place in task.pools}
        for index, kind in enumerate(task.kinds):
            rows = {shade: programme.row(0, 0) for shade in kind}
            entries: dict[int, float] = dict.fromkeys(rows.values(), -1)
            entries[worth] = value = task.values[index]
            self.made.append(programme.column(entries, cost=-value, upper=task.most[index]))
            for place in task.pools:
                self._add_place(index, place, rows.get(place[0]), rooms[place])

    def _add_place(self, index: int, place: Place, row: int | None, room: int) -> None:
        kind = self.task.kinds[index].get(place[0])
        if row is None or kind is None or place not in self.task.places_for(index, place[0]):
            self.from_place[place].append(self.programme.column({}, upper=0))
            return
        column = self.programme.column({row: 1, room: kind.total}, upper=self.task.most[index])
        self.from_place[place].append(column)

    def add_arcs(self, most_arcs: int) -> bool:
        """Add the graph of every lot; False where that would be too much."""
        for place, pool in self.task.pools.items():
            demand: Counter[int] = Counter()
            fitting = []
            for index, kinds in enumerate(self.task.kinds):
                kind = kinds.get(place[0])
                if kind is not None and kind.longest <= pool.longest:
                    fitting.append((index, kind))
                    for length in kind.pieces:
                        demand[length] += self.task.most[index]
            graph = flow_graph(demand, pool.longest, most_arcs)
            if graph is None:
                return False
            most_arcs -= len(graph.arcs)
            rows = {length: self.programme.row(0, 0) for length in demand}
            for index, kind in fitting:
                column = self.programme.columns[self.from_place[place][index]]
                for length, count in Counter(kind.pieces).items():
                    column[rows[length]] = -count
            part = PoolPart(pool, self.from_place[place], ())
            add_flow(self.programme, part, graph, rows, 0, 1)
            self.parts[place] = part
        return True


def worth(task: ScrapsTask, made: Sequence[int]) -> int:
    """Give what so many of each kind are worth.

    Parameters
    ----------
    task
        The problem.
    made
        How many of each kind.

    Returns
    -------
    int
        The value [smallest units].
    """
    return sum(value * count for value, count in zip(task.values, made, strict=True))
