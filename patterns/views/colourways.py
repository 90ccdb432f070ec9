"""Colourways: which shade goes in each slot of a pattern."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect
from django.urls import reverse
from django.utils.safestring import mark_safe
from django.views.decorators.http import require_http_methods, require_POST

from inventory.models import Shade
from inventory.page_helpers import say_with_undo
from patterns.actions import LibraryError, set_colourway
from patterns.forms_colourway import ColourwayForm
from patterns.models import Colourway, Pattern
from patterns.pictures import thumbnail
from patterns.techniques import Pattern as PatternCore
from patterns.views._shared import note_refusal, posted, removed, render_either


@require_http_methods(["GET", "HEAD", "POST"])
def colourway_new(request: HttpRequest, pattern_pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pattern_pk)
    return _colourway_form(request, pattern, None)


@require_http_methods(["GET", "HEAD", "POST"])
def colourway_edit(request: HttpRequest, pk: int) -> HttpResponse:
    colourways = Colourway.objects.select_related("pattern").prefetch_related("shades__shade")
    colourway = get_object_or_404(colourways, pk=pk)
    return _colourway_form(request, colourway.pattern, colourway)


def _colourway_form(
    request: HttpRequest, pattern: Pattern, colourway: Colourway | None
) -> HttpResponse:
    definition = pattern.definition
    only_look = "preview" in request.POST
    form = ColourwayForm(
        None if only_look else posted(request),
        definition=definition,
        shades=Shade.objects.all(),
        initial=request.POST.dict() if only_look else _initial(colourway),
    )
    if form.is_valid():
        saved = _saved(form, pattern, colourway)
        if saved:
            messages.success(request, f"{saved.name} is saved. You can put it in an order now.")
            return redirect(f"{reverse('pattern_detail', args=[pattern.pk])}?colourway={saved.pk}")
    context = {
        "pattern": pattern,
        "colourway": colourway,
        "form": form,
        "picture": _picture(definition, form),
    }
    return render_either(
        request, "patterns/colourway_form.html", "patterns/_colourway_band.html", context
    )


def _initial(colourway: Colourway | None) -> dict[str, object]:
    if colourway is None:
        return {}
    shades = colourway.shades_by_slot()
    return {"name": colourway.name} | {f"slot_{slot}": shade.pk for slot, shade in shades.items()}


def _picture(definition: PatternCore, form: ColourwayForm) -> str:
    chosen = form.chosen
    colours = {slot: shade.colour for slot, shade in chosen.items()}
    words = ", ".join(f"{slot} {shade}" for slot, shade in chosen.items())
    title = f"{definition.name} in {words}" if words else f"{definition.name}, no shade chosen yet"
    # The drawing escapes its title; everything else in it is numbers and colours.
    return mark_safe(thumbnail(definition, colours, title=title))


def _saved(form: ColourwayForm, pattern: Pattern, colourway: Colourway | None) -> Colourway | None:
    try:
        return set_colourway(
            pattern=pattern, name=form.cleaned_data["name"], shades=form.chosen, colourway=colourway
        )
    except LibraryError as error:
        note_refusal(form, error)
        return None


@require_POST
def colourway_remove(request: HttpRequest, pk: int) -> HttpResponse:
    colourways = Colourway.objects.select_related("pattern").prefetch_related("shades__shade")
    colourway = get_object_or_404(colourways, pk=pk)
    values = list(_initial(colourway).items())
    if removed(request, colourway):
        say_with_undo(
            request,
            f"{colourway} is removed.",
            undo_url=reverse("colourway_new", args=[colourway.pattern_id]),
            values=values,
        )
    return redirect("pattern_detail", pk=colourway.pattern_id)
