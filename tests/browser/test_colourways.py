"""Choosing the shades of a colourway, in a real browser."""

from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, Route, expect

from inventory.models import Shade
from patterns.actions import load_defaults
from patterns.models import Colourway, Pattern
from tests.browser.conftest import DESK, PHONE, OpenPage
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_pattern,
    make_shade,
    make_workshop,
    put_thread,
)

pytestmark = pytest.mark.django_db(transaction=True)
ALIKE = "look alike to people with red-green colour blindness."


@pytest.fixture
def pattern(maker: User) -> Pattern:
    make_workshop()
    load_defaults()
    return make_pattern("Ferry stripe")


@pytest.fixture
def shades(maker: User) -> dict[str, Shade]:
    shades = {
        "R1": make_shade("R1", "Madder", "#aa1122"),
        "R2": make_shade("R2", "Rust", "#b01a22"),
        "G1": make_shade("G1", "Moss", "#2e7d32"),
        "W1": make_shade("W1", "Chalk", "#f4f1e8"),
    }
    for code in ("R2", "G1", "W1"):
        put_thread(shades[code], 8_000)
    return shades


def new(pattern: Pattern) -> str:
    return reverse("colourway_new", args=[pattern.pk])


def choose(page: Page, slot: str, words: str) -> None:
    page.locator(f"#id_slot_{slot}").select_option(label=words)


def test_choosing_warns_at_once_and_a_near_shade_is_taken(
    signed_in_page: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_page
    page.goto(new(pattern))
    page.get_by_label("Name of the colourway").fill("Hedge")
    choose(page, "A", "R1 Madder: none on the shelf")
    choose(page, "B", "G1 Moss: 8 m on the shelf")
    choose(page, "C", "W1 Chalk: 8 m on the shelf")
    expect(page.get_by_role("status").get_by_text(ALIKE)).to_be_visible()
    expect(page.get_by_text("As eyes without green cones (deutan) see it")).to_be_visible()
    assert page.url.endswith(new(pattern)), "the page stays"
    page.get_by_role("button", name="Take R2 Rust for A").click()
    expect(page.locator("#id_slot_A")).to_have_value(str(shades["R2"].pk))
    expect(page.locator("#id_slot_B")).to_have_value(str(shades["G1"].pk))
    expect(page.locator("#advice-A").get_by_role("button")).to_have_count(0)
    page.get_by_role("button", name="Save the colourway").click()
    expect(page.get_by_text("Hedge is saved.")).to_be_visible()
    expect(page.locator(".leaves").get_by_text(ALIKE)).to_be_visible()
    assert Colourway.objects.get().shades_by_slot()["A"] == shades["R2"]


def test_a_shade_is_chosen_by_keyboard_alone(
    signed_in_phone: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_phone
    page.goto(new(pattern))
    page.get_by_label("Name of the colourway").focus()
    page.keyboard.type("Hedge")
    for code in ("R1", "G1", "W1"):
        page.keyboard.press("Tab")
        while not page.evaluate("document.activeElement.id").startswith("id_slot_"):
            page.keyboard.press("Tab")
        page.keyboard.type(code)
        page.keyboard.press("Tab")
        page.keyboard.press("Shift+Tab")
    expect(page.get_by_role("status").get_by_text(ALIKE)).to_be_visible()
    page.get_by_label("Name of the colourway").press("Enter")
    expect(page.get_by_text("Hedge is saved.")).to_be_visible()


def test_a_near_shade_is_taken_without_scripts(
    new_page: OpenPage, maker: User, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    page.goto(new(pattern))
    page.get_by_label("Name of the colourway").fill("Hedge")
    choose(page, "A", "R1 Madder: none on the shelf")
    choose(page, "B", "G1 Moss: 8 m on the shelf")
    page.get_by_role("button", name="Show it in these shades").click()
    expect(page.get_by_text(ALIKE)).to_be_visible()
    page.get_by_role("button", name="Take R2 Rust for A").click()
    expect(page.locator("#id_slot_A")).to_have_value(str(shades["R2"].pk))
    expect(page.locator("#id_slot_B")).to_have_value(str(shades["G1"].pk))
    expect(page.get_by_label("Name of the colourway")).to_have_value("Hedge")


def test_searching_narrows_the_lists_and_keeps_what_is_chosen(
    signed_in_page: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_page
    page.goto(new(pattern))
    choose(page, "A", "G1 Moss: 8 m on the shelf")
    expect(page.locator("#advice-A")).to_contain_text("8 m on the shelf")
    find = page.get_by_label("Find shades by code, name or lot")
    find.press_sequentially("rust")
    expect(page.get_by_role("status").get_by_text("1 shade found.")).to_be_visible()
    expect(find).to_be_focused()
    assert page.locator("#id_slot_B option").all_text_contents() == [
        "Choose a shade",
        "R2 Rust: 8 m on the shelf",
    ]
    expect(page.locator("#id_slot_A")).to_have_value(str(shades["G1"].pk))
    page.keyboard.press("Tab")
    page.keyboard.press("Tab")
    expect(page.locator("#id_slot_B")).to_be_focused()
    page.keyboard.type("R2")
    page.keyboard.press("Tab")
    expect(page.locator("#advice-B")).to_contain_text("8 m on the shelf")
    find.fill("")
    expect(page.locator("#id_slot_C option")).to_have_count(5)
    expect(page.locator("#id_slot_B")).to_have_value(str(shades["R2"].pk))


def test_what_is_chosen_while_a_search_is_under_way_stays_chosen(
    signed_in_page: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_page
    page.goto(new(pattern))
    held: list[Route] = []

    def hold_the_first(route: Route) -> None:
        route.continue_() if held else held.append(route)

    page.route(f"**{new(pattern)}", hold_the_first)
    with page.expect_request(f"**{new(pattern)}"):
        page.get_by_label("Find shades by code, name or lot").press_sequentially("rust")
    choose(page, "A", "W1 Chalk: 8 m on the shelf")
    held[0].continue_()
    expect(page.get_by_text("1 shade found.")).to_be_visible()
    expect(page.locator("#id_slot_A")).to_have_value(str(shades["W1"].pk))
    expect(page.locator("#advice-A")).to_contain_text("8 m on the shelf")


def test_another_size_changes_what_each_slot_takes(
    signed_in_page: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_page
    page.goto(new(pattern))
    takes = page.locator("#advice-A")
    usual = takes.inner_text()
    size = page.get_by_label("For a bracelet in")
    size.select_option(index=0)
    expect(page.locator("#colourway-size")).to_contain_text(
        size.locator("option").first.inner_text()
    )
    expect(takes).not_to_have_text(usual)


def test_two_shades_are_swapped(
    signed_in_phone: Page, pattern: Pattern, shades: dict[str, Shade]
) -> None:
    page = signed_in_phone
    page.goto(new(pattern))
    choose(page, "A", "G1 Moss: 8 m on the shelf")
    choose(page, "C", "W1 Chalk: 8 m on the shelf")
    page.get_by_label("Second slot").select_option("C")
    page.get_by_role("button", name="Swap").click()
    expect(page.locator("#id_slot_A")).to_have_value(str(shades["W1"].pk))
    expect(page.locator("#id_slot_C")).to_have_value(str(shades["G1"].pk))


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_pages_are_accessible(
    new_page: OpenPage,
    maker: User,
    axe: Callable[[Page], None],
    pattern: Pattern,
    shades: dict[str, Shade],
    viewport: dict[str, int],
    theme: str,
) -> None:
    grid = make_grid_pattern()
    ways = [
        make_colourway(pattern, "Hedge", A=shades["R1"], B=shades["G1"], C=shades["W1"]),
        make_colourway(grid, "Heart", A=shades["R1"], B=shades["G1"]),
    ]
    page = new_page(viewport, user=maker, color_scheme=theme)
    for way in ways:
        page.goto(reverse("colourway_edit", args=[way.pk]))
        expect(page.get_by_text("Nearest on the shelf:").first).to_be_visible()
        expect(page.get_by_text(ALIKE)).to_be_visible()
        page.get_by_label("Find shades by code, name or lot").press_sequentially("rust")
        expect(page.get_by_text("1 shade found.")).to_be_visible()
        axe(page)
        for target in (
            page.locator("main form")
            .locator("select, input:not([type=hidden]), button:not(.visually-hidden)")
            .all()
        ):
            box = target.bounding_box()
            assert box, "it can be seen"
            assert box["height"] >= 44
    page.goto(reverse("pattern_detail", args=[pattern.pk]))
    axe(page)
