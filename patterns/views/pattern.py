"""One pattern: how long its strands have to be; changing, saving as a file, removing."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils.http import content_disposition_header
from django.utils.safestring import SafeString, mark_safe
from django.utils.text import slugify
from django.views.decorators.http import require_http_methods, require_safe

from inventory.models import Shade
from inventory.page_helpers import habits
from patterns.actions import LibraryError, change_pattern, cut_rule
from patterns.forms import PatternEditForm, StrandChoiceForm
from patterns.knots import DiagonalPattern
from patterns.models import KnottedLength, Pattern
from patterns.pictures import MOST_PICTURE_ROWS, band_picture
from patterns.strand_answer import NoAnswer, StrandAnswer, answer_for
from patterns.techniques import Pattern as PatternCore
from patterns.tying import colour_order, order_of_repeat
from patterns.views._shared import note_refusal, posted, removed, render_either, why_not_removed
from patterns.views.analysis import what_it_does
from patterns.views.colourways import colourway_lines
from patterns.views.comparison import others_to_compare
from patterns.views.reading import how_to_read


@require_safe
def pattern_detail(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern.objects.for_library_page(), pk=pk)
    definition = pattern.definition
    choice = StrandChoiceForm(request.GET, pattern=pattern)
    strands = _strands(pattern, definition, choice)
    answer = strands.get("answer")
    rows = answer.rows if isinstance(answer, StrandAnswer) else len(definition.rows)
    colourways = colourway_lines(pattern, rows)
    context = {
        "pattern": pattern,
        "choice": choice,
        "slots": definition.used_slots,
        "others": others_to_compare(pattern),
        "colourways": colourways,
        "can_order": any(not line.missing for line in colourways),
        "has_shades": Shade.objects.exists(),
        "can_remove": not why_not_removed(pattern),
    }
    context |= _orders(definition) | strands
    context |= how_to_read(definition, context)
    return render_either(
        request, "patterns/pattern_detail.html", "patterns/_strands_and_reading.html", context
    )


def _orders(definition: PatternCore) -> dict[str, int]:
    """Only the strands of diagonal patterns change places."""
    if not isinstance(definition, DiagonalPattern):
        return {}
    return {
        "colour_repeats": colour_order(definition),
        "strand_repeats": order_of_repeat(definition),
    }


def _strands(
    pattern: Pattern, definition: PatternCore, choice: StrandChoiceForm
) -> dict[str, object]:
    """Everything that changes with the choice; `why_not` says why there is no answer."""
    if not choice.is_valid():
        return {"why_not": "Choose a size, an ending and a gauge."}
    chosen = choice.cleaned_data
    shades = _shades(pattern, chosen["colourway"])
    context: dict[str, object] = {"chosen": chosen, "shades": shades}
    length = KnottedLength.objects.filter(size=chosen["size"], ending=chosen["ending"]).first()
    if length is None:
        return context | {"missing_length": True}
    length_mm = length.knotted_length_mm
    try:
        answer = answer_for(
            definition,
            length_mm,
            chosen["gauge"].as_core(),
            chosen["ending"].as_core(),
            cut_rule(habits()),
            chosen["lengths"],
        )
    except NoAnswer as error:
        return context | {"why_not": str(error)}
    context |= what_it_does(definition, answer, chosen, length_mm, shades)
    return context | {
        "answer": answer,
        "knotted_length_mm": length_mm,
        "picture": _picture(definition, answer.rows, shades),
        "rows_not_drawn": answer.rows > MOST_PICTURE_ROWS,
        "most_picture_rows": MOST_PICTURE_ROWS,
    }


def _picture(definition: PatternCore, rows: int, shades: dict[str, Shade]) -> SafeString:
    colours = {slot: shade.colour for slot, shade in shades.items()}
    title = f"{definition.name}, {rows} rows, the start at the left"
    # The drawing escapes its title; everything else in it is numbers and colours.
    return mark_safe(band_picture(definition, rows, colours, title=title))


def _shades(pattern: Pattern, colourway: object) -> dict[str, Shade]:
    """From the prefetched colourways, so that the choice costs no further query."""
    same = (way for way in pattern.colourways.all() if way == colourway)
    return next((way.shades_by_slot() for way in same), {})


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_edit_text(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    form = PatternEditForm(posted(request), initial={"text": pattern.text})
    if request.method == "POST" and _changed(form, pattern, request):
        messages.success(request, f"{pattern} is saved. Plans that you made keep the old one.")
        return redirect("pattern_detail", pk=pk)
    context = {"section": "patterns", "pattern": Pattern.objects.get(pk=pk), "form": form}
    return render(request, "patterns/pattern_edit.html", context)


def _changed(form: PatternEditForm, pattern: Pattern, request: HttpRequest) -> bool:
    """Where another window saved first, that is told once; the page then stands on its version."""
    if not form.is_valid():
        return False
    try:
        change_pattern(
            pattern=pattern,
            text=form.cleaned_data["pattern_text"],
            by=request.user,
            expected_version=form.cleaned_data["version"],
        )
    except LibraryError as error:
        note_refusal(form, error)
        return False
    return True


@require_safe
def pattern_file(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    name = f"{slugify(pattern.name, allow_unicode=True)[:80] or f'pattern-{pk}'}.toml"
    response = HttpResponse(pattern.text, content_type="application/toml; charset=utf-8")
    response["Content-Disposition"] = content_disposition_header(True, name)
    response["X-Content-Type-Options"] = "nosniff"
    return response


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_remove(request: HttpRequest, pk: int) -> HttpResponse:
    """Asks once: a removed pattern takes its colourways along and does not come back."""
    pattern = get_object_or_404(Pattern, pk=pk)
    if request.method == "POST" and removed(request, pattern):
        messages.success(request, f"{pattern} is removed from your library.")
        return redirect("pattern_list")
    context = {
        "section": "patterns",
        "pattern": pattern,
        "colourway_count": pattern.colourways.count(),
        "why_not": why_not_removed(pattern),
    }
    return render(request, "patterns/pattern_remove.html", context)
