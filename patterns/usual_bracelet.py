"""The bracelet that a pattern is looked at for where nobody has chosen one: the usual size."""

from collections.abc import Mapping
from dataclasses import dataclass

from django.http import QueryDict

from inventory.models import Workshop
from patterns.actions import cut_rule
from patterns.forms import StrandChoiceForm
from patterns.models import KnottedLength, Pattern
from patterns.strand_answer import NoAnswer, answer_for


@dataclass(frozen=True)
class UsualBracelet:
    """Its rows, and the pieces to cut of every slot [mm].

    Without a size, an ending or a gauge nothing is known but one repeat: `size` is empty then.
    """

    size: str
    rows: int
    pieces_mm: Mapping[str, tuple[int, ...]]


def usual_bracelet(pattern: Pattern, workshop: Workshop) -> UsualBracelet:
    """The middle one of the sizes, with the ending and the gauge that are the default."""
    definition = pattern.definition
    one_repeat = UsualBracelet("", len(definition.rows), {})
    choice = StrandChoiceForm(QueryDict(), pattern=pattern)
    if not choice.is_valid():
        return one_repeat
    size, ending = choice.cleaned_data["size"], choice.cleaned_data["ending"]
    length = KnottedLength.objects.filter(size=size, ending=ending).first()
    if length is None:
        return one_repeat
    try:
        answer = answer_for(
            definition,
            length.knotted_length_mm,
            choice.cleaned_data["gauge"].as_core(),
            ending.as_core(),
            cut_rule(workshop),
        )
    except NoAnswer:
        return one_repeat
    pieces: dict[str, tuple[int, ...]] = {}
    for line in answer.pieces:
        pieces[line.piece.slot] = (*pieces.get(line.piece.slot, ()), line.piece.cut_mm)
    return UsualBracelet(size.name, answer.rows, pieces)
