"""Builders of rows for tests: the least that makes a valid row, and one argument per difference."""

import itertools
from decimal import Decimal
from typing import Any

from inventory.actions import AddThread, change_shelf
from inventory.models import PutUp, Shade, ShelfPiece, Supplier, Workshop
from patterns.actions import add_pattern, load_defaults, set_colourway
from patterns.models import Colourway, Ending, Pattern, Size
from planner.models import Batch, OrderLine

_numbers = itertools.count(1)


def make_workshop(**changes: Any) -> Workshop:
    workshop, _ = Workshop.objects.update_or_create(
        pk=1, defaults={"name": "Sandpiper Knots"} | changes
    )
    return workshop


def make_shade(code: str = "", name: str = "Harbour grey", colour: str = "#6b7a86") -> Shade:
    return Shade.objects.create(code=code or f"T{next(_numbers):04}", name=name, colour=colour)


def make_put_up(
    name: str = "skein",
    *,
    supplier: str = "Quay Threads",
    length_mm: int = 8_000,
    price: str = "1.20",
    shades: tuple[Shade, ...] = (),
    **packs: int,
) -> PutUp:
    """Sold in every shade, unless shades are given."""
    put_up = PutUp.objects.create(
        name=name,
        supplier=Supplier.objects.get_or_create(name=supplier)[0],
        length_mm=length_mm,
        price=Decimal(price),
        for_every_shade=not shades,
        **packs,
    )
    put_up.shades.set(shades)
    return put_up


def put_thread(
    shade: Shade,
    *lengths_mm: int,
    kind: str = ShelfPiece.Kind.STARTED,
    lot: str = "L1",
    note: str = "",
) -> list[ShelfPiece]:
    """One piece of each length."""
    return change_shelf(
        changes=[
            AddThread(shade=shade, lot_name=lot, kind=kind, length_mm=length_mm, note=note)
            for length_mm in lengths_mm
        ]
    )


def pattern_text(
    name: str = "Ferry stripe",
    *,
    strands: str = "A A B B C C",
    rows: tuple[str, ...] = ("f f f", "f f"),
    finish: str = "",
) -> str:
    """The text of a pattern file."""
    lines = "\n".join(rows)
    ending = f'finish = "{finish}"\n' if finish else ""
    return (
        f'name = "{name}"\ntechnique = "diagonal"\nstrands = "{strands}"\n'
        f'rows = """\n{lines}\n"""\n{ending}'
    )


def make_pattern(name: str = "Ferry stripe", **differences: Any) -> Pattern:
    return add_pattern(text=pattern_text(name, **differences))


def grid_text(
    name: str = "Heart row",
    *,
    background: str = "A",
    rows: tuple[str, ...] = ("ABABA", "BBBBB", "ABBBA", "AABAA", "AAAAA"),
    finish: str = "",
    carry: str = "",
) -> str:
    """The text of the file of a grid pattern."""
    lines = "\n".join(rows)
    choices = "".join(
        f'{key} = "{value}"\n' for key, value in (("finish", finish), ("carry", carry)) if value
    )
    return (
        f'name = "{name}"\ntechnique = "grid"\nbackground = "{background}"\n'
        f'rows = """\n{lines}\n"""\n{choices}'
    )


def make_grid_pattern(name: str = "Heart row", **differences: Any) -> Pattern:
    return add_pattern(text=grid_text(name, **differences))


def make_colourway(pattern: Pattern, name: str = "Harbour", **shades: Shade) -> Colourway:
    """Every slot gets a shade of its own, unless one is given: make_colourway(p, A=madder)."""
    for slot in pattern.definition.used_slots:
        shades.setdefault(slot, make_shade())
    return set_colourway(pattern=pattern, name=name, shades=shades)


def make_ready_workshop(**changes: Any) -> Workshop:
    """A workshop with the usual sizes and endings, and one skein to buy in every shade."""
    workshop = make_workshop(**changes)
    load_defaults()
    make_put_up()
    return workshop


def make_batch(name: str = "Saturday's market", **values: Any) -> Batch:
    return Batch.objects.create(name=name, **values)


def make_order(
    batch: Batch,
    colourway: Colourway,
    *,
    quantity: int = 1,
    size: str = "Medium",
    ending: str | None = None,
    **values: Any,
) -> OrderLine:
    endings = (
        Ending.objects.filter(name=ending) if ending else Ending.objects.filter(is_default=True)
    )
    return OrderLine.objects.create(
        batch=batch,
        position=batch.lines.count() + 1,
        pattern=colourway.pattern,
        colourway=colourway,
        size=Size.objects.get(name=size),
        ending=endings.get(),
        quantity=quantity,
        **values,
    )
