"""Grid patterns: lettering and pictures, cell by cell, over base strands that hang straight."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum
from typing import Literal, NamedTuple

from patterns.knots import MAX_REPEAT_ROWS, SLOT_LETTERS, Finish, PatternError, clean_name, shown

MIN_COLUMNS = 2
MAX_COLUMNS = 60
MIN_GRID_ROWS = 1
MAX_GRID_ROWS = MAX_REPEAT_ROWS

CellRow = tuple[str, ...]


class Carry(StrEnum):
    """What a colour does between two of its cells."""

    LEAST = "least"
    CARRIED = "carried"
    CUT = "cut"


class Cell(NamedTuple):
    """A cell of the band, row and column counted from 1."""

    row: int
    column: int
    slot: str


@dataclass(frozen=True)
class GridPattern:
    """Rows of cells, one slot letter each.

    Parameters
    ----------
    name
        What the maker calls it, 1 to 80 characters.
    background
        The slot (A to Z) of the leading strand and of the base strands.
    rows
        The slot of every cell, row by row as they are tied, each from column 1 on the left.
    finish
        How a bracelet ends; centred: the rows once, with background rows before and after.
    carry
        What a colour does between two of its cells: whichever takes less thread, always
        carried along behind, or always cut and joined where the next cell does not touch.

    Raises
    ------
    PatternError
        When it cannot be tied; names the row and the column.

    Notes
    -----
    A base strand hangs down in each column. The leading strand knots across them, row 1 from
    the left, row 2 from the right, and so on in turn; a cell of another slot is tied by a
    strand of that slot while the leading strand passes behind.
    """

    name: str
    background: str
    rows: tuple[CellRow, ...]
    finish: Finish = Finish.EXACT
    carry: Carry = Carry.LEAST

    def __post_init__(self) -> None:
        object.__setattr__(self, "name", clean_name(self.name))
        if not _is_slot(self.background):
            raise PatternError(
                f"The background '{shown(self.background)}' is not a letter from A to Z."
            )
        _check_cells(self.rows)
        if not isinstance(self.finish, Finish):
            raise PatternError(f"There is no finish called {self.finish!r}.")
        if not isinstance(self.carry, Carry):
            raise PatternError(f"There is no way to carry called {self.carry!r}.")

    @property
    def technique(self) -> Literal["grid"]:
        """The family the pattern belongs to."""
        return "grid"

    @property
    def columns(self) -> int:
        """Number of columns, and of base strands."""
        return len(self.rows[0])

    @property
    def strands(self) -> int:
        """Threads that hang: the base strands and the leading strand."""
        return self.columns + 1

    @property
    def used_slots(self) -> tuple[str, ...]:
        """The slots that need a shade, by letter."""
        return tuple(sorted({self.background, *(slot for row in self.rows for slot in row)}))


def _is_slot(slot: object) -> bool:
    return isinstance(slot, str) and len(slot) == 1 and slot in SLOT_LETTERS


def _check_cells(rows: tuple[CellRow, ...]) -> None:
    if not isinstance(rows, tuple) or not all(isinstance(row, tuple) for row in rows):
        raise PatternError("The rows have to be a tuple of rows.")
    if not MIN_GRID_ROWS <= len(rows) <= MAX_GRID_ROWS:
        raise PatternError(
            f"A grid pattern has {MIN_GRID_ROWS} to {MAX_GRID_ROWS} rows; this one has {len(rows)}."
        )
    columns = len(rows[0])
    if not MIN_COLUMNS <= columns <= MAX_COLUMNS:
        raise PatternError(
            f"A grid pattern has {MIN_COLUMNS} to {MAX_COLUMNS} columns; row 1 has {columns}.",
            row=1,
        )
    for number, row in enumerate(rows, start=1):
        _check_cell_row(row, number, columns)


def _check_cell_row(row: CellRow, number: int, columns: int) -> None:
    for place, slot in enumerate(row, start=1):
        if not _is_slot(slot):
            raise PatternError(
                f"Row {number}, column {place}: '{shown(slot)}' is not a letter from A to Z.",
                row=number,
                knot=place,
            )
    if len(row) != columns:
        raise PatternError(
            f"Row {number} has {_cells(len(row))}; row 1 has {columns}, and every row needs as many.",
            row=number,
            knot=min(len(row), columns) + 1,
        )


def _cells(count: int) -> str:
    return {0: "no cells", 1: "1 cell"}.get(count, f"{count} cells")


def is_from_left(row: int) -> bool:
    """Return whether a row of the band, counted from 1, is tied from the left."""
    return row % 2 == 1


def band_rows(pattern: GridPattern, rows: int) -> Iterator[CellRow]:
    """Yield the cells of so many rows of the band, each from column 1.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the whole band, 0 or more.

    Notes
    -----
    Centred: the rows once, (rows - R) // 2 background rows before them and the rest after; a
    band shorter than the picture shows the picture's first rows. Otherwise the rows in turn.
    """
    if rows < 0:
        raise ValueError("The number of rows cannot be negative.")
    before = first_picture_row(pattern, rows) - 1
    background = (pattern.background,) * pattern.columns
    for row in range(rows):
        if pattern.finish is Finish.CENTRED:
            inside = before <= row < before + len(pattern.rows)
            yield pattern.rows[row - before] if inside else background
        else:
            yield pattern.rows[row % len(pattern.rows)]


def first_picture_row(pattern: GridPattern, rows: int) -> int:
    """Return the row of the band, from 1, that shows row 1 of the pattern first."""
    if pattern.finish is not Finish.CENTRED:
        return 1
    return max(0, rows - len(pattern.rows)) // 2 + 1


def tie_cells(pattern: GridPattern, rows: int) -> Iterator[list[Cell]]:
    """Tie the band row by row; each row's cells in the order in which they are tied."""
    for number, slots in enumerate(band_rows(pattern, rows), start=1):
        cells = [Cell(number, column, slot) for column, slot in enumerate(slots, start=1)]
        yield cells if is_from_left(number) else cells[::-1]


def mirrored_grid(pattern: GridPattern) -> GridPattern:
    """Return the pattern whose band is the mirror image, left for right."""
    return GridPattern(
        name=pattern.name,
        background=pattern.background,
        rows=tuple(row[::-1] for row in pattern.rows),
        finish=pattern.finish,
        carry=pattern.carry,
    )
