"""What makers choose in the library: filters, and files to bring in."""

from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from django import forms
from django.core.exceptions import ValidationError
from django.core.files.uploadedfile import UploadedFile

from inventory.measures import UNITS
from patterns.fields import BlockField
from patterns.knots import MAX_STRANDS
from patterns.models import Pattern
from patterns.pattern_file import MAX_FILE_BYTES
from patterns.pattern_zip import (
    MAX_FILES,
    MAX_ZIP_BYTES,
    FoundFiles,
    PatternZipError,
    read_files,
)

LONGEST_SEARCH = 80
NOT_ON_LIST = {"invalid_choice": "Choose one from the list."}
THREAD_EDGES = (4, 8, 16)
PASTED = "pasted.toml"


@dataclass(frozen=True)
class ThreadRange:
    """Patterns that take from so much thread to less than so much; None is open."""

    label: str
    from_mm: int | None
    below_mm: int | None


def thread_ranges(length_unit: str) -> dict[str, ThreadRange]:
    """The ranges in metres, or in yards where the workshop measures in inches."""
    unit = "yd" if length_unit == "in" else "m"
    edges = [(edge, int(edge * UNITS[unit])) for edge in THREAD_EDGES]
    first, last = edges[0], edges[-1]
    ranges = [ThreadRange(f"under {first[0]} {unit}", None, first[1])]
    for (low, low_mm), (high, high_mm) in pairwise(edges):
        ranges.append(ThreadRange(f"{low} to {high} {unit}", low_mm, high_mm))
    ranges.append(ThreadRange(f"{last[0]} {unit} and over", last[1], None))
    return {str(number): thread for number, thread in enumerate(ranges, start=1)}


class SearchField(forms.CharField):
    """Words to look for: whatever is typed is searched for, as far as it can be."""

    def to_python(self, value: Any) -> str:
        return str(super().to_python(value) or "").replace("\0", " ")[:LONGEST_SEARCH].strip()


def _choice(label: str, choices: list[tuple[str, str]]) -> forms.ChoiceField:
    return forms.ChoiceField(
        label=label, choices=choices, required=False, error_messages=NOT_ON_LIST
    )


def _strands(label: str) -> forms.IntegerField:
    most = MAX_STRANDS + 1  # a grid of 60 columns has its leading strand too
    words = f"A whole number from 2 to {most}."
    return forms.IntegerField(
        label=label,
        required=False,
        min_value=2,
        max_value=most,
        error_messages={"invalid": words, "min_value": words, "max_value": words},
        widget=forms.TextInput(
            attrs={"inputmode": "numeric", "maxlength": 3, "autocomplete": "off"}
        ),
    )


class LibraryForm(forms.Form):
    """What of the library is shown; a filter that cannot be read is told and left aside."""

    q = SearchField(
        label="Find a pattern by its name",
        required=False,
        widget=forms.TextInput(
            attrs={
                "type": "search",
                "maxlength": LONGEST_SEARCH,
                "placeholder": "Find by name",
                "autocomplete": "off",
            }
        ),
    )
    technique = _choice("Technique", [("", "both"), *Pattern.Technique.choices])
    strands_from = _strands("Strands, from")
    strands_to = _strands("Strands, to")
    thread = _choice("Thread", [])
    made = _choice("Made before", [("", "made or not"), ("yes", "made"), ("no", "not made yet")])
    kept = _choice("Where", [("", "in the library"), ("archived", "archived")])
    sort = _choice(
        "In order of",
        [
            ("", "name"),
            ("newest", "newest first"),
            ("thread", "least thread first"),
            ("most-thread", "most thread first"),
        ],
    )

    def __init__(self, data: Any, *, length_unit: str) -> None:
        super().__init__(data, auto_id="library-%s")
        self.ranges = thread_ranges(length_unit)
        choices = [("", "any amount"), *((key, r.label) for key, r in self.ranges.items())]
        thread = self.fields["thread"]
        assert isinstance(thread, forms.ChoiceField)
        thread.choices = choices

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        low, high = cleaned.get("strands_from"), cleaned.get("strands_to")
        if low and high and high < low:
            self.add_error("strands_to", ValidationError(f"At least {low}, as the first one says."))
        cleaned["thread"] = self.ranges.get(cleaned.get("thread", ""))
        return cleaned

    @property
    def chosen(self) -> dict[str, Any]:
        """What is filtered by, without what is left open."""
        self.is_valid()
        return {name: value for name, value in self.cleaned_data.items() if value}

    @property
    def narrows(self) -> bool:
        """Whether patterns may be left out, and be found again without the filters."""
        return bool(self.chosen.keys() - {"sort"})

    @property
    def is_opened(self) -> bool:
        return bool(self.errors) or bool(self.chosen.keys() - {"q"})

    @property
    def kept_values(self) -> list[tuple[str, str]]:
        """The filters as they were sent, for an address that shows the same."""
        return [(name, self.data[name]) for name in self.fields if self.data.get(name)]

    @property
    def filters(self) -> list[forms.BoundField]:
        return [self[name] for name in self.fields if name != "q"]


class ManyFilesInput(forms.FileInput):
    allow_multiple_selected = True


class ManyFilesField(forms.FileField):
    """All the files that were chosen, as they were sent."""

    widget = ManyFilesInput

    def clean(self, data: Any, initial: Any = None) -> list[UploadedFile]:
        return [super(ManyFilesField, self).clean(file, initial) for file in data or []]


class ImportForm(forms.Form):
    """Pattern files and ZIPs of them, or the text of one file."""

    sent = ManyFilesField(
        required=False,
        allow_empty_file=True,
        label="Choose pattern files, or a ZIP of them",
        help_text=(
            f"Files that end in .toml, each at most {MAX_FILE_BYTES // 1024} KB; a ZIP, folders in it"
            f" or not, at most {MAX_ZIP_BYTES // 2**20} MB. Up to {MAX_FILES} at once."
        ),
        widget=ManyFilesInput(attrs={"accept": ".toml,.zip,text/plain,application/zip"}),
    )
    text = BlockField(
        required=False,
        label="Or paste the text of a pattern file",
        widget=forms.Textarea(attrs={"class": "code", "rows": 10, "spellcheck": "false"}),
    )

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if self.errors:
            return cleaned
        # One byte more than the most is enough to see that it is too large.
        uploads = [(file.name or "", file.read(MAX_ZIP_BYTES + 1)) for file in cleaned["sent"]]
        if cleaned["text"].strip():
            uploads.append((PASTED, cleaned["text"].encode(errors="replace")))
        if not uploads:
            raise ValidationError("Choose pattern files, or paste the text of one.")
        try:
            cleaned["found"] = read_files(uploads)
        except PatternZipError as error:
            self.add_error("sent", str(error))
        return cleaned

    @property
    def found(self) -> FoundFiles:
        found: FoundFiles = self.cleaned_data["found"]
        return found

    @property
    def source_name(self) -> str:
        names = [file.name or "" for file in self.cleaned_data["sent"]]
        if self.cleaned_data["text"].strip():
            names.append(PASTED)
        return names[0] if len(names) == 1 else f"{names[0]} and {len(names) - 1} more"
