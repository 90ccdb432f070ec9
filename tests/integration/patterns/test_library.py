import pytest
from django.urls import reverse

from tests.factories import make_colourway, make_pattern, make_shade, pattern_text

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
    make_colourway(make_pattern("Ferry stripe"), "Dusk", A=madder)
    page = maker.get(LIBRARY).content.decode()
    assert "6 strands · 2 rows a repeat" in page
    assert "<title>Ferry stripe in Dusk</title>" in page
    assert 'fill="#a3262f"' in page


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
        assert "No pattern is called" in page


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


def test_library_over_sixty_patterns_has_pages(maker):
    for number in range(61):
        make_pattern(f"Pattern {number:02}")
    first = maker.get(LIBRARY).content.decode()
    second = maker.get(LIBRARY, {"page": 2}).content.decode()
    assert first.count("library-entry") == 60
    assert second.count("library-entry") == 1
    assert "Page 1 of 2" in first


@pytest.mark.parametrize("words", ["\0", "<script>alert(1)</script>", "%_\\", "x" * 10_000])
def test_library_search_for_anything_is_answered(maker, words):
    response = maker.get(LIBRARY, {"q": words})
    assert response.status_code == 200
    assert b"<script>alert" not in response.content


def test_library_search_with_a_null_looks_for_the_rest(maker):
    # SQLite would bear it; PostgreSQL refuses a text with it.
    assert maker.get(LIBRARY, {"q": "fer\0ry"}).context["words"] == "fer ry"


def test_library_refuses_other_methods(maker):
    assert maker.post(LIBRARY).status_code == 405


def test_library_makes_as_many_queries_for_twice_the_patterns(maker, query_count):
    def add(numbers):
        for number in numbers:
            make_colourway(make_pattern(f"Pattern {number}"))

    add(range(3))
    few = query_count(LIBRARY)
    add(range(3, 6))
    assert query_count(LIBRARY) == few
