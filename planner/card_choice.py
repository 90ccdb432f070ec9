"""Which knotting card a maker wants, and the card as it is worked out now."""

from datetime import date

from django import forms
from django.http import QueryDict

from inventory.models import Workshop
from patterns.actions import cut_rule
from patterns.cautions import cautions_for
from patterns.forms import StrandChoiceForm
from patterns.models import Colourway, KnottedLength, Pattern
from patterns.strand_answer import NoAnswer, answer_for
from planner.planning.cards import fill_card
from planner.planning.demand import ShadeName
from planner.sheets.card_contents import KnottingCard
from planner.sheets.contents import SheetHead
from planner.sheets.paper import CARD_PAPERS

PAPER_OF_WORKSHOP = {Workshop.Paper.A4: "a5", Workshop.Paper.LETTER: "half-letter"}


class CardChoiceForm(StrandChoiceForm):
    """The choice of a bracelet, and of the paper; without one, half of the workshop's own."""

    paper = forms.ChoiceField(choices=[(paper.key, paper.name) for paper in CARD_PAPERS.values()])

    def __init__(self, data: QueryDict, *, pattern: Pattern, workshop: Workshop) -> None:
        super().__init__(data, pattern=pattern)
        usual = PAPER_OF_WORKSHOP[Workshop.Paper(workshop.paper)]
        self.data = {**self.data, "paper": data.get("paper", usual)}
        self.fields["paper"].error_messages["invalid_choice"] = (
            f"There is no such paper. Choose {' or '.join(p.name for p in CARD_PAPERS.values())}."
        )


def chosen_card(
    pattern: Pattern, form: CardChoiceForm, workshop: Workshop, today: date
) -> KnottingCard:
    """Work out the card of a valid choice.

    Raises NoAnswer where the bracelet cannot be worked out; the text says what to do.
    """
    chosen = form.cleaned_data
    size, ending, gauge = chosen["size"], chosen["ending"], chosen["gauge"].as_core()
    length = KnottedLength.objects.filter(size=size, ending=ending).first()
    if length is None:
        raise NoAnswer(
            f"{size} has no knotted length with {ending}. Give it one under Sizes, "
            "or choose another size or ending."
        )
    rule = cut_rule(workshop)
    definition = pattern.definition
    answer = answer_for(
        definition,
        length.knotted_length_mm,
        gauge,
        ending.as_core(),
        rule,
        chosen["lengths"],
    )
    return fill_card(
        head=SheetHead(workshop.name, "", None, "", today),
        unit=workshop.length_unit,
        pattern=definition,
        shades=_shade_names(chosen["colourway"]),
        names=(str(chosen["colourway"] or ""), size.name, ending.name),
        ends=ending.as_core(),
        rows=answer.rows,
        band_mm=(answer.band_length_mm, answer.band_width_mm),
        pieces=[line.piece for line in answer.pieces],
        gauge=gauge,
        join_tail_mm=rule.join_tail_mm,
        cautions=cautions_for(size.is_child, ending.has_metal_or_button),
    )


def _shade_names(colourway: Colourway | None) -> dict[str, ShadeName]:
    if colourway is None:
        return {}
    return {
        slot: ShadeName(shade.pk, shade.code, shade.name, shade.colour)
        for slot, shade in colourway.shades_by_slot().items()
    }
