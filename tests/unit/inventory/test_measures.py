"""Reading and writing of lengths, prices and quantities."""

from decimal import Decimal
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from inventory.measures import (
    UNITS,
    MeasureError,
    format_length,
    format_number,
    parse_decimal,
    parse_length,
    read_quantity,
    to_whole_mm,
)

INCH = Fraction(254, 10)
REFERENCE = pint.UnitRegistry(non_int_type=Fraction)


@pytest.mark.parametrize("unit", sorted(UNITS))
def test_unit_agrees_with_reference_library(unit: str) -> None:
    # pint's own definitions: inch = 25.4 mm, yard = 0.9144 m exactly (agreement of 1959).
    expected = REFERENCE.Quantity(Fraction(1), unit).to("mm").magnitude
    assert UNITS[unit] == expected
    assert parse_length(f"1 {unit}") == expected


@given(st.fractions(0, 900, max_denominator=64), st.sampled_from(sorted(UNITS)))
def test_length_with_fraction_agrees_with_reference_library(value: Fraction, unit: str) -> None:
    whole, rest = divmod(value.numerator, value.denominator)
    typed = f"{whole} {rest}/{value.denominator} {unit}" if rest else f"{whole} {unit}"
    assert parse_length(typed) == REFERENCE.Quantity(value, unit).to("mm").magnitude


@pytest.mark.parametrize(
    ("typed", "expected_mm"),
    [
        ("62", 620),
        ("62 cm", 620),
        ("62cm", 620),
        ("  62\u00a0CM ", 620),
        ("15,5 cm", 155),
        ("15.5 cm", 155),
        (".5 m", 500),
        ("0,125 in", INCH / 8),
        ("1234,567 mm", Fraction(1234567, 1000)),
        ("½ m", 500),
        ("2½ in", INCH * 5 / 2),
        ("2 ½ in", INCH * 5 / 2),
        ("⅔ yd", Fraction(6096, 10)),
        ("2 1/2 in", INCH * 5 / 2),
        ("2-1/2 in.", INCH * 5 / 2),
        ("2 1⁄2 inches", INCH * 5 / 2),
        ("3/8 inch", INCH * 3 / 8),
        ('24 1/2"', INCH * 49 / 2),
        ("24 1/2''", INCH * 49 / 2),
        ("24 1/2”", INCH * 49 / 2),
        ("5' 3 1/2\"", INCH * 127 / 2),
        ("5'3½\"", INCH * 127 / 2),
        ("5′ 3″", INCH * 63),
        ("5 ft 3 in", INCH * 63),
        ("1 foot", INCH * 12),
        ("2 feet", INCH * 24),
        ("8.7 yd", Fraction(795528, 100)),
        ("8 metres", 8000),
        ("0 mm", 0),
        ("100000 m", 100_000_000),
    ],
)
def test_length_as_people_type_it(typed: str, expected_mm: Fraction | int) -> None:
    assert parse_length(typed) == expected_mm


def test_length_without_unit_takes_default_unit() -> None:
    assert parse_length("8", default_unit="m") == 8000
    assert parse_length("8", default_unit="in") == INCH * 8


@pytest.mark.parametrize(
    "typed",
    [
        "",
        "   ",
        "abc",
        "cm",
        "9**9**9 m",
        "1e999 m",
        "1e3 mm",
        "0x10 m",
        "1_000 mm",
        "nan",
        "inf m",
        "-3 cm",
        "−3 cm",
        "+3 cm",
        "2-3 cm",
        "1/0 in",
        "1//2 in",
        "2 3/2 in",
        "1/2/3 in",
        "1.5/2 in",
        "15,5,5 cm",
        "1 250 mm",
        "3 cm 4 mm",
        "3 in 5 ft",
        "5' 3",
        "5' 14\"",
        "5.5' 3\"",
        "3 furlong",
        "3 €",
        "100001 m",
        "9" * 39 + "m",
        "5 cm" * 2500,
        "5\x00 cm",
        "5 cm\x07",
        "\u200f5 cm",
        "5\u202e1 cm",
        "٣ cm",
        "３ cm",
        "x² cm",
        "Ⅷ cm",
        "½½ m",
        "1.5½ m",
        "\ud800 cm",
        "=1+1",
    ],
)
def test_length_that_is_none_is_refused_with_a_short_sentence(typed: str) -> None:
    with pytest.raises(MeasureError) as caught:
        parse_length(typed)
    message = str(caught.value)
    assert 10 < len(message) < 200
    assert message.isprintable()


@pytest.mark.parametrize("typed", ["1,250 m", "12,500 mm"])
def test_length_with_comma_and_three_digits_is_refused_as_ambiguous(typed: str) -> None:
    with pytest.raises(MeasureError, match="could be"):
        parse_length(typed)


def test_length_that_is_not_text_is_refused() -> None:
    for value in (None, 5, 5.0, b"5 cm", ["5 cm"]):
        with pytest.raises(MeasureError):
            parse_length(value)  # type: ignore[arg-type]


@given(st.text(max_size=60) | st.text("0123456789.,/'\" -½incmftyd", max_size=45))
def test_length_from_any_text_is_in_range_or_refused(typed: str) -> None:
    try:
        length = parse_length(typed)
    except MeasureError:
        return
    assert 0 <= length <= 100_000_000


@pytest.mark.parametrize(
    ("length", "nearest", "up", "down"),
    [
        (Fraction(127, 10), 13, 13, 12),
        (Fraction(5, 2), 3, 3, 2),
        (Fraction(7, 2), 4, 4, 3),
        (Fraction(49, 20), 2, 3, 2),
        (7, 7, 7, 7),
    ],
)
def test_whole_mm_rounds_halves_up(
    length: Fraction | int, nearest: int, up: int, down: int
) -> None:
    assert to_whole_mm(length) == nearest
    assert to_whole_mm(length, "up") == up
    assert to_whole_mm(length, "down") == down


def test_whole_mm_with_unknown_rounding_is_refused() -> None:
    with pytest.raises(ValueError, match="sideways"):
        to_whole_mm(3, "sideways")  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("length_mm", "unit", "shown", "number"),
    [
        (620, "cm", "62 cm", "62"),
        (625, "cm", "62.5 cm", "62.5"),
        (0, "cm", "0 cm", "0"),
        (2000, "cm", "200 cm", "200"),
        (2001, "cm", "2.001 m", "200.1"),
        (7840, "cm", "7.84 m", "784"),
        (8000, "cm", "8 m", "800"),
        (-45, "cm", "-4.5 cm", "-4.5"),
        (620, "mm", "620 mm", "620"),
        (620, "m", "0.62 m", "0.62"),
        (622, "in", "24 1/2 in", "24 1/2"),  # 622 / 25.4 = 24.488: 24 8/16
        (3, "in", "1/8 in", "1/8"),  # 3 / 25.4 = 0.118: 2/16
        (254, "in", "10 in", "10"),
        (-1, "in", "-1/16 in", "-1/16"),
        (1613, "ft", "5 ft 3 1/2 in", "5.29"),  # 63.5 in = 1612.9 mm
        (914, "ft", "3 ft", "3"),
        (25, "ft", "1 in", "0.08"),
        (8000, "yd", "8.75 yd", "8.75"),  # 8 / 0.9144 = 8.749
    ],
)
def test_length_is_shown_with_and_without_unit(
    length_mm: int, unit: str, shown: str, number: str
) -> None:
    assert format_length(length_mm, unit) == shown
    assert format_number(length_mm, unit) == number


@given(st.integers(0, 100_000_000), st.sampled_from(["mm", "cm", "m"]))
def test_metric_length_shown_reads_back_exactly(length_mm: int, unit: str) -> None:
    assert parse_length(format_length(length_mm, unit)) == length_mm
    assert parse_length(format_number(length_mm, unit), default_unit=unit) == length_mm


@given(st.integers(0, 10_000_000), st.sampled_from(["in", "ft"]))
def test_inches_shown_read_back_within_half_a_sixteenth(length_mm: int, unit: str) -> None:
    read = parse_length(format_length(length_mm, unit))
    assert abs(read - length_mm) <= INCH / 32


@pytest.mark.parametrize(
    ("typed", "expected"),
    [
        ("3.50", "3.50"),
        ("3,50", "3.50"),
        ("3", "3"),
        (",5", "0.5"),
        ("0,125", "0.125"),
        ("1.414", "1.414"),
        ("1.234,50", "1234.50"),
        ("1,234.50", "1234.50"),
        ("1,234,567", "1234567"),
        ("1.234.567", "1234567"),
        ("-2,5", "-2.5"),
        ("-0,00", "0"),
    ],
)
def test_decimal_as_people_type_it(typed: str, expected: str) -> None:
    number = parse_decimal(typed, name="price", minimum=-10, maximum=10**7)
    assert str(number) == expected


@pytest.mark.parametrize(
    "typed",
    [
        "",
        "abc",
        "1,234",
        "1.23,450",
        "1,23.450",
        "1.234,567.8",
        "01.234,5",
        "1.5.5",
        "1e5",
        "NaN",
        "Infinity",
        "1_0",
        "3 €",
        "1 234,50",
        "٣",
        "３",
        "1\x00",
        "\u200e1",
        "9" * 41,
        "-11",
        "10000001",
        "--1",
        "½",
    ],
)
def test_decimal_that_is_none_is_refused(typed: str) -> None:
    with pytest.raises(MeasureError) as caught:
        parse_decimal(typed, name="price", minimum=-10, maximum=10**7)
    assert (
        "price" in str(caught.value)
        or "hidden" in str(caught.value)
        or "digits" in str(caught.value)
    )
    assert str(caught.value).isprintable()


def test_decimal_with_too_many_places_is_refused() -> None:
    assert parse_decimal("3.50", name="price", minimum=0, maximum=9, places=2) == Decimal("3.50")
    with pytest.raises(MeasureError, match="at most 2 decimal places"):
        parse_decimal("3.505", name="price", minimum=0, maximum=9, places=2)


@given(st.text(max_size=50))
def test_decimal_from_any_text_is_in_range_or_refused(typed: str) -> None:
    try:
        number = parse_decimal(typed, name="share", minimum=0, maximum=1)
    except MeasureError:
        return
    assert 0 <= number <= 1


@pytest.mark.parametrize(
    ("typed", "expected"), [("1", 1), (" 40 ", 40), ("007", 7), ("9999", 9999)]
)
def test_quantity_as_people_type_it(typed: str, expected: int) -> None:
    assert read_quantity(typed) == expected


@pytest.mark.parametrize(
    "typed",
    ["", "0", "-1", "10000", "2.5", "2,5", "1e3", "two", "٣", "３", "1 0", "9" * 10_000, "1\x00"],
)
def test_quantity_that_is_none_is_refused(typed: str) -> None:
    with pytest.raises(MeasureError) as caught:
        read_quantity(typed)
    assert len(str(caught.value)) < 160
