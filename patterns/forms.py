"""What makers type about patterns, sizes, endings and gauges."""

from typing import Any

from django import forms
from django.core.exceptions import ValidationError
from django.http import QueryDict

from inventory.fields import LengthField, LineField
from inventory.page_helpers import habits
from patterns.fields import BlockField, NumberField
from patterns.knots import Finish, PatternError
from patterns.models import Colourway, Ending, Gauge, Pattern, Size
from patterns.pattern_file import read_pattern

NOT_ON_LIST = "Choose one from the list."
FINISH_CHOICES = [
    (Finish.EXACT.value, "after the rows that the length takes"),
    (Finish.NEAREST.value, "after whole repeats: the nearest number"),
    (Finish.AT_LEAST.value, "after whole repeats: at least the length"),
    (Finish.AT_MOST.value, "after whole repeats: at most the length"),
]


LENGTHS_CHOICES = [
    ("", "each its own length"),
    ("1", "one length"),
    *((str(count), f"{count} lengths") for count in range(2, 13)),
]


def _read_into(form: forms.Form, field: str, text: str) -> None:
    try:
        form.cleaned_data["definition"] = read_pattern(text)
    except PatternError as error:
        form.add_error(field, str(error))
    form.cleaned_data["pattern_text"] = text


class PatternEditForm(forms.Form):
    text = BlockField(
        label="The text of the pattern",
        widget=forms.Textarea(attrs={"class": "code", "rows": 20, "spellcheck": "false"}),
    )
    version = forms.IntegerField(required=False, min_value=1, max_value=10**9)

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if "text" in cleaned:
            _read_into(self, "text", cleaned["text"])
        if "version" in self.errors:
            self.add_error(None, "The page did not say which version it shows. Load it again.")
        return cleaned


class StrandChoiceForm(forms.Form):
    """For which bracelet the strands are worked out; what is not said is the default."""

    size = forms.ModelChoiceField(Size.objects.all(), empty_label=None)
    ending = forms.ModelChoiceField(Ending.objects.all(), empty_label=None)
    gauge = forms.ModelChoiceField(Gauge.objects.all(), empty_label=None)
    colourway = forms.ModelChoiceField(
        Colourway.objects.none(), required=False, empty_label="undyed thread"
    )
    lengths = forms.TypedChoiceField(
        label="Cut in", choices=LENGTHS_CHOICES, required=False, coerce=int, empty_value=None
    )

    def __init__(self, data: QueryDict, *, pattern: Pattern | None) -> None:
        """Of a pattern that is not saved yet any colourway may lend its shades."""
        self.sizes = list(Size.objects.all())
        colourways = pattern.colourways.all() if pattern else Colourway.objects.all()
        first_colourway = next(iter(colourways), None) if pattern else None
        defaults = {
            "size": self.sizes[len(self.sizes) // 2] if self.sizes else None,
            "ending": Ending.objects.filter(is_default=True).first(),
            "gauge": Gauge.objects.filter(is_default=True).first(),
            "colourway": first_colourway,
        }
        typed = {name: data[name] for name in (*defaults, "lengths") if name in data}
        super().__init__({name: thing and thing.pk for name, thing in defaults.items()} | typed)
        self.fields["colourway"].queryset = colourways  # type: ignore[attr-defined]
        for field in self.fields.values():
            field.error_messages["invalid_choice"] = "That is not there any more. Choose another."


def workshop_unit() -> str:
    return habits().length_unit


class NamedForm(forms.ModelForm):
    """A model form whose name is taken once, whatever its capitals."""

    def clean_name(self) -> str:
        name: str = self.cleaned_data["name"]
        others = self._meta.model._default_manager.exclude(pk=self.instance.pk)
        if others.filter(name__iexact=name).exists():
            raise ValidationError(f"The name {name} is taken. Choose another.")
        return name


class GaugeForm(NamedForm):
    name = LineField(label="Name", max_length=80)
    thread_diameter_mm = NumberField(
        label="Thread diameter, in mm",
        name="thread diameter",
        minimum="0.1",
        maximum="10",
        places=3,
        help_text="As it lies in the knot: six-strand floss about 0.9 to 1 (common practice).",
    )
    loop_ratio = NumberField(
        label="Loop ratio",
        name="loop ratio",
        minimum="0.5",
        maximum="5",
        places=3,
        help_text="How wide your loops lie round the base strand, in thread diameters. 1.5 lies close; larger is looser.",
    )
    idle_run = NumberField(
        label="Idle run, in thread diameters",
        name="idle run",
        minimum="0",
        maximum="10",
        places=3,
        required=False,
        help_text="Thread along the edge in a row that a strand sits out. Leave it empty for the straight run, 1.414.",
    )

    class Meta:
        model = Gauge
        fields = ["name", "thread_diameter_mm", "loop_ratio", "idle_run"]


class SizeForm(NamedForm):
    """A size with its knotted length for every ending, as fields `knotted_<ending>`."""

    name = LineField(label="Name", max_length=40)

    class Meta:
        model = Size
        fields = ["name", "wrist_min_mm", "wrist_max_mm", "is_child"]
        labels = {"is_child": "A child's size: its tags carry the cautions for children"}

    def __init__(self, *args: Any, unit: str, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        required = {"required": "Type the girth of a wrist."}
        wrist: dict[str, Any] = {
            "unit": unit,
            "minimum_mm": 50,
            "maximum_mm": 400,
            "error_messages": required,
        }
        self.fields["wrist_min_mm"] = LengthField(label="Smallest wrist", **wrist)
        self.fields["wrist_max_mm"] = LengthField(label="Largest wrist", **wrist)
        self.endings = {ending.pk: ending for ending in Ending.objects.all()}
        known = {} if self.instance.pk is None else self._known_lengths()
        for pk, ending in self.endings.items():
            self.fields[f"knotted_{pk}"] = LengthField(
                label=ending.name,
                unit=unit,
                minimum_mm=20,
                maximum_mm=1_000,
                required=False,
                initial=known.get(pk),
            )

    def _known_lengths(self) -> dict[int, int]:
        rows = self.instance.knotted_lengths.all()
        return {row.ending_id: row.knotted_length_mm for row in rows}

    @property
    def knotted_fields(self) -> list[forms.BoundField]:
        return [self[f"knotted_{pk}"] for pk in self.endings]

    @property
    def knotted_lengths_mm(self) -> dict[Ending, int | None]:
        return {ending: self.cleaned_data[f"knotted_{pk}"] for pk, ending in self.endings.items()}

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        smallest, largest = cleaned.get("wrist_min_mm"), cleaned.get("wrist_max_mm")
        if smallest and largest and largest <= smallest:
            self.add_error("wrist_max_mm", "The largest wrist has to be larger than the smallest.")
        return cleaned


ENDING_LENGTHS = {
    "start_tie_mm": (
        "Finished tie at the start",
        "As it hangs from the bracelet, before the first row. A folded start has none.",
    ),
    "end_tie_mm": (
        "Finished tie at the end",
        "As it hangs from the bracelet, after the last row.",
    ),
    "closing_knot_mm": (
        "Closing knot",
        "Thread in the knot that closes a tie, for each strand: about 3 cm (common practice).",
    ),
    "grip_mm": (
        "Grip",
        "The tail that your fingers need to tie the last rows: about 8 to 10 cm (common practice).",
    ),
    "fold_loop_mm": (
        "Loop of a folded start",
        "Thread in the loop, for both strands of a folded piece together: 4 to 6 cm (common practice).",
    ),
    "single_start_mm": (
        "Start of a strand without a partner",
        "With a folded start, a colour with an odd number of strands leaves one to be cut alone; this is its tail.",
    ),
    "sliding_piece_mm": (
        "Sliding piece",
        "One more piece, in the colour of strand 1, tied round the ends of a sliding closure. 0 for none.",
    ),
}


class EndingForm(NamedForm):
    name = LineField(label="Name", max_length=60)
    take_up = NumberField(
        label="Take-up of the ties",
        name="take-up",
        minimum="1",
        maximum="3",
        places=2,
        help_text="Thread for a finished length of tie: 1 for loose ties, 1.2 to 1.3 for a three-part plait (common practice).",
    )
    lengths_like = forms.ModelChoiceField(
        Ending.objects.all(),
        required=False,
        empty_label="none yet",
        error_messages={"invalid_choice": NOT_ON_LIST},
        label="Take the knotted lengths of every size from",
        help_text="Sizes have a knotted length for each ending. Start from those of a similar one.",
    )

    class Meta:
        model = Ending
        fields = ["name", "start", "take_up", *ENDING_LENGTHS, "has_metal_or_button"]
        labels = {
            "start": "How it starts",
            "has_metal_or_button": "It has a button, bead or metal part: tags carry a caution",
        }
        error_messages = {"start": {"required": NOT_ON_LIST, "invalid_choice": NOT_ON_LIST}}

    field_order = [
        "name", "start", "start_tie_mm", "end_tie_mm", "take_up", "closing_knot_mm", "grip_mm",
        "fold_loop_mm", "single_start_mm", "sliding_piece_mm",
    ]  # fmt: skip

    def __init__(self, *args: Any, unit: str, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        for name, (label, help_text) in ENDING_LENGTHS.items():
            self.fields[name] = LengthField(
                label=label,
                help_text=help_text,
                unit=unit,
                minimum_mm=0,
                maximum_mm=2_000,
                error_messages={"required": "Type a length; 0 where it takes none."},
            )
        if self.instance.pk is not None:
            del self.fields["lengths_like"]
        self.order_fields(self.field_order)
