"""Forms of the planner's pages."""

from decimal import Decimal
from typing import Any

from django import forms

from inventory.fields import LengthField, LineField
from inventory.measures import MeasureError, parse_decimal
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


# Half an inch, and a foot.
INCH_HABITS = {"rounding_step_mm": Decimal("12.7"), "keep_length_mm": 305}


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


class WorkshopForm(forms.ModelForm):
    name = LineField(label="What is your workshop called?", max_length=80)
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
    keep_length_mm = LengthField(
        label="Keep length",
        maximum_mm=5_000,
        initial=300,
        help_text="A remnant at least this long goes back on the shelf; a shorter one is waste.",
    )

    join_tail_mm = LengthField(
        label="Tail at a join",
        minimum_mm=0,
        maximum_mm=500,
        initial=50,
        help_text="In grid patterns, what is left hanging where a colour begins or ends.",
    )

    class Meta:
        model = Workshop
        fields = [
            "name",
            "length_unit",
            "date_order",
            "currency",
            "paper",
            "rounding_step_mm",
            "safety_share",
            "short_measure_share",
            "keep_length_mm",
            "join_tail_mm",
        ]
        labels = {
            "length_unit": "You measure in",
            "date_order": "When you type a date with strokes",
            "paper": "You print on",
        }

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        if not self.instance.pk:
            return
        for name in ("keep_length_mm", "join_tail_mm"):
            self.fields[name].unit = self.instance.length_unit  # type: ignore[attr-defined]
        step = f"{self.instance.rounding_step_mm.normalize():f}"
        self.initial["rounding_step_mm"] = step
        if step not in dict(ROUNDING_STEPS):
            self.fields["rounding_step_mm"].choices = [  # type: ignore[attr-defined]
                *ROUNDING_STEPS,
                (step, f"{step} mm"),
            ]

    def clean(self) -> dict[str, Any]:
        """A new workshop that measures in inches starts with inch habits, unless it chose others."""
        cleaned: dict[str, Any] = super().clean() or self.cleaned_data
        if not self.instance.pk and cleaned.get("length_unit") == Workshop.LengthUnit.INCHES:
            for name, value in INCH_HABITS.items():
                if name not in self.changed_data:
                    cleaned[name] = value
        return cleaned


class BatchForm(forms.ModelForm):
    name = LineField(
        label="What is this batch for?",
        max_length=80,
        help_text="For example: Saturday's market.",
    )

    class Meta:
        model = Batch
        fields = ["name", "market_date"]
        labels = {"market_date": "Market date"}
        help_texts = {
            "market_date": "Orders without a due date of their own are due then.",
        }
        widgets = {"market_date": forms.DateInput(attrs={"type": "date"}, format="%Y-%m-%d")}
