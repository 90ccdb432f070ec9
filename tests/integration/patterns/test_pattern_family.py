import pytest
from django.urls import reverse

from patterns.families import FAMILIES, make_family
from patterns.models import Pattern
from tests.factories import make_pattern

FAMILY = "/patterns/new/family/"
GOOD = {"family": "zigzag", "strands": "9", "colours": "A A B C", "name": "Tacking"}


def test_family_becomes_an_ordinary_pattern(maker):
    response = maker.post(FAMILY, GOOD, follow=True)
    pattern = Pattern.objects.get()
    assert pattern.definition == make_family("zigzag", 9, "AABC", name="Tacking")
    assert response.redirect_chain[-1][0] == reverse("pattern_detail", args=[pattern.pk])
    assert reverse("pattern_edit", args=[pattern.pk]) in response.content.decode()


@pytest.mark.parametrize("key", FAMILIES)
def test_every_family_is_offered_and_drawn(maker, key):
    assert f"?family={key}" in maker.get("/patterns/new/").content.decode()
    page = maker.get(FAMILY, {"family": key}).content.decode()
    assert FAMILIES[key].sentence in page
    assert "<svg" in page


def test_fragment_and_page_show_the_same(maker):
    whole = maker.get(FAMILY, GOOD).content.decode()
    fragment = maker.get(FAMILY, GOOD, headers={"HX-Request": "true"}).content.decode()
    assert fragment.startswith("<section")
    assert fragment.strip() in whole
    assert not Pattern.objects.exists()


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"family": "spiral"}, "Choose one from the list."),
        ({"family": ""}, "Choose one from the list."),
        ({"strands": "2"}, "Zigzag takes 3 to 60 strands, not 2."),
        ({"strands": ""}, "Type how many strands."),
        ({"strands": "61"}, "2 to 60"),
        ({"strands": "-1"}, "2 to 60"),
        ({"strands": "many"}, "whole number"),
        ({"strands": "9" * 400}, "2 to 60"),
        ({"colours": ""}, "Type the colours as letters, or how many."),
        ({"colours": "0"}, "Take 1 to 26 colours."),
        ({"colours": "9" * 5000}, "Take 1 to 26 colours."),
        ({"colours": "12"}, "has room for 9 colours; these are 12. Take 3 out"),
        ({"colours": "A ! B"}, "Colour 2: &#x27;!&#x27; is not a letter"),
        ({"colours": "A 3"}, "does not say which letter"),
        ({"colours": "A\0"}, "hidden character"),
        ({"family": "hearts", "colours": "A"}, "Hearts takes 2 colours or more."),
        ({"name": "x" * 81}, "80"),
        ({"name": "a\u202eb"}, "hidden character"),
    ],
)
def test_what_cannot_be_made_is_said_and_kept(maker, change, words):
    for answer in (maker.post(FAMILY, GOOD | change), maker.get(FAMILY, GOOD | change)):
        assert answer.status_code == 200
        assert words in answer.content.decode()
    assert not Pattern.objects.exists()


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"strands": "2"}, "strands"),
        ({"colours": "12"}, "colours"),
        ({"family": "hearts", "colours": "A"}, "colours"),
        ({"name": "\u200b"}, "name"),
    ],
)
def test_what_cannot_be_made_is_marked_where_it_stands(maker, change, field):
    assert list(maker.post(FAMILY, GOOD | change).context["form"].errors) == [field]


@pytest.mark.parametrize("typed", ["3", "ABC", "a, b, c", " A B C "])
def test_colours_as_a_number_or_as_letters(maker, typed):
    maker.post(FAMILY, GOOD | {"colours": typed})
    assert Pattern.objects.get().definition.slots == make_family("zigzag", 9, "ABC").slots


def test_page_says_the_room_for_colours_and_when_the_picture_is_back(maker):
    page = maker.get(
        FAMILY, {"family": "stripe", "strands": "8", "colours": "A B"}
    ).content.decode()
    assert "There is room for 8 colours." in page
    assert "2 rows a repeat; after 8 repeats the picture begins again." in page


def test_name_that_is_taken_is_said(maker):
    make_pattern("Tacking")
    assert "called Tacking is there already" in maker.post(FAMILY, GOOD).content.decode()
    assert Pattern.objects.count() == 1


def test_other_methods_and_signed_out(maker, client):
    assert maker.put(FAMILY).status_code == 405


def test_signed_out_goes_to_the_sign_in(client, workshop):
    assert client.get(FAMILY).status_code == 302
