"""The families of diagonal patterns: made for any number of strands and any colours."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial

from patterns.families import lines, painted
from patterns.families.lines import Lines
from patterns.knots import MAX_STRANDS, SLOT_LETTERS, DiagonalPattern, shown

Made = tuple[tuple[str, ...], lines.Rows]


class FamilyError(ValueError):
    """A pattern that a family cannot give; `field` names what to change.

    Parameters
    ----------
    message
        What is wrong, and what to do.
    field
        "family", "strands" or "order".
    """

    def __init__(self, message: str, field: str) -> None:
        super().__init__(message)
        self.field = field


@dataclass(frozen=True)
class Family:
    """A kind of pattern that the trade knows by a plain name.

    Parameters
    ----------
    key
        Its name in addresses and forms.
    name
        Its name in the trade.
    sentence
        What it looks like.
    fewest
        The fewest strands it makes sense for.
    fewest_colours
        1, or 2 where a motif stands on a ground.
    places
        How many colours there is room for, by the number of strands.
    makes
        The slots and the rows for a number of strands and a colour for each place.
    order_words
        In which order its colours are given.
    """

    key: str
    name: str
    sentence: str
    fewest: int
    places: Callable[[int], int]
    makes: Callable[[int, Sequence[str]], Made]
    order_words: str
    fewest_colours: int = 1

    @property
    def example_order(self) -> str:
        """Colours that show it well."""
        return "AB" if self.fewest_colours == 2 else "ABC"


def _of_lines(
    key: str,
    name: str,
    sentence: str,
    fewest: int,
    lines_of: Callable[[int], Lines],
    order_words: str,
) -> Family:
    def makes(strands: int, colours: Sequence[str]) -> Made:
        made = lines_of(strands)
        return lines.slots_for(made, colours, strands), made.rows

    return Family(key, name, sentence, fewest, lambda n: lines_of(n).count, makes, order_words)


def _of_motif(
    key: str, name: str, sentence: str, fewest: int, motif_of: Callable[[int], painted.Motif]
) -> Family:
    def makes(strands: int, colours: Sequence[str]) -> Made:
        rows = painted.painted(strands, motif_of(strands))
        return painted.slots_for(rows, strands, colours[0], colours[1:]), rows

    def places(strands: int) -> int:
        return 1 + len(painted.motif_strands(painted.painted(strands, motif_of(strands)), strands))

    order_words = "First the ground, then the motif, from left to right."
    return Family(key, name, sentence, fewest, places, makes, order_words, fewest_colours=2)


def _steady(panels: lines.Panels, strands: int) -> Lines:
    return lines.steady_lines(lines.folded(strands, panels), strands // panels)


def _swinging(panels: lines.Panels, strands: int) -> Lines:
    swing = lines.to_and_fro(strands // panels)
    return lines.swinging_lines(lines.folded(strands, panels), swing)


def _waves(strands: int) -> Lines:
    return lines.swinging_lines(lines.folded(strands, 1), lines.rounded(max(2, strands // 2)))


_ALONG = "In the order in which the lines follow each other along the band."
_ALL = (
    _of_lines(
        "stripe",
        "Stripe in one direction",
        "Slanting stripes that run from the left edge to the right edge.",
        2,
        partial(_steady, 1),
        _ALONG,
    ),
    _of_lines(
        "chevron",
        "Chevron",
        "Stripes from both edges that meet in a point in the middle, all pointing one way.",
        4,
        partial(_steady, 2),
        _ALONG,
    ),
    _of_lines(
        "double-chevron",
        "Double chevron",
        "Two rows of points side by side, all pointing one way.",
        8,
        partial(_steady, 4),
        _ALONG,
    ),
    _of_lines(
        "zigzag",
        "Zigzag",
        "Lines that run from edge to edge and back again, each without a break.",
        3,
        partial(_swinging, 1),
        _ALONG,
    ),
    _of_lines(
        "wave",
        "Wave",
        "Lines that swing half as far as a zigzag, and rest a little before they turn.",
        4,
        _waves,
        _ALONG,
    ),
    _of_lines(
        "diamond",
        "Diamond",
        "Closed diamonds in one another, each as wide as the band, with halves between them.",
        4,
        partial(_swinging, 2),
        "From the heart of the diamond outwards.",
    ),
    _of_lines(
        "double-diamond",
        "Double diamond",
        "Two rows of closed diamonds side by side.",
        8,
        partial(_swinging, 4),
        "From the heart of the diamonds outwards.",
    ),
    _of_lines(
        "braid",
        "Braid",
        "Broad bands that go over and under each other, as in a plait. Three colours plait best.",
        3,
        lines.plaited_lines,
        _ALONG,
    ),
    _of_lines(
        "straight-stripes",
        "Straight stripes",
        "Stripes that run straight down the band, side by side.",
        3,
        lines.standing_lines,
        "From left to right.",
    ),
    _of_motif("bars", "Bars", "Bars of two colours across the band.", 3, painted.bars),
    _of_motif("hearts", "Hearts", "Hearts one below the other on a ground.", 6, painted.heart),
    _of_motif("crosses", "Crosses", "Slanting crosses on a ground.", 4, painted.cross),
    _of_motif(
        "arrowheads",
        "Arrowheads",
        "Filled triangles one behind the other, their points towards the start.",
        4,
        painted.arrowhead,
    ),
    _of_motif("checks", "Checks", "Fields in two colours that take turns.", 6, painted.checks),
    _of_motif(
        "ladder", "Ladder", "A rail along each edge, and rungs between them.", 8, painted.ladder
    ),
)
FAMILIES = {family.key: family for family in _ALL}


def family_of(key: str) -> Family:
    """Return the family with a key.

    Raises
    ------
    FamilyError
        When there is none.
    """
    if key not in FAMILIES:
        raise FamilyError(f"There is no family '{shown(key)}'. Choose one from the list.", "family")
    return FAMILIES[key]


def check_strands(family: Family, strands: int) -> None:
    """Raise FamilyError where a family cannot be made with so many strands."""
    if not family.fewest <= strands <= MAX_STRANDS:
        raise FamilyError(
            f"{family.name} takes {family.fewest} to {MAX_STRANDS} strands, not {strands}.",
            "strands",
        )


def colours_in_order(family: Family, strands: int, order: Sequence[str]) -> tuple[str, ...]:
    """Return a slot for every place of a family.

    Parameters
    ----------
    family, strands
        What is made.
    order
        Slots A to Z, one for each place or fewer. Fewer are given equally many neighbouring
        places each, the first ones one more where that does not come out; the ground of a motif
        is one place.

    Raises
    ------
    FamilyError
        When there are too few or too many, or one is no letter.
    """
    check_strands(family, strands)
    places = family.places(strands)
    for number, slot in enumerate(order, start=1):
        if not (isinstance(slot, str) and len(slot) == 1 and slot in SLOT_LETTERS):
            raise FamilyError(
                f"Colour {number}: '{shown(slot)}' is not a letter from A to Z.", "order"
            )
    if len(order) > places:
        raise FamilyError(
            f"{family.name} of {strands} strands has room for {_colours(places)}; these are "
            f"{len(order)}. Take {len(order) - places} out, or take more strands.",
            "order",
        )
    if len(order) < family.fewest_colours:
        raise FamilyError(
            f"{family.name} takes {_colours(family.fewest_colours)} or more. Name them by letters,"
            " such as A B.",
            "order",
        )
    if family.fewest_colours == 2:
        return order[0], *_spread(order[1:], places - 1)
    return _spread(order, places)


def _colours(count: int) -> str:
    return "1 colour" if count == 1 else f"{count} colours"


def _spread(order: Sequence[str], places: int) -> tuple[str, ...]:
    each, over = divmod(places, len(order))
    return tuple(slot for number, slot in enumerate(order) for _ in range(each + (number < over)))


def make_family(key: str, strands: int, order: Sequence[str], *, name: str = "") -> DiagonalPattern:
    """Make a pattern of a family.

    Parameters
    ----------
    key
        Which family.
    strands
        Number of strands, the family's fewest to 60.
    order
        The colours as slots A to Z, in the order of the family's `order_words`.
    name
        What the maker calls it; without, the family's name and the number of strands.

    Returns
    -------
    An ordinary pattern.

    Raises
    ------
    FamilyError
        When the family, the number of strands or the colours do not fit.
    PatternError
        When the name cannot be used.
    """
    family = family_of(key)
    colours = colours_in_order(family, strands, order)
    slots, rows = family.makes(strands, colours)
    return DiagonalPattern(name or f"{family.name}, {strands} strands", slots, rows)
