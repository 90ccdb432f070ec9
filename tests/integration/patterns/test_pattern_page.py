import re
from html import unescape

import pytest
from django.urls import reverse

from patterns.models import (
    Colourway,
    Ending,
    Gauge,
    KnottedLength,
    Pattern,
    PatternImport,
    Size,
)
from tests.factories import (
    make_batch,
    make_colourway,
    make_grid_pattern,
    make_order,
    make_pattern,
    make_shade,
    make_workshop,
    pattern_text,
)

HTMX = {"HX-Request": "true"}


@pytest.fixture
def pattern(maker) -> Pattern:
    return make_pattern()


def page_of(pattern: Pattern) -> str:
    return reverse("pattern_detail", args=[pattern.pk])


def read(response) -> str:
    assert response.status_code == 200
    return " ".join(response.content.decode().split())


def test_pattern_page_answers_how_long_each_strand_has_to_be(maker, pattern):
    # Medium with loose ties is 140 mm: ceil(140 / (0.9 sqrt 2)) = ceil(109.99) = 110 rows.
    page = read(maker.get(page_of(pattern)))
    assert "How long does each strand of" in page
    assert "and tie 110 rows." in page
    assert "Row 1: f f f" in page
    assert "Row 2: f f" in page
    assert page.count("as base ×") == 6
    assert page.count("rounded up to a multiple of 10 mm") == 6


@pytest.mark.parametrize(
    # Six strands all forward, by hand: a repeat moves every strand on in one ring of six, and
    # A B C C B A looks the same half way round it.
    ("strands", "sentence"),
    [
        (
            "A B C C B A",
            "After 3 repeats the colours stand in their first places again; "
            "after 6, every strand does.",
        ),
        ("A A B B C C", "After 6 repeats the colours stand in their first places again."),
        (
            "A A A A A A",
            "After each repeat the colours stand in their first places again; "
            "after 6, every strand does.",
        ),
    ],
)
def test_pattern_page_says_when_colours_and_strands_are_back(maker, strands, sentence):
    assert sentence in read(maker.get(page_of(make_pattern(strands=strands))))


def test_pattern_page_works_out_what_is_chosen(maker, pattern):
    small = Size.objects.get(name="Small child")
    folded = Ending.objects.get(name="Folded start, plaited end")
    thick = Gauge.objects.create(name="Thick", thread_diameter_mm="1.8")
    chosen = {"size": small.pk, "ending": folded.pk, "gauge": thick.pk}
    page = read(maker.get(page_of(pattern), chosen))
    # 95 mm: ceil(95 / (1.8 sqrt 2)) = ceil(37.3) = 38 rows.
    assert "Cut 3 pieces" in page
    assert "and tie 38 rows." in page
    assert "from the end of strand" in page


def test_pattern_page_uses_the_workshops_safety_and_step(maker, pattern):
    before = read(maker.get(page_of(pattern)))
    make_workshop(safety_share="0.25", rounding_step_mm="50", length_unit="in")
    after = read(maker.get(page_of(pattern)))
    assert "10 % safety" in before
    assert "25 % safety" in after
    assert "multiple of 50 mm" in after
    assert " in, and tie" in after


def test_pattern_page_is_drawn_in_the_colourway_that_is_chosen(maker, pattern):
    make_colourway(pattern, "Dusk", A=make_shade(colour="#101010"))
    dawn = make_colourway(pattern, "Dawn", A=make_shade("D1", "Pale gold", colour="#fedc00"))
    page = read(maker.get(page_of(pattern), {"colourway": dawn.pk}, headers=HTMX))
    assert 'fill="#fedc00"' in page
    assert 'fill="#101010"' not in page
    assert "D1 Pale gold" in page


def test_pattern_page_with_undyed_thread_says_so(maker, pattern):
    make_colourway(pattern, "Dusk", A=make_shade(colour="#101010"))
    page = read(maker.get(page_of(pattern), {"colourway": ""}, headers=HTMX))
    assert "Drawn in undyed thread" in page
    assert 'fill="#101010"' not in page


def test_pattern_page_with_htmx_is_the_fragment_alone(maker, pattern):
    response = maker.get(page_of(pattern), headers=HTMX)
    assert read(response).startswith('<section id="strands"')
    assert "HX-Request" in response["Vary"]


def test_pattern_page_for_a_size_without_that_ending_says_where_to_give_it(maker, pattern):
    size, ending = Size.objects.get(name="Large"), Ending.objects.get(name="Plaited ties")
    KnottedLength.objects.filter(size=size, ending=ending).delete()
    page = read(maker.get(page_of(pattern), {"size": size.pk, "ending": ending.pk}))
    assert "has no knotted length with" in page
    assert reverse("size_edit", args=[size.pk]) in page


def test_pattern_page_whose_finish_cannot_be_met_says_why(maker):
    pattern = make_pattern("Long", rows=("f f f", "f f") * 60, finish="at_most")
    page = read(maker.get(page_of(pattern)))
    assert "One repeat of 120 rows is 153 mm, longer than 140 mm." in page


def test_pattern_page_of_very_thin_thread_draws_a_part(maker, pattern):
    thin = Gauge.objects.create(name="Thin", thread_diameter_mm="0.1")
    page = read(maker.get(page_of(pattern), {"gauge": thin.pk}))
    assert "The drawing shows the first 300 rows." in page


@pytest.mark.parametrize("value", ["", "abc", "0", "-1", "99999", "9" * 400, "\0", "<script>"])
@pytest.mark.parametrize("field", ["size", "ending", "gauge", "colourway"])
def test_pattern_page_for_a_choice_that_is_none(maker, pattern, field, value):
    response = maker.get(page_of(pattern), {field: value})
    page = read(response)
    if not (field == "colourway" and value == ""):
        assert response.context["choice"].errors
        assert "Choose a size, an ending and a gauge." in page


def test_pattern_page_without_sizes_endings_and_gauges_points_to_them(maker, pattern):
    Size.objects.all().delete()
    Ending.objects.all().delete()
    Gauge.objects.all().delete()
    page = read(maker.get(page_of(pattern)))
    for name in ("size_list", "ending_list", "gauge_list"):
        assert reverse(name) in page


def test_pattern_page_does_not_take_another_patterns_colourway(maker, pattern):
    other = make_colourway(make_pattern("Other"))
    response = maker.get(page_of(pattern), {"colourway": other.pk})
    assert "colourway" in response.context["choice"].errors


def test_pattern_page_with_a_complete_colourway_offers_an_order(maker, pattern):
    make_colourway(pattern)
    assert f'class="button main" href="{reverse("batch_list")}"' in read(
        maker.get(page_of(pattern))
    )


def test_pattern_page_with_a_colourway_that_lacks_a_shade_does_not(maker, pattern):
    colourway = make_colourway(pattern)
    colourway.shades.filter(slot="B").delete()
    page = read(maker.get(page_of(pattern)))
    assert "It needs a shade for B" in page
    assert f'class="button main" href="{reverse("batch_list")}"' not in page


def test_pattern_page_makes_as_many_queries_for_twice_the_colourways(maker, pattern, query_count):
    for number in range(2):
        make_colourway(pattern, f"First {number}")
    few = query_count(page_of(pattern))
    for number in range(2):
        make_colourway(pattern, f"Second {number}")
    assert query_count(page_of(pattern)) == few


@pytest.mark.parametrize(
    "name",
    ["pattern_detail", "pattern_edit", "pattern_edit_text", "pattern_file", "pattern_remove"],
)
def test_pattern_that_is_not_there_is_not_found(maker, name):
    assert maker.get(reverse(name, args=[987_654_321_987_654_321])).status_code == 404


@pytest.mark.parametrize(
    "name",
    ["pattern_detail", "pattern_edit", "pattern_edit_text", "pattern_file", "pattern_remove"],
)
def test_pattern_signed_out_goes_to_the_sign_in(client, workshop, name):
    response = client.get(reverse(name, args=[make_pattern().pk]))
    assert response.status_code == 302


@pytest.mark.parametrize("name", ["pattern_detail", "pattern_file"])
def test_pattern_page_refuses_other_methods(maker, pattern, name):
    assert maker.post(reverse(name, args=[pattern.pk])).status_code == 405


def test_pattern_with_markup_for_a_name_is_shown_as_text(maker):
    pattern = make_pattern("<script>alert(1)</script>")
    make_colourway(pattern, "<img src=x onerror=alert(2)>")
    for name in ("pattern_detail", "pattern_edit", "pattern_edit_text", "pattern_remove"):
        page = read(maker.get(reverse(name, args=[pattern.pk])))
        assert "<script>alert" not in page
        assert "<img" not in page


def test_pattern_edit_changes_text_and_name(maker, pattern):
    text = pattern_text("Renamed", strands="A B C D", rows=("f b", "f"))
    response = maker.post(
        reverse("pattern_edit_text", args=[pattern.pk]), {"text": text}, follow=True
    )
    assert "Renamed is saved." in read(response)
    pattern.refresh_from_db()
    assert (pattern.name, pattern.text, pattern.strand_count) == ("Renamed", text, 4)


def test_pattern_edit_that_needs_a_new_shade_says_which(maker, pattern):
    make_colourway(pattern, "Dusk")
    response = maker.post(
        reverse("pattern_edit_text", args=[pattern.pk]),
        {"text": pattern_text(strands="A A B B C D")},
        follow=True,
    )
    page = read(response)
    assert "It needs a shade for D before it can be ordered." in page
    assert reverse("colourway_edit", args=[Colourway.objects.get().pk]) in page


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "Fill this in."),
        ("name = 3", "The file has no 'technique'"),
        (pattern_text(rows=("f f f", "f f q")), "Row 2, knot 3"),
        (pattern_text("Taken"), "A pattern called Taken is there already."),
        ("x" * 70_000, "more than 64 KB"),
        ("\0", "hidden character"),
    ],
)
def test_pattern_edit_wrong_changes_nothing_and_keeps_what_was_typed(maker, pattern, text, words):
    make_pattern("Taken")
    before = pattern.text
    response = maker.post(reverse("pattern_edit_text", args=[pattern.pk]), {"text": text})
    assert words in response.content.decode().replace("&#x27;", "'")
    pattern.refresh_from_db()
    assert (pattern.name, pattern.text) == ("Ferry stripe", before)
    assert response.context["form"]["text"].value() == text


@pytest.mark.parametrize(
    ("name", "file_name"),
    [
        ("Ferry stripe", 'attachment; filename="ferry-stripe.toml"'),
        ('../../x"; a', 'attachment; filename="x-a.toml"'),
        ("!!!", 'attachment; filename="pattern-'),
        ("נמל", "attachment; filename*=utf-8''"),
    ],
)
def test_pattern_file_is_its_text_under_a_safe_name(maker, name, file_name):
    pattern = make_pattern(name.replace('"', '\\"')) if '"' in name else make_pattern(name)
    response = maker.get(reverse("pattern_file", args=[pattern.pk]))
    assert response.content.decode() == pattern.text
    assert response["Content-Disposition"].startswith(file_name)
    assert response["Content-Type"] == "application/toml; charset=utf-8"


def test_pattern_file_can_be_added_again(maker, pattern):
    text = maker.get(reverse("pattern_file", args=[pattern.pk])).content.decode()
    maker.post(reverse("pattern_remove", args=[pattern.pk]))
    assert not Pattern.objects.exists()
    maker.post(reverse("pattern_import"), {"text": text})
    maker.post(
        reverse("pattern_import_check", args=[PatternImport.objects.get().pk]), {"do-1": "add"}
    )
    assert Pattern.objects.get().text == pattern.text


def test_pattern_remove_asks_once(maker, pattern):
    make_colourway(pattern)
    page = read(maker.get(reverse("pattern_remove", args=[pattern.pk])))
    assert "its 1 colourway will be gone. This cannot be undone." in page
    assert Pattern.objects.exists()
    response = maker.post(reverse("pattern_remove", args=[pattern.pk]), follow=True)
    assert "is removed from your library" in read(response)
    assert not Pattern.objects.exists()


def test_pattern_remove_in_use_is_refused_with_the_reason(maker, pattern):
    make_order(make_batch(), make_colourway(pattern))
    url = reverse("pattern_remove", args=[pattern.pk])
    assert "is used by 1 order line and" not in read(maker.get(url))
    assert "Ferry stripe is used by 1 order line." in read(maker.get(url))
    assert "Remove it for good" not in read(maker.get(url))
    assert "Ferry stripe is used by 1 order line." in read(maker.post(url))
    assert Pattern.objects.exists()


# --- how it is read -----------------------------------------------------------------------------


def test_pattern_page_shows_how_it_is_read(maker):
    pattern = make_pattern()
    response = maker.get(page_of(pattern))
    page = read(response)
    rows = response.context["answer"].rows
    assert "How do I read it?" in page
    assert f"Row {rows} of the band, its last" in page
    # All forward on AABBCC: the colours are back after 6 repeats of two rows.
    assert "Working chart of Ferry stripe, rows 1 to 12" in page
    assert "Rows 3 to 12 of the chart are the repeat again" in page


def test_pattern_page_links_to_the_card_of_its_choice(maker):
    pattern = make_pattern()
    size = Size.objects.get(name="Large")
    page = maker.get(page_of(pattern), {"size": size.pk}).content.decode()
    links = re.findall(r'href="([^"]+/card\.pdf\?[^"]+)"', page)
    assert len(links) == 2
    for link, paper in zip(links, ("a5", "half-letter"), strict=True):
        address = unescape(link)
        assert f"size={size.pk}&" in address
        assert address.endswith(f"paper={paper}")
        assert maker.get(address)["Content-Type"] == "application/pdf"


def test_pattern_page_fragment_brings_the_reading_along(maker):
    pattern = make_pattern()
    fragment = maker.get(page_of(pattern), headers=HTMX).content.decode()
    assert '<section id="strands"' in fragment
    assert '<section id="reading" hx-swap-oob="true"' in fragment
    assert "hx-swap-oob" not in maker.get(page_of(pattern)).content.decode()


def test_pattern_page_reads_a_centred_picture_by_the_rows_of_the_band(maker):
    pattern = make_grid_pattern(finish="centred")
    response = maker.get(page_of(pattern))
    # Five rows of picture in the middle of the band.
    before = (response.context["answer"].rows - 5) // 2
    assert f"Tie rows 1 to {before} in A throughout, then the picture" in read(response)
    assert f"Row {before + 1}, from the " in read(response)


def test_pattern_page_without_an_answer_still_shows_the_rows(maker):
    KnottedLength.objects.all().delete()
    page = read(maker.get(page_of(make_pattern())))
    assert "Row 2: f f" in page
    assert "Working chart of" in page
    assert "of the band, its last" not in page


def test_pattern_page_charts_no_more_rows_than_it_can_show(maker):
    # 60 strands have 30 knots a row, and 1500 knots are the most: 50 rows.
    strands = " ".join("ABCDEF"[number % 6] for number in range(60))
    rows = (" ".join(["fb"] * 30), " ".join(["fb"] * 29)) * 50
    pattern = make_pattern(strands=strands, rows=rows)
    page = read(maker.get(page_of(pattern)))
    assert "The chart goes to row 50" in page
    assert "Row 100: fb fb" in page
