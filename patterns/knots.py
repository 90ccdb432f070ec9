"""Diagonal patterns: strands, the four knots, and who ties what over a whole bracelet."""

import unicodedata
from dataclasses import dataclass
from enum import StrEnum
from typing import Literal

MIN_STRANDS = 2
MAX_STRANDS = 60
MIN_REPEAT_ROWS = 2
MAX_REPEAT_ROWS = 400
MAX_NAME_LENGTH = 80
SLOT_LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"

# Marks that turn the direction of the text around them would garble a tag; plain
# right-to-left letters need none of them.
_DIRECTION_MARKS = frozenset("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")
_NOT_CHARACTERS = frozenset("\ufffe\uffff")  # no XML and so no spreadsheet can hold these
_REFUSED_CATEGORIES = frozenset({"Cc", "Cs", "Zl", "Zp"})


class PatternError(ValueError):
    """A pattern that cannot be tied; says which row and knot where it knows them."""

    def __init__(self, message: str, *, row: int | None = None, knot: int | None = None) -> None:
        super().__init__(message)
        self.row = row
        self.knot = knot


class Knot(StrEnum):
    """The four double half hitches of the trade."""

    F = "f"
    B = "b"
    FB = "fb"
    BF = "bf"

    @property
    def left_ties(self) -> bool:
        """Whether the left strand of the two is the one that ties."""
        return self in (Knot.F, Knot.FB)

    @property
    def swaps(self) -> bool:
        """Whether the two strands have changed places after the knot."""
        return self in (Knot.F, Knot.B)

    @property
    def mirrored(self) -> "Knot":
        """The same knot seen in a mirror."""
        return _MIRRORED[self]


_MIRRORED = {Knot.F: Knot.B, Knot.B: Knot.F, Knot.FB: Knot.BF, Knot.BF: Knot.FB}


class Finish(StrEnum):
    """How a bracelet ends: after the exact rows, after whole repeats, or with its picture centred."""

    EXACT = "exact"
    NEAREST = "nearest"
    AT_LEAST = "at_least"
    AT_MOST = "at_most"
    CENTRED = "centred"


def knots_in_row(strands: int, row: int) -> int:
    """Return how many knots a row has.

    Parameters
    ----------
    strands
        Number of strands.
    row
        The row, counted from 1.

    Returns
    -------
    Number of pairs; odd rows pair strands 1-2, 3-4, ..., even rows 2-3, 4-5, ...
    """
    return (strands - (row - 1) % 2) // 2


def shown(word: object, most: int = 30) -> str:
    """Return what somebody wrote, short, and with a question mark for what cannot be printed."""
    text = str(word)[:most]
    return "".join(character if character.isprintable() else "?" for character in text)


def clean_name(name: object) -> str:
    """Return a pattern's name without the blanks around it.

    Raises
    ------
    PatternError
        When it is not text, empty, too long, or holds control characters.
    """
    if not isinstance(name, str):
        raise PatternError("The name has to be text.")
    stripped = name.strip()
    if not any(unicodedata.category(character)[0] in "LNPS" for character in stripped):
        raise PatternError("The pattern has no name. Give it one.")
    if len(stripped) > MAX_NAME_LENGTH:
        raise PatternError(
            f"The name has {len(stripped)} characters; {MAX_NAME_LENGTH} is the most. Shorten it."
        )
    if any(_is_refused(character) for character in stripped):
        raise PatternError("The name holds a control character. Type the name again.")
    return stripped


def _is_refused(character: str) -> bool:
    return (
        character in _DIRECTION_MARKS
        or character in _NOT_CHARACTERS
        or unicodedata.category(character) in _REFUSED_CATEGORIES
    )


@dataclass(frozen=True)
class DiagonalPattern:
    """A repeat of knots on strands laid side by side.

    Parameters
    ----------
    name
        What the maker calls it, 1 to 80 characters.
    slots
        The colour slot (A to Z) of every strand at the start, left to right.
    rows
        The knots of every row of the repeat, left to right.
    finish
        How a bracelet ends.

    Raises
    ------
    PatternError
        When it cannot be tied; names the row and the knot.

    Notes
    -----
    Row 1 pairs strands 1-2, 3-4, ...; row 2 pairs 2-3, 4-5, ...; and so on in turn.
    A repeat has an even number of rows, else the next one would not mesh.
    """

    name: str
    slots: tuple[str, ...]
    rows: tuple[tuple[Knot, ...], ...]
    finish: Finish = Finish.EXACT

    def __post_init__(self) -> None:
        object.__setattr__(self, "name", clean_name(self.name))
        _check_slots(self.slots)
        _check_rows(self.rows, len(self.slots))
        if not isinstance(self.finish, Finish):
            raise PatternError(f"There is no finish called {self.finish!r}.")
        if self.finish is Finish.CENTRED:
            raise PatternError("Only grid patterns can be centred. Choose another finish.")

    @property
    def technique(self) -> Literal["diagonal"]:
        """The family the pattern belongs to."""
        return "diagonal"

    @property
    def strands(self) -> int:
        """Number of strands."""
        return len(self.slots)

    @property
    def used_slots(self) -> tuple[str, ...]:
        """The slots that need a shade, by letter."""
        return tuple(sorted(set(self.slots)))


def _check_slots(slots: tuple[str, ...]) -> None:
    if not isinstance(slots, tuple):
        raise PatternError("The strands have to be a tuple of letters.")
    if not MIN_STRANDS <= len(slots) <= MAX_STRANDS:
        raise PatternError(
            f"A pattern has {MIN_STRANDS} to {MAX_STRANDS} strands; this one has {len(slots)}."
        )
    for number, slot in enumerate(slots, start=1):
        if not (isinstance(slot, str) and len(slot) == 1 and slot in SLOT_LETTERS):
            raise PatternError(f"Strand {number}: '{shown(slot)}' is not a letter from A to Z.")


def _check_rows(rows: tuple[tuple[Knot, ...], ...], strands: int) -> None:
    if not isinstance(rows, tuple):
        raise PatternError("The rows have to be a tuple of rows.")
    if not MIN_REPEAT_ROWS <= len(rows) <= MAX_REPEAT_ROWS:
        raise PatternError(
            f"A repeat has {MIN_REPEAT_ROWS} to {MAX_REPEAT_ROWS} rows; this one has {len(rows)}."
        )
    for number, row in enumerate(rows, start=1):
        _check_row(row, number, strands)
    if len(rows) % 2:
        raise PatternError(
            f"A repeat needs an even number of rows, else the next one does not mesh; "
            f"this one has {len(rows)}. Add a row or take one out.",
            row=len(rows),
        )


def _check_row(row: tuple[Knot, ...], number: int, strands: int) -> None:
    if not isinstance(row, tuple):
        raise PatternError(f"Row {number} has to be a tuple of knots.", row=number)
    for place, knot in enumerate(row, start=1):
        if not isinstance(knot, Knot):
            raise PatternError(
                f"Row {number}, knot {place}: '{shown(knot)}' is not a knot. Use f, b, fb or bf.",
                row=number,
                knot=place,
            )
    needed = knots_in_row(strands, number)
    if len(row) != needed:
        raise PatternError(
            f"Row {number} has {_knots(len(row))}; {strands} strands need {needed} there, "
            f"because {_pairing(strands, number)}.",
            row=number,
            knot=min(len(row), needed) + 1,
        )


def _knots(count: int) -> str:
    return {0: "no knots", 1: "1 knot"}.get(count, f"{count} knots")


def _pairing(strands: int, row: int) -> str:
    if knots_in_row(strands, row) == 0:
        return "with two strands every second row is left out (write - for it)"
    first = 1 + (row - 1) % 2
    pairs = [f"{left}-{left + 1}" for left in range(first, strands, 2)][:2]
    more = ", ..." if knots_in_row(strands, row) > 2 else ""
    kind = "odd" if row % 2 else "even"
    return f"{kind} rows pair strands {', '.join(pairs)}{more}"
