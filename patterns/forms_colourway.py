"""The shades of a colourway, one for every slot."""

from collections.abc import Iterable
from typing import Any

from django import forms

from inventory.fields import LineField
from inventory.models import Shade
from patterns.techniques import Pattern as PatternCore
from patterns.techniques import slot_words


class ColourwayForm(forms.Form):
    """A shade for every slot; the shades are fetched once for all the choices."""

    name = LineField(label="Name of the colourway", max_length=60)

    def __init__(
        self,
        data: Any = None,
        *,
        definition: PatternCore,
        shades: Iterable[Shade],
        **kwargs: Any,
    ) -> None:
        super().__init__(data, **kwargs)
        self.shades = {str(shade.pk): shade for shade in shades}
        self.slots = definition.used_slots
        choices = [("", "Choose a shade")] + [(pk, str(shade)) for pk, shade in self.shades.items()]
        for slot in self.slots:
            self.fields[f"slot_{slot}"] = forms.ChoiceField(
                choices=choices,
                label=f"{slot}: {slot_words(definition, slot)}",
                error_messages={
                    "required": f"Choose a shade for {slot}.",
                    "invalid_choice": "That shade is not on your list. Choose another.",
                },
            )

    @property
    def slot_fields(self) -> list[forms.BoundField]:
        return [self[f"slot_{slot}"] for slot in self.slots]

    @property
    def chosen(self) -> dict[str, Shade]:
        """What is chosen so far; the preview shows it while the rest is open."""
        values = {slot: str(self[f"slot_{slot}"].value()) for slot in self.slots}
        return {slot: self.shades[pk] for slot, pk in values.items() if pk in self.shades}
