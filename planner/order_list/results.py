"""What comes of reading a list of orders: lines that can be saved, and lines that cannot yet."""

from dataclasses import dataclass
from datetime import date

from planner.order_list.columns import Field


@dataclass(frozen=True)
class GoodLine:
    """An order that can be saved. `cells` are as typed, in `DEFAULT_ORDER`."""

    number: int
    for_whom: str
    pattern_key: int
    colourway_key: int
    size_key: int
    ending_key: int
    quantity: int
    due_date: date | None
    note: str
    cells: tuple[str, ...]
    distinct_lengths: int | None = None
    matched_set: str = ""
    notices: tuple[str, ...] = ()


@dataclass(frozen=True)
class Problem:
    """What is wrong in a row; the field is `None` when it is the row as a whole.

    The suggestion is text which, put in the cell, would do.
    """

    field: Field | None
    message: str
    suggestion: str | None = None


@dataclass(frozen=True)
class BadLine:
    """An order that cannot be saved yet. `cells` are as typed, in `DEFAULT_ORDER`."""

    number: int
    cells: tuple[str, ...]
    problems: tuple[Problem, ...]

    def __post_init__(self) -> None:
        if not self.problems:
            raise ValueError("a bad line says what is wrong with it")


@dataclass(frozen=True)
class Reading:
    """All that was read of a list; every row of it that is not blank is good or bad."""

    good: tuple[GoodLine, ...]
    bad: tuple[BadLine, ...]
    ignored_columns: tuple[str, ...] = ()
    notices: tuple[str, ...] = ()
