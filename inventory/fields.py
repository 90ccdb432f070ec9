"""Form fields for what makers type: lengths, prices, quantities, and names on one line.

Every app's forms use these, so that a length is read and rounded in one place.
"""

import unicodedata
from decimal import Decimal
from typing import Any

from django import forms
from django.core.exceptions import ValidationError

from inventory.measures import (
    MeasureError,
    Rounding,
    format_length,
    parse_decimal,
    parse_length,
    read_quantity,
    to_whole_mm,
)
from inventory.models import LONGEST_LENGTH_MM

# Direction marks can show a name in another order than it is stored.
_DIRECTION_MARKS = frozenset("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")


class LineField(forms.CharField):
    """A name, code or note on one line: runs of spaces become one, hidden characters are refused."""

    default_error_messages = {
        "required": "Fill this in.",
        "max_length": "At most %(limit_value)d characters: this has %(show_value)d.",
    }

    def to_python(self, value: Any) -> str:
        text = str(super().to_python(value))
        if any(_is_hidden(character) for character in text):
            raise ValidationError("There is a hidden character in this text. Type it again.")
        return unicodedata.normalize("NFC", " ".join(text.split()))


def _is_hidden(character: str) -> bool:
    if character in "\t\r\n":
        return False
    return unicodedata.category(character) in {"Cc", "Cs"} or character in _DIRECTION_MARKS


class LengthField(forms.CharField):
    """A length with its unit, as whole millimetres; a number alone is in `unit`."""

    def __init__(
        self,
        *,
        unit: str = "cm",
        minimum_mm: int = 1,
        maximum_mm: int = LONGEST_LENGTH_MM,
        rounding: Rounding = "nearest",
        **kwargs: Any,
    ) -> None:
        super().__init__(**kwargs)
        self.unit = unit
        self.minimum_mm = minimum_mm
        self.maximum_mm = maximum_mm
        self.rounding: Rounding = rounding
        self._initial_mm: int | None = None
        self.widget.attrs.setdefault("autocomplete", "off")

    def get_bound_field(self, form: forms.BaseForm, field_name: str) -> forms.BoundField:
        bound = super().get_bound_field(form, field_name)
        self._initial_mm = bound.initial if isinstance(bound.initial, int) else None
        return bound

    def prepare_value(self, value: Any) -> Any:
        return format_length(value, self.unit) if isinstance(value, int) else value

    def to_python(self, value: Any) -> int | None:  # type: ignore[override]
        text = str(super().to_python(value))
        if not text:
            return None
        # Inches are shown to the nearest sixteenth: what was left as shown keeps its millimetres.
        if self._initial_mm is not None and text == self.prepare_value(self._initial_mm):
            return self._initial_mm
        try:
            length_mm = to_whole_mm(parse_length(text, self.unit), self.rounding)
        except MeasureError as error:
            raise ValidationError(str(error)) from None
        if not self.minimum_mm <= length_mm <= self.maximum_mm:
            raise ValidationError(
                f"The length must be from {_written(self.minimum_mm, self.unit)}"
                f" to {_written(self.maximum_mm, self.unit)}."
            )
        return length_mm


def _written(length_mm: int, unit: str) -> str:
    """A bound as people read it: 1 mm, not 1/16 in; 10000 m, not 393700 13/16 in."""
    if length_mm < 10:
        return format_length(length_mm, "mm")
    return format_length(length_mm, "yd" if unit == "in" and length_mm > 20_000 else unit)


class PriceField(forms.CharField):
    """An amount of money with a decimal point or comma, as Decimal."""

    def __init__(
        self,
        *,
        name: str = "price",
        minimum: Decimal | int = 0,
        maximum: Decimal | int = 100_000,
        **kwargs: Any,
    ) -> None:
        super().__init__(**kwargs)
        self.name = name
        self.minimum = minimum
        self.maximum = maximum
        self.widget.attrs.setdefault("inputmode", "decimal")
        self.widget.attrs.setdefault("autocomplete", "off")

    def prepare_value(self, value: Any) -> Any:
        return f"{value:.2f}" if isinstance(value, Decimal) else value

    def to_python(self, value: Any) -> Decimal | None:  # type: ignore[override]
        text = str(super().to_python(value))
        if not text:
            return None
        try:
            return parse_decimal(
                text, name=self.name, minimum=self.minimum, maximum=self.maximum, places=2
            )
        except MeasureError as error:
            raise ValidationError(str(error)) from None


class QuantityField(forms.CharField):
    """How many: a whole number within bounds."""

    def __init__(
        self, *, name: str = "quantity", minimum: int = 1, maximum: int = 9_999, **kwargs: Any
    ) -> None:
        super().__init__(**kwargs)
        self.name = name
        self.minimum = minimum
        self.maximum = maximum
        self.widget.attrs.setdefault("inputmode", "numeric")
        self.widget.attrs.setdefault("autocomplete", "off")

    def to_python(self, value: Any) -> int | None:  # type: ignore[override]
        text = str(super().to_python(value))
        if not text:
            return None
        try:
            return read_quantity(text, name=self.name, minimum=self.minimum, maximum=self.maximum)
        except MeasureError as error:
            raise ValidationError(str(error)) from None


class TicksField(forms.ModelMultipleChoiceField):
    """Rows to tick. A key that no row can have is one that is gone, not a database error."""

    widget = forms.CheckboxSelectMultiple
    default_error_messages = {
        "invalid_choice": "One of the ticked lines is gone. Look through the list again.",
        "invalid_pk_value": "One of the ticked lines is gone. Look through the list again.",
    }

    def clean(self, value: Any) -> Any:
        if isinstance(value, list | tuple) and not all(_may_be_key(key) for key in value):
            raise ValidationError(self.error_messages["invalid_choice"], code="invalid_choice")
        return super().clean(value)


def _may_be_key(key: Any) -> bool:
    text = str(key)
    return text.isascii() and text.isdigit() and len(text) <= 18
