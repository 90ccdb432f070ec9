"""Lettering for grid patterns, in an alphabet of two heights drawn for this project."""

import unicodedata
from functools import cache
from types import MappingProxyType
from typing import Literal

from patterns.alphabet_letters import FIVE_CELLS, MARKED_LETTERS, MARKS, SEVEN_CELLS

Picture = tuple[tuple[bool, ...], ...]
Direction = Literal["along", "down"]

HEIGHTS = (5, 7)
MAX_LETTERS = 60
WORD_GAP = 2
_SHEETS = {5: FIVE_CELLS, 7: SEVEN_CELLS}
# What keyboards and phones put in place of a mark that is here.
SAME_MARKS = MappingProxyType(
    {"’": "'", "‘": "'", "`": "'", "–": "-", "—": "-", "❤": "♥", "\ufe0f": "", "\u00a0": " "}
)


class LetteringError(ValueError):
    """Words that the alphabet cannot show."""


@cache
def letters(height: int) -> MappingProxyType[str, Picture]:
    """Return every letter of one height but the blank, each a picture of `height` rows.

    Parameters
    ----------
    height
        5 or 7 [cells].

    Raises
    ------
    LetteringError
        When there are no letters of this height.
    """
    if height not in _SHEETS:
        raise LetteringError(f"Letters are 5 or 7 cells high, not {str(height)[:20]}.")
    drawn = _read_sheets(_SHEETS[height])
    composed = _marked_letters() if height == max(HEIGHTS) else {}
    return MappingProxyType(composed | drawn)


def _read_sheets(text: str) -> dict[str, Picture]:
    found: dict[str, Picture] = {}
    for sheet in text.strip().split("\n\n"):
        names, *lines = (line.split() for line in sheet.splitlines())
        for name, rows in zip(names, zip(*lines, strict=True), strict=True):
            found[name] = tuple(_cells(row) for row in rows)
    return found


def _cells(row: str) -> tuple[bool, ...]:
    return tuple(cell == "#" for cell in row)


def _marked_letters() -> dict[str, Picture]:
    """Put every mark over every letter of five cells that has one in some language."""
    bodies = letters(min(HEIGHTS))
    found: dict[str, Picture] = {}
    for base in MARKED_LETTERS:
        width = len(bodies[base][0])
        for mark, shapes in MARKS.items():
            name = unicodedata.normalize("NFC", base + mark)
            if len(name) == 1 and width in shapes:
                found[name] = (_cells(shapes[width]), (False,) * width, *bodies[base])
    return found


def write_words(text: str, height: int) -> Picture:
    """Write words upright, one letter beside the other.

    Parameters
    ----------
    text
        The words, at most 60 letters; upper and lower case are the same.
    height
        5 or 7 [cells].

    Returns
    -------
    `height` rows from the top, of cells that are True where the letter is. One cell lies
    between two letters, and two more for a blank.

    Raises
    ------
    LetteringError
        When a letter is not there, the text is empty or too long, or the height is another.
    """
    first, *others = (_letter(character, height) for character in _characters(text, height))
    picture = first
    for letter in others:
        picture = tuple((*row, False, *more) for row, more in zip(picture, letter, strict=True))
    return picture


def stack_words(text: str, height: int) -> Picture:
    """Write words downwards, the letters upright one below the other.

    Parameters
    ----------
    text, height
        As in `write_words`.

    Returns
    -------
    Rows from the top, as wide as the widest letter. A row lies between two letters, and two
    more for a blank; a narrow letter stands in the middle, or half a cell to the left of it.

    Raises
    ------
    LetteringError
        As in `write_words`.
    """
    characters = _characters(text, height)
    pictures = [_letter(character, height) for character in characters]
    width = max(len(picture[0]) for picture in pictures)
    rows: list[tuple[bool, ...]] = []
    for number, (character, picture) in enumerate(zip(characters, pictures, strict=True)):
        if number:
            rows.append((False,) * width)
        shown = picture[:WORD_GAP] if character == " " else picture
        rows.extend(_centred(row, width) for row in shown)
    return tuple(rows)


def _centred(row: tuple[bool, ...], width: int) -> tuple[bool, ...]:
    left = (width - len(row)) // 2
    return (False,) * left + row + (False,) * (width - len(row) - left)


def lettering(text: str, height: int, direction: Direction) -> Picture:
    """Write words as rows of a band.

    Parameters
    ----------
    text, height
        As in `write_words`.
    direction
        "along": the word reads along the band when the band lies with its start at the left
        and column 1 lowest, so a letter's lowest row is in its first column. "down": the
        letters stand upright one below the other when the band hangs from its start.

    Returns
    -------
    Rows as they are tied, of cells from column 1.

    Raises
    ------
    LetteringError
        As in `write_words`, and for another direction.
    """
    if direction == "down":
        return stack_words(text, height)
    if direction != "along":
        raise LetteringError("Words run along the band or down the band.")
    return turn_along(write_words(text, height))


def turn_along(picture: Picture) -> Picture:
    """Turn an upright picture so that it reads along the band: left first, lowest in column 1."""
    return tuple(tuple(column[::-1]) for column in zip(*picture, strict=True))


def _characters(text: str, height: int) -> str:
    """Return the text in the alphabet's own letters, or say which one is not there."""
    plain = "".join(SAME_MARKS.get(c, c) for c in unicodedata.normalize("NFC", text))
    words = " ".join(unicodedata.normalize("NFC", plain.upper()).split())
    if not words:
        raise LetteringError("Write a word first.")
    if len(words) > MAX_LETTERS:
        raise LetteringError(f"Write at most {MAX_LETTERS} letters; these are {len(words)}.")
    for place, character in enumerate(words, start=1):
        if character != " " and character not in letters(height):
            raise LetteringError(_not_there(character, place, height))
    return words


def _not_there(character: str, place: int, height: int) -> str:
    shown = character if character.isprintable() else "?"
    words = f"There is no '{shown}' (letter {place}) {height} cells high."
    taller = max(HEIGHTS)
    if character in letters(taller):
        return f"{words} Take the letters of {taller} cells, or write it without its mark."
    plain = unicodedata.normalize("NFD", character)[0]
    if plain != character and plain in letters(height):
        return f"{words} Write {plain} instead."
    return f"{words} Use A to Z, 0 to 9, blanks and & ! ? . - ' + ♥."


def _letter(character: str, height: int) -> Picture:
    if character == " ":
        return ((False,) * WORD_GAP,) * height
    return letters(height)[character]


def alphabet_data() -> dict[str, object]:
    """Return the alphabet as plain data, for a page that writes words itself.

    Returns
    -------
    `letters` by height and name, each a list of rows of "#" and "."; `sameMarks`, the marks
    that mean another; `mostLetters`; and `wordGap`, the cells of a blank.
    """
    return {
        "letters": {
            str(height): {name: _drawn(picture) for name, picture in letters(height).items()}
            for height in HEIGHTS
        },
        "sameMarks": dict(SAME_MARKS),
        "mostLetters": MAX_LETTERS,
        "wordGap": WORD_GAP,
    }


def _drawn(picture: Picture) -> list[str]:
    return ["".join("#" if cell else "." for cell in row) for row in picture]
