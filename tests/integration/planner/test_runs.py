"""A plan as it is worked out: told, stopped, lost, begun twice; nothing is half-saved."""

from datetime import timedelta
from typing import Any

import pytest
from django.contrib.auth.models import User
from django.db import OperationalError
from django.db.models import QuerySet
from django.test import Client
from django.urls import reverse
from django.utils import timezone

from planner import actions_runs
from planner.actions import work_out_batch
from planner.actions_runs import finish_run, start_run
from planner.cutting import LotResult
from planner.models import (
    Batch,
    Plan,
    PlanBracelet,
    PlanKind,
    PlanPiece,
    PlanPurchase,
    PlanRun,
    PlanShade,
    PlanStock,
)
from planner.planning import netting
from planner.plans import runs
from planner.plans.runs import RunWatcher, carry_out
from tests.factories import make_batch, make_order

ROWS_OF_A_PLAN = (Plan, PlanKind, PlanBracelet, PlanShade, PlanPurchase, PlanStock, PlanPiece)


@pytest.fixture
def ordered(colourway, batch: Batch) -> Batch:
    """Two bracelets in three shades."""
    make_order(batch, colourway, quantity=2)
    return batch


def make_run(batch: Batch, **values: Any) -> PlanRun:
    silent = values.pop("silent", timedelta(0))
    run = PlanRun.objects.create(batch=batch, **values)
    PlanRun.objects.filter(pk=run.pk).update(heard_at=timezone.now() - silent)
    run.refresh_from_db()
    return run


def text_of(page: Client, address: str, **kwargs: Any) -> str:
    answer = page.get(address, **kwargs)
    assert answer.status_code == 200
    return " ".join(answer.content.decode().split())


def begin_at_shade(monkeypatch: pytest.MonkeyPatch, nth: int, elsewhere: Any) -> None:
    """Let something happen when the n-th shade is given to the solver."""
    solve, calls = netting.solve_with_lots, []

    def solving(*args: Any, **kwargs: Any) -> LotResult:
        calls.append(1)
        if len(calls) == nth:
            elsewhere()
        return solve(*args, **kwargs)

    monkeypatch.setattr(netting, "solve_with_lots", solving)
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)


def test_plan_new_of_a_small_batch_leads_to_its_plan(page: Client, ordered: Batch) -> None:
    answer = page.post(reverse("plan_new", args=[ordered.pk]))
    plan = Plan.objects.get()
    assert answer["Location"] == reverse("plan_detail", args=[plan.pk])
    run = PlanRun.objects.get()
    assert (run.status, run.plan, run.shades_done, run.shades_total) == ("done", plan, 3, 3)


def test_run_tells_which_shade_it_is_at(ordered: Batch, monkeypatch: pytest.MonkeyPatch) -> None:
    told: list[tuple[int, int, str]] = []

    def look() -> None:
        run = PlanRun.objects.get()
        told.append((run.shades_done, run.shades_total, run.doing))

    begin_at_shade(monkeypatch, 2, look)
    run, _ = start_run(batch=ordered, user=None)
    carry_out(run.pk)
    second = PlanShade.objects.order_by("pk")[1]
    assert told == [(1, 3, f"{second.code} {second.name}")]


def test_run_stopped_in_the_middle_keeps_and_saves_what_is_done(
    page: Client, ordered: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    def stop() -> None:
        address = reverse("run_stop", args=[PlanRun.objects.get().pk])
        assert page.post(address).status_code == 302

    begin_at_shade(monkeypatch, 2, stop)
    run, _ = start_run(batch=ordered, user=None)
    carry_out(run.pk)
    run.refresh_from_db()
    plan = Plan.objects.get()
    assert (run.status, run.plan, plan.status) == ("done", plan, "feasible")
    statuses = {shade.status for shade in plan.shades.all()}
    assert "stopped" in statuses
    stopped = plan.shades.filter(status="stopped")
    assert stopped.count() == 1
    for shade in plan.shades.exclude(status="stopped"):
        assert not shade.pieces.filter(stock=None).exists()
    assert "1 of 3 shades was not worked out" in text_of(
        page, reverse("plan_detail", args=[plan.pk])
    )


def test_run_stopped_before_the_first_shade_saves_nothing(
    page: Client, ordered: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)
    run, _ = start_run(batch=ordered, user=None)
    page.post(reverse("run_stop", args=[run.pk]))
    carry_out(run.pk)
    assert not Plan.objects.exists()
    text = text_of(page, reverse("run_detail", args=[run.pk]))
    assert "Stopped before the first shade was done" in text
    assert "Work it out again" in text


@pytest.mark.parametrize("model", ROWS_OF_A_PLAN)
def test_nothing_is_stored_where_saving_fails_half_way(
    page: Client, ordered: Batch, monkeypatch: pytest.MonkeyPatch, model: Any
) -> None:
    """The disk fills up at each kind of row in turn."""
    name = "create" if model is Plan else "bulk_create"
    write = getattr(QuerySet, name)

    def fail(rows: Any, *args: Any, **kwargs: Any) -> Any:
        if rows.model is model:
            raise OperationalError("database or disk is full")
        return write(rows, *args, **kwargs)

    monkeypatch.setattr(QuerySet, name, fail)
    run, _ = start_run(batch=ordered, user=None)
    carry_out(run.pk)
    monkeypatch.undo()
    run.refresh_from_db()
    assert (run.status, run.plan) == ("failed", None), f"{model.__name__} was never written"
    assert "disk is full" not in run.message
    assert "nothing was saved" in run.message
    assert not any(rows.objects.exists() for rows in ROWS_OF_A_PLAN)
    page.post(reverse("plan_new", args=[ordered.pk]))
    assert Plan.objects.get().number == 1


def test_run_that_was_given_up_saves_nothing(
    ordered: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    """It was silent for long, another run was begun, and then it came back."""
    run, _ = start_run(batch=ordered, user=None)

    def begin_another() -> None:
        PlanRun.objects.update(heard_at=timezone.now() - timedelta(minutes=2))
        _, is_new = start_run(batch=ordered, user=None)
        assert is_new

    begin_at_shade(monkeypatch, 3, begin_another)
    carry_out(run.pk)
    assert not any(rows.objects.exists() for rows in ROWS_OF_A_PLAN)
    run.refresh_from_db()
    assert run.status == "failed"
    assert "Nothing was heard of it" in run.message


def test_second_run_of_a_batch_leads_to_the_first(page: Client, ordered: Batch) -> None:
    run = make_run(ordered)
    answer = page.post(reverse("plan_new", args=[ordered.pk]))
    assert answer["Location"] == reverse("run_detail", args=[run.pk])
    assert PlanRun.objects.count() == 1
    assert not Plan.objects.exists()


def test_runs_of_two_batches_do_not_meet(page: Client, ordered: Batch) -> None:
    make_run(make_batch("Winter fair"))
    page.post(reverse("plan_new", args=[ordered.pk]))
    assert Plan.objects.get().batch == ordered


def test_lost_run_says_so_and_can_be_begun_again(page: Client, ordered: Batch) -> None:
    run = make_run(ordered, silent=timedelta(minutes=3), shades_done=2, shades_total=3)
    address = reverse("run_detail", args=[run.pk])
    text = text_of(page, address)
    assert "Nothing has been heard of it for 3 minutes." in text.replace("\xa0", " ")
    assert "Work it out again" in text
    assert "See how far it is" not in text_of(page, reverse("batch_detail", args=[ordered.pk]))
    answer = page.post(reverse("plan_new", args=[ordered.pk]))
    assert answer["Location"] == reverse("plan_detail", args=[Plan.objects.get().pk])
    run.refresh_from_db()
    assert run.status == "failed"


def test_run_is_lost_after_a_minute_of_silence_and_not_before(ordered: Batch) -> None:
    assert not make_run(ordered, silent=timedelta(seconds=50)).is_lost
    assert make_run(ordered, silent=timedelta(seconds=70)).is_lost
    assert not make_run(ordered, silent=timedelta(seconds=70), status="done").is_lost


def test_batch_page_leads_to_the_run_under_way(page: Client, ordered: Batch) -> None:
    run = make_run(ordered)
    text = text_of(page, reverse("batch_detail", args=[ordered.pk]))
    assert reverse("run_detail", args=[run.pk]) in text


def test_progress_page_full_and_fragment(page: Client, ordered: Batch) -> None:
    run = make_run(ordered, shades_done=6, shades_total=60, doing="T01 <Ochre>")
    address = reverse("run_detail", args=[run.pk])
    whole = text_of(page, address)
    assert "<html" in whole
    assert "Shade 7 of 60: <bdi>T01 &lt;Ochre&gt;</bdi>" in whole
    assert '<progress aria-label="Shades done" max="60" value="6">' in whole
    assert "Stop, and keep the shades that are done" in whole
    assert f'<noscript><p><a href="{address}">' in whole
    part = text_of(page, address, headers={"HX-Request": "true"})
    assert "<html" not in part
    assert "Shade 7 of 60" in part


def test_progress_says_nothing_new_where_nothing_is(page: Client, ordered: Batch) -> None:
    run = make_run(ordered, shades_done=6, shades_total=60)
    address = reverse("run_detail", args=[run.pk])
    htmx = {"HX-Request": "true"}
    assert page.get(f"{address}?seen=6-60-0", headers=htmx).status_code == 204
    PlanRun.objects.update(shades_done=7)
    assert page.get(f"{address}?seen=6-60-0", headers=htmx).status_code == 200


@pytest.mark.parametrize(
    "change",
    [
        {"status": "failed", "message": "No thread."},
        {"status": "done"},
        {"heard_at": timezone.now() - timedelta(hours=1)},
    ],
)
def test_progress_loads_the_page_anew_at_the_end(
    page: Client, ordered: Batch, change: dict[str, Any]
) -> None:
    run = make_run(ordered)
    PlanRun.objects.update(**change)
    answer = page.get(reverse("run_detail", args=[run.pk]), headers={"HX-Request": "true"})
    assert answer["HX-Refresh"] == "true"


def test_run_page_of_a_finished_run_leads_to_its_plan(page: Client, ordered: Batch) -> None:
    page.post(reverse("plan_new", args=[ordered.pk]))
    run = PlanRun.objects.get()
    answer = page.get(reverse("run_detail", args=[run.pk]))
    assert answer["Location"] == reverse("plan_detail", args=[run.plan_id])
    answer = page.post(reverse("run_stop", args=[run.pk]))
    assert answer["Location"] == reverse("plan_detail", args=[run.plan_id])
    run.refresh_from_db()
    assert not run.stop_wanted
    Plan.objects.all().delete()
    assert "removed since" in text_of(page, reverse("run_detail", args=[run.pk]))


def test_failed_run_shows_its_reason_at_the_orders(page: Client, colourway, batch: Batch) -> None:
    answer = page.post(reverse("plan_new", args=[batch.pk]), follow=True)
    assert "no orders to plan yet" in answer.content.decode()
    assert PlanRun.objects.get().status == "failed"


def test_run_pages_refuse_what_is_not_theirs(page: Client, ordered: Batch, owner: User) -> None:
    run = make_run(ordered)
    detail, stop = (reverse(name, args=[run.pk]) for name in ("run_detail", "run_stop"))
    assert page.post(detail).status_code == 405
    assert page.get(stop).status_code == 405
    assert page.get(f"/runs/{run.pk + 1}/").status_code == 404
    assert page.post(f"/runs/{run.pk + 1}/stop/").status_code == 404
    assert page.get("/runs/99999999999999999999/").status_code == 404
    assert page.post("/runs/99999999999999999999/stop/").status_code == 404
    assert page.get(f"{detail}?seen={'x' * 3000}%00").status_code == 200
    stranger, strict = Client(), Client(enforce_csrf_checks=True)
    strict.force_login(owner, "django.contrib.auth.backends.ModelBackend")
    assert stranger.get(detail).status_code == 302
    assert stranger.post(stop).status_code == 302
    assert strict.post(stop).status_code == 403
    run.refresh_from_db()
    assert not run.stop_wanted


def test_watcher_writes_a_few_times_a_second_at_most(
    ordered: Batch, django_assert_num_queries
) -> None:
    now = 100.0
    watcher = RunWatcher(make_run(ordered).pk, clock=lambda: now)
    with django_assert_num_queries(0):
        for position in range(1, 1_000):
            watcher.shade_begins(position, 1_000, 1)
            watcher.stop_wanted()
    now += 0.31
    with django_assert_num_queries(3):
        for _ in range(1_000):
            watcher.stop_wanted()
    assert PlanRun.objects.get().shades_done == 998


def test_watcher_survives_a_database_that_is_busy(
    ordered: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)
    watcher = RunWatcher(make_run(ordered).pk)

    def busy(*args: Any, **kwargs: Any) -> None:
        raise OperationalError("database is locked")

    monkeypatch.setattr("planner.models.PlanRunQuerySet.update", busy, raising=False)
    watcher.shade_begins(1, 3, 1)
    assert not watcher.stop_wanted()
    watcher.saving_begins()


def test_watcher_stops_where_its_run_is_gone(ordered: Batch, monkeypatch) -> None:
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)
    watcher = RunWatcher(make_run(ordered).pk)
    assert not watcher.stop_wanted()
    PlanRun.objects.all().delete()
    assert watcher.stop_wanted()


def test_long_reason_is_shortened(ordered: Batch) -> None:
    run = make_run(ordered)
    actions_runs.fail_run(run=run, message="x" * 2_000)
    run.refresh_from_db()
    assert len(run.message) == 500
    assert run.message.endswith("…")


def test_run_pages_query_count_is_flat(page: Client, colourway, django_assert_max_num_queries):
    for quantity in (1, 30):
        batch = make_batch(f"Of {quantity}")
        make_order(batch, colourway, quantity=quantity)
        run = make_run(batch)
        with django_assert_max_num_queries(4):
            page.get(reverse("run_detail", args=[run.pk]))


def test_finish_run_needs_its_run(ordered: Batch) -> None:
    run = make_run(ordered, status="failed")
    with pytest.raises(actions_runs.RunLost):
        finish_run(run=run, snapshot=work_out_batch(batch=ordered))
    assert not Plan.objects.exists()
