"""Ways to make a batch, compared in a real browser at both sizes and in both themes."""

import re
from collections.abc import Callable

import pytest
from playwright.sync_api import Page

from planner.models import Batch, Plan
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_put_up,
    make_ready_workshop,
)

OpenPage = Callable[..., Page]


@pytest.fixture
def ordered(transactional_db: None) -> Batch:
    make_ready_workshop()
    make_put_up("cone", supplier="Harbour Row", length_mm=50_000, price="9.00")
    batch = make_batch()
    make_order(batch, make_colourway(make_pattern("Wave"), "Dawn"), quantity=3)
    return batch


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", [360, 1280])
def test_ways_are_compared_and_one_is_planned_by_keyboard(
    new_page: OpenPage,
    maker: object,
    ordered: Batch,
    axe: Callable[[Page], None],
    width: int,
    scheme: str,
) -> None:
    page = new_page({"width": width, "height": 800}, user=maker, color_scheme=scheme)
    page.goto(f"/orders/{ordered.pk}/")
    page.get_by_role("link", name="Compare before you buy").click()
    page.get_by_role("button", name=re.compile(r"Plan it so ?, All from Harbour Row")).wait_for()
    page.get_by_text("No shade that would be bought").wait_for()
    axe(page)
    page.get_by_label("Start").focus()
    page.get_by_label("Start").select_option("folded")
    page.get_by_role("button", name="Work it out").press("Enter")
    plan_it = page.get_by_role("button", name=re.compile(r"Plan it so ?, Folded start")).first
    plan_it.press("Enter")
    page.get_by_text("Made another way than ordered: folded start").wait_for()
    assert Plan.objects.get().choice["choice"] == {"start": "folded"}


def test_ways_without_javascript(new_page: OpenPage, maker: object, ordered: Batch) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    page.goto(f"/orders/{ordered.pk}/choices/")
    page.get_by_role("row", name="Folded start").get_by_role("link", name="Work it out").click()
    page.get_by_role("button", name=re.compile(r"Plan it so ?, Folded start")).click()
    page.get_by_text("Made another way than ordered: folded start").wait_for()
