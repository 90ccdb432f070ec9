"""What a pattern does, its variants and a comparison, in a real browser."""

import re
from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, expect

from patterns.actions import change_pattern, load_defaults
from patterns.models import Pattern
from tests.browser.conftest import DESK, PHONE, OpenPage
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_pattern,
    make_workshop,
    pattern_text,
)

KEEP_EVEN = re.compile("Keep it as a new pattern.*even")
pytestmark = pytest.mark.django_db(transaction=True)
# Strand 3 ties in every row; where the two strands of a colour meet, either may tie.
GREEDY = {"strands": "A A B B", "rows": ("fb fb", "bf")}


@pytest.fixture
def pattern(maker: User) -> Pattern:
    make_workshop()
    load_defaults()
    pattern = make_pattern("Harbour stripes", **GREEDY)
    make_colourway(pattern, "Dusk")
    return pattern


def page_of(pattern: Pattern) -> str:
    return reverse("pattern_detail", args=[pattern.pk])


def test_a_variant_is_found_looked_at_and_kept(signed_in_page: Page, pattern: Pattern) -> None:
    page = signed_in_page
    page.goto(page_of(pattern))
    page.get_by_role("link", name="Can the greediest strand be spared?").click()
    expect(page.get_by_text("The picture is the same.").first).to_be_visible()
    assert page.url.endswith(page_of(pattern)), "the page stays"
    page.get_by_text("knots that changed").or_(page.get_by_text("knot that changed")).first.click()
    expect(page.get_by_text("instead of").first).to_be_visible()
    page.get_by_role("button", name=KEEP_EVEN).click()
    expect(page.get_by_text("Harbour stripes, even is in your library")).to_be_visible()
    kept = Pattern.objects.get(name="Harbour stripes, even")
    assert page.url.endswith(page_of(kept))
    assert [way.name for way in kept.colourways.all()] == ["Dusk"]


def test_variants_are_a_page_of_their_own_without_scripts(
    new_page: OpenPage, maker: User, pattern: Pattern
) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    page.goto(page_of(pattern))
    page.get_by_role("link", name="Can the greediest strand be spared?").click()
    expect(page.get_by_role("heading", level=1)).to_have_text(
        "How can Harbour stripes use its thread more evenly?"
    )
    page.get_by_role("button", name=KEEP_EVEN).click()
    expect(page.get_by_text("is in your library")).to_be_visible()


def test_numbers_open_by_keyboard(signed_in_page: Page, pattern: Pattern) -> None:
    signed_in_page.goto(page_of(pattern))
    summary = signed_in_page.locator(".doing summary", has_text="strand 3, 100 %")
    summary.focus()
    signed_in_page.keyboard.press("Enter")
    expect(
        signed_in_page.get_by_text("110 tied / (110 tied + 0 as base = 110) = 100 %")
    ).to_be_visible()


def test_another_pattern_is_chosen_and_compared(signed_in_phone: Page, pattern: Pattern) -> None:
    make_pattern("Ferry stripe", strands="A A B B", rows=("fb b", "bf"))
    page = signed_in_phone
    page.goto(page_of(pattern))
    page.get_by_label("Compare with another pattern").select_option("Ferry stripe")
    page.get_by_role("button", name="Compare").click()
    expect(page.get_by_text("1 row has other knots.")).to_be_visible()
    expect(page.locator("mark")).to_have_text(["fb", "b"])


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_pages_are_accessible(
    new_page: OpenPage,
    maker: User,
    axe: Callable[[Page], None],
    pattern: Pattern,
    viewport: dict[str, int],
    theme: str,
) -> None:
    text = pattern_text("Harbour stripes", strands="A A B B", rows=("fb fb", "bf", "f b", "f"))
    change_pattern(pattern=pattern, text=text)
    grid = make_grid_pattern()
    compare = reverse("pattern_compare")
    page = new_page(viewport, user=maker, color_scheme=theme)
    for address in (
        page_of(pattern),
        page_of(grid),
        reverse("pattern_variants", args=[pattern.pk]),
        reverse("pattern_variants", args=[grid.pk]),
        f"{compare}?a={pattern.pk}&a_version=1&b={pattern.pk}",
        f"{compare}?a={pattern.pk}&b={grid.pk}",
        compare,
    ):
        page.goto(address)
        if address == page_of(pattern):
            page.locator("#variants a").click()
            page.locator("#variants h3").wait_for()
        page.evaluate("for (const more of document.querySelectorAll('details')) more.open = true")
        axe(page)
