"""The order grid: rows of text cells on a page, and what was typed into them."""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from planner.models import OrderLine
from planner.order_list.catalogue import Catalogue
from planner.order_list.columns import DEFAULT_ORDER
from planner.order_list.lines import read_rows
from planner.order_list.results import BadLine, GoodLine
from planner.orders.catalogue import HowToRead

HIGHEST_ROW = 100_000
CELL_NAME = re.compile(r"row-([0-9]{1,6})-([a-z_]+)\Z")
BLANK_ROWS = 5
HEADINGS: tuple[tuple[str, str], ...] = (
    ("for_whom", "For whom"),
    ("pattern", "Pattern"),
    ("colourway", "Colourway"),
    ("size", "Size or wrist"),
    ("ending", "Ending"),
    ("quantity", "How many"),
    ("due_date", "Due"),
    ("note", "Note"),
    ("distinct_lengths", "Lengths to cut"),
    ("matched_set", "Set of one lot"),
)


@dataclass(frozen=True)
class GridCell:
    """One cell: its text, and what is wrong with it."""

    field: str
    heading: str
    text: str
    problem: str = ""
    suggestion: str | None = None


@dataclass(frozen=True)
class GridRow:
    """One row: `line` is the saved order line it shows, None for a new one."""

    number: int
    line: int | None
    cells: tuple[GridCell, ...]
    removed: bool = False
    whole_row: tuple[str, ...] = ()

    @property
    def wrong_cells(self) -> tuple[GridCell, ...]:
        return tuple(cell for cell in self.cells if cell.problem)


@dataclass
class PostedGrid:
    """What came back from the page."""

    rows: list[tuple[int, int | None, dict[str, str], bool]] = field(default_factory=list)
    good: dict[int, GoodLine] = field(default_factory=dict)
    bad: dict[int, BadLine] = field(default_factory=dict)

    @property
    def changed(self) -> dict[int, GoodLine]:
        return {
            line: self.good[number]
            for number, line, _, removed in self.rows
            if line is not None and not removed and number in self.good
        }

    @property
    def added(self) -> list[GoodLine]:
        return [
            self.good[number]
            for number, line, _, removed in self.rows
            if line is None and not removed and number in self.good
        ]

    @property
    def removed(self) -> list[int]:
        """Lines marked as removed, and saved lines that were emptied."""
        return [
            line
            for number, line, _, removed in self.rows
            if line is not None
            and (removed or (number not in self.good and number not in self.bad))
        ]

    @property
    def notices(self) -> list[str]:
        """What was guessed in the rows that are good: a wrist as a size, a date without a year."""
        return [notice for line in self.good.values() for notice in line.notices]

    def as_rows(self) -> list[GridRow]:
        return [
            grid_row(number, line, cells, self.bad.get(number), removed=removed)
            for number, line, cells, removed in self.rows
        ]


def cells_of_line(line: OrderLine) -> dict[str, str]:
    return {
        "for_whom": line.for_whom,
        "pattern": line.pattern.name,
        "colourway": line.colourway.name,
        "size": line.size.name,
        "ending": line.ending.name,
        "quantity": str(line.quantity),
        "due_date": line.due_date.isoformat() if line.due_date else "",
        "note": line.note,
        "distinct_lengths": str(line.distinct_lengths or ""),
        "matched_set": line.matched_set,
    }


def grid_row(
    number: int,
    line: int | None,
    cells: Mapping[str, str],
    bad: BadLine | None = None,
    *,
    removed: bool = False,
) -> GridRow:
    found = {problem.field: problem for problem in bad.problems} if bad else {}
    return GridRow(
        number=number,
        line=line,
        cells=tuple(
            GridCell(
                field=name,
                heading=heading,
                text=cells.get(name, ""),
                problem=problem.message if (problem := found.get(name)) else "",  # type: ignore[call-overload]
                suggestion=problem.suggestion if problem else None,
            )
            for name, heading in HEADINGS
        ),
        removed=removed,
        whole_row=tuple(p.message for p in bad.problems if p.field is None) if bad else (),
    )


def saved_rows(lines: Sequence[OrderLine], first: int) -> list[GridRow]:
    return [
        grid_row(number, line.pk, cells_of_line(line))
        for number, line in enumerate(lines, start=first)
    ]


def blank_rows(first: int, count: int = BLANK_ROWS) -> list[GridRow]:
    return [grid_row(number, None, {}) for number in range(first, first + count)]


def read_grid(posted: Mapping[str, str], catalogue: Catalogue, how: HowToRead) -> PostedGrid:
    """Read the page's cells; names that are no cells are left aside."""
    texts: dict[int, dict[str, str]] = {}
    for name, text in posted.items():
        match = CELL_NAME.match(name)
        if match and int(match[1]) <= HIGHEST_ROW:
            texts.setdefault(int(match[1]), {})[match[2]] = text
    grid = PostedGrid()
    for number in sorted(texts):
        row = texts[number]
        cells = {str(name): row.get(name, "") for name in DEFAULT_ORDER}
        grid.rows.append((number, _line_key(row.get("line", "")), cells, row.get("gone") == "yes"))
    kept = [(number, cells) for number, _, cells, removed in grid.rows if not removed]
    reading = read_rows(kept, catalogue, **how)
    grid.good = {line.number: line for line in reading.good}
    grid.bad = {line.number: line for line in reading.bad}
    return grid


def _line_key(text: str) -> int | None:
    return int(text) if re.fullmatch(r"[0-9]{1,15}", text) else None
