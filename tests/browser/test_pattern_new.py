"""Adding a pattern: from a family and from typed rows, in the browser, with and without scripts."""

import re
from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from playwright.sync_api import Page, expect

from patterns.actions import load_defaults
from patterns.families import FAMILIES
from patterns.models import Pattern
from tests.browser.conftest import DESK, PHONE, OpenPage
from tests.factories import make_workshop

pytestmark = pytest.mark.django_db(transaction=True)

Axe = Callable[[Page], None]


@pytest.fixture(autouse=True)
def workshop(transactional_db) -> None:
    make_workshop()
    load_defaults()


def test_family_is_drawn_while_it_is_chosen_and_then_added(signed_in_page: Page) -> None:
    page = signed_in_page
    page.goto("/patterns/new/")
    expect(page.locator(".families li")).to_have_count(len(FAMILIES))
    page.get_by_role("link", name="Zigzag", exact=True).click()
    expect(page.get_by_label("Family")).to_have_value("zigzag")
    look = page.locator("#family-look")
    expect(look).to_contain_text("12 strands: ")
    page.get_by_role("textbox", name="Strands").fill("9")
    expect(look).to_contain_text("9 strands: ")
    page.get_by_label("Colours, in their order").fill("A A B C")
    expect(look).to_contain_text("There is room for 9 colours.")
    page.get_by_role("textbox", name="Strands").fill("2")
    expect(look).to_contain_text("Zigzag takes 3 to 60 strands, not 2.")
    page.get_by_role("textbox", name="Strands").fill("10")
    expect(look.locator("svg")).to_be_visible()
    page.get_by_label("Name").fill("Tacking")
    page.get_by_role("button", name="Add this pattern").click()
    expect(page.get_by_text("Tacking is in your library.")).to_be_visible()
    assert Pattern.objects.get().definition.strands == 10


def test_rows_are_understood_while_they_are_typed(signed_in_page: Page) -> None:
    page = signed_in_page
    page.goto("/patterns/new/")
    page.get_by_role("link", name="Type the rows").click()
    look = page.locator("#rows-look")
    rows = page.get_by_label("Rows of one repeat")
    rows.fill("Row 1: 3F\n2. ffb")
    expect(look).to_contain_text("'ffb' may be f f b or f fb. Put blanks between the knots.")
    expect(look).to_contain_text("Row 1: f f f")
    expect(look.locator("svg")).to_be_visible()
    rows.fill("Row 1: 3F\n2. f, B")
    expect(look).to_contain_text("Row 2: f b")
    expect(look).to_contain_text("Fill this in.")
    page.get_by_label("Name").fill("From a notebook")
    expect(look).to_contain_text("6 strands: A B C D E F. 2 rows, all understood.")
    expect(rows).to_have_value("Row 1: 3F\n2. f, B")
    page.get_by_role("button", name="Add this pattern").click()
    expect(page.get_by_text("From a notebook is in your library.")).to_be_visible()


def test_cells_are_typed_by_keyboard_alone(signed_in_page: Page) -> None:
    page = signed_in_page
    page.goto("/patterns/new/rows/")
    page.get_by_label("What the rows are made of").focus()
    page.keyboard.type("cells")
    page.keyboard.press("Tab")
    page.keyboard.type("Steps")
    page.keyboard.press("Tab")
    page.keyboard.press("Tab")
    page.keyboard.type("3A 1B\n2A 2B")
    expect(page.locator("#rows-look")).to_contain_text("4 columns on A. 2 rows, all understood.")
    page.get_by_role("button", name="Add this pattern").press("Enter")
    expect(page.get_by_text("Steps is in your library.")).to_be_visible()
    assert Pattern.objects.get().technique == "grid"


def test_pages_work_without_scripts(new_page: OpenPage, maker: User) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    page.goto("/patterns/new/family/?family=braid&colours=ABC")
    page.get_by_role("textbox", name="Strands").fill("7")
    page.get_by_role("button", name="Show it").click()
    expect(page.locator("#family-look")).to_contain_text("7 strands: ")
    expect(page.get_by_label("Family")).to_have_value("braid")
    page.goto("/patterns/new/rows/")
    page.get_by_label("Rows of one repeat").fill("f f\nq")
    page.get_by_role("button", name="Show how it is understood").click()
    expect(page.locator("#rows-look")).to_contain_text("'q' is not a knot")
    expect(page.get_by_label("Rows of one repeat")).to_have_value("f f\nq")
    assert not Pattern.objects.exists()


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_pages_are_accessible_with_answers_and_with_mistakes(
    new_page: OpenPage, maker: User, axe: Axe, viewport: dict[str, int], theme: str
) -> None:
    page = new_page(viewport, user=maker, color_scheme=theme)
    for address in (
        "/patterns/new/",
        "/patterns/new/family/?family=diamond&strands=24&colours=A+B+C",
        "/patterns/new/family/?family=hearts&strands=2&colours=A",
    ):
        page.goto(address)
        axe(page)
    page.goto("/patterns/new/rows/")
    page.get_by_label("Name").fill("Mistakes")
    page.get_by_label("Rows of one repeat").fill("f b f\nf b\nb b huh\n" + "x" * 300)
    expect(page.locator("#rows-look")).to_contain_text("is not a knot")
    axe(page)
    page.get_by_role("button", name="Add this pattern").click()
    expect(page.locator("#id_rows_error")).to_have_text(re.compile("Row 3, knot 3"))
    axe(page)
