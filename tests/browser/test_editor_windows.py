"""What the editor does when windows, networks, sessions and storages misbehave."""

from collections.abc import Callable, Iterator

import pytest
from django.contrib.auth.models import User
from django.contrib.sessions.models import Session
from django.urls import reverse
from playwright.sync_api import Browser, BrowserContext, Page, expect

from patterns.actions import load_defaults
from patterns.knots import SLOT_LETTERS, DiagonalPattern, Knot, knots_in_row
from patterns.models import Colourway, Pattern
from patterns.pictures import neutral_colours
from tests.browser.conftest import DESK, PHONE, OpenPage, sign_in
from tests.factories import make_colourway, make_pattern, make_shade, make_workshop

pytestmark = pytest.mark.django_db(transaction=True)


@pytest.fixture
def pattern(transactional_db) -> Pattern:
    make_workshop()
    load_defaults()
    pattern = make_pattern("Quay")
    make_colourway(pattern)
    return pattern


@pytest.fixture
def unwatched(browser: Browser, live_server, maker: User) -> Iterator[BrowserContext]:
    """Chromium notes each failed request as an error, which these tests cause on purpose."""
    context = browser.new_context(base_url=live_server.url, viewport=DESK)
    context.set_default_timeout(10_000)
    sign_in(context, maker, live_server.url)
    yield context
    context.close()


def open_editor(page: Page, address: str) -> Page:
    page.on("dialog", lambda dialog: dialog.accept())
    page.goto(address)
    expect(page.locator("[data-preview] .answer")).to_be_visible()
    return page


def editor_of(pattern: Pattern) -> str:
    return reverse("pattern_edit", args=[pattern.pk])


def press(page: Page, *keys: str) -> None:
    page.locator("[data-chart] svg").focus()
    for key in keys:
        page.keyboard.press(key)


def first_row(page: Page) -> str:
    return page.locator("[data-chart] .words").first.text_content() or ""


def saved_first_row(pattern: Pattern) -> str:
    return " ".join(Pattern.objects.get(pk=pattern.pk).definition.rows[0])


def test_two_windows_keep_their_own_work(signed_in_page: Page, pattern: Pattern) -> None:
    one = open_editor(signed_in_page, editor_of(pattern))
    assert first_row(one) == "f f f"
    two = open_editor(one.context.new_page(), editor_of(pattern))
    for page in (one, two):
        expect(page.locator("[data-elsewhere]")).to_be_visible()
    press(one, "b")
    press(two, "f", "b")
    for page, row in ((one, "b f f"), (two, "f b f")):
        page.reload()
        expect(page.locator("[data-restored-words]")).to_be_visible()
        assert first_row(page) == row
        press(page, "Control+z", "Control+y")
        assert first_row(page) == row
    two.close()
    expect(one.locator("[data-elsewhere]")).to_be_hidden()
    press(one, "Control+s")
    expect(one.locator("[data-saved]")).to_have_text("Quay is saved.")
    # What the second window had is offered next, and is told to be older than what was saved.
    one.reload()
    expect(one.locator("[data-restored-words]")).to_contain_text("saved elsewhere since")
    assert first_row(one) == "f b f"


def test_new_pattern_in_a_second_window_does_not_take_the_first_ones(
    signed_in_page: Page, pattern: Pattern
) -> None:
    draw = reverse("pattern_draw")
    one = open_editor(signed_in_page, draw)
    press(one, "b")
    one.wait_for_function(
        "() => Object.values(localStorage).some((text) => text.includes('steps'))"
    )
    two = open_editor(one.context.new_page(), draw)
    expect(two.locator("[data-elsewhere]")).to_be_visible()
    two.locator("[data-forget]").click()
    assert first_row(two) == "f f f"
    one.reload()
    expect(one.locator("[data-restored-words]")).to_be_visible()
    assert first_row(one) == "b f f"


def test_name_that_is_being_typed_is_saved(signed_in_page: Page, pattern: Pattern) -> None:
    page = open_editor(signed_in_page, editor_of(pattern))
    page.get_by_label("Name").focus()
    page.keyboard.press("End")
    page.keyboard.type(" again")
    page.keyboard.press("Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Quay again is saved.")
    expect(page.locator("h1")).to_have_text("How is Quay again tied?")
    assert page.title().startswith("Draw Quay again · ")
    page.keyboard.type("!")
    page.reload()
    expect(page.get_by_label("Name")).to_have_value("Quay again!")


def test_connection_that_is_gone_loses_nothing_and_catches_up(
    unwatched: BrowserContext, pattern: Pattern
) -> None:
    page = open_editor(unwatched.new_page(), editor_of(pattern))
    unwatched.set_offline(True)
    press(page, "b", "b")
    expect(page.locator("[data-connection]")).to_contain_text("Your work is kept here")
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_contain_text("Nothing is lost")
    before = page.locator("[data-preview]").inner_html()
    unwatched.set_offline(False)
    expect(page.locator("[data-connection]")).to_have_text("")
    assert page.locator("[data-preview]").inner_html() != before
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Quay is saved.")
    assert saved_first_row(pattern) == "b b f"


def test_signed_out_session_saves_after_signing_in_again(
    unwatched: BrowserContext, pattern: Pattern, maker: User, live_server
) -> None:
    page = open_editor(unwatched.new_page(), editor_of(pattern))
    Session.objects.all().delete()
    press(page, "b")
    expect(page.locator("[data-connection]")).to_contain_text("You are signed out")
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_contain_text("You are signed out")
    # Signing in gives new cookies, and a new token against forged requests.
    unwatched.clear_cookies()
    sign_in(unwatched, maker, live_server.url)
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Quay is saved.")
    assert saved_first_row(pattern) == "b f f"


def test_pattern_that_was_removed_is_saved_as_a_new_one(
    unwatched: BrowserContext, pattern: Pattern
) -> None:
    page = open_editor(unwatched.new_page(), editor_of(pattern))
    press(page, "b")
    Colourway.objects.all().delete()
    pattern.delete()
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_contain_text("not in your library any more")
    page.locator("[data-beside] [data-as-new]").click()
    expect(page.locator("[data-saved]")).to_have_text("Quay is in your library.")
    assert saved_first_row(Pattern.objects.get()) == "b f f"


@pytest.mark.parametrize("refusal", ["null", "'SecurityError'"])
def test_browser_that_keeps_nothing_still_draws_and_saves(
    signed_in_page: Page, pattern: Pattern, refusal: str
) -> None:
    """A store that is full says so; one that may not be used at all is done without."""
    page = signed_in_page
    page.add_init_script(
        f"""const refusal = {refusal};
        Storage.prototype.setItem = () => {{ throw new DOMException("full", "QuotaExceededError"); }};
        if (refusal) Object.defineProperty(window, "localStorage",
          {{ get: () => {{ throw new DOMException("no", refusal); }} }});"""
    )
    open_editor(page, editor_of(pattern))
    press(page, "b")
    if refusal == "null":
        expect(page.locator("[data-not-kept]")).to_be_visible()
    press(page, "Control+s")
    expect(page.locator("[data-saved]")).to_have_text("Quay is saved.")
    assert saved_first_row(pattern) == "b f f"


def test_spoilt_work_in_the_browser_is_no_work(signed_in_page: Page, pattern: Pattern) -> None:
    page = open_editor(signed_in_page, editor_of(pattern))
    key = f"flosswright-editing-pattern-{pattern.pk}"
    for text in ("{", "7", '{"format": 1}', '{"format": 1, "start": {}, "steps": 7, "at": 1}'):
        page.evaluate("([key, text]) => localStorage.setItem(key, text)", [key, text])
        page.reload()
        expect(page.locator("[data-preview] .answer")).to_be_visible()
        assert first_row(page) == "f f f"


def test_colourway_that_is_chosen_colours_the_board(signed_in_page: Page, pattern: Pattern) -> None:
    other = make_colourway(pattern, name="Other", A=make_shade(colour="#123456"))
    page = open_editor(signed_in_page, editor_of(pattern))
    square = page.locator("[data-chart] .knot-squares path").first
    assert square.get_attribute("fill") != "#123456"
    page.get_by_label("Colourway").select_option(str(other.pk))
    assert square.get_attribute("fill") == "#123456"
    page.get_by_label("Colourway").select_option("")
    assert square.get_attribute("fill") == neutral_colours(pattern.definition)["A"]


def test_undyed_tones_are_those_of_the_drawn_band(page: Page) -> None:
    """Within one step of a channel: Python rounds a half to the even number."""
    page.goto("/")
    slots = [SLOT_LETTERS[:count] for count in range(2, 27)]
    ours = page.evaluate(
        """async (slots) => {
          const { neutralColours } = await import("/static/flosswright/editor/tones.js");
          return slots.map((letters) => neutralColours([...letters].reverse()));
        }""",
        slots,
    )
    for letters, tones in zip(slots, ours, strict=True):
        rows = tuple((Knot.F,) * knots_in_row(len(letters), row) for row in (1, 2))
        theirs = neutral_colours(DiagonalPattern("Undyed", tuple(letters), rows))
        assert tones.keys() == theirs.keys()
        for slot, tone in tones.items():
            pairs = zip(bytes.fromhex(tone[1:]), bytes.fromhex(theirs[slot][1:]), strict=True)
            assert all(abs(one - other) <= 1 for one, other in pairs)


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_every_notice_is_accessible(
    new_page: OpenPage,
    maker: User,
    pattern: Pattern,
    axe: Callable[[Page], None],
    theme: str,
    viewport: dict[str, int],
) -> None:
    page = open_editor(new_page(viewport, user=maker, color_scheme=theme), editor_of(pattern))
    press(page, "b")
    page.reload()
    page.evaluate(
        "for (const notice of document.querySelectorAll('.notice')) notice.hidden = false"
    )
    axe(page)
