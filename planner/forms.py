"""Forms of the planner's pages."""

from decimal import Decimal
from typing import Any

from django import forms

from inventory.measures import MeasureError, parse_decimal, parse_length, to_whole_mm
from inventory.models import Workshop
from planner.models import Batch

ROUNDING_STEPS = [
    ("5", "5 mm"),
    ("10", "1 cm"),
    ("20", "2 cm"),
    ("12.7", "1/2 inch"),
    ("25.4", "1 inch"),
]
CURRENCIES = [
    ("EUR", "euro"),
    ("GBP", "pound sterling"),
    ("USD", "US dollar"),
    ("CAD", "Canadian dollar"),
    ("AUD", "Australian dollar"),
    ("NZD", "New Zealand dollar"),
    ("CHF", "Swiss franc"),
    ("DKK", "Danish krone"),
    ("NOK", "Norwegian krone"),
    ("SEK", "Swedish krona"),
    ("PLN", "Polish zloty"),
    ("CZK", "Czech koruna"),
    ("JPY", "Japanese yen"),
]


class PerCentField(forms.CharField):
    """A share, typed as so many per cent."""

    def __init__(self, *, most: int, **kwargs: Any) -> None:
        super().__init__(max_length=10, **kwargs)
        self.most = most

    def prepare_value(self, value: Any) -> Any:
        if isinstance(value, Decimal):
            return f"{value * 100:.1f}".rstrip("0").rstrip(".")
        return value

    def clean(self, value: Any) -> Any:
        text = super().clean(value)
        try:
            number = parse_decimal(
                text.rstrip(" %"),
                name=str(self.label),
                minimum=Decimal(0),
                maximum=Decimal(self.most),
            )
        except MeasureError as reason:
            raise forms.ValidationError(str(reason)) from None
        return (number / 100).quantize(Decimal("0.001"))


class WorkshopForm(forms.ModelForm):  # type: ignore[type-arg]
    rounding_step_mm = forms.TypedChoiceField(
        label="Cut lengths are rounded up to", choices=ROUNDING_STEPS, coerce=Decimal, initial="10"
    )
    currency = forms.ChoiceField(label="Currency", choices=CURRENCIES, initial="EUR")
    safety_share = PerCentField(
        label="Safety share, per cent",
        most=50,
        initial=Decimal("0.1"),
        help_text="Added to the knotted part of every strand.",
    )
    short_measure_share = PerCentField(
        label="Short-measure allowance, per cent",
        most=50,
        initial=Decimal("0.02"),
        help_text="How much less an unmeasured skein may hold than its band says.",
    )
    keep_length_mm = forms.CharField(
        label="Keep length",
        max_length=40,
        initial="30 cm",
        help_text="A remnant at least this long goes back on the shelf; a shorter one is waste.",
    )

    class Meta:
        model = Workshop
        fields = [
            "name",
            "length_unit",
            "currency",
            "paper",
            "rounding_step_mm",
            "safety_share",
            "short_measure_share",
            "keep_length_mm",
        ]
        labels = {
            "name": "What is your workshop called?",
            "length_unit": "You measure in",
            "paper": "You print on",
        }

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        if self.instance.pk:
            from inventory.measures import format_length

            step = f"{self.instance.rounding_step_mm:f}".rstrip("0").rstrip(".")
            if step not in dict(ROUNDING_STEPS):
                self.fields["rounding_step_mm"].choices = [  # type: ignore[attr-defined]
                    *ROUNDING_STEPS,
                    (step, f"{step} mm"),
                ]
            self.initial["rounding_step_mm"] = step
            self.initial["keep_length_mm"] = format_length(
                self.instance.keep_length_mm, self.instance.length_unit
            )

    def clean_keep_length_mm(self) -> int:
        try:
            length_mm = to_whole_mm(parse_length(self.cleaned_data["keep_length_mm"]))
        except MeasureError as reason:
            raise forms.ValidationError(str(reason)) from None
        if not 1 <= length_mm <= 5_000:
            raise forms.ValidationError("The keep length has to be between 1 mm and 5 m.")
        return length_mm


class BatchForm(forms.ModelForm):  # type: ignore[type-arg]
    class Meta:
        model = Batch
        fields = ["name", "market_date"]
        labels = {"name": "What is this batch for?", "market_date": "Market date"}
        help_texts = {
            "name": "For example: Saturday's market.",
            "market_date": "Orders without a due date of their own are due then.",
        }
        widgets = {"market_date": forms.DateInput(attrs={"type": "date"}, format="%Y-%m-%d")}
