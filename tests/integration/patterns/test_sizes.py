import pytest
from django.urls import reverse

from inventory.models import Workshop
from patterns.models import Ending, Size
from tests.factories import make_batch, make_colourway, make_order, make_pattern, make_workshop

LIST = "/patterns/sizes/"
NEW = "/patterns/sizes/new/"
SIZE = {"name": "Toddler", "wrist_min_mm": "9.5", "wrist_max_mm": "10,5 cm", "is_child": "on"}


def knotted(ending: str) -> str:
    return f"knotted_{Ending.objects.get(name=ending).pk}"


def test_size_list_shows_wrists_and_knotted_lengths(maker):
    page = maker.get(LIST).content.decode()
    assert "15 to 16.5" in page
    assert "Knotted lengths and wrists in cm." in page


def test_size_list_without_an_ending_length_says_none(maker):
    Size.objects.get(name="Large").knotted_lengths.first().delete()
    assert 'class="num">none</td>' in maker.get(LIST).content.decode()


def test_size_list_empty_says_what_goes_there(maker):
    Size.objects.all().delete()
    assert "Your sizes go here" in maker.get(LIST).content.decode()


def test_size_new_reads_lengths_as_typed(maker):
    ties, button = knotted("Plaited ties"), knotted("Loop and button")
    response = maker.post(NEW, SIZE | {ties: "8.5", button: "4 1/2 in"}, follow=True)
    assert "Toddler is saved." in response.content.decode()
    size = Size.objects.get(name="Toddler")
    assert (size.wrist_min_mm, size.wrist_max_mm, size.is_child) == (95, 105, True)
    lengths = dict(size.knotted_lengths.values_list("ending__name", "knotted_length_mm"))
    assert lengths == {"Plaited ties": 85, "Loop and button": 114}


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": ""}, "Fill this in."),
        ({"name": "MEDIUM"}, "The name MEDIUM is taken."),
        ({"name": "n" * 10_000}, "At most 40 characters"),
        ({"name": "a\0b"}, "hidden character"),
        ({"wrist_min_mm": ""}, "Type the girth of a wrist."),
        ({"wrist_min_mm": "wide"}, "is not a length"),
        ({"wrist_min_mm": "-5"}, "cannot be negative"),
        ({"wrist_min_mm": "1"}, "from 5 cm to 40 cm"),
        ({"wrist_max_mm": "9" * 39}, "is too long"),
        ({"wrist_max_mm": "9.5"}, "has to be larger than the smallest"),
        ({"wrist_max_mm": "\0"}, "hidden character"),
    ],
)
def test_size_new_wrong_says_what_and_keeps_the_rest(maker, change, words):
    page = maker.post(NEW, SIZE | change).content.decode()
    assert words in page
    assert 'name="is_child" id="id_is_child" checked' in page
    assert Size.objects.count() == 6


@pytest.mark.parametrize(
    ("length", "words"), [("1 cm", "from 2 cm to 100 cm"), ("x", "not a length")]
)
def test_size_new_with_a_wrong_knotted_length_saves_nothing(maker, length, words):
    page = maker.post(NEW, SIZE | {knotted("Plaited ties"): length}).content.decode()
    assert words in page
    assert Size.objects.count() == 6


def test_size_edit_left_as_shown_in_inches_keeps_its_millimetres(maker):
    make_workshop(length_unit=Workshop.LengthUnit.INCHES)
    size = Size.objects.get(name="Medium")
    before = dict(size.knotted_lengths.values_list("ending_id", "knotted_length_mm"))
    url = reverse("size_edit", args=[size.pk])
    form = maker.get(url).context["form"]
    data = {name: form[name].value() for name in form.fields if name != "is_child"}
    maker.post(url, {name: form.fields[name].prepare_value(value) for name, value in data.items()})
    size.refresh_from_db()
    assert (size.wrist_min_mm, size.wrist_max_mm) == (150, 165)
    assert dict(size.knotted_lengths.values_list("ending_id", "knotted_length_mm")) == before


def test_size_edit_emptied_length_is_dropped(maker):
    size = Size.objects.get(name="Medium")
    data = {"name": "Medium", "wrist_min_mm": "15", "wrist_max_mm": "16.5"}
    maker.post(reverse("size_edit", args=[size.pk]), data | {knotted("Loose ties"): "13"})
    assert [row.knotted_length_mm for row in size.knotted_lengths.all()] == [130]


def test_size_remove_can_be_undone(maker):
    size = Size.objects.get(name="Child")
    before = dict(size.knotted_lengths.values_list("ending_id", "knotted_length_mm"))
    page = maker.post(reverse("size_remove", args=[size.pk]), follow=True).content.decode()
    assert not Size.objects.filter(name="Child").exists()
    assert "Undo" in page
    undo = {"name": "Child", "wrist_min_mm": "120 mm", "wrist_max_mm": "135 mm", "is_child": "on"}
    undo |= {f"knotted_{key}": f"{length_mm} mm" for key, length_mm in before.items()}
    for name, value in undo.items():
        assert f'name="{name}" value="{value}"' in page
    maker.post(NEW, undo)
    again = Size.objects.get(name="Child")
    assert again.is_child
    assert dict(again.knotted_lengths.values_list("ending_id", "knotted_length_mm")) == before


def test_size_remove_in_use_is_refused_with_the_reason(maker):
    make_order(make_batch(), make_colourway(make_pattern()))
    size = Size.objects.get(name="Medium")
    page = maker.post(reverse("size_remove", args=[size.pk]), follow=True).content.decode()
    assert "Medium is used by 1 order line." in page
    assert Size.objects.filter(name="Medium").exists()


def test_size_pages_wrong_method_signed_out_and_not_there(maker, client):
    size = Size.objects.first()
    assert maker.get(reverse("size_remove", args=[size.pk])).status_code == 405
    assert maker.post(LIST).status_code == 405
    assert maker.get(reverse("size_edit", args=[9_999])).status_code == 404
    for url in (LIST, NEW, reverse("size_edit", args=[size.pk])):
        assert client.get(url).status_code == 302
    assert maker.post(NEW, {}).context["form"].errors


def test_size_list_makes_as_many_queries_for_twice_the_sizes(maker, query_count):
    few = query_count(LIST)
    for number in range(6):
        data = {"name": f"Size {number}", "wrist_min_mm": "20", "wrist_max_mm": "21"}
        maker.post(NEW, data | {knotted("Plaited ties"): "19"})
    assert Size.objects.count() == 12
    assert query_count(LIST) == few
