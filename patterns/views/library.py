"""The library of patterns."""

from dataclasses import dataclass

from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_safe

from patterns.actions import missing_slots
from patterns.models import Colourway, Pattern
from patterns.pictures import thumbnail
from patterns.views._shared import render_either

PATTERNS_A_PAGE = 60
LONGEST_SEARCH = 80


@dataclass(frozen=True)
class LibraryEntry:
    pattern: Pattern
    picture: SafeString
    colourways: list[tuple[Colourway, list[str]]]


@require_safe
def pattern_list(request: HttpRequest) -> HttpResponse:
    words = request.GET.get("q", "").replace("\0", " ")[:LONGEST_SEARCH].strip()
    found = Pattern.objects.for_library_page().search(words)
    page = Paginator(found, PATTERNS_A_PAGE).get_page(request.GET.get("page"))
    context = {
        "page": page,
        "entries": [_entry(pattern) for pattern in page],
        "words": words,
    }
    return render_either(request, "patterns/pattern_list.html", "patterns/_library.html", context)


def _entry(pattern: Pattern) -> LibraryEntry:
    """The picture is in the first colourway; without one it is in undyed thread."""
    definition = pattern.definition
    colourways = [(way, missing_slots(way, definition)) for way in pattern.colourways.all()]
    shades = colourways[0][0].shades_by_slot() if colourways else {}
    colours = {slot: shade.colour for slot, shade in shades.items()}
    title = f"{pattern.name} in {colourways[0][0].name}" if colourways else pattern.name
    # The drawing escapes its title; everything else in it is numbers and colours.
    picture = mark_safe(thumbnail(definition, colours, title=title))
    return LibraryEntry(pattern, picture, colourways)
