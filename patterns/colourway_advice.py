"""What the shelf says to the shades of a colourway: enough or too little, and what else would do."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from inventory.models import Shade
from inventory.on_shelf import OnShelf
from patterns.colour_difference import difference_words, nearest_shades
from patterns.proposals import propose
from patterns.usual_bracelet import UsualBracelet

MOST_INSTEAD = 3
NOTHING = OnShelf()


@dataclass(frozen=True)
class Shelf:
    """Every shade and its thread."""

    shades: Mapping[str, Shade]
    thread: Mapping[int, OnShelf]
    unit: str

    def of(self, shade: Shade) -> OnShelf:
        return self.thread.get(shade.pk, NOTHING)

    def words(self, shade: Shade) -> str:
        return self.of(shade).words(self.unit)

    def words_with_lots(self, shade: Shade) -> str:
        return ", ".join(filter(None, (self.words(shade), self.of(shade).lot_words())))

    def search(self, words: str) -> dict[str, Shade]:
        """Shades with every word in the code, the name or a lot on the shelf."""
        wanted = words.casefold().split()
        return {
            key: shade
            for key, shade in self.shades.items()
            if all(word in self._searched(shade) for word in wanted)
        }

    def _searched(self, shade: Shade) -> str:
        return "\n".join((shade.code, shade.name, *self.of(shade).lot_names)).casefold()


@dataclass(frozen=True)
class Instead:
    """A shade that lies on the shelf and comes near the one chosen."""

    shade: Shade
    difference: float
    on_shelf: str

    @property
    def words(self) -> str:
        return difference_words(self.difference)


@dataclass(frozen=True)
class SlotAdvice:
    """One slot: what it takes, what its shade has, and what would do where that is too little.

    `shares_with` are the other slots of the same shade, whose pieces come from the same thread.
    """

    slot: str
    pieces: int
    need_mm: int
    shade: Shade | None
    on_shelf: str
    is_short: bool
    shares_with: tuple[str, ...]
    instead: tuple[Instead, ...]


def advise(
    slots: Sequence[str],
    chosen: Mapping[str, Shade],
    shelf: Shelf,
    bracelet: UsualBracelet,
) -> dict[str, SlotAdvice]:
    """What to say to each slot, by slot."""
    return {slot: _slot_advice(slot, chosen, shelf, bracelet) for slot in slots}


def propose_from_shelf(
    slots: Sequence[str], shelf: Shelf, bracelet: UsualBracelet, number: int
) -> dict[str, Shade]:
    """A shade with enough thread for every slot; what takes most, and what has most, come first.

    Proposals are numbered from 0; each starts from another shade.
    """
    by_need = sorted(slots, key=lambda slot: -sum(bracelet.pieces_mm.get(slot, ())))
    by_length = sorted(shelf.shades.values(), key=lambda shade: -shelf.of(shade).length_mm)
    colours = {shade: shade.colour for shade in by_length if shelf.of(shade).length_mm}
    return propose(
        by_need,
        colours,
        lambda slot, shade: shelf.of(shade).holds(bracelet.pieces_mm.get(slot, ())),
        number,
    )


def _slot_advice(
    slot: str, chosen: Mapping[str, Shade], shelf: Shelf, bracelet: UsualBracelet
) -> SlotAdvice:
    own_mm = bracelet.pieces_mm.get(slot, ())
    shade = chosen.get(slot)
    sharing = tuple(other for other, taken in chosen.items() if taken == shade and other != slot)
    of_shade_mm = [piece for each in (slot, *sharing) for piece in bracelet.pieces_mm.get(each, ())]
    is_short = shade is not None and not shelf.of(shade).holds(of_shade_mm)
    return SlotAdvice(
        slot=slot,
        pieces=len(own_mm),
        need_mm=sum(own_mm),
        shade=shade,
        on_shelf=shelf.words_with_lots(shade) if shade else "",
        is_short=is_short,
        shares_with=sharing if shade else (),
        instead=tuple(_instead(shade, own_mm, chosen, shelf)) if shade and is_short else (),
    )


def _instead(
    wanted: Shade, pieces_mm: Sequence[int], chosen: Mapping[str, Shade], shelf: Shelf
) -> Iterator[Instead]:
    """Shades of other slots are left out: two slots of one shade would make another pattern."""
    taken = set(chosen.values())
    colours = {
        shade: shade.colour
        for shade in shelf.shades.values()
        if shade not in taken and shelf.of(shade).holds(pieces_mm)
    }
    for near in nearest_shades(wanted.colour, colours, MOST_INSTEAD):
        yield Instead(near.key, near.difference, shelf.words_with_lots(near.key))
