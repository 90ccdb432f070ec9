"""Reading a pattern: the chart, the rows and the card follow the choice on the page."""

from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, expect

from patterns.actions import load_defaults
from patterns.models import KnottedLength
from tests.browser.conftest import DESK, PHONE, OpenPage
from tests.factories import make_colourway, make_grid_pattern, make_pattern, make_workshop

pytestmark = pytest.mark.django_db(transaction=True)


def test_reading_follows_the_choice_of_a_size(new_page: OpenPage, maker: User) -> None:
    make_workshop()
    load_defaults()
    pattern = make_pattern()
    make_colourway(pattern)
    page = new_page(DESK, user=maker)
    page.goto(reverse("pattern_detail", args=[pattern.pk]))
    reading = page.locator("#reading")
    first = reading.locator("p").first.inner_text()
    card = reading.get_by_role("link", name="A5").get_attribute("href")
    page.get_by_label("Size").select_option(index=0)
    expect(reading.locator("p").first).not_to_have_text(first)
    assert page.locator("#reading").count() == 1
    assert reading.get_by_role("link", name="A5").get_attribute("href") != card


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_charts_and_the_choice_of_a_card_are_accessible(
    new_page: OpenPage,
    maker: User,
    axe: Callable[[Page], None],
    viewport: dict[str, int],
    theme: str,
) -> None:
    make_workshop()
    load_defaults()
    patterns = [make_pattern(), make_grid_pattern(carry="cut")]
    page = new_page(viewport, user=maker, color_scheme=theme)
    for pattern in patterns:
        page.goto(reverse("pattern_detail", args=[pattern.pk]))
        chart = page.get_by_role("img", name=f"Working chart of {pattern.name}")
        expect(chart).to_be_visible()
        page.get_by_role("region", name="The working chart").focus()
        assert page.evaluate("document.documentElement.scrollWidth") <= viewport["width"]
        axe(page)
    KnottedLength.objects.all().delete()
    # A refusal is an answer with a page, whose status the browser notes as an error.
    context = page.context
    page.close()
    asked = context.new_page()
    asked.goto(reverse("knotting_card", args=[patterns[0].pk]))
    expect(asked.get_by_text("has no knotted length with")).to_be_visible()
    axe(asked)
