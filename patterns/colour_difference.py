"""How far apart two thread colours look, to usual sight and to colour-blind eyes."""

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum
from functools import lru_cache
from typing import TYPE_CHECKING, Generic, TypeAlias, TypeVar

from patterns.colours import channels

if TYPE_CHECKING:
    from coloraide import Color

Key = TypeVar("Key")
Lab: TypeAlias = tuple[float, float, float]

# Our choice, no standard: side by side on a screen a difference of 1 to 2 can just be seen, but
# knots are small, lie in relief and cast shadows on each other.
HARD_TO_TELL_BELOW = 8.0
_WORDS = (
    (1.0, "the same to the eye"),
    (4.0, "very close"),
    (HARD_TO_TELL_BELOW, "close"),
    (16.0, "alike, but to be told apart"),
    (30.0, "clearly another shade"),
)
_FURTHEST = "another colour altogether"


class Sight(StrEnum):
    """A way of seeing colours."""

    USUAL = "usual"
    PROTAN = "protan"
    DEUTAN = "deutan"
    TRITAN = "tritan"


@dataclass(frozen=True)
class Near(Generic[Key]):
    """A shade and how far it lies from the one wanted, as Delta E 2000."""

    key: Key
    difference: float


@lru_cache(maxsize=4096)
def lab(colour: str) -> Lab:
    """Return L*, a* and b* of "#rrggbb" under D65, the white that screens are made for.

    Raises
    ------
    ColourError
        When the colour is not written as #rrggbb.
    """
    # coloraide takes 66 ms to import: only pages that compare colours pay for it.
    from coloraide import Color

    channels(colour)
    lightness, green_red, blue_yellow = Color(colour).convert("lab-d65").coords(nans=False)
    return lightness, green_red, blue_yellow


def lab_difference(first: Lab, second: Lab) -> float:
    """Return Delta E 2000 of two colours given as L*, a* and b* under D65.

    References
    ----------
    G. Sharma, W. Wu, E. N. Dalal, The CIEDE2000 color-difference formula, Color Res. Appl. 30
    (2005) 21-30.
    """
    return _as_colour(first).delta_e(_as_colour(second), method="2000")


@lru_cache(maxsize=4096)
def _as_colour(place: Lab) -> "Color":
    """Making one takes longer than comparing two: they are kept, and never changed."""
    from coloraide import Color

    return Color("lab-d65", place)


def difference(first: str, second: str) -> float:
    """Return how far apart two colours look, as Delta E 2000: 0 for equal, 100 for black and white.

    Parameters
    ----------
    first, second
        "#rrggbb".

    Raises
    ------
    ColourError
        When a colour is not written as #rrggbb.
    """
    return lab_difference(lab(first), lab(second))


def difference_words(amount: float) -> str:
    """Return a difference in words; where one ends and the next begins is our choice."""
    return next((words for limit, words in _WORDS if amount < limit), _FURTHEST)


def nearest_shades(wanted: str, shades: Mapping[Key, str], most: int) -> tuple[Near[Key], ...]:
    """Return the shades that look most like the one wanted, nearest first.

    Parameters
    ----------
    wanted
        "#rrggbb".
    shades
        The colour of each shade, "#rrggbb", by whatever names the shade.
    most
        How many to return at the most.

    Raises
    ------
    ColourError
        When a colour is not written as #rrggbb.

    Notes
    -----
    Shades of one difference stay in the order in which they are given.
    """
    found = (Near(key, difference(wanted, colour)) for key, colour in shades.items())
    return tuple(sorted(found, key=lambda near: near.difference)[: max(0, most)])


@lru_cache(maxsize=4096)
def as_seen(colour: str, sight: Sight) -> str:
    """Return a colour as it looks to eyes that see so, "#rrggbb".

    Raises
    ------
    ColourError
        When the colour is not written as #rrggbb.

    Notes
    -----
    The whole deficiency, severity 1; what falls outside the screen's colours is cut off there.

    References
    ----------
    G. M. Machado, M. M. Oliveira, L. A. F. Fernandes, A physiologically-based model for simulation
    of color vision deficiency, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291-1298.
    """
    from coloraide import Color

    channels(colour)
    if sight is Sight.USUAL:
        return colour.lower()
    seen = Color(colour).filter(sight.value, 1, method="machado", space="srgb-linear")
    return seen.convert("srgb").clip().to_string(hex=True)


def difference_as_seen(first: str, second: str, sight: Sight) -> float:
    """Return how far apart two colours look to eyes that see so, as Delta E 2000."""
    return difference(as_seen(first, sight), as_seen(second, sight))


@lru_cache(maxsize=4096)
def hard_to_tell(first: str, second: str) -> tuple[Sight, ...]:
    """Return the ways of seeing in which two colours are hard to tell apart.

    Parameters
    ----------
    first, second
        "#rrggbb".

    Returns
    -------
    The ways of seeing in which the colours differ by less than `HARD_TO_TELL_BELOW`.

    Raises
    ------
    ColourError
        When a colour is not written as #rrggbb.
    """
    return tuple(
        sight for sight in Sight if difference_as_seen(first, second, sight) < HARD_TO_TELL_BELOW
    )
