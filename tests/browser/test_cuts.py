"""The cuts of a shade, skein by skein and length by length, where they are read: at the bench."""

from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, expect

from planner.actions import make_plan
from planner.models import Batch, PlanShade
from planner.sample.load import load_sample
from tests.browser.conftest import DESK, PHONE, OpenPage


@pytest.fixture
def shade(maker: User) -> PlanShade:
    """The shade with most pieces of so many bracelets that skeins are cut alike."""
    load_sample()
    batch = Batch.objects.get(name="Saturday's market")
    for line in batch.lines.all()[:8]:
        line.quantity *= 8
        line.save()
    plan = make_plan(batch=batch, user=None)
    return max(plan.shades.all(), key=lambda shade: shade.piece_count)


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_both_ways_of_cutting(
    new_page: OpenPage,
    maker: User,
    shade: PlanShade,
    axe: Callable[[Page], None],
    viewport: dict[str, int],
    theme: str,
) -> None:
    page = new_page(viewport, user=maker, color_scheme=theme)
    page.goto(reverse("plan_shade", args=[shade.plan_id, shade.pk]))
    ways = page.get_by_role("navigation", name="Ways to cut")
    expect(ways.get_by_text("Skein by skein")).to_have_attribute("aria-current", "true")
    expect(page.get_by_text("together, from each:").first).to_be_visible()
    for summary in page.locator(".stock summary").all():
        summary.click()
    axe(page)
    ways.get_by_role("link", name="Length by length").press("Enter")
    expect(page.get_by_role("heading", name="Set the board to").first).to_be_visible()
    expect(ways.get_by_text("Length by length")).to_have_attribute("aria-current", "true")
    axe(page)


def test_shade_opened_on_its_plan_leads_to_lengths(
    new_page: OpenPage, maker: User, shade: PlanShade, axe: Callable[[Page], None]
) -> None:
    page = new_page(PHONE, user=maker)
    page.goto(reverse("plan_detail", args=[shade.plan_id]))
    page.get_by_role("link", name=f"{shade.code} {shade.name}").click()
    expect(page.get_by_role("navigation", name="Ways to cut")).to_be_visible()
    axe(page)
    page.get_by_role("link", name="Length by length").click()
    expect(page.get_by_role("heading", name="Set the board to").first).to_be_visible()
