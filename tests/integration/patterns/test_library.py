import html
import re
from datetime import date

import pytest
from django.urls import reverse
from django.utils import timezone

from inventory.models import Workshop
from patterns.models import Pattern
from patterns.views import library
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_pattern,
    make_shade,
    pattern_text,
)

LIBRARY = "/patterns/"


def test_library_signed_out_goes_to_the_sign_in(client, workshop):
    response = client.get(LIBRARY)
    assert response.status_code == 302
    assert reverse("sign_in") in response["Location"]


def test_library_empty_offers_the_first_step(maker):
    page = maker.get(LIBRARY).content.decode()
    assert "Your patterns go here" in page
    assert reverse("pattern_new") in page
    assert 'role="search"' not in page


def test_library_shows_picture_counts_and_colourways(maker):
    madder = make_shade("M1", colour="#a3262f")
    pattern = make_pattern("Ferry stripe")
    make_colourway(pattern, "Dusk", A=madder)
    page = maker.get(LIBRARY).content.decode()
    # Derived from the geometry: 61.83 cm a strand on average with six strands; 118 whole rows are 150.2 mm.
    assert "6 strands · 2 rows a repeat · 3.71&nbsp;m" in page
    assert 'alt="The band of Ferry stripe in Dusk" loading="lazy"' in page
    assert 'fill="#a3262f"' in maker.get(picture_address(page)).content.decode()


def picture_address(page):
    return re.search(r'<img src="(/patterns/[^"]+)"', page)[1]


def test_library_without_colourways_offers_to_choose_shades(maker):
    pattern = make_pattern()
    page = maker.get(LIBRARY).content.decode()
    assert "No colourway yet" in page
    assert reverse("colourway_new", args=[pattern.pk]) in page


def test_library_says_which_slots_wait_for_a_shade(maker):
    pattern = make_pattern(strands="A A B B C C")
    make_colourway(pattern)
    maker.post(
        reverse("pattern_edit_text", args=[pattern.pk]),
        {"text": pattern_text(strands="A A B B D E")},
    )
    assert "needs a shade for D, E" in maker.get(LIBRARY).content.decode()


@pytest.mark.parametrize(
    ("words", "found"),
    [("ferry", {"Ferry"}), ("e r", {"Ferry", "Pier"}), ("zz", set())],
)
def test_library_search_finds_all_words(maker, words, found):
    for name in ("Ferry", "Pier", "Quay"):
        make_pattern(name)
    page = maker.get(LIBRARY, {"q": words}).content.decode()
    assert {name for name in ("Ferry", "Pier", "Quay") if f"<bdi>{name}</bdi>" in page} == found
    if not found:
        assert f"No pattern fits “<bdi>{words}</bdi>”" in page
        assert f'<a class="button" href="{LIBRARY}">Clear the filters</a>' in page


def test_library_with_htmx_is_the_fragment_alone(maker):
    make_pattern()
    response = maker.get(LIBRARY, {"q": "ferry"}, headers={"HX-Request": "true"})
    page = response.content.decode()
    assert page.lstrip().startswith('<div id="library">')
    assert "HX-Request" in response["Vary"]


def test_library_restored_from_history_is_the_whole_page(maker):
    headers = {"HX-Request": "true", "HX-History-Restore-Request": "true"}
    assert "<html" in maker.get(LIBRARY, headers=headers).content.decode()


@pytest.mark.parametrize("page", ["0", "-1", "99", "abc", "9" * 5_000, "\0"])
def test_library_with_a_page_that_is_none_still_shows_patterns(maker, page):
    make_pattern()
    assert b"Ferry stripe" in maker.get(LIBRARY, {"page": page}).content


def test_library_of_many_patterns_has_pages_that_keep_the_filters(maker, monkeypatch):
    monkeypatch.setattr(library, "PATTERNS_A_PAGE", 6)
    for number in range(7):
        make_pattern(f"Pattern {number:02}")
    first = maker.get(LIBRARY, {"q": "pattern", "sort": "newest"}).content.decode()
    assert first.count("library-entry") == 6
    assert "Page 1 of 2" in first
    after = html.unescape(re.search(r'rel="next" href="([^"]+)"', first)[1])
    assert after == "?q=pattern&sort=newest&page=2"
    second = maker.get(LIBRARY + after).content.decode()
    assert second.count("library-entry") == 1
    assert "<bdi>Pattern 00</bdi>" in second


@pytest.mark.parametrize("words", ["\0", "<script>alert(1)</script>", "%_\\", "x" * 10_000])
def test_library_search_for_anything_is_answered(maker, words):
    response = maker.get(LIBRARY, {"q": words})
    assert response.status_code == 200
    assert b"<script>alert" not in response.content


def test_library_search_with_a_null_looks_for_the_rest(maker):
    # SQLite would bear it; PostgreSQL refuses a text with it.
    assert maker.get(LIBRARY, {"q": "fer\0ry"}).context["form"].chosen == {"q": "fer ry"}


def test_library_refuses_other_methods(maker):
    assert maker.post(LIBRARY).status_code == 405


def test_library_makes_as_many_queries_for_300_patterns_as_for_30(maker, query_count):
    shades = {slot: make_shade() for slot in "ABC"}

    def add(numbers):
        for number in numbers:
            make_colourway(make_pattern(f"Pattern {number}"), **shades)

    add(range(30))
    few = query_count(LIBRARY)
    add(range(30, 300))
    assert query_count(LIBRARY) == few
    assert maker.get(LIBRARY).content.count(b"library-entry") == 300


def names(maker, **filters):
    """What the page lists, in its order."""
    page = maker.get(LIBRARY, filters).content.decode()
    return re.findall(r"<h2><a[^>]*><bdi>(.*?)</bdi>", page)


@pytest.fixture
def three(maker):
    """Two, six and six strands; 1.1, 3.7 and more metres of thread, as the page says itself."""
    narrow = make_pattern("Narrow", strands="A B", rows=("f", "-"))
    made = make_pattern("Made")
    grid = make_grid_pattern("Grid")
    Pattern.objects.filter(pk=made.pk).update(last_planned_on=date(2026, 5, 2))
    return narrow, made, grid


@pytest.mark.parametrize(
    ("filters", "found"),
    [
        ({}, ["Grid", "Made", "Narrow"]),
        ({"technique": "grid"}, ["Grid"]),
        ({"technique": "diagonal"}, ["Made", "Narrow"]),
        ({"strands_from": "3"}, ["Grid", "Made"]),
        ({"strands_to": "2"}, ["Narrow"]),
        ({"strands_from": "6", "strands_to": "6"}, ["Grid", "Made"]),
        ({"made": "yes"}, ["Made"]),
        ({"made": "no"}, ["Grid", "Narrow"]),
        ({"sort": "newest"}, ["Grid", "Made", "Narrow"]),
        ({"sort": "thread"}, ["Narrow", "Made", "Grid"]),
        ({"sort": "most-thread"}, ["Grid", "Made", "Narrow"]),
        ({"q": "a", "technique": "diagonal", "made": "no", "thread": "1"}, ["Narrow"]),
        ({"kept": "archived"}, []),
    ],
)
def test_library_filters(maker, three, filters, found):
    assert names(maker, **filters) == found


@pytest.mark.parametrize(
    ("unit", "thread_mm", "place", "label"),
    [
        ("cm", 3_999, "1", "under 4 m"),
        ("cm", 4_000, "2", "4 to 8 m"),
        ("cm", 7_999, "2", "4 to 8 m"),
        ("mm", 8_000, "3", "8 to 16 m"),
        ("cm", 16_000, "4", "16 m and over"),
        # A yard is 914.4 mm: 4 yards are 3657.6, 16 are 14630.4.
        ("in", 3_656, "1", "under 4 yd"),
        ("in", 3_658, "2", "4 to 8 yd"),
        ("in", 14_631, "4", "16 yd and over"),
    ],
)
def test_library_filters_by_thread_in_the_workshops_unit(maker, unit, thread_mm, place, label):
    Workshop.objects.update(length_unit=unit)
    make_pattern("Quay")
    Pattern.objects.update(thread_mm=thread_mm)
    assert f'<option value="{place}">{label}</option>' in maker.get(LIBRARY).content.decode()
    found = [choice for choice in "1234" if names(maker, thread=choice) == ["Quay"]]
    assert found == [place]


@pytest.mark.parametrize(
    ("filters", "words"),
    [
        ({"technique": "plaited"}, "Technique: Choose one from the list."),
        ({"strands_from": "x"}, "Strands, from: A whole number from 2 to 61."),
        ({"strands_to": "1"}, "Strands, to: A whole number from 2 to 61."),
        ({"strands_from": "8", "strands_to": "6"}, "Strands, to: At least 8"),
        ({"thread": "9"}, "Thread: Choose one from the list."),
        ({"made": "\0"}, "Made before: Choose one from the list."),
        ({"kept": "nowhere"}, "Where: Choose one from the list."),
        ({"sort": "colour"}, "In order of: Choose one from the list."),
        ({"strands_from": "9" * 5_000}, "Strands, from: A whole number from 2 to 61."),
    ],
)
def test_library_tells_of_a_filter_that_cannot_be_and_shows_the_rest(maker, filters, words):
    make_pattern("Quay", strands=" ".join("ABCDEFGH"), rows=("f f f f", "f f f"))
    page = maker.get(LIBRARY, filters).content.decode()
    assert words in page
    assert "This filter is left aside." in page
    assert "<bdi>Quay</bdi>" in page


def test_library_archive_says_what_goes_there(maker):
    make_pattern()
    assert "No pattern is archived." in maker.get(LIBRARY, {"kept": "archived"}).content.decode()
    Pattern.objects.update(archived_at=timezone.now())
    assert names(maker) == []
    assert names(maker, kept="archived") == ["Ferry stripe"]
    page = maker.get(LIBRARY, {"kept": "archived"}).content.decode()
    assert "1 archived pattern found" in page
    back = reverse("pattern_bring_back", args=[Pattern.objects.get().pk])
    assert f'action="{back}"' in page
    maker.post(back)
    assert names(maker) == ["Ferry stripe"]


# --- pictures --------------------------------------------------------------------------------


def test_picture_is_kept_until_what_it_shows_changes(maker):
    pattern = make_pattern()
    address = picture_address(maker.get(LIBRARY).content.decode())
    kept = maker.get(address)
    assert kept["Content-Type"] == "image/svg+xml"
    assert kept["Cache-Control"] == "private, max-age=31536000, immutable"
    again = maker.get(address, headers={"If-None-Match": kept["ETag"]})
    assert (again.status_code, again.content) == (304, b"")
    make_colourway(pattern, A=make_shade(colour="#a3262f"))
    # The old address is answered with what the pattern looks like now, and not kept.
    old = maker.get(address, headers={"If-None-Match": kept["ETag"]})
    assert (old.status_code, old["Cache-Control"]) == (200, "no-cache")
    assert "#a3262f" in old.content.decode()
    assert picture_address(maker.get(LIBRARY).content.decode()) != address


def test_picture_of_nothing_is_not_found(maker):
    assert maker.get(reverse("pattern_picture", args=[1])).status_code == 404
    pattern = make_pattern()
    Pattern.objects.update(text="damaged")
    assert maker.get(reverse("pattern_picture", args=[pattern.pk])).status_code == 404
    assert maker.get(LIBRARY).status_code == 200


def test_picture_is_only_for_those_signed_in(client, workshop):
    pattern = make_pattern()
    assert client.get(reverse("pattern_picture", args=[pattern.pk])).status_code == 302


def test_picture_refuses_other_methods(maker):
    pattern = make_pattern()
    assert maker.post(reverse("pattern_picture", args=[pattern.pk])).status_code == 405
