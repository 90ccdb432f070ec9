"""What the database itself refuses, whoever writes."""

from decimal import Decimal

import pytest
from django.db import IntegrityError, transaction
from django.db.models import ProtectedError

from patterns.models import (
    Colourway,
    ColourwayShade,
    Ending,
    Gauge,
    KnottedLength,
    Pattern,
    Size,
)
from tests.factories import make_colourway, make_pattern, make_shade

pytestmark = pytest.mark.django_db


def refused(constraint: str, make) -> None:
    with pytest.raises(IntegrityError) as caught, transaction.atomic():
        make()
    words = str(caught.value)
    assert constraint in words or "UNIQUE constraint failed" in words


def make_size(**changes) -> Size:
    return Size.objects.create(
        **{"name": "Middling", "wrist_min_mm": 150, "wrist_max_mm": 165} | changes
    )


def test_gauge_second_default_is_refused():
    Gauge.objects.create(name="First", is_default=True)
    Gauge.objects.create(name="Second")
    refused("gauge_one_default", lambda: Gauge.objects.create(name="Third", is_default=True))


@pytest.mark.parametrize("changes", [{"thread_diameter_mm": 0}, {"loop_ratio": Decimal(-1)}])
def test_gauge_without_thickness_is_refused(changes):
    refused("gauge_positive", lambda: Gauge.objects.create(name="Air", **changes))


def test_gauge_without_an_idle_run_takes_the_straight_chord():
    gauge = Gauge(name="Plain")
    assert gauge.as_core().idle_run == pytest.approx(2**0.5)
    assert Gauge(name="None", idle_run=Decimal(0)).as_core().idle_run == 0


@pytest.mark.parametrize("largest", [150, 149])
def test_size_whose_range_is_none_is_refused(largest):
    refused("size_wrist_range", lambda: make_size(wrist_max_mm=largest))


def test_size_name_is_taken_once_whatever_its_capitals():
    make_size()
    refused("size_name_once", lambda: make_size(name="MIDDLING"))


def test_ending_name_is_taken_once_whatever_its_capitals():
    Ending.objects.create(name="Knot and run")
    refused("ending_name_once", lambda: Ending.objects.create(name="knot AND run"))


def test_ending_second_default_is_refused():
    Ending.objects.create(name="First", is_default=True)
    refused("ending_one_default", lambda: Ending.objects.create(name="Second", is_default=True))


def test_ending_take_up_under_one_is_refused():
    refused(
        "ending_take_up_at_least_one",
        lambda: Ending.objects.create(name="Magic", take_up=Decimal("0.99")),
    )


def test_ending_with_an_unknown_start_is_refused():
    refused("ending_start_known", lambda: Ending.objects.create(name="Odd", start="sideways"))


def test_ending_as_core_keeps_every_allowance():
    ending = Ending(
        name="All different",
        start=Ending.Start.FOLDED,
        start_tie_mm=1,
        end_tie_mm=2,
        take_up=Decimal("1.25"),
        closing_knot_mm=3,
        grip_mm=4,
        fold_loop_mm=5,
        single_start_mm=6,
        sliding_piece_mm=7,
    ).as_core()
    assert (ending.name, ending.start, ending.take_up) == ("All different", "folded", 1.25)
    assert (ending.start_tie_mm, ending.end_tie_mm, ending.closing_knot_mm) == (1, 2, 3)
    assert (ending.grip_mm, ending.fold_loop_mm) == (4, 5)
    assert (ending.single_start_mm, ending.sliding_piece_mm) == (6, 7)


def test_knotted_length_is_given_once_for_a_size_and_an_ending():
    size, ending = make_size(), Ending.objects.create(name="Ties")
    KnottedLength.objects.create(size=size, ending=ending, knotted_length_mm=140)
    refused(
        "knotted_length_once",
        lambda: KnottedLength.objects.create(size=size, ending=ending, knotted_length_mm=150),
    )


@pytest.mark.parametrize("length_mm", [0, 19, 1_001])
def test_knotted_length_out_of_range_is_refused(length_mm):
    size, ending = make_size(), Ending.objects.create(name="Ties")
    refused(
        "knotted_length_in_range",
        lambda: KnottedLength.objects.create(size=size, ending=ending, knotted_length_mm=length_mm),
    )


def test_pattern_name_is_taken_once_whatever_its_capitals():
    make_pattern("Ferry stripe")
    refused(
        "pattern_name_once",
        lambda: Pattern.objects.create(name="FERRY STRIPE", text="", strand_count=2, repeat_rows=2),
    )


def test_colourway_name_is_taken_once_a_pattern():
    first, second = make_pattern("One"), make_pattern("Two")
    make_colourway(first, "Dusk")
    make_colourway(second, "Dusk")
    refused(
        "colourway_name_once_a_pattern",
        lambda: Colourway.objects.create(pattern=first, name="dusk"),
    )


def test_colourway_slot_has_one_shade():
    colourway = make_colourway(make_pattern())
    refused(
        "colourway_slot_once",
        lambda: ColourwayShade.objects.create(colourway=colourway, slot="A", shade=make_shade()),
    )


def test_shade_in_a_colourway_stays():
    shade = make_shade()
    make_colourway(make_pattern(), A=shade)
    with pytest.raises(ProtectedError):
        shade.delete()


def test_pattern_takes_its_colourways_along():
    pattern = make_pattern()
    make_colourway(pattern)
    pattern.delete()
    assert not Colourway.objects.exists()
    assert not ColourwayShade.objects.exists()
