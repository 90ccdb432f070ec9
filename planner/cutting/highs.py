"""Running HiGHS on a linear or integer programme: one thread, a seed, a limit, a way to stop."""

import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cache
from typing import Any, Literal

NEVER: Callable[[], bool] = bool
"""A stop that is never wanted: bool() is False."""
INFINITY = float("inf")

Verdict = Literal["optimal", "impossible", "unknown"]


@dataclass(frozen=True)
class Limits:
    """How long a search may go on.

    Parameters
    ----------
    deadline
        Reading of the monotonic clock at which it ends [s].
    seed
        Seed of its random choices.
    stop
        Asked now and then; True ends the search.
    """

    deadline: float
    seed: int = 0
    stop: Callable[[], bool] = NEVER

    @property
    def left_s(self) -> float:
        """Seconds until the deadline; 0 when it has passed."""
        return max(0.0, self.deadline - time.monotonic())

    @property
    def are_over(self) -> bool:
        """Whether the time is up or a stop is wanted."""
        return time.monotonic() >= self.deadline or self.stop()

    def at_most(self, seconds: float) -> "Limits":
        """Give the same limits with no more than so many seconds from now.

        Parameters
        ----------
        seconds
            The time that may be used [s].

        Returns
        -------
        Limits
            The stricter limits.
        """
        return Limits(min(self.deadline, time.monotonic() + seconds), self.seed, self.stop)


@dataclass
class Programme:
    """A programme that is put together row by row and column by column.

    Every column is a variable from 0 to its `upper`; `rows` hold ``lower <= sum <= upper``.
    """

    costs: list[float] = field(default_factory=list)
    uppers: list[float] = field(default_factory=list)
    whole: list[bool] = field(default_factory=list)
    columns: list[dict[int, float]] = field(default_factory=list)
    row_lowers: list[float] = field(default_factory=list)
    row_uppers: list[float] = field(default_factory=list)

    def row(self, lower: float, upper: float) -> int:
        """Add a row.

        Parameters
        ----------
        lower, upper
            The range of its sum.

        Returns
        -------
        int
            Its index.
        """
        self.row_lowers.append(lower)
        self.row_uppers.append(upper)
        return len(self.row_lowers) - 1

    def column(
        self,
        entries: dict[int, float],
        *,
        cost: float = 0,
        upper: float = INFINITY,
        whole: bool = True,
    ) -> int:
        """Add a variable.

        Parameters
        ----------
        entries
            Row to coefficient.
        cost
            Its coefficient in the objective, which is minimised.
        upper
            Its largest value.
        whole
            Whether it takes whole numbers only.

        Returns
        -------
        int
            Its index.
        """
        self.columns.append(entries)
        self.costs.append(cost)
        self.uppers.append(upper)
        self.whole.append(whole)
        return len(self.columns) - 1


@dataclass(frozen=True)
class Answer:
    """What HiGHS found.

    Parameters
    ----------
    verdict
        ``"optimal"``: `values` are the best there are; ``"impossible"``: proven that there are
        none; ``"unknown"``: it stopped before, or failed.
    values
        The best values found, rounded to whole numbers; empty where there are none.
    bound
        No values have an objective below this.
    """

    verdict: Verdict
    values: tuple[int, ...]
    bound: float


def solve_whole(
    programme: Programme,
    limits: Limits,
    *,
    most_nodes: int | None = None,
    presolve: bool = True,
) -> Answer:
    """Minimise an integer programme.

    Parameters
    ----------
    programme
        The programme.
    limits
        When to stop.
    most_nodes
        Nodes of the search tree after which it stops, the same on every machine; None for no limit.
    presolve
        Whether HiGHS may reduce the programme first; of large ones it does not heed the time.

    Returns
    -------
    Answer
        Never an error: what fails inside HiGHS is ``"unknown"``.
    """
    import highspy  # here, because start-up of every command would pay for it

    if limits.are_over:
        return Answer("unknown", (), -INFINITY)
    highs = quiet_highs(limits)
    if most_nodes is not None:
        highs.setOptionValue("mip_max_nodes", most_nodes)
    if not presolve:
        highs.setOptionValue("presolve", "off")
    highs.setOptionValue("mip_rel_gap", 0.0)
    highs.setOptionValue("mip_abs_gap", 1e-6)
    if highs.passModel(_model(programme)) == highspy.HighsStatus.kError:
        return Answer("unknown", (), -INFINITY)
    highs.cbMipInterrupt += lambda event: event.interrupt(limits.stop())
    if highs.run() == highspy.HighsStatus.kError:
        return Answer("unknown", (), -INFINITY)
    return _answer(highs)


def quiet_highs(limits: Limits) -> Any:
    """Give a HiGHS with one thread, the seed and the time that is left.

    Parameters
    ----------
    limits
        When to stop.

    Returns
    -------
    highspy.Highs
        Without a model.
    """
    highs: Any = _quiet_class()()
    # Once, before the first run: HiGHS refuses to change it afterwards.
    highs.setOptionValue("threads", 1)
    highs.setOptionValue("random_seed", limits.seed % 2**31)
    highs.setOptionValue("time_limit", limits.left_s)
    return highs


@cache
def _quiet_class() -> Any:
    """HiGHS prints who it is to standard output while it is made, before it can be silenced."""
    import highspy

    class QuietHighs(highspy.Highs):
        def enableCallbacks(self) -> None:
            self.setOptionValue("output_flag", False)
            super().enableCallbacks()  # type: ignore[no-untyped-call]

    return QuietHighs


def _answer(highs: Any) -> Answer:
    import highspy

    status = highs.getModelStatus()
    info = highs.getInfo()
    values: tuple[int, ...] = ()
    if info.primal_solution_status == highspy.kSolutionStatusFeasible:
        values = tuple(round(value) for value in highs.getSolution().col_value)
    if status == highspy.HighsModelStatus.kOptimal:
        return Answer("optimal" if values else "unknown", values, info.mip_dual_bound)
    if status == highspy.HighsModelStatus.kInfeasible:
        return Answer("impossible", (), INFINITY)
    return Answer("unknown", values, info.mip_dual_bound)


def _model(programme: Programme) -> Any:
    import highspy
    import numpy as np

    lp = highspy.HighsLp()
    lp.num_col_ = len(programme.columns)
    lp.num_row_ = len(programme.row_lowers)
    lp.col_cost_ = np.array(programme.costs, dtype=float)
    lp.col_lower_ = np.zeros(lp.num_col_)
    lp.col_upper_ = np.array(programme.uppers, dtype=float)
    lp.row_lower_ = np.array(programme.row_lowers, dtype=float)
    lp.row_upper_ = np.array(programme.row_uppers, dtype=float)
    lp.integrality_ = [
        highspy.HighsVarType.kInteger if whole else highspy.HighsVarType.kContinuous
        for whole in programme.whole
    ]
    starts, indexes, entries = _columnwise(programme.columns)
    lp.a_matrix_.format_ = highspy.MatrixFormat.kColwise
    lp.a_matrix_.start_ = np.array(starts, dtype=np.int32)
    lp.a_matrix_.index_ = np.array(indexes, dtype=np.int32)
    lp.a_matrix_.value_ = np.array(entries, dtype=float)
    return lp


def _columnwise(
    columns: Sequence[dict[int, float]],
) -> tuple[list[int], list[int], list[float]]:
    starts, indexes, entries = [0], [], []
    for column in columns:
        for row, entry in column.items():
            if entry:
                indexes.append(row)
                entries.append(entry)
        starts.append(len(indexes))
    return starts, indexes, entries
