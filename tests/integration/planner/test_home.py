"""The first page: begin a workshop, once."""

from django.test import Client
from django.urls import reverse

from inventory.models import Workshop
from patterns.models import Ending, Gauge, KnottedLength, Size
from planner.models import Batch
from tests.factories import make_workshop

OWN = {
    "name": "Sandpiper Knots",
    "length_unit": "in",
    "date_order": "month",
    "currency": "USD",
    "paper": "Letter",
    "rounding_step_mm": "12.7",
    "safety_share": "8,5",
    "short_measure_share": "2",
    "keep_length_mm": "12 in",
    "join_tail_mm": "2 in",
}


def test_home_of_an_empty_database_offers_both_beginnings(page: Client) -> None:
    text = page.get(reverse("home")).content.decode()
    assert "Open the sample workshop" in text
    assert "Start my own" in text


def test_start_own_makes_a_workshop_ready_to_use(page: Client) -> None:
    assert page.post(reverse("start_own"), OWN).status_code == 302
    workshop = Workshop.current()
    assert workshop is not None
    assert (str(workshop.safety_share), workshop.keep_length_mm) == ("0.085", 305)
    assert Size.objects.exists()
    assert Ending.objects.filter(is_default=True).count() == 1
    assert Gauge.objects.filter(is_default=True).count() == 1
    assert KnottedLength.objects.count() == Size.objects.count() * Ending.objects.count()
    assert "Add the shades" in page.get(reverse("home")).content.decode()


def test_start_own_in_inches_begins_with_inch_habits(page: Client) -> None:
    untouched = {"rounding_step_mm": "10", "keep_length_mm": "30 cm"}
    assert page.post(reverse("start_own"), OWN | untouched).status_code == 302
    workshop = Workshop.objects.get()
    assert (str(workshop.rounding_step_mm), workshop.keep_length_mm) == ("12.70", 305)


def test_start_own_refuses_bad_habits_and_keeps_what_was_typed(page: Client) -> None:
    for name, text in {
        "name": "",
        "safety_share": "minus",
        "keep_length_mm": "9**9**9 m",
        "currency": "XXX",
        "rounding_step_mm": "0",
    }.items():
        response = page.post(reverse("start_own"), OWN | {name: text})
        assert response.status_code == 422, name
        assert "12 in" in response.content.decode() or name == "keep_length_mm"
    assert Workshop.current() is None


def test_start_own_a_second_time_changes_nothing(page: Client) -> None:
    make_workshop(name="First")
    page.post(reverse("start_own"), OWN)
    assert Workshop.objects.get().name == "First"


def test_open_sample_into_a_workshop_is_refused(page: Client) -> None:
    make_workshop(name="First")
    response = page.post(reverse("open_sample"), follow=True)
    assert response.status_code == 200
    assert Workshop.objects.get().name == "First"
    assert not Batch.objects.exists()


def test_workshop_page_saves_and_refuses(page: Client) -> None:
    make_workshop()
    assert page.post(reverse("workshop"), OWN).status_code == 302
    assert Workshop.objects.get().length_unit == "in"
    assert page.post(reverse("workshop"), OWN | {"safety_share": "90"}).status_code == 422
    assert "12 in" in page.get(reverse("workshop")).content.decode()
