"""Every write of the planner that touches more than one model."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from typing import Any

from django.db import transaction
from django.db.models import Max
from django.utils import timezone

from inventory.models import Workshop
from patterns.actions import load_defaults, note_planned
from planner.models import Batch, OrderDraft, OrderLine, Plan
from planner.order_list.results import GoodLine
from planner.orders.drafts import corrected
from planner.planning.choices import Choice
from planner.planning.snapshot import Snapshot
from planner.planning.watching import Watcher
from planner.plans.from_scraps import MadeRow
from planner.plans.store import store_snapshot
from planner.plans.work_out import PlanError, work_out_plan

LINE_FIELDS = (
    "for_whom",
    "pattern_id",
    "colourway_id",
    "size_id",
    "ending_id",
    "quantity",
    "due_date",
    "note",
    "distinct_lengths",
    "matched_set",
)


class WorkshopExists(ValueError):
    """There is a workshop already; the text says so."""


class BatchChanged(ValueError):
    """Somebody saved the batch in the meantime; the text says what to do."""


@transaction.atomic
def start_workshop(*, name: str, **habits: Any) -> Workshop:
    """Make the workshop with the usual sizes, endings and gauge; `habits` are its other fields."""
    workshop, is_new = Workshop.objects.get_or_create(pk=1, defaults={"name": name, **habits})
    if not is_new:
        raise WorkshopExists("There is a workshop here already.")
    load_defaults()
    return workshop


def line_values(line: GoodLine) -> dict[str, Any]:
    return {
        "for_whom": line.for_whom,
        "pattern_id": line.pattern_key,
        "colourway_id": line.colourway_key,
        "size_id": line.size_key,
        "ending_id": line.ending_key,
        "quantity": line.quantity,
        "due_date": line.due_date,
        "note": line.note,
        "distinct_lengths": line.distinct_lengths,
        "matched_set": line.matched_set,
    }


@transaction.atomic
def save_lines(
    *,
    batch: Batch,
    revision: int,
    changed: Mapping[int, GoodLine],
    added: Sequence[GoodLine],
    removed: Iterable[int],
) -> Batch:
    """Save a page of the grid: all of it, or nothing where somebody else saved first."""
    batch = _next_revision(batch, revision)
    lines = {line.pk: line for line in batch.lines.filter(pk__in=changed)}
    for pk, good in changed.items():
        if pk not in lines:
            raise BatchChanged("A row was removed in another window. Look through and save again.")
        for name, value in line_values(good).items():
            setattr(lines[pk], name, value)
    OrderLine.objects.bulk_update(lines.values(), list(LINE_FIELDS), batch_size=200)
    batch.lines.filter(pk__in=list(removed)).delete()
    append_lines(batch=batch, good=added)
    return batch


@transaction.atomic
def order_from_scraps(*, rows: Sequence[MadeRow]) -> Batch:
    """A batch for the stall, of what can be made without buying."""
    batch = Batch.objects.create(name="For the stall, from scraps")
    OrderLine.objects.bulk_create(
        OrderLine(
            batch=batch,
            position=position,
            pattern_id=row.wish.colourway.pattern_id,
            colourway=row.wish.colourway,
            size=row.wish.size,
            ending=row.wish.ending,
            quantity=row.count,
        )
        for position, row in enumerate(rows, start=1)
    )
    return batch


@transaction.atomic
def put_back_lines(*, batch: Batch, good: Sequence[GoodLine]) -> Batch:
    """Add lines that were removed a moment ago."""
    locked = Batch.objects.select_for_update().get(pk=batch.pk)
    append_lines(batch=locked, good=good)
    locked.revision += 1
    locked.save(update_fields=["revision"])
    return locked


def append_lines(*, batch: Batch, good: Sequence[GoodLine]) -> None:
    last = batch.lines.aggregate(last=Max("position"))["last"] or 0
    OrderLine.objects.bulk_create(
        OrderLine(batch=batch, position=last + offset, **line_values(line))
        for offset, line in enumerate(good, start=1)
    )


def _next_revision(batch: Batch, revision: int) -> Batch:
    locked = Batch.objects.select_for_update().get(pk=batch.pk)
    if locked.revision != revision:
        raise BatchChanged(
            "These orders were changed in another window since you opened them. "
            "Your rows are still here: look them through and save again."
        )
    locked.revision += 1
    locked.save(update_fields=["revision"])
    return locked


@transaction.atomic
def correct_draft(*, draft: OrderDraft, posted: Mapping[str, str]) -> OrderDraft:
    """Correct the rows as they are now, not as they were when the page was opened."""
    locked = OrderDraft.objects.select_for_update().filter(pk=draft.pk).first()
    if locked is None:
        raise BatchChanged("That list was added or put away in another window.")
    locked.rows = corrected(locked, posted)
    locked.save(update_fields=["rows"])
    return locked


@transaction.atomic
def confirm_draft(
    *, draft: OrderDraft, good: Sequence[GoodLine], waiting: Sequence[dict[str, Any]]
) -> Batch:
    """Add the good rows of a list, all or none; rows that wait stay in the draft."""
    locked = OrderDraft.objects.select_for_update().filter(pk=draft.pk).first()
    if locked is None or locked.rows != draft.rows:
        raise BatchChanged("That list was added or changed in another window.")
    batch = Batch.objects.select_for_update().get(pk=draft.batch_id)
    append_lines(batch=batch, good=good)
    batch.revision += 1
    batch.save(update_fields=["revision"])
    if waiting:
        draft.rows = list(waiting)
        draft.notices = []
        draft.save(update_fields=["rows", "notices"])
    else:
        draft.delete()
    return batch


def make_plan(*, batch: Batch, user: Any) -> Plan:
    """Work out a plan outside any transaction, then store it in one."""
    return store_plan(snapshot=work_out_batch(batch=batch), batch=batch, user=user)


def work_out_batch(
    *, batch: Batch, watcher: Watcher | None = None, choice: Choice | None = None
) -> Snapshot:
    """The plan of a batch as it stands, not yet saved; its number is given when it is."""
    workshop = Workshop.current()
    if workshop is None:
        raise PlanError("Start a workshop first.")
    return work_out_plan(
        lines=list(batch.lines.for_grid()),
        workshop=workshop,
        batch_name=batch.name,
        market_date=batch.market_date,
        plan_number=1,
        today=timezone.localdate(),
        watcher=watcher,
        choice=choice,
    )


@transaction.atomic
def store_plan(*, snapshot: Snapshot, batch: Batch, user: Any) -> Plan:
    """Save a plan under the next number of its batch: every row of it, or none."""
    Batch.objects.select_for_update().get(pk=batch.pk)
    last = batch.plans.aggregate(last=Max("number"))["last"] or 0
    plan = store_snapshot(replace(snapshot, plan_number=last + 1), batch=batch, user=user)
    keys = {kind.pattern_key for kind in snapshot.kinds if kind.pattern_key is not None}
    note_planned(patterns=keys, on=snapshot.plan_date)
    return plan
