"""Gauges: how tightly a maker knots, and what a knot takes."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from inventory.page_helpers import say_with_undo
from patterns.actions import LibraryError, set_default_gauge, set_gauge
from patterns.examples import gauge_example
from patterns.forms import GaugeForm
from patterns.models import Gauge
from patterns.views._shared import note_refusal, posted, removed, render_either


@require_safe
def gauge_list(request: HttpRequest) -> HttpResponse:
    rows = [(gauge, gauge_example(gauge.as_core())) for gauge in Gauge.objects.all()]
    context = {"section": "patterns", "rows": rows}
    return render(request, "patterns/gauge_list.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def gauge_new(request: HttpRequest) -> HttpResponse:
    return _gauge_form(request, Gauge())


@require_http_methods(["GET", "HEAD", "POST"])
def gauge_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return _gauge_form(request, get_object_or_404(Gauge, pk=pk))


def _gauge_form(request: HttpRequest, gauge: Gauge) -> HttpResponse:
    is_new = gauge.pk is None
    form = GaugeForm(posted(request), instance=gauge)
    is_sound = form.is_valid() if request.method == "POST" else True
    if request.method == "POST" and is_sound and "preview" not in request.POST and _saved(form):
        messages.success(request, f"{gauge} is saved. Plans that you made keep the old one.")
        return redirect("gauge_list")
    context = {
        "gauge": None if is_new else Gauge.objects.get(pk=gauge.pk),
        "form": form,
        "example": gauge_example(gauge.as_core()) if is_sound else None,
    }
    return render_either(
        request, "patterns/gauge_form.html", "patterns/_gauge_example.html", context
    )


def _saved(form: GaugeForm) -> bool:
    try:
        set_gauge(gauge=form.instance)
    except LibraryError as error:
        note_refusal(form, error)
        return False
    return True


@require_POST
def gauge_default(request: HttpRequest, pk: int) -> HttpResponse:
    gauge = get_object_or_404(Gauge, pk=pk)
    try:
        set_default_gauge(gauge=gauge)
    except LibraryError as error:
        messages.error(request, str(error))
    else:
        messages.success(request, f"{gauge} is the default now.")
    return redirect("gauge_list")


@require_POST
def gauge_remove(request: HttpRequest, pk: int) -> HttpResponse:
    gauge = get_object_or_404(Gauge, pk=pk)
    values: list[tuple[str, object]] = [
        ("name", gauge.name),
        ("thread_diameter_mm", gauge.thread_diameter_mm),
        ("loop_ratio", gauge.loop_ratio),
        ("idle_run", "" if gauge.idle_run is None else gauge.idle_run),
    ]
    if removed(request, gauge):
        text = f"{gauge} is removed. Plans that you made keep it."
        say_with_undo(request, text, undo_url=reverse("gauge_new"), values=values)
    return redirect("gauge_list")
