import pytest
from django.urls import reverse

from inventory.models import Shade
from patterns.models import Colourway, Pattern
from tests.factories import make_batch, make_colourway, make_order, make_pattern, make_shade

HTMX = {"HX-Request": "true"}


@pytest.fixture
def pattern(maker) -> Pattern:
    return make_pattern()


@pytest.fixture
def shades(db) -> list[Shade]:
    return [make_shade("M1", "Madder"), make_shade("I1", "Indigo"), make_shade("W1", "Weld")]


def new(pattern: Pattern) -> str:
    return reverse("colourway_new", args=[pattern.pk])


def typed(shades: list[Shade], **changes) -> dict:
    slots = {f"slot_{slot}": shade.pk for slot, shade in zip("ABC", shades, strict=True)}
    return {"name": "Dusk"} | slots | changes


def test_colourway_new_without_shades_says_to_add_them_first(maker, pattern):
    page = maker.get(new(pattern)).content.decode()
    assert "You have no shades yet" in page
    assert reverse("shade_new") in page
    assert "Save the colourway" not in page


def test_colourway_new_asks_for_every_slot_with_its_strands(maker, pattern, shades):
    page = maker.get(new(pattern)).content.decode()
    assert "A: strands 1, 2" in page
    assert "C: strands 5, 6" in page
    assert "M1 Madder" in page


def test_colourway_new_saves_the_choice_and_shows_it(maker, pattern, shades):
    response = maker.post(new(pattern), typed(shades), follow=True)
    colourway = Colourway.objects.get()
    assert colourway.shades_by_slot() == dict(zip("ABC", shades, strict=True))
    assert response.redirect_chain[-1][0].endswith(f"?colourway={colourway.pk}")
    assert reverse("batch_list") in response.content.decode()


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": ""}, "Fill this in."),
        ({"name": "n" * 61}, "At most 60 characters"),
        ({"name": "a\0"}, "hidden character"),
        ({"slot_B": ""}, "Choose a shade for B."),
        ({"slot_B": "999999"}, "That shade is not on your list."),
        ({"slot_B": "\0"}, "That shade is not on your list."),
        ({"slot_B": "<script>"}, "That shade is not on your list."),
    ],
)
def test_colourway_new_wrong_says_what_and_keeps_the_rest(maker, pattern, shades, change, words):
    response = maker.post(new(pattern), typed(shades, **change))
    page = response.content.decode()
    assert words in page
    assert f'<option value="{shades[2].pk}" selected>' in page
    assert not Colourway.objects.exists()


def test_colourway_new_with_a_taken_name_says_so(maker, pattern, shades):
    make_colourway(pattern, "Dusk")
    page = maker.post(new(pattern), typed(shades, name="DUSK")).content.decode()
    assert "Ferry stripe has a colourway called DUSK already." in page
    assert Colourway.objects.count() == 1


def test_colourway_preview_draws_and_saves_nothing(maker, pattern, shades):
    red = make_shade("R1", colour="#aa1122")
    data = typed(shades, slot_A=red.pk, slot_C="", preview="yes")
    whole = maker.post(new(pattern), data).content.decode()
    fragment = maker.post(new(pattern), data, headers=HTMX).content.decode()
    assert not Colourway.objects.exists()
    for page in (whole, fragment):
        assert 'fill="#aa1122"' in page
    assert "Choose a shade for C." not in whole
    assert f'<option value="{red.pk}" selected>' in whole
    assert fragment.lstrip().startswith('<div id="colourway-band"')


@pytest.mark.parametrize("value", ["abc", "-1", "9" * 5_000, "\0"])
def test_colourway_preview_of_anything_is_answered(maker, pattern, shades, value):
    response = maker.post(new(pattern), {"preview": "yes", "slot_A": value, "name": value})
    assert response.status_code == 200


def test_colourway_edit_starts_from_what_is_chosen(maker, pattern, shades):
    maker.post(new(pattern), typed(shades))
    colourway = Colourway.objects.get()
    url = reverse("colourway_edit", args=[colourway.pk])
    assert maker.get(url).content.decode().count(" selected>") == 3
    maker.post(url, typed(shades[::-1], name="Dawn"))
    colourway.refresh_from_db()
    assert colourway.name == "Dawn"
    assert colourway.shades_by_slot()["A"] == shades[2]
    assert Colourway.objects.count() == 1


def test_colourway_edit_completes_what_lacked_a_shade(maker, pattern, shades):
    colourway = make_colourway(pattern, "Dusk")
    colourway.shades.filter(slot="B").delete()
    maker.post(reverse("colourway_edit", args=[colourway.pk]), typed(shades))
    assert set(Colourway.objects.get().shades_by_slot()) == {"A", "B", "C"}


def test_colourway_remove_can_be_undone(maker, pattern, shades):
    maker.post(new(pattern), typed(shades))
    before = Colourway.objects.get()
    was = before.shades_by_slot()
    response = maker.post(reverse("colourway_remove", args=[before.pk]), follow=True)
    assert not Colourway.objects.exists()
    page = response.content.decode()
    assert "Undo" in page
    undo = {"name": "Dusk"} | {f"slot_{slot}": shade.pk for slot, shade in was.items()}
    for name, value in undo.items():
        assert f'name="{name}" value="{value}"' in page
    maker.post(new(pattern), undo)
    assert Colourway.objects.get().shades_by_slot() == was


def test_colourway_remove_in_use_is_refused_with_the_reason(maker, pattern):
    colourway = make_colourway(pattern)
    make_order(make_batch(), colourway)
    response = maker.post(reverse("colourway_remove", args=[colourway.pk]), follow=True)
    assert "Harbour is used by 1 order line." in response.content.decode()
    assert Colourway.objects.exists()


def test_colourway_pages_wrong_method_and_signed_out(maker, client, pattern):
    colourway = make_colourway(pattern)
    assert maker.get(reverse("colourway_remove", args=[colourway.pk])).status_code == 405
    assert maker.put(new(pattern)).status_code == 405
    assert client.get(new(pattern)).status_code == 302
    assert client.post(reverse("colourway_remove", args=[colourway.pk])).status_code == 302
    assert Colourway.objects.exists()


def test_colourway_that_is_not_there_is_not_found(maker):
    assert maker.get(reverse("colourway_new", args=[99])).status_code == 404
    assert maker.get(reverse("colourway_edit", args=[99])).status_code == 404
    assert maker.post(reverse("colourway_remove", args=[99])).status_code == 404


def test_colourway_form_makes_as_many_queries_for_twice_the_shades(maker, pattern, query_count):
    for _ in range(3):
        make_shade()
    few = query_count(new(pattern))
    for _ in range(3):
        make_shade()
    assert query_count(new(pattern)) == few
