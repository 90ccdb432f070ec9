"""What makers type for a new pattern: its rows, or a family's strands and colours."""

from typing import Any

from django import forms
from django.core.exceptions import ValidationError

from inventory.fields import LineField
from patterns.families import FAMILIES, FamilyError, make_family
from patterns.fields import BlockField
from patterns.forms import FINISH_CHOICES, NOT_ON_LIST
from patterns.knots import (
    MAX_NAME_LENGTH,
    MAX_STRANDS,
    SLOT_LETTERS,
    DiagonalPattern,
    Finish,
    Knot,
    PatternError,
)
from patterns.written_rows import read_written_rows


class PatternRowsForm(forms.Form):
    """A pattern typed or pasted row by row, in the words that makers use."""

    name = LineField(label="Name", max_length=MAX_NAME_LENGTH)
    strands = BlockField(
        required=False,
        label="Strands, left to right",
        help_text=(
            "One letter a strand; equal letters are one colour. Six strands of three colours:"
            " A A B B C C. Left empty, every strand gets a letter of its own, as many as the rows need."
        ),
        widget=forms.TextInput(
            attrs={"class": "code", "autocomplete": "off", "spellcheck": "false"}
        ),
    )
    rows = BlockField(
        label="Rows of one repeat",
        help_text=(
            "One line a row: f f b, or 3f 2b, or (f b) x3. “x2” behind a row ties it twice; on a line of"
            " its own it ties all rows above again. An even number of rows: the first pairs strands"
            " 1-2, 3-4, …; the second 2-3, 4-5, …; and so on in turn."
        ),
        widget=forms.Textarea(attrs={"class": "code", "rows": 12, "spellcheck": "false"}),
    )
    finish = forms.ChoiceField(
        label="The band ends",
        choices=FINISH_CHOICES,
        error_messages={"required": NOT_ON_LIST, "invalid_choice": NOT_ON_LIST},
    )

    def clean_strands(self) -> tuple[str, ...]:
        letters = tuple("".join(self.cleaned_data["strands"].replace(",", " ").split()).upper())
        for number, letter in enumerate(letters, start=1):
            if letter not in SLOT_LETTERS:
                raise ValidationError(f"Strand {number}: '{letter}' is not a letter from A to Z.")
        if letters and not 2 <= len(letters) <= MAX_STRANDS:
            raise ValidationError(
                f"A pattern has 2 to {MAX_STRANDS} strands; this one has {len(letters)}."
            )
        return letters

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if "rows" in cleaned:
            written = read_written_rows(cleaned["rows"])
            cleaned["written"] = written
            for problem in written.problems:
                self.add_error("rows", problem.message)
        if not self.errors:
            self._read_pattern(cleaned)
        return cleaned

    def _read_pattern(self, cleaned: dict[str, Any]) -> None:
        rows = cleaned["written"].rows
        try:
            cleaned["definition"] = DiagonalPattern(
                name=cleaned["name"],
                slots=cleaned["strands"] or _own_letters(rows),
                rows=rows,
                finish=Finish(cleaned["finish"]),
            )
        except PatternError as error:
            self.add_error("rows", str(error))


def _own_letters(rows: tuple[tuple[Knot, ...], ...]) -> tuple[str, ...]:
    """As many strands as two rows below each other pair: 3 and 2 knots are six, 3 and 3 seven."""
    first, second = (len(row) for row in (*rows, (), ())[:2])
    strands = min(2 * first + (first == second), MAX_STRANDS)
    return tuple(SLOT_LETTERS[place % len(SLOT_LETTERS)] for place in range(strands))


class FamilyForm(forms.Form):
    """Which family, how wide, in how many colours."""

    family = forms.ChoiceField(
        label="Family",
        choices=[(family.key, family.name) for family in FAMILIES.values()],
        initial="chevron",
        error_messages={"required": NOT_ON_LIST, "invalid_choice": NOT_ON_LIST},
    )
    strands = forms.IntegerField(
        label="Strands",
        min_value=2,
        max_value=MAX_STRANDS,
        initial=12,
        help_text=f"From 2 to {MAX_STRANDS}; the more, the wider.",
    )
    colours = forms.IntegerField(
        label="Colours",
        min_value=1,
        max_value=len(SLOT_LETTERS),
        initial=3,
        help_text="How many; you choose the shades afterwards.",
    )
    name = LineField(
        label="Name",
        max_length=MAX_NAME_LENGTH,
        required=False,
        help_text="Left empty, it is called after its family.",
    )

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if self.errors:
            return cleaned
        letters = tuple(SLOT_LETTERS[: cleaned["colours"]])
        try:
            cleaned["definition"] = make_family(
                cleaned["family"], cleaned["strands"], letters, name=cleaned["name"]
            )
        except (FamilyError, PatternError) as error:
            self.add_error(None, str(error))
        return cleaned
