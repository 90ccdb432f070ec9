"""What makers type for a new pattern: its rows, or a family's strands and colours."""

from collections.abc import Callable
from typing import Any

from django import forms
from django.core.exceptions import ValidationError

from inventory.fields import LineField, QuantityField
from patterns.families import FAMILIES, FamilyError, make_family
from patterns.fields import BlockField
from patterns.forms import FINISH_CHOICES, NOT_ON_LIST
from patterns.grid import GridPattern
from patterns.knots import (
    MAX_NAME_LENGTH,
    MAX_STRANDS,
    MIN_STRANDS,
    SLOT_LETTERS,
    DiagonalPattern,
    Finish,
    PatternError,
)
from patterns.techniques import Pattern
from patterns.written_cells import read_letters, read_written_cells
from patterns.written_lines import WrittenProblem
from patterns.written_look import (
    LookedRow,
    beginning_of_cells,
    beginning_of_knots,
    look_at_cells,
    look_at_knots,
    most_used,
    own_slots,
)
from patterns.written_rows import read_written_rows

CENTRED_CHOICE = (Finish.CENTRED.value, "cells only: with the picture once, in the middle")
CODE = {"class": "code", "autocomplete": "off", "spellcheck": "false", "autocapitalize": "off"}


class RowsForm(forms.Form):
    """A pattern typed or pasted row by row, in the words that makers use.

    `looked` and `beginning` tell what was understood, also where something is wrong.
    """

    technique = forms.ChoiceField(
        label="What the rows are made of",
        choices=[("diagonal", "knots: f, b, fb, bf"), ("grid", "cells: a letter for each colour")],
        required=False,
        error_messages={"invalid_choice": NOT_ON_LIST},
    )
    name = LineField(label="Name", max_length=MAX_NAME_LENGTH)
    strands = BlockField(
        required=False,
        label="Strands, left to right",
        help_text=(
            "For knots: one letter a strand, equal letters are one colour: A A B B C C, or 2A 2B 2C."
            " Left empty, every strand gets a letter of its own, as many as the rows need."
            " For cells: the letter of the background; left empty, the letter with most cells."
        ),
        widget=forms.TextInput(attrs=CODE),
    )
    rows = BlockField(
        label="Rows of one repeat",
        help_text=(
            "One line a row: f f b, or 3f 2b, or (f b) x3; of cells A A B, AAB or 2A B. “x2” behind"
            " a row ties it twice; on a line of its own it ties all rows above again. - is a row"
            " without knots."
        ),
        widget=forms.Textarea(attrs=CODE | {"rows": 12}),
    )
    finish = forms.ChoiceField(
        label="The band ends",
        choices=[*FINISH_CHOICES, CENTRED_CHOICE],
        error_messages={"required": NOT_ON_LIST, "invalid_choice": NOT_ON_LIST},
    )

    looked: tuple[LookedRow, ...] = ()
    beginning: Pattern | None = None

    @property
    def open_problems(self) -> list[tuple[str, str]]:
        """What is wrong and does not stand beside its row, as label and sentence."""
        shown_by_row = any(row.notes for row in self.looked)
        return [
            (str(self.fields[name].label), str(error))
            for name, errors in self.errors.items()
            if not (name == "rows" and shown_by_row)
            for error in errors
        ]

    def clean_strands(self) -> tuple[str, ...]:
        letters, problem = read_letters(self.cleaned_data["strands"], MAX_STRANDS)
        if problem and problem.place > MAX_STRANDS:
            raise ValidationError(
                f"A pattern has {MIN_STRANDS} to {MAX_STRANDS} strands; these are more."
            )
        if problem:
            raise ValidationError(f"Strand {problem.place}: {problem.sentence}")
        return letters

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if "strands" in cleaned and cleaned.get("technique") != "grid":
            self._check_strands(cleaned["strands"])
        if "rows" not in cleaned:
            return cleaned
        if cleaned.get("technique") == "grid":
            self._read_cells(cleaned)
        else:
            self._read_knots(cleaned)
        return cleaned

    def _check_strands(self, strands: tuple[str, ...]) -> None:
        if strands and len(strands) < MIN_STRANDS:
            self.add_error(
                "strands", f"A pattern has {MIN_STRANDS} to {MAX_STRANDS} strands; this one has 1."
            )

    def _read_knots(self, cleaned: dict[str, Any]) -> None:
        written = read_written_rows(cleaned["rows"])
        self._note(written.problems)
        slots = cleaned.get("strands") or own_slots(written.rows, SLOT_LETTERS, MAX_STRANDS)
        self.looked = look_at_knots(written, len(slots))
        self.beginning = beginning_of_knots(written, self.looked, slots)
        if not self.errors:
            finish = Finish(cleaned["finish"])
            self._keep(lambda: DiagonalPattern(cleaned["name"], slots, written.rows, finish))

    def _read_cells(self, cleaned: dict[str, Any]) -> None:
        written = read_written_cells(cleaned["rows"])
        self._note(written.problems)
        self.looked = look_at_cells(written)
        self.beginning = beginning_of_cells(written, self.looked)
        background = cleaned.get("strands") or ()
        if len(background) > 1:
            self.add_error("strands", "Cells have one background: type one letter, or none.")
        if not self.errors:
            ground = background[0] if background else most_used(written.rows)
            finish = Finish(cleaned["finish"])
            self._keep(lambda: GridPattern(cleaned["name"], ground, written.rows, finish))

    def _note(self, problems: tuple[WrittenProblem, ...]) -> None:
        for problem in problems:
            self.add_error("rows", problem.message)

    def _keep(self, make: Callable[[], Pattern]) -> None:
        try:
            self.cleaned_data["definition"] = make()
        except PatternError as error:
            is_finish = error.row is None and "finish" in str(error)
            self.add_error("finish" if is_finish else "rows", str(error))


class FamilyForm(forms.Form):
    """Which family, how wide, in which colours."""

    family = forms.ChoiceField(
        label="Family",
        choices=[(family.key, family.name) for family in FAMILIES.values()],
        initial="chevron",
        error_messages={"required": NOT_ON_LIST, "invalid_choice": NOT_ON_LIST},
    )
    strands = QuantityField(
        label="Strands",
        name="number of strands",
        minimum=MIN_STRANDS,
        maximum=MAX_STRANDS,
        initial="12",
        help_text=f"From {MIN_STRANDS} to {MAX_STRANDS}; the more, the wider.",
        error_messages={"required": "Type how many strands."},
    )
    colours = BlockField(
        label="Colours, in their order",
        initial="A B C",
        help_text=(
            "A letter for each line: A A B, or 2A B. Fewer letters than lines make broader ones."
            " Or how many: 3. You choose the shades afterwards."
        ),
        widget=forms.TextInput(attrs=CODE),
        error_messages={"required": "Type the colours as letters, or how many."},
    )
    name = LineField(
        label="Name",
        max_length=MAX_NAME_LENGTH,
        required=False,
        help_text="Left empty, it is called after its family.",
    )

    def clean_colours(self) -> tuple[str, ...]:
        typed: str = self.cleaned_data["colours"].strip()
        if typed.isascii() and typed.isdigit():
            return self._so_many(typed)
        letters, problem = read_letters(typed, MAX_STRANDS)
        if problem:
            raise ValidationError(f"Colour {problem.place}: {problem.sentence}")
        return letters

    def _so_many(self, typed: str) -> tuple[str, ...]:
        count = int(typed[:9])
        if not 1 <= count <= len(SLOT_LETTERS):
            raise ValidationError(f"Take 1 to {len(SLOT_LETTERS)} colours.")
        return tuple(SLOT_LETTERS[:count])

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        if self.errors:
            return cleaned
        try:
            cleaned["definition"] = make_family(
                cleaned["family"], cleaned["strands"], cleaned["colours"], name=cleaned["name"]
            )
        except FamilyError as error:
            self.add_error("colours" if error.field == "order" else error.field, str(error))
        except PatternError as error:
            self.add_error("name", str(error))
        return cleaned
