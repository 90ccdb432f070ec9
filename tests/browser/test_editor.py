"""The editor of diagonal patterns, by keyboard, by touch, and with the connection gone."""

import re
from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, expect

from patterns.actions import change_pattern, load_defaults
from patterns.models import Pattern
from tests.browser.conftest import PHONE, OpenPage
from tests.factories import make_colourway, make_pattern, make_workshop, pattern_text

pytestmark = pytest.mark.django_db(transaction=True)


@pytest.fixture
def workshop(transactional_db) -> None:
    make_workshop()
    load_defaults()


@pytest.fixture
def pattern(workshop: None) -> Pattern:
    pattern = make_pattern("Quay")
    make_colourway(pattern)
    return pattern


def chart(page: Page):
    return page.locator("[data-chart] svg")


def open_editor(page: Page, address: str) -> None:
    page.goto(address)
    expect(page.locator("[data-preview] .answer")).to_be_visible()


def state(page: Page) -> dict:
    """The state that is kept in the browser, once it is stored."""
    page.evaluate("window.dispatchEvent(new Event('pagehide'))")
    return page.evaluate(
        """() => {
          const key = Object.keys(localStorage).find((name) => name.startsWith('flosswright-editing-'));
          return key && JSON.parse(localStorage.getItem(key));
        }"""
    )


def words_of_rows(page: Page) -> list[str]:
    return chart(page).locator(".words").all_text_contents()


def test_twelve_strands_by_keyboard_only(
    signed_in_page: Page, workshop: None, axe: Callable[[Page], None]
) -> None:
    """From an empty pattern to a saved one without a pointer: Tab, arrows, letters, Enter."""
    page = signed_in_page
    open_editor(page, reverse("pattern_draw"))
    page.locator("[data-field=name]").focus()
    page.keyboard.press("Control+A")
    page.keyboard.type("Twelve by hand")
    tab_to(page, "[data-step=strand-right]")
    for _ in range(6):
        page.keyboard.press("Enter")
    shift_tab_to(page, "[data-chart] svg")
    page.keyboard.press("Home")
    page.keyboard.press("ArrowUp")
    page.keyboard.type("abcdefabcdef")
    page.keyboard.press("ArrowDown")
    page.keyboard.press("Home")
    # Rows 1 and 2 of the six rows: Shift makes a knot return.
    for knot in ["f", "b", "Shift+F", "Shift+B", "f", "b", "b", "b", "f", "f", "Shift+F"]:
        page.keyboard.press(knot)
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Twelve by hand is in your library.")
    axe(page)
    pattern = Pattern.objects.get()
    assert pattern.definition.name == "Twelve by hand"
    assert "".join(pattern.definition.slots) == "ABCDEFABCDEF"
    assert [" ".join(row) for row in pattern.definition.rows[:2]] == ["f b fb bf f b", "b b f f fb"]
    assert page.url.endswith(reverse("pattern_edit", args=[pattern.pk]))
    # A second saving is a version of the same pattern.
    chart(page).focus()
    page.keyboard.press("b")
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Twelve by hand is saved.")
    assert Pattern.objects.get().version == 2


def tab_to(page: Page, selector: str, key: str = "Tab") -> None:
    for _ in range(60):
        page.keyboard.press(key)
        if page.evaluate("(selector) => document.activeElement.matches(selector)", selector):
            return
    pytest.fail(f"{selector} cannot be reached with {key}")


def shift_tab_to(page: Page, selector: str) -> None:
    tab_to(page, selector, "Shift+Tab")


def test_two_hundred_steps_are_taken_back_and_done_again(
    signed_in_page: Page, pattern: Pattern
) -> None:
    page = signed_in_page
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    start = words_of_rows(page)
    chart(page).focus()
    buttons = ["repeat-mirrored", "mirror", "strand-left", "begin-later", "rows-copy", "clear"]
    for number in range(200):
        if number % 20 == 19:
            page.locator(f"[data-step={buttons[number // 20 % 6]}]").evaluate("e => e.click()")
        else:
            chart(page).focus()
            page.keyboard.press(["b", "Shift+F", "f", "Shift+B"][number % 4])
            page.keyboard.press("ArrowLeft")
            page.keyboard.press(" ")
    done = int(page.locator("[data-steps]").text_content())
    assert done >= 200
    end = words_of_rows(page)
    end_state = state(page)
    for _ in range(done):
        page.keyboard.press("Control+z")
    expect(page.locator("[data-steps]")).to_have_text("0")
    assert words_of_rows(page) == start
    expect(page.locator("[data-undo]")).to_be_disabled()
    expect(page.locator("[data-unsaved]")).to_be_hidden()
    for _ in range(done):
        page.keyboard.press("Control+y")
    assert words_of_rows(page) == end
    assert state(page)["at"] == end_state["at"] == done


def test_reload_in_the_middle_keeps_work_and_the_way_back(
    signed_in_page: Page, pattern: Pattern
) -> None:
    page = signed_in_page
    page.on("dialog", lambda dialog: dialog.accept())
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    start = words_of_rows(page)
    chart(page).focus()
    for _ in range(5):
        page.keyboard.press("b")
    changed = words_of_rows(page)
    assert changed != start
    page.reload()
    expect(page.locator("[data-restored-words]")).to_contain_text("is back, with every step")
    assert words_of_rows(page) == changed
    chart(page).focus()
    for _ in range(5):
        page.keyboard.press("Control+z")
    assert words_of_rows(page) == start
    page.keyboard.press("Control+y")
    page.locator("[data-forget]").click()
    assert words_of_rows(page) == start
    expect(page.locator("[data-undo]")).to_be_disabled()


def test_lost_connection_loses_nothing(signed_in_page: Page, pattern: Pattern) -> None:
    page = signed_in_page
    address = reverse("pattern_edit", args=[pattern.pk])
    open_editor(page, address)
    # Chromium writes each failed request to the console: fail them before they reach the network.
    page.evaluate("() => { window.fetch = () => Promise.reject(new TypeError('no network')); }")
    chart(page).focus()
    page.keyboard.press("b")
    expect(page.locator("[data-connection]")).to_contain_text("Your work is kept here")
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_contain_text("Nothing is lost")
    assert Pattern.objects.get().version == 1
    page.on("dialog", lambda dialog: dialog.accept())
    page.reload()
    expect(page.locator("[data-restored-words]")).to_be_visible()
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Quay is saved.")
    assert [str(knot) for knot in Pattern.objects.get().definition.rows[0]] == ["b", "f", "f"]


def test_leaving_unsaved_work_asks(signed_in_page: Page, pattern: Pattern) -> None:
    page = signed_in_page
    asked: list[str] = []

    def stay(dialog) -> None:
        asked.append(dialog.type)
        dialog.dismiss()

    page.on("dialog", stay)
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    chart(page).focus()
    page.keyboard.press("b")
    page.locator(".crumbs a").first.click(no_wait_after=True)
    page.wait_for_timeout(300)
    assert asked == ["beforeunload"]
    assert page.url.endswith("/edit/")
    page.keyboard.press("Control+z")
    page.locator(".crumbs a").first.click()
    page.wait_for_url("**/patterns/")
    assert asked == ["beforeunload"]


def test_saved_elsewhere_meanwhile_keeps_both(signed_in_page: Page, pattern: Pattern) -> None:
    page = signed_in_page
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    change_pattern(pattern=pattern, text=pattern_text("Quay", finish="nearest"))
    page.locator("[data-field=name]").fill("Quay, mine")
    chart(page).focus()
    page.keyboard.press("b")
    page.keyboard.press("Control+s")
    expect(page.locator("[data-conflict]")).to_be_visible()
    page.locator("[data-conflict] [data-as-new]").click()
    expect(page.locator("[data-saved]")).to_have_text("Quay, mine is in your library.")
    assert set(Pattern.objects.values_list("name", flat=True)) == {"Quay", "Quay, mine"}


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_tapping_on_a_phone(
    new_page: OpenPage,
    maker: User,
    pattern: Pattern,
    axe: Callable[[Page], None],
    theme: str,
) -> None:
    page = new_page(PHONE, user=maker, color_scheme=theme, has_touch=True)
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    box = chart(page).bounding_box()
    unit = box["width"] / float(chart(page).get_attribute("viewBox").split()[2])
    assert round(2 * unit) >= 44  # a knot is two units from tip to tip
    page.locator("[data-chart]").scroll_into_view_if_needed()
    box = chart(page).bounding_box()
    # The second knot of row 1: three strands and one row into the band, which begins 2.2 units from
    # the left (numbers) and 3.6 from the top (letters).
    x, y = box["x"] + (2.2 + 3) * unit, box["y"] + (3.6 + 1) * unit
    page.touchscreen.tap(x, y)
    assert words_of_rows(page)[0] == "f b f"
    page.locator("[name=knot-brush][value=bf]").check()
    page.touchscreen.tap(x, y)
    assert words_of_rows(page)[0] == "f bf f"
    page.locator("[data-undo]").tap()
    assert words_of_rows(page)[0] == "f b f"
    axe(page)
    page.locator("[data-save]").tap()
    expect(page.locator("[data-saved]")).to_have_text("Quay is saved.")


def test_refusal_shows_the_knot(signed_in_page: Page, pattern: Pattern) -> None:
    """A state that a broken store brings back is refused with its row, and the board goes there."""
    page = signed_in_page
    open_editor(page, reverse("pattern_edit", args=[pattern.pk]))
    chart(page).focus()
    page.keyboard.press("b")
    state(page)
    page.on("dialog", lambda dialog: dialog.accept())
    page.evaluate(
        """() => {
          const key = Object.keys(localStorage).find((name) => name.startsWith('flosswright-editing-'));
          localStorage.setItem(key, localStorage.getItem(key).replace('"added":[["b"', '"added":[["x"'));
          Storage.prototype.setItem = () => {};
        }"""
    )
    page.reload()
    expect(page.locator("[data-problem]")).to_have_text(re.compile("Row 1, knot 1: 'x' is not"))
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_have_text(re.compile("Row 1, knot 1"))


SPOILT = {
    "a row is nothing": {"start": {"rows": [None, ["f", "f"]]}},
    "a row is a number": {"start": {"rows": [["f", "f", "f"], 5]}},
    "rows are text": {"start": {"rows": "x"}},
    "no rows": {"start": {"rows": []}},
    "no slots": {"start": {"slots": None}},
    "slots are none": {"start": {"slots": {}}},
    "no steps": {"steps": []},
    "added text": {"steps": [{"fields": {}, "from": 0, "removed": [["f"]], "added": "x"}]},
    "added a number": {"steps": [{"fields": {}, "from": 0, "removed": [["f"]], "added": [7]}]},
    "beyond the steps": {"at": 99},
}


def test_spoilt_kept_work_is_left_aside(signed_in_page: Page, pattern: Pattern) -> None:
    page = signed_in_page
    page.on("dialog", lambda dialog: dialog.accept())
    editor = reverse("pattern_edit", args=[pattern.pk])
    open_editor(page, editor)
    start = words_of_rows(page)
    chart(page).focus()
    page.keyboard.press("b")
    kept = state(page)
    for name, harm in SPOILT.items():
        page.goto("/workshop/")
        start_then = kept["start"] | harm.get("start", {})
        work = kept | harm | {"start": start_then}
        page.evaluate(
            """(work) => {
              localStorage.clear();
              localStorage.setItem("flosswright-editing-pattern-" + work.key, JSON.stringify(work));
            }""",
            work | {"key": pattern.pk},
        )
        open_editor(page, editor)
        assert words_of_rows(page) == start, name
