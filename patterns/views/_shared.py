"""What the pattern pages have in common."""

from collections.abc import Mapping

from django import forms
from django.contrib import messages
from django.db import models
from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render
from django.utils.cache import patch_vary_headers
from django.utils.http import content_disposition_header

from inventory.page_helpers import wants_fragment
from patterns.actions import LibraryError, check_removable, remove
from patterns.pattern_zip import file_names


def posted(request: HttpRequest) -> QueryDict | None:
    """What was typed; an empty post is still one, and is told what it lacks."""
    return request.POST if request.method == "POST" else None


def render_either(
    request: HttpRequest, page: str, fragment: str, context: Mapping[str, object]
) -> HttpResponse:
    template = fragment if wants_fragment(request) else page
    response = render(request, template, {"section": "patterns", **context})
    patch_vary_headers(response, ["HX-Request"])
    return response


def file_answer(text: str, name: str) -> HttpResponse:
    """A pattern's text to save, under a name that every system takes."""
    response = HttpResponse(text, content_type="application/toml; charset=utf-8")
    (file_name,) = file_names([name])
    response["Content-Disposition"] = content_disposition_header(True, file_name)
    response["X-Content-Type-Options"] = "nosniff"
    return response


def note_refusal(form: forms.BaseForm, error: LibraryError) -> None:
    form.add_error("name" if "name" in form.fields else None, str(error))


def why_not_removed(thing: models.Model) -> str:
    """The reason why it has to stay, or nothing."""
    try:
        check_removable(thing)
    except LibraryError as error:
        return str(error)
    return ""


def removed(request: HttpRequest, thing: models.Model) -> bool:
    """Remove it, or tell why it stays."""
    try:
        remove(thing=thing)
    except LibraryError as error:
        messages.error(request, str(error))
        return False
    return True
