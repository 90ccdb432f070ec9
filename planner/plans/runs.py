"""A plan worked out beside the pages: how far it is stands in a row that every process can read."""

import logging
import time
from collections.abc import Callable
from threading import Thread

from django.conf import settings
from django.db import Error, connections
from django.utils import timezone

from inventory.models import Shade
from planner.actions import work_out_batch
from planner.actions_runs import RunLost, fail_run, finish_run
from planner.models import PlanRun
from planner.planning.choices import read_choice
from planner.plans.work_out import PlanError

logger = logging.getLogger(__name__)

WRITE_EVERY_S = 0.3
# A plan of a stall's size is done within it, and the maker never sees a page in between.
WAIT_S = 2.0
SAVING = "saving the plan"
BROKEN = (
    "An error in the program kept this plan from being made, and nothing was saved; the log says "
    "which. Your orders and your shelf are as they were."
)


class RunWatcher:
    """Writes how far a run is, and reads whether to stop, a few times a second at most.

    It never raises: a row that cannot be written just now is no reason to lose a plan.
    """

    def __init__(self, pk: int, clock: Callable[[], float] = time.monotonic) -> None:
        self._pk = pk
        self._clock = clock
        self._looked = clock()
        self._stop = False
        self._done = self._total = self._shade = 0

    def shade_begins(self, position: int, total: int, shade: int) -> None:
        self._done, self._total, self._shade = position - 1, total, shade
        self._look_now_and_then()

    def stop_wanted(self) -> bool:
        if not self._stop:
            self._look_now_and_then()
        return self._stop

    def saving_begins(self) -> None:
        """From here on the row is not heard of until all is stored."""
        self._tell(self._done if self._stop else self._total, SAVING)

    def _look_now_and_then(self) -> None:
        if self._clock() - self._looked < WRITE_EVERY_S:
            return
        self._looked = self._clock()
        self._tell(self._done)

    def _tell(self, done: int, doing: str = "") -> None:
        running = PlanRun.objects.filter(pk=self._pk, status=PlanRun.Status.RUNNING)
        try:
            running.update(
                shades_done=done,
                shades_total=self._total,
                doing=doing or self._name_of_shade(),
                heard_at=timezone.now(),
            )
            # A row that is gone, or was given up, is no longer waited for.
            self._stop = running.values_list("stop_wanted", flat=True).first() is not False
        except Error:
            logger.warning("The progress of run %s could not be written.", self._pk, exc_info=True)

    def _name_of_shade(self) -> str:
        shade = Shade.objects.filter(pk=self._shade).first()
        return str(shade)[:120] if shade else ""


def begin(run: PlanRun) -> None:
    """Carry a run out in a thread of its own, and wait for it a little."""
    if not settings.PLANS_IN_THREADS:
        carry_out(run.pk)
        return
    # A daemon: closing the workshop must not wait for a plan; the run is then found lost.
    thread = Thread(target=_in_thread, args=[run.pk], name=f"plan run {run.pk}", daemon=True)
    thread.start()
    thread.join(WAIT_S)


def _in_thread(pk: int) -> None:
    try:
        carry_out(pk)
    finally:
        connections.close_all()


def carry_out(pk: int) -> None:
    """Work out the plan of a run and save it, or say in the run why there is none."""
    run = PlanRun.objects.select_related("batch", "created_by").get(pk=pk)
    watcher = RunWatcher(pk)
    try:
        choice = read_choice(run.choice)
        snapshot = work_out_batch(batch=run.batch, watcher=watcher, choice=choice)
        watcher.saving_begins()
        finish_run(run=run, snapshot=snapshot)
    except PlanError as reason:
        fail_run(run=run, message=str(reason))
    except RunLost:
        logger.warning("Run %s was given up before its plan was saved.", pk)
    except Exception:
        logger.exception("Run %s failed.", pk)
        fail_run(run=run, message=BROKEN)
