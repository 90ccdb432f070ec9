"""Fields that forms of every app share. Worked values: arithmetic beside each."""

from decimal import Decimal

import pytest
from django import forms
from django.core.exceptions import ValidationError

from inventory.fields import LengthField, LineField, PriceField, QuantityField


def problem(field: forms.Field, text: str) -> str:
    with pytest.raises(ValidationError) as caught:
        field.clean(text)
    return " ".join(caught.value.messages)


@pytest.mark.parametrize(
    ("text", "unit", "length_mm"),
    [
        ("7.84 m", "cm", 7_840),
        ("62", "cm", 620),
        ("62", "in", 1_575),  # 62 x 25.4 = 1574.8
        ("24 1/2 in", "cm", 622),  # 24.5 x 25.4 = 622.3
        (" 15,5 cm ", "in", 155),
        ("10 km", "cm", None),
        ("10000 m", "cm", 10_000_000),
        ("1 mm", "cm", 1),
    ],
)
def test_length_field_reads_units(text: str, unit: str, length_mm: int | None) -> None:
    field = LengthField(unit=unit)
    if length_mm is None:
        assert "No unit is called" in problem(field, text)
    else:
        assert field.clean(text) == length_mm


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "required"),
        ("0", "from 1 mm to 10000 m"),
        ("0.04 cm", "from 1 mm"),  # rounds to 0 mm
        ("10001 m", "from 1 mm to 10000 m"),
        ("-5 cm", "negative"),
        ("9**9 m", "not a length"),
        ("8 m\x00", "hidden character"),
        ("\u202e8 m", "hidden character"),
        ("9" * 10_000, "too long"),
        ("<script>", "not a length"),
    ],
)
def test_length_field_says_what_is_wrong(text: str, words: str) -> None:
    assert words in problem(LengthField(), text)


def test_length_field_writes_bounds_in_its_unit() -> None:
    field = LengthField(unit="in", minimum_mm=20, maximum_mm=1_000)
    # 20 mm = 0.787 in, 13/16 = 0.8125; 1000 mm = 39.37 in, 3/8 = 0.375
    assert problem(field, "100 in") == "The length must be from 13/16 in to 39 3/8 in."


class Measured(forms.Form):
    length = LengthField(unit="in")


def test_length_field_left_as_shown_keeps_its_millimetres() -> None:
    # 620 mm = 24.409 in, shown as 24 7/16 in = 620.7 mm, which would round to 621 mm
    shown = Measured(initial={"length": 620})["length"].value()
    assert shown == "24 7/16 in"
    form = Measured({"length": shown}, initial={"length": 620})
    assert form.is_valid()
    assert form.cleaned_data["length"] == 620
    assert not form.has_changed()


def test_length_field_typed_anew_is_read_exactly() -> None:
    form = Measured({"length": "24 1/2"}, initial={"length": 620})
    assert form.is_valid()
    assert form.cleaned_data["length"] == 622
    assert form.has_changed()


def test_length_field_that_is_wrong_keeps_what_was_typed() -> None:
    form = Measured({"length": "two hands"}, initial={"length": 620})
    assert not form.is_valid()
    assert form["length"].value() == "two hands"


@pytest.mark.parametrize(
    ("text", "price"),
    [("1.20", "1.20"), ("1,20", "1.20"), ("0", "0"), ("1.234,50", "1234.50"), ("100000", "100000")],
)
def test_price_field_reads_points_and_commas(text: str, price: str) -> None:
    assert PriceField().clean(text) == Decimal(price)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "required"),
        ("-1", "from 0 to 100000"),
        ("100000.01", "from 0 to 100000"),
        ("1.205", "2 decimal places"),
        ("1,234", "could be"),
        ("1e3", "not a number"),
        ("NaN", "not a number"),
        ("Infinity", "not a number"),
        ("1\x00", "hidden character"),
        ("٣", "digits 0 to 9"),
    ],
)
def test_price_field_says_what_is_wrong(text: str, words: str) -> None:
    assert words in problem(PriceField(), text)


def test_price_field_shows_two_places() -> None:
    assert PriceField().prepare_value(Decimal("1.2")) == "1.20"


@pytest.mark.parametrize(
    ("text", "words"),
    [("0", "from 1 to 9999"), ("2.5", "whole number"), ("10000", "from 1"), ("9" * 41, "too long")],
)
def test_quantity_field_says_what_is_wrong(text: str, words: str) -> None:
    assert words in problem(QuantityField(), text)


def test_quantity_field_reads_whole_numbers() -> None:
    assert QuantityField().clean(" 12 ") == 12


def test_line_field_tidies_spaces_and_accents() -> None:
    # e + combining acute becomes one letter (Unicode normalisation form C)
    assert LineField().clean("  Cafe\u0301 \t grey\n") == "Café grey"


@pytest.mark.parametrize("text", ["a\x00b", "a\x07b", "\u202ecba", "a\u2066b"])
def test_line_field_refuses_hidden_characters(text: str) -> None:
    assert "hidden character" in problem(LineField(), text)


@pytest.mark.parametrize("text", ["שלום", "نیلی\u200cتیره", "👩🏽\u200d🎨 red", "<script>"])
def test_line_field_takes_every_script(text: str) -> None:
    assert LineField().clean(text) == text


def test_line_field_says_how_long_it_may_be() -> None:
    field = LineField(max_length=20)
    assert problem(field, "x" * 10_000) == "At most 20 characters: this has 10000."
