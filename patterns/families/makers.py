"""The table of families, and the one way to make a pattern of any of them."""

from collections.abc import Callable
from dataclasses import dataclass

from patterns.families import moving, pictured
from patterns.families.moving import Rows
from patterns.knots import MAX_STRANDS, SLOT_LETTERS, DiagonalPattern, Finish, clean_name

Slots = tuple[str, ...]


class FamilyError(ValueError):
    """A pattern that a family cannot make; the text says why and what to do."""


@dataclass(frozen=True)
class Family:
    """A family of patterns.

    Parameters
    ----------
    key
        Its name in addresses.
    name
        What the trade calls it.
    sentence
        What its bands look like.
    fewest_strands
        With fewer it cannot be told apart.
    fewest_colours
        With fewer its picture does not show.
    rows
        Makes the rows of one repeat.
    slots
        Gives the strands their colours.
    """

    key: str
    name: str
    sentence: str
    fewest_strands: int
    fewest_colours: int
    rows: Callable[[int], Rows]
    slots: Callable[[int, Slots], Slots]


FAMILIES: dict[str, Family] = {
    family.key: family
    for family in (
        Family(
            "stripe", "One-direction stripe", "Colours run down to one side.",
            2, 1, moving.stripe, moving.in_blocks,
        ),
        Family(
            "chevron", "Chevron", "Colours run to the middle and meet in a point.",
            4, 1, moving.chevron, moving.mirrored_halves,
        ),
        Family(
            "double-chevron", "Double chevron", "Two chevrons side by side.",
            8, 1, moving.double_chevron, moving.mirrored_quarters,
        ),
        Family(
            "zigzag", "Zigzag", "Stripes that turn and come back.",
            4, 2, moving.zigzag, moving.in_blocks,
        ),
        Family(
            "diamond", "Diamond", "Colours close to a point and open again.",
            6, 2, moving.diamond, moving.mirrored_halves,
        ),
        Family(
            "straight-stripes", "Straight stripes", "Colours run straight down, side by side.",
            3, 1, moving.straight_stripes, moving.in_blocks,
        ),
        Family(
            "bars", "Bars", "Bars of two colours across the band.",
            3, 2, pictured.bars, pictured.in_turn,
        ),
        Family(
            "checks", "Checks", "Squares of two colours in turn, standing on a corner.",
            6, 2, pictured.checks, pictured.in_turn,
        ),
        Family(
            "ladder", "Ladder", "Rails along both edges, and rungs.",
            8, 2, pictured.ladder, pictured.in_turn,
        ),
        Family(
            "crosses", "Crosses", "One cross below the other.",
            8, 2, pictured.crosses, pictured.in_turn,
        ),
        Family(
            "wave", "Wave", "A broad line that swings from edge to edge.",
            8, 2, pictured.wave, pictured.in_turn,
        ),
        Family(
            "hearts", "Hearts", "One heart below the other.",
            8, 2, pictured.hearts, pictured.in_turn,
        ),
    )
}  # fmt: skip


def make_family(key: str, strands: int, colours: Slots, *, name: str = "") -> DiagonalPattern:
    """Make a pattern of a family.

    Parameters
    ----------
    key
        The family's key in `FAMILIES`.
    strands
        Number of strands, from the family's fewest to 60.
    colours
        Slot letters in the order of use, each once; the first is the ground of a picture.
    name
        The pattern's name; without one, the family's with the number of strands.

    Returns
    -------
    An ordinary pattern, to be edited on.

    Raises
    ------
    FamilyError
        When there is no such family, or it cannot be made with these strands or colours.
    PatternError
        When the name cannot be used.
    """
    family = FAMILIES.get(key)
    if family is None:
        raise FamilyError(f"There is no family '{key[:30]}'. Choose one of the list.")
    if not family.fewest_strands <= strands <= MAX_STRANDS:
        raise FamilyError(
            f"{family.name} takes {family.fewest_strands} to {MAX_STRANDS} strands, not {strands}."
        )
    _check_colours(family, strands, colours)
    return DiagonalPattern(
        name=clean_name(name or f"{family.name}, {strands} strands"),
        slots=family.slots(strands, colours),
        rows=family.rows(strands),
        finish=Finish.EXACT,
    )


def _check_colours(family: Family, strands: int, colours: Slots) -> None:
    for letter in colours:
        if len(letter) != 1 or letter not in SLOT_LETTERS:
            raise FamilyError(f"'{letter[:10]}' is not a letter from A to Z.")
    if len(set(colours)) != len(colours):
        raise FamilyError("A colour stands twice. Write each letter once, in the order of use.")
    most = most_colours(family, strands)
    if not family.fewest_colours <= len(colours) <= most:
        raise FamilyError(
            f"{family.name} with {strands} strands takes {family.fewest_colours} to {most} colours,"
            f" not {len(colours)}."
        )


def most_colours(family: Family, strands: int) -> int:
    """Return how many colours find a place on so many strands."""
    letters = tuple(SLOT_LETTERS)
    return len(set(family.slots(strands, letters)))
