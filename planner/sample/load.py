"""Loads the sample workshop from the files beside this module, through the same actions as a maker."""

import tomllib
from dataclasses import replace
from datetime import date, timedelta
from decimal import Decimal
from pathlib import Path
from typing import Any

from django.db import IntegrityError, transaction
from django.utils import timezone

from inventory.actions import AddThread, change_shelf, save_put_up
from inventory.models import PutUp, Shade, ShelfPiece, Supplier, Workshop
from patterns.actions import add_pattern, set_colourway
from patterns.models import Pattern
from planner.actions import WorkshopExists, append_lines, start_workshop
from planner.models import Batch
from planner.order_list.lines import read_lines
from planner.order_list.results import GoodLine
from planner.order_list.table import read_table
from planner.orders.catalogue import load_catalogue

FOLDER = Path(__file__).parent
WEEKDAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
_KINDS = {
    "whole_mm": ShelfPiece.Kind.WHOLE,
    "started_mm": ShelfPiece.Kind.STARTED,
    "remnants_mm": ShelfPiece.Kind.REMNANT,
}


@transaction.atomic
def load_sample() -> Workshop:
    """Raises WorkshopExists, and changes nothing, where there is anything of a maker's own."""
    _check_empty()
    content = _read("workshop.toml")
    try:
        workshop = start_workshop(**content["workshop"])
    except (IntegrityError, WorkshopExists):  # somebody pressed the button twice
        raise WorkshopExists(_taken("a workshop")) from None
    shades = {row["code"]: Shade.objects.create(**row) for row in content["shade"]}
    _add_put_ups(content["put_up"], shades)
    _fill_shelf(shades)
    _add_patterns(shades)
    _add_batches(timezone.localdate())
    return workshop


def _check_empty() -> None:
    """Shades and patterns can be there without a workshop: their pages do not ask for one."""
    if Workshop.current() is not None:
        raise WorkshopExists(_taken("a workshop"))
    for model in (Shade, Supplier, Pattern, Batch):
        if model._default_manager.exists():
            raise WorkshopExists(_taken(f"a {model._meta.verbose_name} of yours"))


def _taken(what: str) -> str:
    return f"There is {what} here already. The sample opens only where nothing is yet."


def _read(name: str) -> dict[str, Any]:
    return tomllib.loads((FOLDER / name).read_text(encoding="utf-8"))


def _add_put_ups(rows: list[dict[str, Any]], shades: dict[str, Shade]) -> None:
    """A put-up that names no shades is sold in every one."""
    for row in rows:
        sold_in = [shades[code] for code in row.get("shades", "").split()]
        put_up = PutUp(
            name=row["name"],
            length_mm=row["length_mm"],
            price=Decimal(row["price"]),
            for_every_shade=not sold_in,
        )
        save_put_up(put_up=put_up, supplier_name=row["supplier"], shades=sold_in)


def _fill_shelf(shades: dict[str, Shade]) -> None:
    change_shelf(
        changes=[
            AddThread(shades[lot["shade"]], lot["name"], kind, length_mm, note=lot.get("note", ""))
            for lot in _read("shelf.toml")["lot"]
            for lengths, kind in _KINDS.items()
            for length_mm in lot.get(lengths, ())
        ]
    )


def _add_patterns(shades: dict[str, Shade]) -> None:
    added = [
        add_pattern(text=path.read_text(encoding="utf-8"))
        for path in sorted((FOLDER / "patterns").glob("*.toml"))
    ]
    patterns = {pattern.name: pattern for pattern in added}
    for row in _read("colourways.toml")["colourway"]:
        pattern = patterns[row["pattern"]]
        slots = pattern.definition.used_slots
        chosen = [shades[code] for code in row["shades"].split()]
        set_colourway(
            pattern=pattern, name=row["name"], shades=dict(zip(slots, chosen, strict=True))
        )


def _add_batches(today: date) -> None:
    for row in _read("batches.toml")["batch"]:
        market_date = market_day(today, row["weekday"], row["days_ahead"])
        batch = Batch.objects.create(name=row["name"], market_date=market_date)
        append_lines(batch=batch, good=_lines(row, today, market_date))


def market_day(today: date, weekday: str, days_ahead: int) -> date:
    """The first such weekday that is at least so many days ahead."""
    earliest = today + timedelta(days=days_ahead)
    return earliest + timedelta(days=(WEEKDAYS.index(weekday) - earliest.weekday()) % 7)


def _lines(row: dict[str, Any], today: date, market_date: date) -> list[GoodLine]:
    path = FOLDER / row["orders"]
    reading = read_lines(
        read_table(path.read_bytes(), path.name),
        load_catalogue(),
        today=today,
        market_date=market_date,
    )
    if reading.bad:
        raise ValueError(f"{path.name}: {reading.bad[0].problems[0].message}")
    due_dates = {
        number: market_date - timedelta(days=earlier["days"])
        for earlier in row.get("wanted_earlier", ())
        for number in earlier["rows"]
    }
    return [
        replace(line, due_date=due_dates.get(line.number, line.due_date)) for line in reading.good
    ]
