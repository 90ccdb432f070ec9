"""The library, versions, and pattern files in and out, in a real browser."""

import io
import re
import zipfile
from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page, expect

from patterns.actions import change_pattern, load_defaults
from patterns.models import Pattern, PatternImport
from tests.browser.conftest import DESK, PHONE, OpenPage
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_pattern,
    make_shade,
    make_workshop,
    pattern_text,
)

pytestmark = pytest.mark.django_db(transaction=True)


@pytest.fixture
def library(maker: User) -> None:
    """Forty-four patterns; the last of them a grid."""
    make_workshop()
    load_defaults()
    shades = {slot: make_shade() for slot in "ABC"}
    for number in range(1, 44):
        pattern = make_pattern(f"Quay {number:02}")
        if number % 3:
            make_colourway(pattern, "Dusk", **shades)
    make_grid_pattern("Zinnia")


def file(name: str, text: str) -> dict[str, object]:
    return {"name": name, "mimeType": "text/plain", "buffer": text.encode()}


def shown(page: Page) -> list[str]:
    return page.locator(".library-entry h2").all_inner_texts()


def test_filters_follow_and_stay_in_the_address(signed_in_page: Page, library: None) -> None:
    page = signed_in_page
    page.goto(reverse("pattern_list"))
    expect(page.get_by_text("44 patterns.")).to_be_visible()
    page.get_by_label("Find a pattern by its name").press_sequentially("quay 1")
    expect(page.get_by_text("14 patterns found.")).to_be_visible()
    page.get_by_text("By technique, strands").click()
    page.get_by_label("In order of").select_option("newest first")
    expect(page.locator(".library-entry h2").first).to_have_text("Quay 41")
    assert "q=quay%201" in page.url
    assert "sort=newest" in page.url
    page.reload()
    assert len(shown(page)) == 14
    expect(page.get_by_label("In order of")).to_have_value("newest")
    page.get_by_label("Technique").select_option("grid")
    expect(page.get_by_text("No pattern fits")).to_be_visible()
    page.get_by_role("link", name="Clear the filters").click()
    expect(page.get_by_text("44 patterns.")).to_be_visible()


def test_filters_work_without_scripts(new_page: OpenPage, maker: User, library: None) -> None:
    page = new_page(user=maker, java_script_enabled=False)
    page.goto(reverse("pattern_list"))
    page.get_by_text("By technique, strands").click()
    page.get_by_label("Technique").select_option("grid")
    page.get_by_role("button", name="Find").click()
    assert shown(page) == ["Zinnia"]


def test_pictures_are_drawn_when_they_come_near(signed_in_page: Page, library: None) -> None:
    page = signed_in_page
    asked: list[str] = []
    page.on("request", lambda request: asked.append(request.url))
    page.goto(reverse("pattern_list"))
    first, last = page.locator(".library-band img").first, page.locator(".library-band img").last
    drawn = "image => image.complete && image.naturalWidth > 0"
    page.wait_for_function(f"() => ({drawn})(document.querySelector('.library-band img'))")
    assert first.evaluate(drawn)
    assert not last.evaluate(drawn)
    last.scroll_into_view_if_needed()
    expect(last).to_be_visible()
    page.wait_for_function(
        f"() => ({drawn})([...document.querySelectorAll('.library-band img')].at(-1))"
    )
    asked.clear()
    page.reload()
    page.wait_for_function(f"() => ({drawn})(document.querySelector('.library-band img'))")
    sizes = page.evaluate(
        "performance.getEntriesByType('resource').filter(e => e.name.includes('picture.svg'))"
        ".map(e => e.transferSize)"
    )
    assert sizes
    assert set(sizes) == {0}, "kept pictures come without a request"


def test_ticked_ones_are_saved_and_come_back(signed_in_page: Page, library: None) -> None:
    page = signed_in_page
    page.goto(f"{reverse('pattern_list')}?q=quay")
    for name in ("Quay 02", "Quay 04"):
        page.get_by_label(f"Tick {name}, to save it as a file").check()
    with page.expect_download() as download:
        page.get_by_role("button", name="Save the ticked ones").click()
    content = download.value.path().read_bytes()
    assert zipfile.ZipFile(io.BytesIO(content)).namelist() == ["Quay-02.toml", "Quay-04.toml"]
    Pattern.objects.filter(name="Quay 04").delete()
    page.get_by_role("link", name="Add pattern files").click()
    page.get_by_label("Choose pattern files").set_input_files(
        {"name": "all.zip", "mimeType": "application/zip", "buffer": content}
    )
    page.get_by_role("button", name="Look at them").click()
    expect(page.get_by_text("2 files: 1 new, 1 same as yours.")).to_be_visible()
    page.get_by_role("button", name="Do so with all 2").click()
    expect(page.get_by_text("1 pattern added, 1 left out.")).to_be_visible()
    assert Pattern.objects.filter(name="Quay 04").exists()


def test_files_are_looked_through_put_right_and_named_anew(
    signed_in_phone: Page, library: None
) -> None:
    page = signed_in_phone
    page.goto(reverse("pattern_import"))
    page.get_by_label("Choose pattern files").set_input_files(
        [
            file("taken.toml", pattern_text("Quay 01", rows=("b b b", "b b"))),
            file("bad.toml", pattern_text("Pier", rows=("f q f", "f f"))),
        ]
    )
    page.get_by_role("button", name="Look at them").click()
    expect(page.get_by_text("Row 1, knot 2: 'q' is not a knot.")).to_be_visible()
    other_name = page.get_by_label("Its other name: Quay 01")
    expect(other_name).to_be_hidden()
    page.get_by_label("What becomes of it: Quay 01").select_option("add it under another name")
    expect(other_name).to_have_value("Quay 01 2")
    other_name.fill("Mole")
    page.get_by_text("Put its text right here").click()
    page.get_by_label("The text of bad.toml").fill(pattern_text("Pier"))
    page.get_by_role("button", name="Read corrected texts again").click()
    expect(page.get_by_text("2 files: 1 new, 1 that would change yours.")).to_be_visible()
    expect(page.get_by_label("Its other name: Quay 01")).to_have_value("Mole")
    page.get_by_label("What becomes of it: Pier").select_option("add it")
    page.get_by_role("button", name="Do so with all 2").click()
    expect(page.get_by_text("2 patterns added.")).to_be_visible()
    assert Pattern.objects.filter(name__in=["Mole", "Pier"]).count() == 2
    assert not PatternImport.objects.exists()


def test_archived_goes_out_of_sight_and_comes_back(signed_in_page: Page, library: None) -> None:
    page = signed_in_page
    pattern = Pattern.objects.get(name="Zinnia")
    page.goto(reverse("pattern_detail", args=[pattern.pk]))
    page.get_by_role("button", name="Archive").click()
    expect(page.get_by_text("43 patterns.")).to_be_visible()
    page.get_by_role("button", name="Undo").click()
    expect(page.get_by_text("Zinnia is back in your library.")).to_be_visible()
    page.goto(reverse("pattern_list"))
    expect(page.get_by_text("44 patterns.")).to_be_visible()
    page.goto(reverse("pattern_detail", args=[pattern.pk]))
    page.get_by_role("button", name="Archive").click()
    page.get_by_text("By technique, strands").click()
    page.get_by_label("Where").select_option("archived")
    page.get_by_role("button", name=re.compile("Bring it back.*Zinnia")).click()
    expect(page.get_by_text("Zinnia is back in your library.")).to_be_visible()


def test_earlier_version_is_looked_at_and_taken_again(signed_in_page: Page, library: None) -> None:
    page = signed_in_page
    pattern = Pattern.objects.get(name="Quay 01")
    text = pattern.text
    change_pattern(pattern=pattern, text=pattern_text("Quay 01", rows=("b b b", "b b")))
    page.goto(reverse("pattern_detail", args=[pattern.pk]))
    page.get_by_role("link", name="Earlier versions").click()
    expect(page.get_by_text("5 knots changed")).to_be_visible()
    page.get_by_role("link", name="Version 1", exact=True).click()
    page.get_by_role("button", name="Make the pattern so again").click()
    expect(page.get_by_text("Quay 01 is as it was in version 1.")).to_be_visible()
    pattern.refresh_from_db()
    assert (pattern.text, pattern.version) == (text, 3)


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_library_pages_are_accessible(
    new_page: OpenPage,
    maker: User,
    library: None,
    axe: Callable[[Page], None],
    viewport: dict[str, int],
    theme: str,
) -> None:
    pattern = change_pattern(
        pattern=Pattern.objects.get(name="Quay 01"), text=pattern_text("Quay 01", finish="nearest")
    )
    page = new_page(viewport, user=maker, color_scheme=theme)
    for query in ("", "?technique=grid&strands_from=x", "?q=zzz", "?kept=archived"):
        page.goto(reverse("pattern_list") + query)
        axe(page)
    for name, more in (
        ("pattern_versions", []),
        ("pattern_version", [1]),
        ("pattern_edit_text", []),
    ):
        page.goto(reverse(name, args=[pattern.pk, *more]))
        axe(page)
    page.goto(reverse("pattern_import"))
    page.get_by_text("What a pattern file looks like").click()
    axe(page)
    page.get_by_label("Choose pattern files").set_input_files(
        [
            file("new.toml", pattern_text("A new one")),
            file("again.toml", pattern_text("A new one")),
            file("same.toml", pattern.text),
            file("changes.toml", pattern_text("Quay 02", finish="nearest")),
            file("bad.toml", "no pattern"),
        ]
    )
    page.get_by_role("button", name="Look at them").click()
    page.get_by_label("What becomes of it: A new one").first.select_option("rename")
    page.get_by_text("Put its text right here").click()
    axe(page)
    page.get_by_label("Its other name: A new one").first.fill("quay 03")
    page.get_by_role("button", name="Do so with all 5").click()
    expect(page.get_by_text("A pattern called quay 03 is there already.")).to_be_visible()
    axe(page)
