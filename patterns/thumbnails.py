"""Pictures for lists of patterns: drawn once, and named by what they show."""

from collections.abc import Iterable, Mapping
from functools import lru_cache
from hashlib import sha256

from patterns.knots import PatternError
from patterns.pattern_file import read_pattern
from patterns.pictures import thumbnail

Colours = tuple[tuple[str, str], ...]
# Two full pages of the library; a picture is 5 to 40 KB.
_MOST_PICTURES = 600
_DRAWN_BY = "1"  # another number when thumbnails are drawn otherwise, so that browsers ask anew


def sorted_colours(colours: Mapping[str, str]) -> Colours:
    return tuple(sorted(colours.items()))


def picture_name(text: str, colours: Colours) -> str:
    """Name a picture by what it shows, so that a browser may keep it for good."""
    shown = "\n".join([_DRAWN_BY, text, *(f"{slot} {colour}" for slot, colour in colours)])
    return sha256(shown.encode("utf-8", errors="replace")).hexdigest()[:20]


@lru_cache(maxsize=_MOST_PICTURES)
def picture(text: str, colours: Colours) -> bytes:
    """Return the thumbnail as an SVG file.

    Parameters
    ----------
    text : a pattern's text.
    colours : slot and "#rrggbb"; slots without one are in undyed thread.

    Raises
    ------
    PatternError
        When the text is no pattern.
    """
    definition = read_pattern(text)
    known = {slot: colour for slot, colour in colours if slot in definition.used_slots}
    return thumbnail(definition, known, title=definition.name).encode()


@lru_cache(maxsize=4096)
def _slots(text: str) -> tuple[str, ...]:
    """Reading takes longer than all else on a page of 300 patterns."""
    try:
        return read_pattern(text).used_slots
    except PatternError:
        return ()


def slots_without(text: str, chosen: Iterable[str]) -> list[str]:
    """List the slots of a pattern's text that are not among the chosen ones."""
    taken = set(chosen)
    return [slot for slot in _slots(text) if slot not in taken]
