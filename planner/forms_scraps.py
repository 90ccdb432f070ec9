"""What may be made for the stall from what lies on the shelf: the choices of a page."""

from decimal import Decimal
from typing import Any

from django import forms
from django.db.models import QuerySet

from inventory.fields import PriceField, QuantityField, TicksField
from patterns.models import Colourway, Ending, Size
from planner.cutting.from_scraps_problem import MOST_KINDS

MOST_OF_EACH = 100
USUAL_MOST = 5


def makeable_colourways() -> QuerySet[Colourway]:
    """Colourways of the patterns that are still made, by pattern."""
    return (
        Colourway.objects.filter(pattern__archived_at__isnull=True)
        .select_related("pattern")
        .prefetch_related("shades__shade")
        .order_by("pattern__name", "pk")
    )


class ScrapsForm(forms.Form):
    """Colourways and sizes to choose from, how many, and what counts."""

    colourways = TicksField(
        label="Which bracelets?",
        queryset=Colourway.objects.none(),
        required=False,
    )
    every = forms.BooleanField(label="All of these", required=False)
    sizes = TicksField(
        label="In which sizes?",
        queryset=Size.objects.all(),
        error_messages={"required": "Tick at least one size."},
    )
    ending = forms.ChoiceField(label="With which ending?")
    most = QuantityField(
        label="At most, of each",
        name="number of each",
        initial=str(USUAL_MOST),
        maximum=MOST_OF_EACH,
        help_text="Of each bracelet in each size.",
        error_messages={"required": "Say how many of each you would take to the stall."},
    )
    aim = forms.ChoiceField(
        label="What counts?",
        choices=[("count", "as many bracelets as can be"), ("money", "as much money as can be")],
        initial="count",
        widget=forms.RadioSelect,
    )
    leave_whole = forms.BooleanField(
        label="Remnants and started skeins only: leave whole skeins as they are", required=False
    )

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        queryset = makeable_colourways()
        self.fields["colourways"].queryset = queryset  # type: ignore[attr-defined]
        endings = list(Ending.objects.order_by("name"))
        self.fields["ending"].choices = [(str(e.pk), e.name) for e in endings]  # type: ignore[attr-defined]
        self.fields["ending"].initial = next((str(e.pk) for e in endings if e.is_default), None)
        self.rows = list(queryset)
        for colourway in self.rows:
            self.fields[_price_name(colourway)] = PriceField(required=False, label="Price of one")

    def lines(self) -> list[dict[str, Any]]:
        """Each colourway with its tick, its price field, and its shades, for the page."""
        ticked = {str(key) for key in self["colourways"].value() or ()}
        return [
            {
                "colourway": colourway,
                "shades": [choice.shade for choice in colourway.shades.all()],
                "ticked": str(colourway.pk) in ticked,
                "price": self[_price_name(colourway)],
            }
            for colourway in self.rows
        ]

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if cleaned.get("every"):
            cleaned["colourways"] = self.rows
        elif not cleaned.get("colourways") and "colourways" not in self.errors:
            self.add_error("colourways", "Tick at least one bracelet that you would make.")
        colourways, sizes = cleaned.get("colourways"), cleaned.get("sizes")
        if cleaned.get("aim") == "money":
            for colourway in colourways or ():
                name = _price_name(colourway)
                if not cleaned.get(name) and name not in self.errors:
                    self.add_error(name, f"What does one {colourway.pattern} cost at your stall?")
        if colourways is not None and sizes is not None:
            kinds = len(colourways) * len(sizes)
            if kinds > MOST_KINDS:
                self.add_error(
                    "colourways",
                    f"{kinds} kinds are too many at once: {MOST_KINDS} at most. Untick some.",
                )
        return cleaned

    def price_of(self, colourway: Colourway) -> Decimal:
        """What one is worth: its price, or 1 where bracelets are counted."""
        if self.cleaned_data["aim"] == "count":
            return Decimal(1)
        price: Decimal = self.cleaned_data[_price_name(colourway)]
        return price


def _price_name(colourway: Colourway) -> str:
    return f"price-{colourway.pk}"
