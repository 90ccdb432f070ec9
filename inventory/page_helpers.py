"""What pages of every app share: habits, fragments, messages with Undo, saving a form."""

import secrets
from collections.abc import Callable, Sequence

from django import forms
from django.contrib import messages
from django.db import IntegrityError, transaction
from django.http import HttpRequest
from django.template.loader import render_to_string

from inventory.models import Workshop


def habits() -> Workshop:
    """The workshop's unit and currency; those of a new workshop where there is none yet."""
    return Workshop.current() or Workshop()


def wants_fragment(request: HttpRequest) -> bool:
    """When htmx restores a page from its history it needs the whole page."""
    htmx = request.htmx  # type: ignore[attr-defined]
    return bool(htmx) and not htmx.history_restore_request


def say_with_undo(
    request: HttpRequest,
    text: str,
    *,
    undo_url: str,
    values: Sequence[tuple[str, object]] = (),
) -> None:
    """Tell what was done, with a button that posts `values` to `undo_url`."""
    # The button names its form by id: a message may stand in a paragraph, which holds no form.
    form_id = f"undo-{secrets.token_hex(4)}"
    context = {"text": text, "undo_url": undo_url, "values": values, "form_id": form_id}
    # The rendered text is marked safe, and messages keep that mark.
    messages.success(request, render_to_string("_undo.html", context, request))


def saved(form: forms.BaseForm, save: Callable[[], object], *, field: str, problem: str) -> bool:
    """Save a valid form; when somebody else took the name in the meantime, say so at `field`."""
    if not form.is_valid():
        return False
    try:
        with transaction.atomic():
            save()
    except IntegrityError:
        form.add_error(field, problem)
        return False
    return True
