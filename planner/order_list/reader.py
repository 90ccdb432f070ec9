"""One row of text read into an order line, or into everything that is wrong with it."""

import re
from collections.abc import Callable, Mapping
from datetime import date
from functools import partial
from typing import TypeVar

from inventory.measures import MeasureError, read_quantity
from planner.order_list.catalogue import Catalogue, Names, PatternChoice
from planner.order_list.cells import UNREADABLE, clean_cell, listed, one_line, shown
from planner.order_list.columns import DEFAULT_ORDER, FIELD_LABELS, Columns, Field
from planner.order_list.dates import long_date, read_date
from planner.order_list.limits import (
    MAX_DISTINCT_LENGTHS,
    MAX_FOR_WHOM_CHARACTERS,
    MAX_NOTE_CHARACTERS,
    MAX_SET_CHARACTERS,
)
from planner.order_list.problems import CellProblem
from planner.order_list.results import BadLine, GoodLine, Problem
from planner.order_list.sizes import Sizes
from planner.order_list.table import TableRow

_Value = TypeVar("_Value")

_TIMES = re.compile(r"[x×] ?([0-9]+)|([0-9]+) ?[x×]|([0-9]+)[.,]0{1,2}", re.IGNORECASE)


class _Row:
    """One row being read: its cells, and what was found wrong or worth saying so far."""

    def __init__(self, number: int, cells: Mapping[str, str]) -> None:
        self.number = number
        self.cells = {field: clean_cell(cells.get(field, "")) for field in DEFAULT_ORDER}
        self.problems: list[Problem] = []
        self.notices: list[str] = []
        for field in DEFAULT_ORDER:
            self._check_readable(field)

    @property
    def is_blank(self) -> bool:
        return not self.problems and not any(cell.strip() for cell in self.cells.values())

    def read(self, field: Field, reader: Callable[[str], _Value]) -> _Value | None:
        """Give what a cell says, or note what is wrong with it."""
        if any(problem.field == field for problem in self.problems):
            return None
        try:
            return reader(self.cells[field].strip())
        except CellProblem as problem:
            self.add_problem(field, problem.sentence, problem.suggestion)
            return None

    def add_problem(
        self, field: Field | None, sentence: str, suggestion: str | None = None
    ) -> None:
        self.problems.append(Problem(field, f"Row {self.number}: {sentence}", suggestion))

    def add_notice(self, sentence: str | None) -> None:
        if sentence is not None:
            self.notices.append(f"Row {self.number}: {sentence}")

    def as_bad(self) -> BadLine:
        def place(problem: Problem) -> int:
            return -1 if problem.field is None else DEFAULT_ORDER.index(problem.field)

        problems = sorted(self.problems, key=place)
        return BadLine(self.number, tuple(self.cells.values()), tuple(problems))

    def _check_readable(self, field: Field) -> None:
        position = self.cells[field].find(UNREADABLE)
        if position >= 0:
            self.add_problem(
                field,
                f"character {position + 1} of the {FIELD_LABELS[field]} cell cannot be read and is "
                f"shown as {UNREADABLE}. Type it again, or take it out.",
            )


class RowReader:
    """Reads rows against one catalogue.

    Parameters
    ----------
    catalogue
        What can be ordered.
    today
        Due dates without a year are the next from this day on.
    market_date
        The due date of lines without one.
    day_first
        Whether ``5/12/2026`` is 5 December.
    """

    def __init__(
        self, catalogue: Catalogue, today: date, market_date: date | None, day_first: bool
    ) -> None:
        self._today = today
        self._market_date = market_date
        self._day_first = day_first
        self._patterns = Names(catalogue.patterns)
        self._pattern_by_key = {pattern.key: pattern for pattern in catalogue.patterns}
        self._colourways: dict[int, Names] = {}
        self._sizes = Sizes(catalogue.sizes)
        self._endings = Names(catalogue.endings)
        self._ending_names = [ending.name for ending in catalogue.endings]
        self._default_ending_key = catalogue.default_ending_key

    def read_table_row(self, table_row: TableRow, columns: Columns) -> GoodLine | BadLine | None:
        """Read a row of a list.

        Parameters
        ----------
        table_row
            The row.
        columns
            What each of its cells holds.

        Returns
        -------
        GoodLine, BadLine or None
            The line; `None` when nothing is written in the columns that are read.
        """
        placed = zip(columns.fields, table_row.cells, strict=False)
        row = _Row(table_row.number, {field: cell for field, cell in placed if field is not None})
        cells, width = len(table_row.cells), len(columns.fields)
        if cells > width:
            row.add_problem(
                None,
                f"{cells} cells, but the list has {width} columns. "
                "Put quotes round text that holds the character between the cells.",
            )
        for column, field in enumerate(columns.fields, start=1):
            if field is not None and column in table_row.formulas:
                row.add_problem(
                    field,
                    f"the {FIELD_LABELS[field]} cell is a formula without a result. Open the workbook "
                    "in your spreadsheet and save it again, or write the result in its place.",
                )
        return self._read(row)

    def read(self, number: int, cells: Mapping[str, str]) -> GoodLine | BadLine | None:
        """Read a row of the grid.

        Parameters
        ----------
        number
            The row's number, as messages give it.
        cells
            Text by field.

        Returns
        -------
        GoodLine, BadLine or None
            The line; `None` when nothing is written.
        """
        return self._read(_Row(number, cells))

    def _read(self, row: _Row) -> GoodLine | BadLine | None:
        if row.is_blank:
            return None
        for_whom = row.read("for_whom", _read_for_whom)
        pattern = row.read("pattern", self._read_pattern)
        colourway_key = None
        if pattern is not None:
            colourway_key = row.read("colourway", partial(self._read_colourway, pattern))
        size_key, size_notice = row.read("size", self._read_size) or (None, None)
        ending_key = row.read("ending", self._read_ending)
        quantity = row.read("quantity", _read_quantity)
        due_date, due_notice = row.read("due_date", self._read_due_date) or (None, None)
        note = row.read("note", _read_note)
        distinct_lengths = row.read("distinct_lengths", _read_distinct_lengths)
        matched_set = row.read("matched_set", _read_matched_set)
        if (
            row.problems
            or for_whom is None
            or pattern is None
            or colourway_key is None
            or size_key is None
            or ending_key is None
            or quantity is None
            or note is None
            or matched_set is None
        ):
            return row.as_bad()
        row.add_notice(size_notice)
        row.add_notice(due_notice)
        return GoodLine(
            number=row.number,
            for_whom=for_whom,
            pattern_key=pattern.key,
            colourway_key=colourway_key,
            size_key=size_key,
            ending_key=ending_key,
            quantity=quantity,
            due_date=due_date,
            note=note,
            cells=tuple(row.cells.values()),
            distinct_lengths=distinct_lengths,
            matched_set=matched_set,
            notices=tuple(row.notices),
        )

    def _read_pattern(self, text: str) -> PatternChoice:
        if not self._pattern_by_key:
            raise CellProblem("there are no patterns yet. Add one first.")
        if not text:
            raise CellProblem("no pattern is given. Write its name.")
        key = _find(self._patterns, text, "no pattern called", "Check its name, or add it first.")
        pattern = self._pattern_by_key[key]
        if pattern.is_archived:
            raise CellProblem(f"{pattern.name} is archived. Bring it back in the library first.")
        return pattern

    def _read_colourway(self, pattern: PatternChoice, text: str) -> int:
        names = listed([colourway.name for colourway in pattern.colourways])
        if not pattern.colourways:
            raise CellProblem(f"{pattern.name} has no colourway yet. Add one first.")
        if text:
            called = f"{pattern.name} has no colourway called"
            return _find(self._colourways_of(pattern), text, called, f"It has {names}.")
        if len(pattern.colourways) == 1:
            return pattern.colourways[0].key
        if pattern.default_colourway_key is None:
            raise CellProblem(f"no colourway is given; {pattern.name} has {names}. Write which.")
        return pattern.default_colourway_key

    def _colourways_of(self, pattern: PatternChoice) -> Names:
        if pattern.key not in self._colourways:
            self._colourways[pattern.key] = Names(pattern.colourways)
        return self._colourways[pattern.key]

    def _read_size(self, text: str) -> tuple[int, str | None]:
        if not text:
            raise CellProblem("no size is given. Write its name, or a wrist such as 16 cm.")
        return self._sizes.read(one_line(text))

    def _read_ending(self, text: str) -> int:
        if not self._ending_names:
            raise CellProblem("there are no endings yet. Add one first.")
        if text:
            known = f"You have {listed(self._ending_names, most=8)}."
            return _find(self._endings, text, "no ending called", known)
        if self._default_ending_key is None:
            raise CellProblem("no ending is given. Write its name.")
        return self._default_ending_key

    def _read_due_date(self, text: str) -> tuple[date | None, str | None]:
        if not text:
            return self._market_date, None
        read = read_date(text, today=self._today, day_first=self._day_first)
        if read.day < self._today:
            return read.day, f"the due date, {long_date(read.day)}, has passed."
        if self._market_date is not None and read.day > self._market_date:
            return read.day, f"the due date, {long_date(read.day)}, is after the market."
        return read.day, read.notice


def _find(names: Names, text: str, called: str, otherwise: str) -> int:
    line = one_line(text)
    found = names.find(line)
    if len(found) == 1:
        return found[0][0]
    if found:
        both = listed([name for _, name in found])
        raise CellProblem(f"{shown(line)} may be {both}. Write the name exactly.")
    near = names.nearest(line)
    if near is not None:
        raise CellProblem(f"{called} {shown(line)}. Did you mean {near}?", near)
    raise CellProblem(f"{called} {shown(line)}. {otherwise}")


def _read_for_whom(text: str) -> str:
    return _within(one_line(text), MAX_FOR_WHOM_CHARACTERS, "for whom")


def _read_note(text: str) -> str:
    return _within(text, MAX_NOTE_CHARACTERS, "note")


def _read_matched_set(text: str) -> str:
    return _within(one_line(text), MAX_SET_CHARACTERS, "set")


def _within(text: str, most: int, what: str) -> str:
    if len(text) > most:
        raise CellProblem(
            f"{shown(text)} under {what} has {len(text):,} characters; {most} is the limit. "
            "Shorten it."
        )
    return text


def _read_quantity(text: str) -> int:
    if not text:
        return 1
    times = _TIMES.fullmatch(text)
    try:
        return read_quantity(next(filter(None, times.groups())) if times else text)
    except MeasureError as error:
        raise CellProblem(
            f"the quantity {shown(text)} is not a whole number from 1 to 9999. Write one, like 3."
        ) from error


def _read_distinct_lengths(text: str) -> int | None:
    """Empty: each piece of a bracelet is cut to its own length."""
    if not text:
        return None
    try:
        return read_quantity(text, maximum=MAX_DISTINCT_LENGTHS)
    except MeasureError as error:
        raise CellProblem(
            f"the lengths {shown(text)} are not a whole number from 1 to {MAX_DISTINCT_LENGTHS}. "
            "Write in how many lengths the pieces of a bracelet are cut, or leave it empty."
        ) from error
