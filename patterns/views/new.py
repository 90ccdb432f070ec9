"""Adding a pattern: drawn, from a family, from its rows, from a file."""

from django import forms
from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_http_methods, require_safe

from patterns.actions import LibraryError, add_pattern
from patterns.families import FAMILIES, Family, make_family
from patterns.forms_new import FamilyForm, RowsForm
from patterns.models import Pattern
from patterns.pattern_file import write_pattern
from patterns.pictures import band_picture, short_picture, thumbnail
from patterns.techniques import Pattern as PatternCore
from patterns.tying import colour_order
from patterns.views._shared import note_refusal, posted, render_either
from patterns.written_look import rows_before_notes

PICTURE_ROWS = 120
EXAMPLE_STRANDS = 12


@require_safe
def pattern_new(request: HttpRequest) -> HttpResponse:
    """The ways to add one."""
    context = {"section": "patterns", "families": _family_pictures()}
    return render(request, "patterns/pattern_new.html", context)


def _family_pictures() -> list[tuple[Family, SafeString]]:
    pictures = []
    for family in FAMILIES.values():
        example = make_family(family.key, EXAMPLE_STRANDS, family.example_order)
        # The drawing escapes its title; everything else in it is numbers and colours.
        pictures.append((family, mark_safe(thumbnail(example, {}, title=family.name))))
    return pictures


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_rows(request: HttpRequest) -> HttpResponse:
    form = RowsForm(posted(request))
    only_look = "look" in request.POST
    if request.method == "POST" and form.is_valid() and not only_look:
        pattern = _added(request, form, write_pattern(form.cleaned_data["definition"]))
        if pattern:
            return redirect("pattern_detail", pk=pattern.pk)
    context = {"form": form, "definition": None, "picture": _rows_picture(form)}
    if form.is_bound:
        context["definition"] = form.cleaned_data.get("definition")
    return render_either(request, "patterns/pattern_rows.html", "patterns/_rows_look.html", context)


def _rows_picture(form: RowsForm) -> SafeString | None:
    """The whole band, or what can be drawn before the first row with something wrong."""
    whole = form.cleaned_data.get("definition") if form.is_bound else None
    if whole:
        return _picture(whole)
    if not form.beginning:
        return None
    rows = rows_before_notes(form.looked)
    title = f"The first {rows} rows, the start at the left"
    return mark_safe(short_picture(form.beginning, min(rows, PICTURE_ROWS), title=title))


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_family(request: HttpRequest) -> HttpResponse:
    if request.method == "POST":
        form = FamilyForm(request.POST)
        if form.is_valid():
            pattern = _added(request, form, write_pattern(form.cleaned_data["definition"]))
            if pattern:
                return redirect("pattern_detail", pk=pattern.pk)
    else:
        first = {name: field.initial for name, field in FamilyForm.base_fields.items()}
        form = FamilyForm(first | request.GET.dict())
    definition = form.cleaned_data.get("definition") if form.is_valid() else None
    context: dict[str, object] = {"form": form, "definition": definition}
    if definition:
        family = FAMILIES[form.cleaned_data["family"]]
        context |= {
            "picture": _picture(definition),
            "family": family,
            "places": family.places(definition.strands),
            "repeats": colour_order(definition),
        }
    return render_either(
        request, "patterns/pattern_family.html", "patterns/_family_look.html", context
    )


def _picture(definition: PatternCore) -> SafeString:
    title = f"{definition.name}, the start at the left"
    # The drawing escapes its title; everything else in it is numbers and colours.
    return mark_safe(band_picture(definition, PICTURE_ROWS, {}, title=title))


def _added(request: HttpRequest, form: forms.Form, text: str) -> Pattern | None:
    try:
        pattern = add_pattern(text=text, by=request.user)
    except LibraryError as error:
        note_refusal(form, error)
        return None
    messages.success(request, f"{pattern} is in your library.")
    return pattern
