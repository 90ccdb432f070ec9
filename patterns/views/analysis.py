"""What a pattern does, and variants of it that use thread more evenly."""

from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any
from urllib.parse import urlencode

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_POST, require_safe

from inventory.models import Shade
from inventory.page_helpers import habits
from patterns.actions import LibraryError, cut_rule, keep_variant
from patterns.analysis import (
    ALWAYS_TIES_SHARE,
    HARDLY_TIES_SHARE,
    Analysis,
    ShadeThread,
    analyse,
)
from patterns.forms import StrandChoiceForm
from patterns.geometry import LengthError
from patterns.knots import MAX_NAME_LENGTH, DiagonalPattern, PatternError
from patterns.models import Ending, KnottedLength, Pattern
from patterns.pattern_file import write_pattern
from patterns.pictures import band_picture
from patterns.strand_answer import StrandAnswer
from patterns.techniques import Pattern as PatternCore
from patterns.techniques import strand_table
from patterns.variants import LEAST_SAVING_SHARE, Variant, VariantSearch, find_variants
from patterns.views._shared import render_either

_CHOICES = ("size", "ending", "gauge", "colourway")
# Enough of a band to see its repeat, and few enough rows for a page of several bands.
VARIANT_PICTURE_ROWS = 60


@dataclass(frozen=True)
class VariantEntry:
    """A variant as its page shows it; `text` is the pattern that its button keeps."""

    variant: Variant
    picture: SafeString
    text: str


class NoBracelet(ValueError):
    """No bracelet can be worked out for the choice; the text says why."""


def what_it_does(
    definition: PatternCore,
    answer: StrandAnswer,
    chosen: dict[str, Any],
    length_mm: int,
    shades: dict[str, Shade],
) -> dict[str, object]:
    """What stands below the answer for one bracelet."""
    gauge = chosen["gauge"].as_core()
    doing = analyse(
        definition,
        strand_table(definition, length_mm, gauge, cut_rule(habits()).join_tail_mm),
        tuple(line.piece for line in answer.pieces),
        gauge,
        sizes=sizes_of(chosen["ending"]),
        shade_keys={slot: shade.pk for slot, shade in shades.items()},
    )
    return {
        "doing": doing,
        "thread_lines": _thread_lines(doing, shades),
        "hardly_share": HARDLY_TIES_SHARE,
        "always_share": ALWAYS_TIES_SHARE,
        "choice_query": _choice_query(chosen),
    }


def sizes_of(ending: Ending) -> list[tuple[str, int]]:
    """Name and knotted length [mm] of every size that is made with an ending."""
    lengths = KnottedLength.objects.filter(ending=ending).select_related("size")
    return [(row.size.name, row.knotted_length_mm) for row in lengths]


def _thread_lines(
    doing: Analysis, shades: dict[str, Shade]
) -> list[tuple[ShadeThread, Shade | None]]:
    by_key = {shade.pk: shade for shade in shades.values()}
    return [(line, by_key.get(line.key) if line.key else None) for line in doing.thread]


def _choice_query(chosen: dict[str, Any]) -> str:
    """The same choice again, for a link; no colourway is one, too."""
    return urlencode({name: chosen[name].pk if chosen[name] else "" for name in _CHOICES})


@require_safe
def pattern_variants(request: HttpRequest, pk: int) -> HttpResponse:
    """Takes up to a second, so the pattern's page asks for it only when the maker does."""
    pattern = get_object_or_404(Pattern.objects.for_library_page(), pk=pk)
    choice = StrandChoiceForm(request.GET, pattern=pattern)
    context: dict[str, object] = {"pattern": pattern, "least_share": LEAST_SAVING_SHARE}
    try:
        context |= _variants(pattern, choice)
    except NoBracelet as error:
        context["why_not"] = str(error)
    return render_either(
        request, "patterns/pattern_variants.html", "patterns/_variants.html", context
    )


def _variants(pattern: Pattern, choice: StrandChoiceForm) -> dict[str, object]:
    definition = pattern.definition
    if not isinstance(definition, DiagonalPattern):
        raise NoBracelet(
            "In a grid nobody changes places: the leading strand ties the background, and each"
            " run its own cells. So there are no variants."
        )
    chosen, length_mm = chosen_bracelet(choice)
    try:
        search = _searched(definition, length_mm, chosen["gauge"].as_core())
    except LengthError as error:
        raise NoBracelet(str(error)) from error
    colours = colours_of(pattern, chosen["colourway"])
    return {
        "chosen": chosen,
        "search": search,
        "entries": [_entry(variant, colours) for variant in search.variants],
        "picture": _picture(definition, colours),
        "picture_rows": VARIANT_PICTURE_ROWS,
    }


def chosen_bracelet(choice: StrandChoiceForm) -> tuple[dict[str, Any], int]:
    """What was chosen, and its knotted length [mm]. Raises NoBracelet."""
    if not choice.is_valid():
        raise NoBracelet("Choose a size, an ending and a gauge.")
    chosen = choice.cleaned_data
    length = KnottedLength.objects.filter(size=chosen["size"], ending=chosen["ending"]).first()
    if length is None:
        raise NoBracelet(f"{chosen['size']} has no knotted length with {chosen['ending']}.")
    return chosen, length.knotted_length_mm


# The search is the same for the same question, and asked again when one goes back to the page.
@lru_cache(maxsize=32)
def _searched(definition: DiagonalPattern, length_mm: int, gauge: Any) -> VariantSearch:
    return find_variants(definition, length_mm, gauge)


def colours_of(pattern: Pattern, colourway: object) -> dict[str, str]:
    """The colours of a colourway by slot, from the prefetched ones."""
    same = (way for way in pattern.colourways.all() if way == colourway)
    shades = next((way.shades_by_slot() for way in same), {})
    return {slot: shade.colour for slot, shade in shades.items()}


def _entry(variant: Variant, colours: dict[str, str]) -> VariantEntry:
    name = variant_name(variant.pattern.name, variant.kind)
    return VariantEntry(
        variant=variant,
        picture=_picture(variant.pattern, colours),
        text=write_pattern(replace(variant.pattern, name=name)),
    )


def variant_name(name: str, word: str) -> str:
    """ "Harbour stripes, even"; a long name loses its end."""
    return f"{name[: MAX_NAME_LENGTH - len(word) - 2].rstrip()}, {word}"


def _picture(definition: PatternCore, colours: dict[str, str]) -> SafeString:
    title = f"{definition.name}, the first {VARIANT_PICTURE_ROWS} rows, the start at the left"
    # The drawing escapes its title; everything else in it is numbers and colours.
    return mark_safe(band_picture(definition, VARIANT_PICTURE_ROWS, colours, title=title))


@require_POST
def pattern_variant_keep(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    try:
        kept = keep_variant(pattern=pattern, text=request.POST.get("text", ""), by=request.user)
    except (PatternError, LibraryError) as error:
        messages.error(request, f"The variant was not kept. {error}")
        return redirect("pattern_variants", pk=pk)
    messages.success(request, f"{kept} is in your library, beside {pattern}.")
    return redirect("pattern_detail", pk=kept.pk)
