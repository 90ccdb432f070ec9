"""Shades for a pattern's slots out of what lies on the shelf, well apart from each other."""

from collections.abc import Callable, Mapping, Sequence
from typing import TypeVar

from patterns.colour_difference import Sight, difference_as_seen

Key = TypeVar("Key")
# Each further shade is compared with every one chosen, in four ways of seeing; more would be slow.
MOST_CONSIDERED = 60


def propose(
    slots: Sequence[str],
    shades: Mapping[Key, str],
    holds: Callable[[str, Key], bool],
    number: int = 0,
) -> dict[str, Key]:
    """Give every slot a shade of its own that has enough thread, far from the other ones.

    Parameters
    ----------
    slots
        The slots, in the order in which they choose.
    shades
        "#rrggbb" by whatever names the shade; of equal ones the first is taken, and only the
        first `MOST_CONSIDERED` are looked at.
    holds
        Whether a shade has enough thread for a slot.
    number
        Which proposal, from 0: the first slot takes the shade of that number among those that
        have enough; after the last one it begins again.

    Returns
    -------
    The shade by slot; slots for which no shade is left are missing.

    Raises
    ------
    ColourError
        When a colour is not written as #rrggbb.

    Notes
    -----
    Greedy: each slot takes the shade whose least difference from those taken, in whatever way of
    seeing, is greatest. The same input gives the same
    answer.
    """
    left = dict(list(shades.items())[:MOST_CONSIDERED])
    apart = dict.fromkeys(left, float("inf"))
    taken: dict[str, Key] = {}
    for slot in slots:
        fitting = [key for key in left if holds(slot, key)]
        if not fitting:
            continue
        furthest = max(fitting, key=lambda key: apart[key])
        best = furthest if taken else fitting[number % len(fitting)]
        taken[slot] = best
        colour = left.pop(best)
        for key, other in left.items():
            apart[key] = min(apart[key], _least_difference(colour, other))
    return taken


def _least_difference(first: str, second: str) -> float:
    return min(difference_as_seen(first, second, sight) for sight in Sight)
