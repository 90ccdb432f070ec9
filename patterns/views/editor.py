"""The pattern editor: its page, what its preview shows, and saving."""

import json
from typing import Any

from django.db import transaction
from django.db.models import QuerySet
from django.http import HttpRequest, HttpResponse, JsonResponse, QueryDict
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.utils.safestring import mark_safe
from django.views.decorators.http import require_http_methods, require_POST

from inventory.page_helpers import habits
from patterns import grid
from patterns.actions import (
    LibraryError,
    VersionConflict,
    add_pattern,
    change_pattern,
    cut_rule,
    missing_slots,
)
from patterns.alphabet import alphabet_data
from patterns.editor_state import read_state, write_state
from patterns.forms import FINISH_CHOICES, StrandChoiceForm
from patterns.grid import Carry, GridPattern
from patterns.knots import SLOT_LETTERS, DiagonalPattern, Finish, Knot, PatternError, knots_in_row
from patterns.models import Colourway, KnottedLength, Pattern
from patterns.pattern_file import write_pattern
from patterns.pictures import MOST_PICTURE_ROWS, band_picture
from patterns.strand_answer import NoAnswer, answer_for
from patterns.techniques import Pattern as PatternCore

LARGEST_STATE_BYTES = 512 * 1024
NEW_STRANDS = 6
NEW_ROWS = 6
NEW_COLUMNS = 9
NEW_GRID_ROWS = 40
CARRY_CHOICES = [
    (Carry.LEAST.value, "carried or cut, whichever takes less thread"),
    (Carry.CARRIED.value, "always carried behind"),
    (Carry.CUT.value, "cut and joined wherever cells do not touch"),
]
CENTRED_CHOICE = (Finish.CENTRED.value, "with the picture once, in the middle")


class NoState(ValueError):
    """The editor sent something that is no pattern; the text says what to do."""


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_edit(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern.objects.for_library_page(), pk=pk)
    if request.method == "POST":
        return _save(request, pattern)
    return _page(request, pattern.definition, pattern)


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_draw(request: HttpRequest) -> HttpResponse:
    """A pattern drawn from nothing; it is in the library from its first saving on."""
    if request.method == "POST":
        return _save(request, None)
    technique = request.GET.get("technique")
    return _page(request, _empty_grid() if technique == "grid" else _empty_diagonal(), None)


def _empty_diagonal() -> DiagonalPattern:
    rows = range(1, NEW_ROWS + 1)
    return DiagonalPattern(
        name="New pattern",
        slots=tuple("AABBCC"),
        rows=tuple((Knot.F,) * knots_in_row(NEW_STRANDS, row) for row in rows),
    )


def _empty_grid() -> GridPattern:
    row = ("A",) * NEW_COLUMNS
    return GridPattern("New picture", "A", (row,) * NEW_GRID_ROWS, Finish.CENTRED)


def _page(request: HttpRequest, definition: PatternCore, pattern: Pattern | None) -> HttpResponse:
    choice = StrandChoiceForm(request.GET, pattern=pattern)
    shades = _shades(choice)
    context = {
        "section": "patterns",
        "pattern": pattern,
        "definition": definition,
        "choice": choice,
        "finishes": _finishes(definition),
        "carries": CARRY_CHOICES,
        "letters": SLOT_LETTERS,
        "limits": {
            "min_columns": grid.MIN_COLUMNS,
            "max_columns": grid.MAX_COLUMNS,
            "min_rows": grid.MIN_GRID_ROWS,
            "max_rows": grid.MAX_GRID_ROWS,
        },
        "alphabet": alphabet_data(),
        "editor_data": {
            "key": _key(pattern, definition),
            "state": write_state(definition),
            "version": pattern.version if pattern else None,
            "preview_url": reverse("pattern_preview"),
            "save_url": request.path,
            "new_url": reverse("pattern_draw"),
            "colours": {slot: shade.colour for slot, shade in shades.items()},
            "names": {slot: str(shade) for slot, shade in shades.items()},
            "colourways": _colourways(pattern),
        },
    }
    return render(request, "patterns/editor.html", context)


def _colourways(pattern: Pattern | None) -> dict[int, dict[str, dict[str, str]]]:
    ways = {way.pk: way.shades_by_slot() for way in pattern.colourways.all()} if pattern else {}
    return {
        pk: {
            "colours": {slot: shade.colour for slot, shade in shades.items()},
            "names": {slot: str(shade) for slot, shade in shades.items()},
        }
        for pk, shades in ways.items()
    }


def _key(pattern: Pattern | None, definition: PatternCore) -> str:
    return f"pattern-{pattern.pk}" if pattern else f"new-{definition.technique}"


def _shades(choice: StrandChoiceForm) -> dict[str, Any]:
    chosen = choice.cleaned_data.get("colourway") if choice.is_valid() else None
    return chosen.shades_by_slot() if chosen else {}


def _finishes(definition: PatternCore) -> list[tuple[str, str]]:
    is_grid = isinstance(definition, GridPattern)
    return [*FINISH_CHOICES, CENTRED_CHOICE] if is_grid else FINISH_CHOICES


@require_POST
def pattern_preview(request: HttpRequest) -> HttpResponse:
    """The drawn band and the lengths of what stands in the editor, saved or not."""
    try:
        posted = _posted(request)
        definition = read_state(posted.get("state"))
    except (NoState, PatternError) as error:
        return _refusal(error, 422)
    choice = StrandChoiceForm(_choice_data(posted), pattern=None)
    if not choice.is_valid():
        return JsonResponse({"message": "Choose a size, an ending and a gauge."}, status=422)
    return render(request, "patterns/_preview.html", _answer(definition, choice))


def _choice_data(posted: dict[str, Any]) -> QueryDict:
    data = QueryDict(mutable=True)
    choice = posted.get("choice")
    for name, value in choice.items() if isinstance(choice, dict) else ():
        data[str(name)[:40]] = str(value)[:40]
    return data


def _answer(definition: PatternCore, choice: StrandChoiceForm) -> dict[str, Any]:
    chosen = choice.cleaned_data
    shades = _shades(choice)
    context: dict[str, Any] = {"pattern": definition, "shades": shades, "chosen": chosen}
    length = KnottedLength.objects.filter(size=chosen["size"], ending=chosen["ending"]).first()
    if length is None:
        why_not = f"{chosen['size']} has no knotted length with {chosen['ending']}."
        return context | {"why_not": why_not}
    try:
        answer = answer_for(
            definition,
            length.knotted_length_mm,
            chosen["gauge"].as_core(),
            chosen["ending"].as_core(),
            cut_rule(habits()),
            chosen["lengths"],
        )
    except NoAnswer as error:
        return context | {"why_not": str(error)}
    colours = {slot: shade.colour for slot, shade in shades.items()}
    title = f"{definition.name}, {answer.rows} rows, the start at the left"
    # The drawing escapes its title; everything else in it is numbers and colours.
    picture = mark_safe(band_picture(definition, answer.rows, colours, title=title))
    return context | {
        "answer": answer,
        "picture": picture,
        "rows_not_drawn": answer.rows > MOST_PICTURE_ROWS,
    }


def _save(request: HttpRequest, pattern: Pattern | None) -> HttpResponse:
    try:
        posted = _posted(request)
        text = write_pattern(read_state(posted.get("state")))
        saved = _stored(request, posted, pattern, text)
    except (NoState, PatternError) as error:
        return _refusal(error, 422)
    except VersionConflict as error:
        assert pattern is not None
        url = reverse("pattern_detail", args=[pattern.pk])
        return JsonResponse({"message": str(error), "url": url}, status=409)
    except LibraryError as error:
        return _refusal(error, 422)
    words = f"{saved} is saved." if pattern else f"{saved} is in your library."
    waiting = [way for way in _ways(saved) if missing_slots(way, saved.definition)]
    if waiting:
        words += f" Colourways that need a shade now: {', '.join(str(way) for way in waiting[:3])}."
    if saved.last_planned_on:
        words += " Orders follow the change; plans that you made keep the version they have."
    return JsonResponse(
        {
            "words": words,
            "name": saved.name,
            "version": saved.version,
            "key": _key(saved, saved.definition),
            "url": reverse("pattern_detail", args=[saved.pk]),
            "edit_url": reverse("pattern_edit", args=[saved.pk]),
        }
    )


def _ways(pattern: Pattern) -> QuerySet[Colourway]:
    return pattern.colourways.select_related("pattern").prefetch_related("shades__shade")


@transaction.atomic
def _stored(
    request: HttpRequest, posted: dict[str, Any], pattern: Pattern | None, text: str
) -> Pattern:
    if pattern is None:
        return add_pattern(text=text, by=request.user)
    version = posted.get("version")
    if isinstance(version, bool) or not isinstance(version, int):
        raise NoState("The editor did not say which version it began with. Load the page again.")
    return change_pattern(pattern=pattern, text=text, by=request.user, expected_version=version)


def _posted(request: HttpRequest) -> dict[str, Any]:
    if len(request.body) > LARGEST_STATE_BYTES:
        raise NoState("That is more than any pattern holds.")
    try:
        posted = json.loads(request.body)
    except (ValueError, RecursionError):
        raise NoState("The editor sent no pattern. Load the page again.") from None
    if not isinstance(posted, dict):
        raise NoState("The editor sent no pattern. Load the page again.")
    return posted


def _refusal(error: ValueError, status: int) -> JsonResponse:
    row, knot = getattr(error, "row", None), getattr(error, "knot", None)
    return JsonResponse({"message": str(error), "row": row, "knot": knot}, status=status)
