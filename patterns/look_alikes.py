"""Colours that lie beside each other in a band and are hard to tell apart."""

from collections.abc import Mapping
from dataclasses import dataclass

from patterns.colour_difference import Sight, hard_to_tell
from patterns.neighbours import SlotPair, neighbouring_slots
from patterns.techniques import Pattern

DEFICIENCIES = (Sight.PROTAN, Sight.DEUTAN, Sight.TRITAN)


@dataclass(frozen=True)
class LookAlike:
    """Two slots that lie beside each other and look alike.

    Parameters
    ----------
    slots
        Their letters.
    sides
        Along how many sides their knots touch in the band.
    sights
        The ways of seeing in which they are hard to tell apart.
    same
        Whether they have the very same colour.
    """

    slots: SlotPair
    sides: int
    sights: tuple[Sight, ...]
    same: bool

    @property
    def to_whom(self) -> str:
        """Say whose eyes cannot tell them apart."""
        if Sight.USUAL in self.sights:
            return "to everybody"
        kinds = []
        if Sight.PROTAN in self.sights or Sight.DEUTAN in self.sights:
            kinds.append("red-green")
        if Sight.TRITAN in self.sights:
            kinds.append("blue-yellow")
        return f"to people with {' or '.join(kinds)} colour blindness"


def look_alikes(pattern: Pattern, rows: int, colours: Mapping[str, str]) -> tuple[LookAlike, ...]:
    """Return the neighbours that are hard to tell apart, those that meet most often first.

    Parameters
    ----------
    pattern
        The pattern.
    rows
        Rows of the band.
    colours
        "#rrggbb" by slot; slots without one are left out.

    Raises
    ------
    ColourError
        When a colour is not written as #rrggbb.
    """
    found = []
    for (first, second), sides in neighbouring_slots(pattern, rows).items():
        if first in colours and second in colours:
            one, other = sorted((colours[first].lower(), colours[second].lower()))
            if sights := hard_to_tell(one, other):
                found.append(LookAlike((first, second), sides, sights, one == other))
    return tuple(sorted(found, key=lambda pair: -pair.sides))


def sights_to_show(pairs: tuple[LookAlike, ...]) -> tuple[Sight, ...]:
    """Return the deficiencies in which a pair is lost that usual eyes can tell apart."""
    lost = {sight for pair in pairs if Sight.USUAL not in pair.sights for sight in pair.sights}
    return tuple(sight for sight in DEFICIENCIES if sight in lost)
