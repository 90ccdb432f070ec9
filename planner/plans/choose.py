"""A choice put into the rows of the database: endings, lengths, shades, and its words."""

import copy
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from inventory.models import Shade, ShelfPiece, Supplier, Workshop
from patterns.colour_difference import nearest_shades
from patterns.models import Ending, KnottedLength
from planner.models import OrderLine
from planner.planning.choices import AS_ORDERED, OWN_LENGTHS, Choice, ChoiceError
from planner.planning.netting import NettedShade

SUBSTITUTES_OFFERED = 3
"""How many shades of the shelf are tried for one that has to be bought."""


@dataclass(frozen=True)
class ChosenLines:
    """Order lines as a choice has them, never saved, and what it changed in words."""

    lines: list[OrderLine]
    words: tuple[str, ...]


@dataclass(frozen=True)
class Substitute:
    """A shade of the shelf that may stand in for one that has to be bought."""

    shade: Shade
    instead: Shade
    apart: float

    @property
    def choice(self) -> Choice:
        return Choice(substitutes=((self.shade.pk, self.instead.pk),))


def choose(lines: Sequence[OrderLine], choice: Choice) -> ChosenLines:
    """Copy the lines with the choice's endings and lengths.

    ChoiceError where the choice names a supplier or a shade that is not there.
    """
    words = [] if choice.remnants else ["whole skeins only, remnants left alone"]
    chosen = [copy.copy(line) for line in lines]
    if choice.start != AS_ORDERED:
        words.append(_with_start(chosen, choice.start))
    if choice.lengths != AS_ORDERED:
        for line in chosen:
            line.distinct_lengths = None if choice.lengths == OWN_LENGTHS else int(choice.lengths)
        words.append(_length_words(choice.lengths))
    if choice.supplier:
        if not Supplier.objects.filter(name=choice.supplier).exists():
            raise ChoiceError(f"There is no supplier “{choice.supplier}” any more.")
        words.append(f"all new thread from {choice.supplier}")
    return ChosenLines(chosen, (*words, *_substitute_words(choice)))


def _length_words(lengths: str) -> str:
    if lengths == OWN_LENGTHS:
        return "each piece its own length"
    return "one length a bracelet" if lengths == "1" else f"at most {lengths} lengths a bracelet"


def _substitute_words(choice: Choice) -> list[str]:
    keys = {key for pair in choice.substitutes for key in pair}
    shades = Shade.objects.in_bulk(keys)
    if len(shades) < len(keys):
        raise ChoiceError("A shade of this choice is not there any more.")
    return [f"{shades[new]} instead of {shades[old]}" for old, new in choice.substitutes]


def _with_start(lines: Sequence[OrderLine], start: str) -> str:
    """Give every line an ending of that start, where its size has a length for one.

    Of several, the one whose band is nearest in length to the one ordered.
    """
    endings = {ending.pk: ending for ending in Ending.objects.order_by("-is_default", "pk")}
    lengths: dict[int, dict[int, int]] = {}
    for row in KnottedLength.objects.all():
        lengths.setdefault(row.size_id, {})[row.ending_id] = row.knotted_length_mm
    used: Counter[str] = Counter()
    unchanged = 0
    for line in lines:
        if endings[line.ending_id].start == start:
            continue
        of_size = lengths.get(line.size_id, {})
        wanted = of_size.get(line.ending_id, 0)
        fitting = [key for key in endings if key in of_size and endings[key].start == start]
        if not fitting:
            unchanged += line.quantity
            continue
        line.ending = min(
            (endings[key] for key in fitting), key=lambda e: abs(of_size[e.pk] - wanted)
        )
        used[line.ending.name] += line.quantity
    named = ", ".join(f"{name} for {count}" for name, count in sorted(used.items()))
    words = f"{start} start: {named}" if named else f"{start} start: nothing changes"
    return f"{words}; {unchanged} have no such ending in their size" if unchanged else words


def substitutes_for(netted: Sequence[NettedShade], workshop: Workshop) -> list[Substitute]:
    """For each shade that has to be bought, the nearest ones with thread enough on the shelf.

    Enough is in length alone: whether it is in pieces and lots, the choice's own row says.
    """
    bought = [one for one in netted if one.result.bought]
    used = {one.shade for one in netted}
    shelf = ShelfPiece.objects.by_shade(workshop.short_measure_share)
    shades = Shade.objects.in_bulk()
    found = []
    for one in bought:
        shade = shades[one.shade]
        enough = {
            key: shades[key].colour
            for key, thread in shelf.items()
            if key not in used and key in shades and thread.length_mm >= one.need_mm
        }
        for near in nearest_shades(shade.colour, enough, SUBSTITUTES_OFFERED):
            found.append(Substitute(shade, shades[near.key], near.difference))
    return sorted(found, key=lambda item: item.apart)
