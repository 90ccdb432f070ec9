"""A workshop of sixty shades and a batch of as many bracelets as wanted, made without chance."""

import random

from inventory.actions import AddThread, change_shelf
from inventory.models import Shade, ShelfPiece
from patterns.models import Colourway
from planner.models import Batch
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_put_up,
    make_ready_workshop,
)

SHADES = 60
PATTERNS = 30
SIZES = ("Small", "Medium", "Large")
LINES = PATTERNS * len(SIZES)
STRANDS = "A A B C D E F F B"
SEED = 20


def make_large_batch(bracelets: int, *, lines: int = LINES, patterns: int = PATTERNS) -> Batch:
    """Bracelets of nine strands in six shades; `lines` kinds share them evenly.

    A pattern's six shades lie ten apart, so every shade is in three patterns and serves pieces
    of some ten lengths; the shelf holds skeins and remnants of two lots of each.
    """
    make_ready_workshop()
    make_put_up("hank", supplier="Harbour Yarns", length_mm=40_000, price="5.40")
    chance = random.Random(SEED)
    shades = [Shade(code=f"S{n:02}", name=f"Shade {n}", colour=_colour(n)) for n in range(SHADES)]
    Shade.objects.bulk_create(shades)
    _fill_shelf(shades, chance)
    colourways = [_colourway(number, shades, chance) for number in range(patterns)]
    batch = make_batch("Large")
    each, more = divmod(bracelets, lines)
    for number in range(lines):
        quantity = each + (number < more)
        if quantity:
            size = SIZES[number // patterns % len(SIZES)]
            make_order(batch, colourways[number % patterns], quantity=quantity, size=size)
    return batch


def _colour(number: int) -> str:
    return f"#{number * 4 % 256:02x}{number * 37 % 256:02x}{number * 91 % 256:02x}"


def _fill_shelf(shades: list[Shade], chance: random.Random) -> None:
    remnants = [(shade, lot) for shade in shades for lot in ("L1", "L1", "L2", "L2")]
    changes = [AddThread(shade, "L1", ShelfPiece.Kind.WHOLE, 8_000) for shade in shades]
    changes += [
        AddThread(shade, lot, ShelfPiece.Kind.REMNANT, chance.randrange(400, 7_500, 10))
        for shade, lot in remnants
    ]
    change_shelf(changes=changes)


def _colourway(number: int, shades: list[Shade], chance: random.Random) -> Colourway:
    rows = tuple(
        " ".join(chance.choice(("f", "b", "fb", "bf")) for _ in range(4)) for _ in range(8)
    )
    pattern = make_pattern(f"Pattern {number}", strands=STRANDS, rows=rows)
    chosen = {slot: shades[(number + 10 * place) % SHADES] for place, slot in enumerate("ABCDEF")}
    return make_colourway(pattern, "Usual", **chosen)
