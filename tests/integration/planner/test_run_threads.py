"""Runs in real threads with connections of their own, on a database that all of them share."""

import threading
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from django.contrib.auth.models import User
from django.db import connection, connections
from django.test import Client
from django.urls import reverse

from planner.cutting import LotResult
from planner.models import Batch, Plan, PlanRun
from planner.planning import netting
from planner.plans import runs
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_ready_workshop,
)

PATIENCE_S = 20.0


@pytest.fixture
def shared_database(transactional_db, tmp_path: Path) -> Iterator[None]:
    """SQLite in memory knows no waiting between connections: a file does, as for a maker."""
    if connection.vendor != "sqlite":
        yield
        return
    in_memory = connections["default"]
    file = str(tmp_path / "threads.sqlite3")
    with in_memory.cursor() as cursor:
        cursor.execute("VACUUM INTO %s", [file])
    name = in_memory.settings_dict["NAME"]
    in_memory.settings_dict["NAME"] = file
    connections["default"] = connections.create_connection("default")
    yield
    connections["default"].close()
    in_memory.settings_dict["NAME"] = name
    connections["default"] = in_memory


@pytest.fixture
def ordered(shared_database, settings, monkeypatch: pytest.MonkeyPatch) -> Batch:
    """Two bracelets in three shades; every look at the run is a real one."""
    settings.PLANS_IN_THREADS = True
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)
    make_ready_workshop()
    batch = make_batch()
    make_order(batch, make_colourway(make_pattern("Wave"), "Dawn"), quantity=2)
    return batch


@pytest.fixture
def maker(shared_database) -> User:
    return User.objects.create(username="owner")


class Gate:
    """Holds the solver at a shade until it is opened; remembers the thread's connection."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch, nth: int) -> None:
        self.nth = nth
        self.reached, self.opened = threading.Event(), threading.Event()
        self.connection: Any = None
        self.calls = 0
        self.solve = netting.solve_with_lots
        monkeypatch.setattr(netting, "solve_with_lots", self)

    def __call__(self, *args: Any, **kwargs: Any) -> LotResult:
        self.calls += 1
        self.connection = connections["default"]
        if self.calls == self.nth:
            self.reached.set()
            assert self.opened.wait(PATIENCE_S)
        return self.solve(*args, **kwargs)


def signed_in(maker: User) -> Client:
    client = Client()
    client.force_login(maker, "django.contrib.auth.backends.ModelBackend")
    return client


def wait_for_end(run: PlanRun) -> None:
    until = time.monotonic() + PATIENCE_S
    while time.monotonic() < until:
        run.refresh_from_db()
        if run.status != PlanRun.Status.RUNNING and not _threads():
            return
        time.sleep(0.02)
    raise AssertionError(f"run {run.pk} did not end")


def _threads() -> list[threading.Thread]:
    return [each for each in threading.enumerate() if each.name.startswith("plan run")]


def test_small_batch_is_done_within_the_request(ordered: Batch, maker: User) -> None:
    answer = signed_in(maker).post(reverse("plan_new", args=[ordered.pk]))
    plan = Plan.objects.get()
    assert answer["Location"] == reverse("plan_detail", args=[plan.pk])
    assert (plan.status, plan.created_by) == ("optimal", maker)


def test_long_run_is_shown_stopped_and_saved(
    ordered: Batch, maker: User, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(runs, "WAIT_S", 0.0)
    gate, page = Gate(monkeypatch, 2), signed_in(maker)
    answer = page.post(reverse("plan_new", args=[ordered.pk]))
    run = PlanRun.objects.get()
    assert answer["Location"] == reverse("run_detail", args=[run.pk])
    assert gate.reached.wait(PATIENCE_S)
    assert "Shade 2 of 3" in page.get(answer["Location"]).content.decode()
    page.post(reverse("run_stop", args=[run.pk]))
    assert "It stops as soon as it can" in page.get(answer["Location"]).content.decode()
    assert not Plan.objects.exists()
    gate.opened.set()
    wait_for_end(run)
    plan = Plan.objects.get()
    assert page.get(answer["Location"])["Location"] == reverse("plan_detail", args=[plan.pk])
    assert gate.calls == 2
    assert [s.status for s in plan.shades.order_by("pk")].count("stopped") == 1


def test_thread_leaves_no_connection_open(
    ordered: Batch, maker: User, monkeypatch: pytest.MonkeyPatch
) -> None:
    gate = Gate(monkeypatch, 99)
    signed_in(maker).post(reverse("plan_new", args=[ordered.pk]))
    wait_for_end(PlanRun.objects.get())
    assert gate.connection is not connections["default"]
    assert gate.connection.connection is None


def test_failing_thread_leaves_its_reason_and_no_connection(
    ordered: Batch, maker: User, monkeypatch: pytest.MonkeyPatch
) -> None:
    gate = Gate(monkeypatch, 99)

    def fail(**kwargs: Any) -> Plan:
        raise RuntimeError("no more room")

    monkeypatch.setattr(runs, "finish_run", fail)
    answer = signed_in(maker).post(reverse("plan_new", args=[ordered.pk]), follow=True)
    assert "nothing was saved" in answer.content.decode()
    wait_for_end(PlanRun.objects.get())
    assert gate.connection.connection is None
    assert not Plan.objects.exists()


def test_two_at_the_same_moment_make_one_run(
    ordered: Batch, maker: User, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(runs, "WAIT_S", 0.0)
    gate = Gate(monkeypatch, 1)
    clients = [signed_in(maker) for _ in range(4)]
    together, led_to = threading.Barrier(len(clients)), []

    def press(client: Client) -> None:
        together.wait(PATIENCE_S)
        try:
            led_to.append(client.post(reverse("plan_new", args=[ordered.pk]))["Location"])
        finally:
            connections.close_all()

    hands = [threading.Thread(target=press, args=[client]) for client in clients]
    for hand in hands:
        hand.start()
    for hand in hands:
        hand.join(PATIENCE_S)
    run = PlanRun.objects.get()
    assert led_to == [reverse("run_detail", args=[run.pk])] * len(clients)
    gate.opened.set()
    wait_for_end(run)
    assert Plan.objects.count() == 1
