"""The pages on what a pattern does, its variants, and two patterns side by side."""

import re
from html import unescape

import pytest
from django.urls import reverse

from patterns.actions import change_pattern, keep_variant
from patterns.models import Ending, Gauge, Pattern, Size
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_pattern,
    make_shade,
    make_workshop,
    pattern_text,
)

HTMX = {"HX-Request": "true"}
# Strand 1 of A A ties every knot it is in; where the two meet, either may tie.
GREEDY = {"strands": "A A B B", "rows": ("fb fb", "bf")}


@pytest.fixture
def pattern(maker) -> Pattern:
    return make_pattern("Harbour stripes", **GREEDY)


def page_of(pattern: Pattern) -> str:
    return reverse("pattern_detail", args=[pattern.pk])


def variants_of(pattern: Pattern) -> str:
    return reverse("pattern_variants", args=[pattern.pk])


def read(response, status: int = 200) -> str:
    assert response.status_code == status
    return unescape(" ".join(response.content.decode().split()))


# --- what it does ----------------------------------------------------------------------------


def test_pattern_page_says_what_the_pattern_does(maker, pattern):
    page = read(maker.get(page_of(pattern)))
    # Medium with loose ties: 140 mm at 0.9 mm are ceil(140 / 1.2728) = ceil(109.99) = 110 rows.
    # Strand 3 ties the 55 odd rows and the 55 even ones, strand 4 is base 55 times, idle as often.
    assert "Strand 3 is the greediest" in page
    assert "strand 4 is the most frugal" in page
    assert "55 tied / (55 tied + 0 as base = 55) = 100 %" in page
    assert "0 tied / (0 tied + 55 as base = 55) = 0 %" in page
    assert "2 rows × 1.273 mm = 2.5 mm" in page
    assert "4 strands × 1.273 mm = 5.1 mm" in page
    assert "after 1 repeat, 2 rows" in page
    assert "it ties in 15 % of its knots or fewer" in page
    assert "from 85 % on" in page


def test_pattern_page_gives_the_rows_of_every_size(maker, pattern):
    page = read(maker.get(page_of(pattern)))
    for size in Size.objects.all():
        assert f"<bdi>{size.name}</bdi>" in page
    assert "140 mm / 1.273 mm a row = 109.99, rounded up to whole rows = 110" in page


def test_pattern_page_holds_the_flat_rule_against_the_strands(maker, pattern):
    page = read(maker.get(page_of(pattern)))
    assert "75 cm to 100 cm long, whatever the pattern (common practice, no source)" in page
    assert "strand 3 by" in page
    assert "the shortest that does" in page


def test_pattern_page_counts_thread_by_shade(maker, pattern):
    shade = make_shade("S1", "Sea green")
    make_colourway(pattern, "One shade", A=shade, B=shade)
    page = read(maker.get(page_of(pattern)))
    row = page.split("How much thread of each shade")[1].split("</table>")[0]
    assert "<bdi>S1 Sea green</bdi>" in row
    assert "A, B" in row
    assert '<td data-label="Pieces" class="num">4</td>' in row


def test_pattern_page_follows_the_choice(maker, pattern):
    thick = Gauge.objects.create(name="Thick", thread_diameter_mm="1.8")
    page = read(maker.get(page_of(pattern), {"gauge": thick.pk}, headers=HTMX))
    assert "2 rows × 2.546 mm = 5.1 mm" in page
    assert f"gauge={thick.pk}" in page.split("pattern_variants")[0]


def test_pattern_page_of_a_grid_says_that_nobody_changes_places(maker):
    page = read(maker.get(page_of(make_grid_pattern())))
    assert "In a grid nobody changes places" in page
    assert "Joins: a colour is cut, and begins again" in page
    assert "Every run, in the knots" in page
    assert "Can the greediest strand be spared?" not in page
    assert "Hardly tie" not in page


def test_pattern_page_needs_as_many_queries_for_many_strands(maker, query_count):
    small = make_pattern("Small")
    large = make_pattern("Large", strands=" ".join("ABCDEFGH"), rows=("f f f f", "f f f"))
    assert query_count(page_of(small)) == query_count(page_of(large))


# --- variants --------------------------------------------------------------------------------


def test_variants_page_and_fragment(maker, pattern):
    page = read(maker.get(variants_of(pattern)))
    fragment = maker.get(variants_of(pattern), headers=HTMX)
    assert "How can" in page
    assert read(fragment).startswith('<div id="variants">')
    assert "HX-Request" in fragment["Vary"]
    assert "The picture is the same." in page
    assert "compared knot by knot over all 110 rows" in page
    assert "instead of fb" in page


def test_variants_are_looked_for_only_when_asked(maker, pattern, monkeypatch):
    def refuse(*_):
        raise AssertionError("searched")

    monkeypatch.setattr("patterns.views.analysis._searched", refuse)
    page = read(maker.get(page_of(pattern)))
    assert f'href="{variants_of(pattern)}?size=' in page
    assert f'hx-get="{variants_of(pattern)}?size=' in page


def test_variants_of_a_pattern_that_is_even_says_no(maker):
    page = read(maker.get(variants_of(make_pattern("Even", strands="A B", rows=("f", "-")))))
    assert "No. Strand" in page
    assert "there is nothing to choose" in page


def test_variants_of_a_grid_says_why_there_are_none(maker):
    assert "there are no variants" in read(maker.get(variants_of(make_grid_pattern())))


@pytest.mark.parametrize("choice", [{"size": "999999"}, {"gauge": "x"}, {"size": "9" * 40}])
def test_variants_for_a_choice_that_is_gone_says_so(maker, pattern, choice):
    page = read(maker.get(variants_of(pattern), choice))
    assert "Choose a size, an ending and a gauge." in page


def test_variants_for_a_length_that_cannot_be_tied_says_why(maker):
    pattern = make_pattern("Long", rows=("f f f", "f f") * 60, finish="at_most")
    assert "One repeat of 120 rows is" in read(maker.get(variants_of(pattern)))


def test_variants_for_a_size_without_that_ending_says_so(maker, pattern):
    size, ending = Size.objects.get(name="Large"), Ending.objects.get(name="Plaited ties")
    size.knotted_lengths.filter(ending=ending).delete()
    page = read(maker.get(variants_of(pattern), {"size": size.pk, "ending": ending.pk}))
    assert "Large has no knotted length with Plaited ties." in page


def variant_text(page: str) -> str:
    return unescape(re.search(r'name="text" value="([^"]*)"', page)[1])


def test_keeping_a_variant_adds_it_with_its_colourways(maker, pattern):
    make_colourway(pattern, "Dusk")
    raw = maker.get(variants_of(pattern)).content.decode()
    response = maker.post(
        reverse("pattern_variant_keep", args=[pattern.pk]), {"text": variant_text(raw)}
    )
    kept = Pattern.objects.get(name="Harbour stripes, even")
    assert response["Location"] == page_of(kept)
    assert kept.definition.slots == pattern.definition.slots
    assert kept.definition.rows != pattern.definition.rows
    (colourway,) = kept.colourways.all()
    assert colourway.name == "Dusk"
    (original,) = pattern.colourways.all()
    assert colourway.shades_by_slot() == original.shades_by_slot()
    # The kept pattern says what the button promised.
    assert "Harbour stripes, even is in your library" in read(maker.get(page_of(kept)))


def test_keeping_a_variant_twice_numbers_its_name(maker, pattern):
    text = pattern_text("Harbour stripes, even")
    names = [keep_variant(pattern=pattern, text=text).name for _ in range(3)]
    assert names == ["Harbour stripes, even", "Harbour stripes, even 2", "Harbour stripes, even 3"]


def test_keeping_a_variant_with_the_longest_name_there_is(maker):
    pattern = make_pattern("x" * 80, **GREEDY)
    raw = maker.get(variants_of(pattern)).content.decode()
    for _ in range(2):
        maker.post(reverse("pattern_variant_keep", args=[pattern.pk]), {"text": variant_text(raw)})
    names = set(Pattern.objects.exclude(pk=pattern.pk).values_list("name", flat=True))
    assert names == {"x" * 74 + ", even", "x" * 74 + " 2"}


@pytest.mark.parametrize("text", ["", "no pattern", "\0", 'name = "A"', "x" * 70_000])
def test_keeping_what_is_no_pattern_is_refused_and_adds_nothing(maker, pattern, text):
    address = reverse("pattern_variant_keep", args=[pattern.pk])
    response = maker.post(address, {"text": text}, follow=True)
    assert "The variant was not kept." in read(response)
    assert Pattern.objects.count() == 1


def test_keeping_needs_a_post_a_pattern_and_a_maker(maker, client, pattern):
    address = reverse("pattern_variant_keep", args=[pattern.pk])
    assert maker.get(address).status_code == 405
    assert maker.post(variants_of(pattern)).status_code == 405
    assert maker.post(reverse("pattern_variant_keep", args=[999])).status_code == 404
    assert maker.get(reverse("pattern_variants", args=[999])).status_code == 404
    for url in (address, variants_of(pattern)):
        response = client.get(url)
        assert response.status_code == 302
        assert "sign-in" in response["Location"]


def test_lengths_read_as_the_maker_measures(maker, pattern):
    make_workshop(length_unit="in")
    page = read(maker.get(variants_of(pattern)))
    assert re.search(r"longest strand [\d/ ½¼¾]+ in", page)


# --- two patterns side by side ---------------------------------------------------------------


def compare(maker, **choice) -> str:
    return read(maker.get(reverse("pattern_compare"), choice))


@pytest.fixture
def other(maker) -> Pattern:
    return make_pattern("Ferry stripe", strands="A B B B", rows=("fb fb", "bf", "f f", "f"))


def test_compare_page_tells_rows_slots_and_numbers(maker, pattern, other):
    page = compare(maker, a=pattern.pk, b=other.pk)
    assert "How do <bdi>Harbour stripes</bdi> and <bdi>Ferry stripe</bdi> differ?" in page
    assert "2 rows are only in the second. 2 are the same." in page
    assert "Strand 2" in page
    assert "2 more" in page  # rows of a repeat
    assert page.count("<svg") >= 2
    # 110 rows: 55 of two knots, 55 of one.
    assert ">165</summary>" in page


def test_compare_page_marks_the_knots_that_differ(maker, pattern):
    changed = make_pattern("Changed", strands="A A B B", rows=("fb b", "bf"))
    page = compare(maker, a=pattern.pk, b=changed.pk)
    assert "1 row has other knots. 1 is the same." in page
    assert "<mark>b</mark>" in page
    assert "<mark>fb</mark>" in page
    assert ">knot 2</td>" in page


def test_compare_page_of_a_pattern_with_itself_says_the_same(maker, pattern):
    page = compare(maker, a=pattern.pk, b=pattern.pk)
    assert "they are the same pattern" in page


def test_compare_page_of_two_versions(maker, pattern):
    change_pattern(
        pattern=pattern,
        text=pattern_text("Harbour stripes", strands="A A B B", rows=("fb b", "bf")),
    )
    page = compare(maker, a=pattern.pk, a_version=1, b=pattern.pk)
    assert "<bdi>Harbour stripes, version 1</bdi>" in page
    assert "1 row has other knots." in page
    # The newest version is the pattern as it is.
    assert "they are the same pattern" in compare(maker, a=pattern.pk, a_version=2, b=pattern.pk)
    linked = read(maker.get(page_of(pattern)))
    assert f"{reverse('pattern_compare')}?a={pattern.pk}&a_version=1&b={pattern.pk}" in linked


@pytest.mark.parametrize("version", ["7", "x", "-1", "9" * 30, "\0"])
def test_compare_page_for_a_version_that_is_not_there_says_so(maker, pattern, version):
    page = compare(maker, a=pattern.pk, a_version=version, b=pattern.pk)
    assert "That is not there any more. Choose another." in page


@pytest.mark.parametrize("key", ["", "999", "x", "9" * 40, "\0", "1.5"])
def test_compare_page_for_a_pattern_that_is_not_there_says_so(maker, pattern, key):
    page = compare(maker, a=pattern.pk, b=key)
    assert "How do two patterns differ?" in page
    assert "Choose a pattern." in page or "That is not there" in page or "Null char" in page


def test_compare_page_without_a_choice_asks_for_one(maker, pattern):
    assert "Choose a pattern." in compare(maker)


def test_compare_page_of_a_diagonal_and_a_grid(maker, pattern):
    page = compare(maker, a=pattern.pk, b=make_grid_pattern().pk)
    assert "One is a diagonal pattern, the other a grid" in page
    assert "different" in page


def test_compare_page_where_a_size_cannot_be_tied_still_shows_the_rows(maker, pattern):
    long = make_pattern("Long", strands="A A B B", rows=("fb fb", "bf") * 90, finish="at_most")
    page = compare(maker, a=pattern.pk, b=long.pk)
    assert "One repeat of 180 rows is" in page
    assert "178 rows are only in the second." in page


def test_compare_page_for_an_unreadable_version_says_so(maker, pattern):
    pattern.versions.create(number=9, text="not a pattern")
    page = compare(maker, a=pattern.pk, a_version=9, b=pattern.pk)
    assert "One of these versions cannot be read any more." in page


def test_compare_page_needs_as_many_queries_for_many_patterns(maker, pattern, other, query_count):
    address = f"{reverse('pattern_compare')}?a={pattern.pk}&b={other.pk}"
    before = query_count(address), query_count(page_of(pattern))
    for number in range(12):
        make_pattern(f"Another {number}")
    assert (query_count(address), query_count(page_of(pattern))) == before


def test_compare_page_takes_no_post_and_needs_a_maker(maker, client):
    assert maker.post(reverse("pattern_compare")).status_code == 405
    assert client.get(reverse("pattern_compare")).status_code == 302


def test_pattern_page_offers_the_others_to_compare_with(maker, pattern, other):
    page = read(maker.get(page_of(pattern)))
    assert f'<option value="{other.pk}">Ferry stripe</option>' in page
    assert f'<option value="{pattern.pk}">' not in page.split("How does it differ")[1]


def test_pattern_page_of_the_only_pattern_offers_no_comparison(maker, pattern):
    assert "It is the only pattern in your library." in read(maker.get(page_of(pattern)))
