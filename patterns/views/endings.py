"""Endings: what the start and the end of a bracelet take in thread."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from inventory.page_helpers import habits
from patterns.actions import LibraryError, cut_rule, set_default_ending, set_ending
from patterns.examples import ending_example
from patterns.forms import EndingForm
from patterns.models import Ending
from patterns.views._shared import note_refusal, posted, removed, render_either, why_not_removed


@require_safe
def ending_list(request: HttpRequest) -> HttpResponse:
    rule = cut_rule(habits())
    rows = [(ending, ending_example(ending.as_core(), rule)) for ending in Ending.objects.all()]
    context = {"section": "patterns", "rows": rows}
    return render(request, "patterns/ending_list.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def ending_new(request: HttpRequest) -> HttpResponse:
    return _ending_form(request, Ending())


@require_http_methods(["GET", "HEAD", "POST"])
def ending_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return _ending_form(request, get_object_or_404(Ending, pk=pk))


def _ending_form(request: HttpRequest, ending: Ending) -> HttpResponse:
    is_new = ending.pk is None
    workshop = habits()
    form = EndingForm(posted(request), instance=ending, unit=workshop.length_unit)
    is_sound = form.is_valid() if request.method == "POST" else not is_new
    if request.method == "POST" and is_sound and "preview" not in request.POST and _saved(form):
        messages.success(request, f"{ending} is saved. Plans that you made keep the old one.")
        return redirect("ending_list")
    context = {
        "ending": None if is_new else Ending.objects.get(pk=ending.pk),
        "form": form,
        "example": ending_example(ending.as_core(), cut_rule(workshop)) if is_sound else None,
    }
    return render_either(
        request, "patterns/ending_form.html", "patterns/_ending_example.html", context
    )


def _saved(form: EndingForm) -> bool:
    try:
        set_ending(ending=form.instance, lengths_like=form.cleaned_data.get("lengths_like"))
    except LibraryError as error:
        note_refusal(form, error)
        return False
    return True


@require_POST
def ending_default(request: HttpRequest, pk: int) -> HttpResponse:
    ending = get_object_or_404(Ending, pk=pk)
    try:
        set_default_ending(ending=ending)
    except LibraryError as error:
        messages.error(request, str(error))
    else:
        messages.success(request, f"{ending} is the default now.")
    return redirect("ending_list")


@require_http_methods(["GET", "HEAD", "POST"])
def ending_remove(request: HttpRequest, pk: int) -> HttpResponse:
    """Asks once: the knotted lengths of every size with this ending go with it."""
    ending = get_object_or_404(Ending, pk=pk)
    if request.method == "POST" and removed(request, ending):
        messages.success(request, f"{ending} is removed.")
        return redirect("ending_list")
    context = {
        "section": "patterns",
        "ending": ending,
        "length_count": ending.knotted_lengths.count(),
        "why_not": why_not_removed(ending),
    }
    return render(request, "patterns/ending_remove.html", context)
