"""The library of patterns, and adding one."""

from dataclasses import dataclass

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_http_methods, require_safe

from patterns.actions import LibraryError, add_pattern, missing_slots
from patterns.forms import PatternFileForm, PatternRowsForm
from patterns.models import Colourway, Pattern
from patterns.pictures import thumbnail
from patterns.views._shared import note_refusal, posted, render_either

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


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_new(request: HttpRequest) -> HttpResponse:
    by_file = request.POST.get("way") == "file"
    data = posted(request)
    rows_form = PatternRowsForm(None if by_file else data, auto_id="rows_%s")
    file_form = PatternFileForm(
        data if by_file else None, request.FILES if by_file else None, auto_id="file_%s"
    )
    if request.method == "POST":
        pattern = _added(file_form if by_file else rows_form)
        if pattern:
            messages.success(request, f"{pattern} is in your library.")
            return redirect("pattern_detail", pk=pattern.pk)
    context = {"section": "patterns", "rows_form": rows_form, "file_form": file_form}
    return render(request, "patterns/pattern_new.html", context)


def _added(form: PatternFileForm | PatternRowsForm) -> Pattern | None:
    if not form.is_valid():
        return None
    try:
        return add_pattern(text=form.cleaned_data["pattern_text"])
    except LibraryError as error:
        note_refusal(form, error)
        return None
