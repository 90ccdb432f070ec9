"""The bracelet that a pattern is looked at for: a size, with the usual ending and gauge."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

from django.http import QueryDict

from inventory.models import Workshop
from patterns.actions import cut_rule
from patterns.forms import StrandChoiceForm
from patterns.models import KnottedLength, Pattern, Size
from patterns.strand_answer import NoAnswer, answer_for


@dataclass(frozen=True)
class UsualBracelet:
    """Its rows, and the pieces to cut of every slot [mm].

    Without a size, an ending or a gauge nothing is known but one repeat: `size` is empty then.
    `sizes` are those to choose from, `wanted` the one that was looked at.
    """

    sizes: tuple[Size, ...]
    wanted: Size | None
    size: str
    rows: int
    pieces_mm: Mapping[str, tuple[int, ...]]


def usual_bracelet(pattern: Pattern, workshop: Workshop, size_key: str = "") -> UsualBracelet:
    """One in a size, the middle one where none is chosen, with the usual ending and gauge."""
    definition = pattern.definition
    choice = _choice(pattern, size_key)
    size, ending = choice.cleaned_data.get("size"), choice.cleaned_data.get("ending")
    one_repeat = UsualBracelet(tuple(choice.sizes), size, "", len(definition.rows), {})
    if size is None or ending is None or "gauge" not in choice.cleaned_data:
        return one_repeat
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
    return replace(one_repeat, size=size.name, rows=answer.rows, pieces_mm=pieces)


def _choice(pattern: Pattern, size_key: str) -> StrandChoiceForm:
    """The checked choice; a size that is not there is no choice."""
    typed = QueryDict(mutable=True)
    if size_key:
        typed["size"] = size_key
    choice = StrandChoiceForm(typed, pattern=pattern)
    if not choice.is_valid() and size_key:
        return _choice(pattern, "")
    return choice
