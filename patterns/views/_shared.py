"""What the pattern pages have in common."""

from collections.abc import Mapping

from django import forms
from django.contrib import messages
from django.db import models
from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render
from django.utils.cache import patch_vary_headers

from inventory.page_helpers import wants_fragment
from patterns.actions import LibraryError, check_removable, remove


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
