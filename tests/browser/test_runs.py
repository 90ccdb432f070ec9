"""The page of a plan that is being worked out: it moves by itself, can be stopped, and ends."""

import re
import threading
import time
from collections.abc import Callable, Iterator
from typing import Any

import pytest
from django.contrib.auth.models import User
from playwright.sync_api import Page, expect

from planner.cutting import LotResult
from planner.models import Batch
from planner.planning import netting
from planner.plans import runs
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_ready_workshop,
    make_shade,
)

pytestmark = pytest.mark.django_db(transaction=True)
PATIENCE_S = 20.0


@pytest.fixture
def batch(transactional_db, settings, monkeypatch: pytest.MonkeyPatch) -> Batch:
    settings.PLANS_IN_THREADS = True
    monkeypatch.setattr(runs, "WAIT_S", 0.0)
    monkeypatch.setattr(runs, "WRITE_EVERY_S", 0.0)
    make_ready_workshop()
    names = ("Ochre", "Net green", "Tarred rope")
    shades = {slot: make_shade(f"T{slot}", name) for slot, name in zip("ABC", names, strict=True)}
    batch = make_batch()
    make_order(batch, make_colourway(make_pattern("Wave"), "Dawn", **shades), quantity=2)
    return batch


@pytest.fixture
def next_shade(monkeypatch: pytest.MonkeyPatch) -> Iterator[Callable[[], None]]:
    """Holds the solver at every shade; a call lets one through."""
    solve, gate = netting.solve_with_lots, threading.Semaphore(0)

    def held(*args: Any, **kwargs: Any) -> LotResult:
        assert gate.acquire(timeout=PATIENCE_S)
        return solve(*args, **kwargs)

    monkeypatch.setattr(netting, "solve_with_lots", held)
    yield gate.release
    for _ in range(99):
        gate.release()
    for thread in threading.enumerate():
        if thread.name.startswith("plan run"):
            thread.join(PATIENCE_S)


def begin(page: Page, batch: Batch) -> None:
    page.goto(f"/orders/{batch.pk}/")
    page.get_by_role("button", name="Make the plan").click()
    expect(page.get_by_role("heading", level=1)).to_contain_text("How far is the plan")


def test_progress_moves_by_itself_and_ends_at_the_plan(
    signed_in_page: Page, batch: Batch, next_shade: Callable[[], None], axe: Any
) -> None:
    page = signed_in_page
    begin(page, batch)
    expect(page.get_by_text("Shade 1 of 3: TA Ochre")).to_be_visible()
    axe(page)
    next_shade()
    expect(page.get_by_text("Shade 2 of 3: TB Net green")).to_be_visible()
    expect(page.get_by_role("progressbar", name="Shades done")).to_have_attribute("value", "1")
    next_shade()
    next_shade()
    page.wait_for_url(re.compile("/plans/"))
    expect(page.get_by_text("Cheaper is impossible.")).to_be_visible()


def test_progress_stopped_by_keyboard_keeps_what_is_done(
    signed_in_phone: Page, batch: Batch, next_shade: Callable[[], None], axe: Any
) -> None:
    page = signed_in_phone
    begin(page, batch)
    next_shade()
    expect(page.get_by_text("Shade 2 of 3")).to_be_visible()
    stop = page.get_by_role("button", name="Stop, and keep the shades that are done")
    assert (stop.bounding_box() or {})["height"] >= 44
    stop.focus()
    page.keyboard.press("Enter")
    expect(page.get_by_text("It stops as soon as it can")).to_be_visible()
    axe(page)
    next_shade()
    page.wait_for_url(re.compile("/plans/"))
    expect(page.get_by_text("1 of 3 shades was not worked out")).to_be_visible()
    axe(page)


def test_progress_without_scripts_has_a_link_to_look_again(
    new_page: Any, maker: User, batch: Batch, next_shade: Callable[[], None]
) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    begin(page, batch)
    next_shade()
    look_until(page, lambda: page.get_by_text("Shade 2 of 3").is_visible())
    next_shade()
    next_shade()
    look_until(page, lambda: "/plans/" in page.url)


def look_until(page: Page, is_so: Callable[[], bool]) -> None:
    """Without scripts the page is as it was when it was loaded."""
    until = time.monotonic() + PATIENCE_S
    while not is_so():
        assert time.monotonic() < until
        page.get_by_role("link", name="Look how far it is").click()


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", [360, 1280])
def test_progress_and_its_ends_are_readable(
    new_page: Any,
    maker: User,
    batch: Batch,
    next_shade: Callable[[], None],
    axe: Any,
    scheme: str,
    width: int,
) -> None:
    page = new_page({"width": width, "height": 800}, user=maker, color_scheme=scheme)
    begin(page, batch)
    next_shade()
    expect(page.get_by_text("Shade 2 of 3")).to_be_visible()
    axe(page)
    page.goto(f"/orders/{batch.pk}/")
    page.get_by_role("link", name="See how far it is").click()
    run = batch.runs.get()
    run.status, run.message = "failed", "None of the orders can be planned."
    run.save()
    expect(page.get_by_role("heading", level=1)).to_contain_text("Why is there no plan")
    axe(page)
