"""Forms of the shelf. Lengths and prices are typed as people write them."""

from typing import Any

from django import forms

from inventory.fields import LengthField, LineField, PriceField, QuantityField, TicksField
from inventory.models import PutUp, Shade, ShelfPiece, Supplier

MOST_PIECES_AT_ONCE = 200
LENGTH_HINT = {
    "cm": "Like 8 m, 784.5 cm or 24 1/2 in. A number alone is in centimetres.",
    "in": "Like 8 yd, 24 1/2 in or 62 cm. A number alone is in inches.",
}


def _set_unit(field: forms.Field, unit: str) -> None:
    assert isinstance(field, LengthField)
    field.unit = unit
    field.help_text = LENGTH_HINT[unit]


class SearchForm(forms.Form):
    q = LineField(label="Search", required=False, max_length=100)


class ShadeForm(forms.ModelForm):
    code = LineField(
        label="Code",
        max_length=20,
        help_text="Your own short code, the one you write on labels.",
    )
    name = LineField(label="Name", max_length=80)
    colour = forms.CharField(
        label="Colour",
        widget=forms.TextInput(attrs={"type": "color"}),
        initial="#94292f",
        help_text="As close to the thread as your screen comes.",
    )

    class Meta:
        model = Shade
        fields = ["code", "name", "colour"]

    def clean_code(self) -> str:
        code: str = self.cleaned_data["code"]
        taken = Shade.objects.filter(code__iexact=code).exclude(pk=self.instance.pk).first()
        if taken:
            raise forms.ValidationError(
                f"The code {taken.code} belongs to {taken.name}. Choose another one."
            )
        return code

    def clean_colour(self) -> str:
        return str(self.cleaned_data["colour"]).lower()


class ThreadForm(forms.Form):
    """What one piece of thread is; written to the shelf by `change_shelf` alone."""

    kind = forms.ChoiceField(label="What is it?", choices=ShelfPiece.Kind.choices)
    length = LengthField(label="Length of one")
    lot_name = LineField(
        label="Dye lot",
        max_length=40,
        help_text="From its label. Without one, name the purchase, like “March”.",
    )
    note = LineField(label="Note", max_length=200, required=False)

    def __init__(self, *args: Any, shade: Shade, unit: str, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        # Lots that are used up stay in the list: their thread may come back from a bracelet bag.
        self.lot_names = [lot.name for lot in shade.lots.all()]
        _set_unit(self.fields["length"], unit)
        self.fields["lot_name"].widget.attrs.update(list="lot-names", autocomplete="off")


class ThreadAddForm(ThreadForm):
    count = QuantityField(
        label="How many", name="number of pieces", initial="1", maximum=MOST_PIECES_AT_ONCE
    )

    field_order = ["kind", "length", "count", "lot_name", "note"]


PACK_FIELDS = ("pack_size", "minimum_packs", "pack_step")
MOST_IN_PACKS = 1_000


class PutUpForm(forms.ModelForm):
    name = LineField(label="Name", max_length=80, help_text="Like “skein” or “cone, small”.")
    supplier_name = LineField(label="Supplier", max_length=80)
    length_mm = LengthField(label="Length")
    price = PriceField(label="Price")
    pack_size = QuantityField(
        label="Skeins in a pack",
        name="number in a pack",
        initial="1",
        maximum=MOST_IN_PACKS,
        required=False,
        help_text="12 for a box of twelve; the price is then that of the box.",
    )
    minimum_packs = QuantityField(
        label="Fewest packs at once",
        name="fewest packs",
        initial="1",
        maximum=MOST_IN_PACKS,
        required=False,
        help_text="Of one shade.",
    )
    pack_step = QuantityField(
        label="Packs come in steps of",
        name="step of packs",
        initial="1",
        maximum=MOST_IN_PACKS,
        required=False,
        help_text="2 where they are sold by the pair.",
    )
    for_every_shade = forms.BooleanField(label="Sold in every shade", required=False, initial=True)
    shades = TicksField(
        label="Sold in these shades only", queryset=Shade.objects.all(), required=False
    )

    class Meta:
        model = PutUp
        fields = ["name", "length_mm", "price", *PACK_FIELDS, "for_every_shade", "shades"]

    def __init__(self, *args: Any, unit: str, currency: str, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.supplier_names = list(Supplier.objects.values_list("name", flat=True))
        _set_unit(self.fields["length_mm"], unit)
        self.fields["price"].help_text = f"Of one, or of a pack, in {currency}."
        supplier = self.fields["supplier_name"]
        supplier.widget.attrs.update(list="supplier-names", autocomplete="off")
        if self.instance.pk:
            supplier.initial = self.instance.supplier.name

    @property
    def comes_in_packs(self) -> bool:
        """Whether the fields about packs have anything to say, or to mend."""
        return any(
            self.errors.get(name) if self.is_bound else getattr(self.instance, name) != 1
            for name in PACK_FIELDS
        )

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        for name in PACK_FIELDS:
            if name not in self.errors:
                cleaned[name] = cleaned.get(name) or 1
        is_sold = cleaned.get("for_every_shade") or cleaned.get("shades")
        if not is_sold and "shades" not in self.errors:
            self.add_error("shades", "Tick the shades it is sold in, or tick every shade.")
        self._check_name_is_free(cleaned.get("supplier_name"), cleaned.get("name"))
        return cleaned

    def _check_name_is_free(self, supplier_name: str | None, name: str | None) -> None:
        if not supplier_name or not name:
            return
        same = PutUp.objects.filter(supplier__name__iexact=supplier_name, name=name)
        if same.exclude(pk=self.instance.pk).exists():
            self.add_error("name", f"{supplier_name} has a put-up called “{name}” already.")
