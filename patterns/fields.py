"""Form fields of the pattern pages: blocks of pattern text, and plain numbers."""

import unicodedata
from decimal import Decimal
from typing import Any

from django import forms
from django.core.exceptions import ValidationError

from inventory.measures import MeasureError, parse_decimal
from patterns.pattern_file import MAX_FILE_BYTES


class BlockField(forms.CharField):
    """Text of many lines, kept as typed but for its line ends; hidden characters are refused."""

    default_error_messages = {"required": "Fill this in."}

    def __init__(self, **kwargs: Any) -> None:
        kwargs.setdefault("widget", forms.Textarea(attrs={"class": "code", "spellcheck": "false"}))
        super().__init__(strip=False, **kwargs)

    def to_python(self, value: Any) -> str:
        text = str(super().to_python(value)).replace("\r\n", "\n").replace("\r", "\n")
        if len(text.encode("utf-8", errors="replace")) > MAX_FILE_BYTES:
            raise ValidationError(f"This is more than {MAX_FILE_BYTES // 1024} KB; no pattern is.")
        for number, line in enumerate(text.split("\n"), start=1):
            if any(unicodedata.category(mark) in {"Cc", "Cs"} and mark != "\t" for mark in line):
                raise ValidationError(
                    f"Line {number} holds a hidden character. Type the line again."
                )
        return text


class NumberField(forms.CharField):
    """A plain number with a decimal point or comma, as Decimal."""

    default_error_messages = {"required": "Fill this in."}

    def __init__(
        self, *, name: str, minimum: str, maximum: str, places: int, **kwargs: Any
    ) -> None:
        super().__init__(**kwargs)
        self.name = name
        self.minimum = Decimal(minimum)
        self.maximum = Decimal(maximum)
        self.places = places
        self.widget.attrs.update({"inputmode": "decimal", "autocomplete": "off"})

    def prepare_value(self, value: Any) -> Any:
        return f"{value.normalize():f}" if isinstance(value, Decimal) else value

    def to_python(self, value: Any) -> Decimal | None:  # type: ignore[override]
        text = super().to_python(value)
        if text is None or text == "":
            return None
        try:
            return parse_decimal(
                text,
                name=self.name,
                minimum=self.minimum,
                maximum=self.maximum,
                places=self.places,
            )
        except MeasureError as error:
            raise ValidationError(str(error)) from None
