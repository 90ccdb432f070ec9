"""The library of patterns, and the pictures in it."""

from dataclasses import dataclass

from django.core.paginator import Paginator
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase
from django.shortcuts import get_object_or_404
from django.urls import reverse
from django.utils.cache import get_conditional_response
from django.utils.http import quote_etag
from django.views.decorators.http import require_safe

from inventory.page_helpers import habits
from patterns.forms_library import LibraryForm
from patterns.knots import PatternError
from patterns.models import Colourway, Pattern
from patterns.techniques import USUAL_LENGTH_MM
from patterns.thumbnails import Colours, picture, picture_name, slots_without, sorted_colours
from patterns.views._shared import render_either

PATTERNS_A_PAGE = 300
A_YEAR = 365 * 24 * 60 * 60


@dataclass(frozen=True)
class LibraryEntry:
    pattern: Pattern
    picture_url: str
    picture_words: str
    colourways: list[tuple[Colourway, list[str]]]


@require_safe
def pattern_list(request: HttpRequest) -> HttpResponse:
    form = LibraryForm(request.GET, length_unit=habits().length_unit)
    found = Pattern.objects.for_library_page().fitting(form.chosen)
    page = Paginator(found, PATTERNS_A_PAGE).get_page(request.GET.get("page"))
    entries = [_entry(pattern) for pattern in page]
    context = {
        "form": form,
        "page": page,
        "entries": entries,
        "is_archive": form.chosen.get("kept") == "archived",
        "usual_length_mm": USUAL_LENGTH_MM,
        # Only an empty list needs to know why it is empty.
        "is_empty": not entries and not Pattern.objects.exists(),
    }
    return render_either(request, "patterns/pattern_list.html", "patterns/_library.html", context)


def _entry(pattern: Pattern) -> LibraryEntry:
    """The picture is in the first colourway; without one it is in undyed thread."""
    ways = [(way, way.shades_by_slot()) for way in pattern.colourways.all()]
    colours = first_colours(pattern)
    words = f"{pattern.name} in {ways[0][0].name}" if ways else f"{pattern.name} in undyed thread"
    return LibraryEntry(
        pattern,
        picture_url(pattern, colours),
        f"The band of {words}",
        [(way, slots_without(pattern.text, shades)) for way, shades in ways],
    )


def first_colours(pattern: Pattern) -> Colours:
    """Uses prefetched colourways where they were prefetched."""
    for way in pattern.colourways.all():
        return sorted_colours({slot: s.colour for slot, s in way.shades_by_slot().items()})
    return ()


def picture_url(pattern: Pattern, colours: Colours) -> str:
    name = picture_name(pattern.text, colours)
    return f"{reverse('pattern_picture', args=[pattern.pk])}?v={name}"


@require_safe
def pattern_picture(request: HttpRequest, pk: int) -> HttpResponseBase:
    """Kept for a year where the address names what it shows now, else asked for again."""
    pattern = get_object_or_404(Pattern.objects.for_library_page(), pk=pk)
    return svg_answer(request, pattern.text, first_colours(pattern))


def svg_answer(request: HttpRequest, text: str, colours: Colours) -> HttpResponseBase:
    name = picture_name(text, colours)
    etag = quote_etag(name)
    answer = get_conditional_response(request, etag=etag)
    if answer is None:
        try:
            answer = HttpResponse(picture(text, colours), content_type="image/svg+xml")
        except PatternError:
            raise Http404("This text is no pattern.") from None
    is_current = request.GET.get("v") == name
    answer["ETag"] = etag
    answer["Cache-Control"] = f"private, max-age={A_YEAR}, immutable" if is_current else "no-cache"
    return answer
