import pytest
from django.urls import reverse

from patterns.families import FAMILIES, make_family
from patterns.models import Pattern
from tests.factories import make_pattern

FAMILY = "/patterns/new/family/"
GOOD = {"family": "zigzag", "strands": "9", "colours": "3", "name": "Tacking"}


def test_family_becomes_an_ordinary_pattern(maker):
    response = maker.post(FAMILY, GOOD, follow=True)
    pattern = Pattern.objects.get()
    assert pattern.definition == make_family("zigzag", 9, ("A", "B", "C"), name="Tacking")
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
        ({"strands": "3"}, "Zigzag takes 4 to 60 strands, not 3."),
        ({"strands": "61"}, "60"),
        ({"strands": "-1"}, "2"),
        ({"strands": "many"}, "whole number"),
        ({"strands": "9" * 400}, "60"),
        ({"colours": "0"}, "1"),
        ({"colours": "12"}, "takes 2 to 9 colours, not 12"),
        ({"name": "x" * 81}, "80"),
        ({"name": "a\u202eb"}, "hidden character"),
    ],
)
def test_what_cannot_be_made_is_said_and_kept(maker, change, words):
    for answer in (maker.post(FAMILY, GOOD | change), maker.get(FAMILY, GOOD | change)):
        assert answer.status_code == 200
        assert words in answer.content.decode()
    assert not Pattern.objects.exists()


def test_name_that_is_taken_is_said(maker):
    make_pattern("Tacking")
    assert "called Tacking is there already" in maker.post(FAMILY, GOOD).content.decode()
    assert Pattern.objects.count() == 1


def test_other_methods_and_signed_out(maker, client):
    assert maker.put(FAMILY).status_code == 405


def test_signed_out_goes_to_the_sign_in(client, workshop):
    assert client.get(FAMILY).status_code == 302
