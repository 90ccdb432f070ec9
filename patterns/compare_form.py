"""Which two patterns, and which of their versions, to lay side by side."""

from typing import Any

from django import forms
from django.http import QueryDict

from patterns.models import Pattern, PatternVersion

GONE = "That is not there any more. Choose another."


class CompareForm(forms.Form):
    """Versions are asked for only where a pattern has more than one."""

    a = forms.ModelChoiceField(Pattern.objects.all(), label="First pattern", empty_label=None)
    a_version = forms.TypedChoiceField(
        label="Its version", coerce=int, empty_value=None, required=False
    )
    b = forms.ModelChoiceField(Pattern.objects.all(), label="Second pattern", empty_label=None)
    b_version = forms.TypedChoiceField(
        label="Its version", coerce=int, empty_value=None, required=False
    )

    def __init__(self, data: QueryDict) -> None:
        super().__init__(data)
        for name in ("a", "b"):
            self.fields[name].error_messages |= {
                "required": "Choose a pattern.",
                "invalid_choice": GONE,
            }
            self._offer_versions(name)

    def _offer_versions(self, name: str) -> None:
        """A version that was asked for and is not there is told, so its field stays."""
        field: Any = self.fields[f"{name}_version"]
        field.error_messages["invalid_choice"] = GONE
        numbers = list(self._versions_of(self.data.get(name, "")))
        if len(numbers) < 2 and not self.data.get(f"{name}_version"):
            del self.fields[f"{name}_version"]
            return
        field.choices = [
            ("", "as it is now"),
            *((str(number), f"version {number}") for number in numbers),
        ]

    def _versions_of(self, key: str) -> list[int]:
        try:
            pattern = self.fields["a"].to_python(key)
        except forms.ValidationError:
            return []
        versions = PatternVersion.objects.filter(pattern=pattern)
        return list(versions.values_list("number", flat=True))
