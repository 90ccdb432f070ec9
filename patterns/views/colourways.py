"""Colourways: which shade goes in each slot of a pattern."""

from dataclasses import dataclass

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import get_object_or_404, redirect
from django.urls import reverse
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_http_methods, require_POST

from inventory.models import Shade, ShelfPiece, Workshop
from inventory.page_helpers import habits, say_with_undo
from patterns.actions import LibraryError, missing_slots, set_colourway
from patterns.colour_difference import HARD_TO_TELL_BELOW, Sight, as_seen
from patterns.colourway_advice import Shelf, advise, propose_from_shelf
from patterns.forms_colourway import ColourwayForm
from patterns.look_alikes import LookAlike, look_alikes, sights_to_show
from patterns.models import Colourway, Pattern
from patterns.pictures import thumbnail
from patterns.techniques import Pattern as PatternCore
from patterns.usual_bracelet import UsualBracelet, usual_bracelet
from patterns.views._shared import note_refusal, posted, removed, render_either

# These buttons show what would be; the others save.
LOOKS = {"preview", "take", "propose", "swap"}
MOST_FOUND_SHOWN = 12
SEEN_BY = {
    Sight.PROTAN: "without red cones (protan)",
    Sight.DEUTAN: "without green cones (deutan)",
    Sight.TRITAN: "without blue cones (tritan)",
}


@dataclass(frozen=True)
class ColourwayLine:
    """A colourway on its pattern's page; what looks alike is worked out where the page asks."""

    colourway: Colourway
    definition: PatternCore
    rows: int

    @property
    def missing(self) -> list[str]:
        return missing_slots(self.colourway, self.definition)

    @property
    def alike(self) -> tuple[LookAlike, ...]:
        shades = self.colourway.shades_by_slot()
        colours = {slot: shade.colour for slot, shade in shades.items()}
        return look_alikes(self.definition, self.rows, colours)


def colourway_lines(pattern: Pattern, rows: int) -> list[ColourwayLine]:
    """Uses prefetched colourways where `for_library_page` fetched them."""
    definition = pattern.definition
    return [ColourwayLine(way, definition, rows) for way in pattern.colourways.all()]


@require_http_methods(["GET", "HEAD", "POST"])
def colourway_new(request: HttpRequest, pattern_pk: int) -> HttpResponse:
    """A new one, or a copy of one of the pattern's own to change."""
    pattern = get_object_or_404(Pattern, pk=pattern_pk)
    return _colourway_form(request, pattern, None, _copied(pattern, request.GET.get("copy", "")))


def _copied(pattern: Pattern, key: str) -> dict[str, object]:
    if not key:
        return {}
    ways = pattern.colourways.prefetch_related("shades__shade")
    values = next((_initial(way) for way in ways if str(way.pk) == key), {})
    return values and values | {"name": f"{str(values['name'])[:54].rstrip()}, copy"}


@require_http_methods(["GET", "HEAD", "POST"])
def colourway_edit(request: HttpRequest, pk: int) -> HttpResponse:
    colourways = Colourway.objects.select_related("pattern").prefetch_related("shades__shade")
    colourway = get_object_or_404(colourways, pk=pk)
    return _colourway_form(request, colourway.pattern, colourway, _initial(colourway))


def _colourway_form(
    request: HttpRequest,
    pattern: Pattern,
    colourway: Colourway | None,
    initial: dict[str, object],
) -> HttpResponse:
    definition = pattern.definition
    only_look = _only_looks(request.POST)
    workshop = habits()
    shelf = _shelf(workshop)
    bracelet = usual_bracelet(pattern, workshop, request.POST.get("size", ""))
    form = ColourwayForm(
        None if only_look else posted(request),
        definition=definition,
        shelf=shelf,
        initial=_looked_at(request.POST) if only_look else initial,
    )
    if "propose" in request.POST:
        _fill_from_shelf(request, form, shelf, bracelet)
    if form.is_valid():
        saved = _saved(form, pattern, colourway)
        if saved:
            messages.success(request, f"{saved.name} is saved. You can put it in an order now.")
            return redirect(f"{reverse('pattern_detail', args=[pattern.pk])}?colourway={saved.pk}")
    context: dict[str, object] = {"pattern": pattern, "form": form, "address": request.path}
    context |= _advice(definition, form, shelf, bracelet) | _tools(request.POST, form, shelf)
    context["searching"] = request.headers.get("HX-Trigger-Name") == "find"
    return render_either(
        request, "patterns/colourway_form.html", "patterns/_colourway_answer.html", context
    )


def _shelf(workshop: Workshop) -> Shelf:
    return Shelf(
        shades={str(shade.pk): shade for shade in Shade.objects.all()},
        thread=ShelfPiece.objects.by_shade(workshop.short_measure_share),
        unit=workshop.length_unit,
    )


def _only_looks(typed: QueryDict) -> bool:
    """Enter presses the form's unnamed button: while somebody searches it does not save."""
    return not LOOKS.isdisjoint(typed) or bool(typed.get("find") and "save" not in typed)


def _looked_at(typed: QueryDict) -> dict[str, object]:
    """What was typed, with the shade that a button takes or swaps; nothing is saved."""
    shown: dict[str, object] = dict(typed.items())
    slot, _, key = typed.get("take", "").partition(":")
    if key:
        shown[f"slot_{slot}"] = key
    one, other = (f"slot_{typed.get(name, '')}" for name in ("swap_one", "swap_other"))
    if "swap" in typed and one in shown and other in shown:
        shown[one], shown[other] = shown[other], shown[one]
    return shown


def _tools(typed: QueryDict, form: ColourwayForm, shelf: Shelf) -> dict[str, object]:
    """The search among the shades, the slots to swap, and the number of the next proposal."""
    find = typed.get("find", "").strip()[:80]
    found = shelf.search(find) if find else {}
    if found:
        form.list_only(found)
    return {
        "find": find,
        "found_count": len(found),
        "found": [
            (shade, shelf.words_with_lots(shade))
            for shade in list(found.values())[:MOST_FOUND_SHOWN]
        ],
        "swap_one": typed.get("swap_one", form.slots[0]),
        "swap_other": typed.get("swap_other", form.slots[-1]),
        "next_proposal": _proposal_number(typed) + 1 if "propose" in typed else 0,
    }


def _proposal_number(typed: QueryDict) -> int:
    number = typed.get("propose", "")
    return int(number) if number.isascii() and number.isdigit() and len(number) < 4 else 0


def _fill_from_shelf(
    request: HttpRequest, form: ColourwayForm, shelf: Shelf, bracelet: UsualBracelet
) -> None:
    """Put the proposal into the form, for the maker to look at."""
    proposed = propose_from_shelf(form.slots, shelf, bracelet, _proposal_number(request.POST))
    for slot in form.slots:
        form.initial[f"slot_{slot}"] = proposed[slot].pk if slot in proposed else ""
    if left_open := [slot for slot in form.slots if slot not in proposed]:
        messages.warning(
            request,
            f"The shelf has no further shade with enough thread for {', '.join(left_open)}. "
            "Choose one to buy.",
        )


def _advice(
    definition: PatternCore, form: ColourwayForm, shelf: Shelf, bracelet: UsualBracelet
) -> dict[str, object]:
    """Everything that changes with the shades."""
    chosen = form.chosen
    colours = {slot: shade.colour for slot, shade in chosen.items()}
    advice = advise(form.slots, chosen, shelf, bracelet)
    alike = look_alikes(definition, bracelet.rows, colours)
    return {
        "bracelet": bracelet,
        "slots": [(form[f"slot_{slot}"], advice[slot]) for slot in form.slots],
        "alike": alike,
        "alike_below": HARD_TO_TELL_BELOW,
        "picture": _picture(definition, chosen),
        "seen": [_as_seen_by(definition, colours, sight) for sight in sights_to_show(alike)],
    }


def _as_seen_by(
    definition: PatternCore, colours: dict[str, str], sight: Sight
) -> tuple[str, SafeString]:
    seen = {slot: as_seen(colour, sight) for slot, colour in colours.items()}
    words = SEEN_BY[sight]
    title = f"{definition.name}, as seen by eyes {words}"
    # The drawing escapes its title; everything else in it is numbers and colours.
    return words, mark_safe(thumbnail(definition, seen, title=title))


def _initial(colourway: Colourway) -> dict[str, object]:
    shades = colourway.shades_by_slot()
    return {"name": colourway.name} | {f"slot_{slot}": shade.pk for slot, shade in shades.items()}


def _picture(definition: PatternCore, chosen: dict[str, Shade]) -> SafeString:
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
