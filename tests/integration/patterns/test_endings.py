from decimal import Decimal

import pytest
from django.forms import model_to_dict
from django.urls import reverse

from patterns.models import Ending
from tests.factories import make_batch, make_colourway, make_order, make_pattern

LIST = "/patterns/endings/"
NEW = "/patterns/endings/new/"
HTMX = {"HX-Request": "true"}
ENDING = {
    "name": "Bead and loop",
    "start": "folded",
    "start_tie_mm": "0",
    "end_tie_mm": "6",
    "take_up": "1,25",
    "closing_knot_mm": "3 cm",
    "grip_mm": "90 mm",
    "fold_loop_mm": "5",
    "single_start_mm": "8",
    "sliding_piece_mm": "0",
    "has_metal_or_button": "on",
}


def test_ending_list_shows_what_each_comes_to(maker):
    page = maker.get(LIST).content.decode()
    # Loose ties: 90 + 30 + 80 = 200 at each end; 660 + 400 = 1060 mm.
    assert "a piece of <b>106 cm</b>" in page
    assert page.count(">default</small>") == 1


def test_ending_list_empty_says_what_goes_there(maker):
    Ending.objects.all().delete()
    assert "Your endings go here" in maker.get(LIST).content.decode()


def test_ending_new_reads_every_allowance(maker):
    maker.post(NEW, ENDING)
    ending = Ending.objects.get(name="Bead and loop")
    assert (ending.end_tie_mm, ending.closing_knot_mm, ending.grip_mm) == (60, 30, 90)
    assert (ending.fold_loop_mm, ending.single_start_mm, ending.take_up) == (
        50,
        80,
        Decimal("1.25"),
    )
    assert ending.has_metal_or_button
    assert not ending.is_default
    assert not ending.knotted_lengths.exists()


def test_ending_new_takes_knotted_lengths_from_another(maker):
    like = Ending.objects.get(name="Loop and button")
    maker.post(NEW, ENDING | {"lengths_like": like.pk})
    assert Ending.objects.get(name="Bead and loop").knotted_lengths.count() == 6


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": "PLAITED TIES"}, "The name PLAITED TIES is taken."),
        ({"name": ""}, "Fill this in."),
        ({"start": "sideways"}, "Choose one from the list."),
        ({"take_up": "0.9"}, "must be from 1 to 3"),
        ({"take_up": "1e0"}, "is not a number"),
        ({"take_up": "1.255"}, "at most 2 decimal places"),
        ({"take_up": "9" * 10_000}, "too long"),
        ({"grip_mm": "-1"}, "cannot be negative"),
        ({"grip_mm": "3 m"}, "from 0 mm to 200 cm"),
        ({"grip_mm": "\0"}, "hidden character"),
        ({"end_tie_mm": ""}, "Type a length; 0 where it takes none."),
        ({"lengths_like": "abc"}, "Choose one from the list."),
    ],
)
def test_ending_new_wrong_says_what_and_keeps_the_rest(maker, change, words):
    page = maker.post(NEW, ENDING | change).content.decode()
    assert words in page
    assert "has_metal_or_button" in page
    assert 'value="8"' in page
    assert Ending.objects.count() == 5


def test_ending_preview_shows_the_sum_and_saves_nothing(maker):
    data = ENDING | {"preview": "yes"}
    whole = maker.post(NEW, data).content.decode()
    fragment = maker.post(NEW, data, headers=HTMX).content.decode()
    for page in (whole, fragment):
        # 60 x 1.25 + 30 + 90 = 195; pair: 660 + 550 + 2 x 195 + 50 = 1650.
        assert "one piece of <b>165 cm</b>" in page
    assert fragment.lstrip().startswith('<section id="ending-example"')
    assert not Ending.objects.filter(name="Bead and loop").exists()


def test_ending_preview_of_something_wrong_asks_for_the_rest(maker):
    data = ENDING | {"preview": "yes", "grip_mm": "wide"}
    assert "Fill in all lengths" in maker.post(NEW, data, headers=HTMX).content.decode()


def test_ending_edit_left_as_shown_changes_nothing(maker):
    ending = Ending.objects.get(name="Folded start, plaited end")
    before = model_to_dict(ending)
    url = reverse("ending_edit", args=[ending.pk])
    form = maker.get(url).context["form"]
    data = {name: form.fields[name].prepare_value(form[name].value()) for name in form.fields}
    del data["has_metal_or_button"]
    maker.post(url, data)
    ending.refresh_from_db()
    assert model_to_dict(ending) == before
    assert "lengths_like" not in form.fields


def test_ending_default_moves(maker):
    ending = Ending.objects.get(name="Loop and button")
    page = maker.post(reverse("ending_default", args=[ending.pk]), follow=True).content.decode()
    assert "Loop and button is the default now." in page
    assert Ending.objects.get(is_default=True) == ending


def test_ending_remove_asks_once(maker):
    ending = Ending.objects.get(name="Loop and button")
    url = reverse("ending_remove", args=[ending.pk])
    page = maker.get(url).content.decode()
    assert "its knotted length in 6 sizes will be gone. This cannot be undone." in page
    maker.post(url)
    assert not Ending.objects.filter(pk=ending.pk).exists()


def test_ending_remove_in_use_or_default_is_refused_with_the_reason(maker):
    make_order(make_batch(), make_colourway(make_pattern()), ending="Plaited ties")
    used = Ending.objects.get(name="Plaited ties")
    default = Ending.objects.get(is_default=True)
    for ending, words in ((used, "is used by 1 order line"), (default, "is the default")):
        url = reverse("ending_remove", args=[ending.pk])
        assert words in maker.get(url).content.decode()
        assert words in maker.post(url).content.decode()
    assert Ending.objects.count() == 5


def test_ending_pages_wrong_method_signed_out_and_not_there(maker, client):
    ending = Ending.objects.first()
    assert maker.get(reverse("ending_default", args=[ending.pk])).status_code == 405
    assert maker.post(LIST).status_code == 405
    for name in ("ending_edit", "ending_remove"):
        assert maker.get(reverse(name, args=[9_999])).status_code == 404
        assert client.get(reverse(name, args=[ending.pk])).status_code == 302
    assert maker.post(reverse("ending_default", args=[9_999])).status_code == 404
    assert maker.post(NEW, {}).context["form"].errors


def test_ending_list_makes_as_many_queries_for_twice_the_endings(maker, query_count):
    few = query_count(LIST)
    for number in range(5):
        maker.post(NEW, ENDING | {"name": f"Ending {number}"})
    assert Ending.objects.count() == 10
    assert query_count(LIST) == few
