"""The shades of a colourway, one for every slot."""

from collections.abc import Collection, Mapping
from typing import Any, cast

from django import forms

from inventory.fields import LineField
from inventory.models import Shade
from patterns.colourway_advice import Shelf
from patterns.techniques import Pattern as PatternCore
from patterns.techniques import slot_words


class ColourwayForm(forms.Form):
    """A shade for every slot; each choice says what lies on the shelf, so no script is needed."""

    name = LineField(label="Name of the colourway", max_length=60)

    def __init__(
        self, data: Any = None, *, definition: PatternCore, shelf: Shelf, **kwargs: Any
    ) -> None:
        super().__init__(data, **kwargs)
        self.shades: Mapping[str, Shade] = shelf.shades
        self.slots = definition.used_slots
        self.choices = [("", "Choose a shade")] + [
            (pk, f"{shade}: {shelf.words(shade)}") for pk, shade in self.shades.items()
        ]
        for slot in self.slots:
            self.fields[f"slot_{slot}"] = forms.ChoiceField(
                choices=self.choices,
                label=f"{slot}: {slot_words(definition, slot)}",
                error_messages={
                    "required": f"Choose a shade for {slot}.",
                    "invalid_choice": "That shade is not on your list. Choose another.",
                },
            )

    def list_only(self, keys: Collection[str]) -> None:
        """Offer these shades alone, and in every slot its own; any other stays valid."""
        for slot in self.slots:
            field = cast(forms.ChoiceField, self.fields[f"slot_{slot}"])
            offered = {"", str(self[f"slot_{slot}"].value()), *keys}
            # Those of the widget alone: the field goes on to take every shade.
            cast(forms.Select, field.widget).choices = [
                (key, words) for key, words in self.choices if key in offered
            ]

    @property
    def chosen(self) -> dict[str, Shade]:
        """What is chosen so far; the preview shows it while the rest is open."""
        values = {slot: str(self[f"slot_{slot}"].value()) for slot in self.slots}
        return {slot: self.shades[pk] for slot, pk in values.items() if pk in self.shades}
