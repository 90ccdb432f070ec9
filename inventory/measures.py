"""Lengths, prices and quantities as people type them, and lengths as screens and sheets show them.

Everything typed is read exactly, as `Fraction` or `Decimal`, and rounded once, by `to_whole_mm`.
What could be read in two ways is refused with a sentence that says what to type instead.
"""

import re
import unicodedata
from collections.abc import Mapping
from decimal import Decimal
from fractions import Fraction
from types import MappingProxyType
from typing import Literal

UNITS: Mapping[str, Fraction] = MappingProxyType(
    {
        "mm": Fraction(1),
        "cm": Fraction(10),
        "m": Fraction(1000),
        "in": Fraction(254, 10),
        "ft": Fraction(3048, 10),
        "yd": Fraction(9144, 10),
    }
)
"""Millimetres in one of each unit (inch, foot and yard exactly, since the agreement of 1959)."""

MAXIMUM_CHARACTERS = 40
MAXIMUM_LENGTH_MM = 100_000_000

_SPELLINGS: Mapping[str, tuple[str, ...]] = {
    "mm": ("mm", "millimetre", "millimetres", "millimeter", "millimeters"),
    "cm": ("cm", "centimetre", "centimetres", "centimeter", "centimeters"),
    "m": ("m", "metre", "metres", "meter", "meters"),
    "in": ("in", "inch", "inches", '"', "″", "”", "“", "''", "′′", "’’"),
    "ft": ("ft", "foot", "feet", "'", "′", "’", "‘"),
    "yd": ("yd", "yds", "yard", "yards"),
}
_UNIT_BY_SPELLING = {word: unit for unit, words in _SPELLINGS.items() for word in words}

_VULGAR_FRACTIONS = {
    "½": Fraction(1, 2),
    "¼": Fraction(1, 4),
    "¾": Fraction(3, 4),
    "⅛": Fraction(1, 8),
    "⅜": Fraction(3, 8),
    "⅝": Fraction(5, 8),
    "⅞": Fraction(7, 8),
    "⅓": Fraction(1, 3),
    "⅔": Fraction(2, 3),
}

_NUMBER = re.compile(
    rf"""
    (?: (?P<whole>[0-9]+) (?:\ +|-) )? (?P<top>[0-9]+) \ * [/⁄] \ * (?P<bottom>[0-9]+)
  | (?P<before>[0-9]+)? \ * (?P<vulgar>[{"".join(_VULGAR_FRACTIONS)}])
  | (?P<decimal>[0-9]+ (?:[.,][0-9]+)? | [.,][0-9]+)
    """,
    re.VERBOSE,
)
_UNIT_TEXT = re.compile(r"[A-Za-z]+\.?|''|′′|’’|[\"″”“'′’‘]")
_PLAIN_DECIMAL = re.compile(r"-?(?:[0-9]+(?:[.,][0-9]+)?|[.,][0-9]+)")
_GROUPED_DECIMALS = (
    re.compile(r"-?[1-9][0-9]{0,2}(?:\.[0-9]{3})+,[0-9]+"),
    re.compile(r"-?[1-9][0-9]{0,2}(?:,[0-9]{3})+\.[0-9]+"),
    re.compile(r"-?[1-9][0-9]{0,2}(?:\.[0-9]{3}){2,}"),
    re.compile(r"-?[1-9][0-9]{0,2}(?:,[0-9]{3}){2,}"),
)
_MAYBE_THOUSANDS = re.compile(r"-?[1-9][0-9]{0,2},[0-9]{3}")
_MINUS_SIGNS = "-−–‒"
_EXAMPLES = "Type it like 62 cm, 15,5 cm, 24 1/2 in or 5' 3\"."

Rounding = Literal["nearest", "up", "down"]


class MeasureError(ValueError):
    """What was typed is not a measure; the message says what to type instead."""


def parse_length(text: str, default_unit: str = "cm") -> Fraction:
    """Read one length as people type it.

    Parameters
    ----------
    text
        A number and a unit: ``62 cm``, ``15,5 cm``, ``2 1/2 in``, ``½ m``, ``5' 3 1/2"``.
        At most 40 characters.
    default_unit
        The unit of a number that stands alone, one of `UNITS`.

    Returns
    -------
    Fraction
        The length, exactly [mm], from 0 to 100 km.

    Raises
    ------
    MeasureError
        When the text is not one length, or could mean two different ones.
    KeyError
        When `default_unit` is not one of `UNITS`.
    """
    default_mm = UNITS[default_unit]
    cleaned = _clean(text, "a length", _EXAMPLES)
    if cleaned[0] in _MINUS_SIGNS:
        raise MeasureError(f"A length cannot be negative: {_quoted(cleaned)}.")
    match _split_parts(cleaned):
        case [(number, None)]:
            length = number * default_mm
        case [(number, str(unit))]:
            length = number * UNITS[unit]
        case [(feet, "ft"), (inches, "in")] if feet.denominator == 1 and inches < 12:
            length = feet * UNITS["ft"] + inches * UNITS["in"]
        case [(_, "ft"), (_, "in")]:
            raise MeasureError(
                f"Feet and inches do not fit in {_quoted(cleaned)}: "
                "type whole feet and fewer than 12 inches, like 5' 3 1/2\"."
            )
        case [(_, "ft"), (_, None)]:
            raise MeasureError(f"Which unit after the feet in {_quoted(cleaned)}? Type 5' 3\".")
        case _:
            raise MeasureError(f"{_quoted(cleaned)} is more than one length. {_EXAMPLES}")
    if length > MAXIMUM_LENGTH_MM:
        raise MeasureError(f"{_quoted(cleaned)} is too long: at most 100 km.")
    return length


def to_whole_mm(length: Fraction | int, rounding: Rounding = "nearest") -> int:
    """Round an exact length to whole millimetres, once, where it enters.

    Parameters
    ----------
    length
        Exact length [mm].
    rounding
        ``"nearest"`` (halves go up), ``"up"`` or ``"down"``.

    Returns
    -------
    int
        Whole millimetres [mm].

    Raises
    ------
    ValueError
        When `rounding` is none of the three.
    """
    exact = Fraction(length)
    if rounding == "nearest":
        exact += Fraction(1, 2)
    elif rounding == "up":
        return -(-exact.numerator // exact.denominator)
    elif rounding != "down":
        raise ValueError(f"no rounding called {rounding!r}")
    return exact.numerator // exact.denominator


def format_length(length_mm: int, unit: str = "cm") -> str:
    """Write a length with its unit, for screens and sheets.

    Parameters
    ----------
    length_mm
        The length [mm].
    unit
        The unit to show, one of `UNITS`.

    Returns
    -------
    str
        ``"62.5 cm"``; above 200 cm in metres, ``"7.84 m"``. Inches to the nearest sixteenth,
        ``"24 1/2 in"``; feet with inches, ``"5 ft 3 1/2 in"``; yards to the nearest hundredth.
    """
    if unit == "cm" and abs(length_mm) > 2000:
        unit = "m"
    if unit == "ft":
        sixteenths = _in_sixteenths(length_mm)
        return _with_sign(_write_feet(sixteenths), negative=length_mm < 0 < sixteenths)
    return f"{format_number(length_mm, unit)} {unit}"


def format_number(length_mm: int, unit: str = "cm") -> str:
    """Write a length without its unit, for a column whose head holds the unit.

    Parameters
    ----------
    length_mm
        The length [mm].
    unit
        The unit of the column, one of `UNITS`; it never changes with the length.

    Returns
    -------
    str
        Exact in mm, cm and m (``"784.5"``); inches to the nearest sixteenth (``"24 1/2"``);
        feet and yards to the nearest hundredth.
    """
    if unit == "in":
        scaled = _in_sixteenths(length_mm)
        digits = _write_inches(scaled)
    else:
        places = {"mm": 0, "cm": 1, "m": 3}.get(unit, 2)
        scaled = to_whole_mm(abs(length_mm) / UNITS[unit] * 10**places)
        whole, rest = divmod(scaled, 10**places)
        digits = f"{whole}.{rest:0{places}}".rstrip("0").rstrip(".") if rest else str(whole)
    return _with_sign(digits, negative=length_mm < 0 < scaled)


def parse_decimal(
    text: str,
    *,
    name: str,
    minimum: Decimal | int,
    maximum: Decimal | int,
    places: int | None = None,
) -> Decimal:
    """Read a price, a share or another plain number with a decimal point or comma.

    Parameters
    ----------
    text
        ``3.50``, ``3,50``, ``1.234,50`` or ``1,234.50``. No exponents, no currency signs.
    name
        What the number is, as errors call it: ``"price"``.
    minimum, maximum
        The smallest and the largest value taken.
    places
        The most decimal places taken, where there is such a limit (2 for money).

    Returns
    -------
    Decimal
        The number, exactly as typed.

    Raises
    ------
    MeasureError
        When the text is not one number, could mean two, or is out of range.
    """
    cleaned = _clean(text, f"a {name}", "Type a number like 3.50 or 3,50.")
    number = Decimal(_plain_digits(cleaned, name)) or Decimal(0)  # no "-0.00" on a sheet
    if not minimum <= number <= maximum:
        raise MeasureError(f"The {name} must be from {minimum} to {maximum}.")
    exponent = number.as_tuple().exponent
    if places is not None and isinstance(exponent, int) and -exponent > places:
        raise MeasureError(
            f"The {name} takes at most {places} decimal places: {_quoted(cleaned)} has {-exponent}."
        )
    return number


def read_quantity(
    text: str, *, name: str = "quantity", minimum: int = 1, maximum: int = 9999
) -> int:
    """Read how many.

    Parameters
    ----------
    text
        A whole number in the digits 0 to 9.
    name
        What is counted, as errors call it.
    minimum, maximum
        The smallest and the largest number taken.

    Returns
    -------
    int
        The number.

    Raises
    ------
    MeasureError
        When the text is not a whole number, or is out of range.
    """
    cleaned = _clean(text, f"a {name}", f"Type a whole number from {minimum} to {maximum}.")
    if not re.fullmatch(r"-?[0-9]+", cleaned):
        raise MeasureError(
            f"The {name} {_quoted(cleaned)} is not a whole number. Type one from {minimum} to {maximum}."
        )
    number = int(cleaned)
    if not minimum <= number <= maximum:
        raise MeasureError(f"The {name} must be from {minimum} to {maximum}.")
    return number


def _clean(text: str, what: str, hint: str) -> str:
    """Strip and check characters, so that every reader below sees short, plain text."""
    if not isinstance(text, str):
        raise MeasureError(f"Type {what} as text. {hint}")
    stripped = text.strip()
    if not stripped:
        raise MeasureError(f"Type {what}. {hint}")
    if len(stripped) > MAXIMUM_CHARACTERS:
        raise MeasureError(f"That is too long for {what}: at most {MAXIMUM_CHARACTERS} characters.")
    for character in stripped:
        # Format characters (direction marks) can show digits in another order than they are stored.
        if unicodedata.category(character) in {"Cc", "Cf", "Cn", "Co", "Cs", "Zl", "Zp"}:
            raise MeasureError(
                f"There is a hidden character in {_quoted(stripped)}. Type it again."
            )
        if not character.isascii() and character.isnumeric() and character not in _VULGAR_FRACTIONS:
            raise MeasureError(f"Use the digits 0 to 9 in {_quoted(stripped)}.")
    return "".join(" " if unicodedata.category(c) == "Zs" else c for c in stripped)


def _quoted(text: str) -> str:
    """Show what was typed without its hidden characters, and not all of it when it is long."""
    shown = "".join(c for c in text[:24] if c.isprintable())
    return f"“{shown}…”" if len(text) > 24 else f"“{shown}”"


def _split_parts(text: str) -> list[tuple[Fraction, str | None]]:
    parts: list[tuple[Fraction, str | None]] = []
    position = 0
    while position < len(text):
        number = _NUMBER.match(text, position)
        if number is None:
            raise MeasureError(f"{_quoted(text)} is not a length. {_EXAMPLES}")
        position = _skip_spaces(text, number.end())
        unit = _UNIT_TEXT.match(text, position)
        if unit is None:
            parts.append((_number_value(number), None))
        else:
            parts.append((_number_value(number), _unit_named(unit.group())))
            position = _skip_spaces(text, unit.end())
    return parts


def _skip_spaces(text: str, position: int) -> int:
    while position < len(text) and text[position] == " ":
        position += 1
    return position


def _unit_named(spelling: str) -> str:
    unit = _UNIT_BY_SPELLING.get(spelling.lower().removesuffix("."))
    if unit is None:
        raise MeasureError(f"No unit is called {_quoted(spelling)}. Use {', '.join(UNITS)}.")
    return unit


def _number_value(match: re.Match[str]) -> Fraction:
    if match["decimal"]:
        return Fraction(_point_for_comma(match["decimal"], "length"))
    if match["vulgar"]:
        return int(match["before"] or 0) + _VULGAR_FRACTIONS[match["vulgar"]]
    top, bottom = int(match["top"]), int(match["bottom"])
    if bottom == 0:
        raise MeasureError(f"{_quoted(match.group())} divides by zero.")
    if match["whole"] is None:
        return Fraction(top, bottom)
    if top >= bottom:
        raise MeasureError(
            f"The fraction in {_quoted(match.group())} must be less than 1, like 2 1/2."
        )
    return int(match["whole"]) + Fraction(top, bottom)


def _point_for_comma(digits: str, name: str) -> str:
    """Turn a decimal comma into a point, unless the comma may part thousands."""
    if _MAYBE_THOUSANDS.fullmatch(digits):
        whole, decimals = digits.split(",")
        raise MeasureError(
            f"The {name} “{digits}” could be {whole}.{decimals} or {whole}{decimals}. "
            "Type it without the comma."
        )
    return digits.replace(",", ".")


def _plain_digits(text: str, name: str) -> str:
    plain = "-" + text[1:] if text[0] in _MINUS_SIGNS else text
    if _PLAIN_DECIMAL.fullmatch(plain):
        return _point_for_comma(plain, name)
    for pattern, separator in zip(_GROUPED_DECIMALS, ".,.,", strict=True):
        if pattern.fullmatch(plain):
            return plain.replace(separator, "").replace(",", ".")
    raise MeasureError(f"The {name} {_quoted(text)} is not a number. Type one like 3.50 or 3,50.")


def _with_sign(digits: str, *, negative: bool) -> str:
    return f"-{digits}" if negative else digits


def _in_sixteenths(length_mm: int) -> int:
    return to_whole_mm(abs(length_mm) / UNITS["in"] * 16)


def _write_inches(sixteenths: int) -> str:
    whole, rest = divmod(sixteenths, 16)
    if not rest:
        return str(whole)
    part = Fraction(rest, 16)
    return f"{whole} {part}" if whole else str(part)


def _write_feet(sixteenths: int) -> str:
    feet, rest = divmod(sixteenths, 12 * 16)
    if not rest:
        return f"{feet} ft"
    return f"{feet} ft {_write_inches(rest)} in" if feet else f"{_write_inches(rest)} in"
