"""Every write of a plan's run: one at a time for a batch, and its plan saved whole or not at all."""

from collections.abc import Mapping
from typing import Any

from django.db import transaction

from planner.actions import store_plan
from planner.models import Batch, Plan, PlanRun
from planner.planning.snapshot import Snapshot

LOST = "Nothing was heard of it any more: perhaps the workshop was closed. Nothing was saved."
LONGEST_MESSAGE = 500


class RunLost(RuntimeError):
    """The run was given up in the meantime: what it found must not be saved."""


@transaction.atomic
def start_run(
    *, batch: Batch, user: Any, choice: Mapping[str, Any] | None = None
) -> tuple[PlanRun, bool]:
    """Return the batch's run that is under way, or a new one; the bool tells which."""
    Batch.objects.select_for_update().get(pk=batch.pk)
    under_way = PlanRun.objects.under_way().filter(batch=batch).first()
    if under_way is not None:
        return under_way, False
    running = PlanRun.objects.filter(batch=batch, status=PlanRun.Status.RUNNING)
    running.update(status=PlanRun.Status.FAILED, message=LOST)
    return PlanRun.objects.create(batch=batch, created_by=user, choice=dict(choice or {})), True


@transaction.atomic
def finish_run(*, run: PlanRun, snapshot: Snapshot) -> Plan:
    """Save the plan and close its run: both, or neither."""
    plan = store_plan(snapshot=snapshot, batch=run.batch, user=run.created_by)
    running = PlanRun.objects.filter(pk=run.pk, status=PlanRun.Status.RUNNING)
    if not running.update(status=PlanRun.Status.DONE, plan=plan):
        raise RunLost
    return plan


def fail_run(*, run: PlanRun, message: str) -> None:
    shortened = (
        message if len(message) <= LONGEST_MESSAGE else message[: LONGEST_MESSAGE - 1] + "\u2026"
    )
    running = PlanRun.objects.filter(pk=run.pk, status=PlanRun.Status.RUNNING)
    running.update(status=PlanRun.Status.FAILED, message=shortened)


def stop_run(*, run: PlanRun) -> None:
    PlanRun.objects.filter(pk=run.pk, status=PlanRun.Status.RUNNING).update(stop_wanted=True)
