"""Patterns out: many files in one ZIP."""

from urllib.parse import urlencode

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.urls import reverse
from django.views.decorators.http import require_safe

from inventory.page_helpers import habits
from patterns.forms_library import LibraryForm
from patterns.models import Pattern, PatternQuerySet
from patterns.pattern_zip import write_zip

LONGEST_KEY = 18


@require_safe
def pattern_export(request: HttpRequest) -> HttpResponse:
    """What is ticked, or all that the filters show; in the order of the page."""
    form = LibraryForm(request.GET, length_unit=habits().length_unit)
    found = Pattern.objects.fitting(form.chosen)
    if request.GET.get("what") == "ticked":
        found = _ticked(request, found)
    patterns = list(found.values_list("name", "text"))
    if not patterns:
        messages.error(request, "Tick the patterns first that you want to save.")
        return redirect(f"{reverse('pattern_list')}?{urlencode(form.kept_values)}")
    response = HttpResponse(write_zip(patterns), content_type="application/zip")
    response["Content-Disposition"] = 'attachment; filename="patterns.zip"'
    response["X-Content-Type-Options"] = "nosniff"
    return response


def _ticked(request: HttpRequest, found: PatternQuerySet) -> PatternQuerySet:
    keys = [key for key in request.GET.getlist("pattern") if key.isascii() and key.isdigit()]
    return found.filter(pk__in=[int(key) for key in keys if len(key) <= LONGEST_KEY])
