from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from inventory.actions import ShelfError, remove_shade
from inventory.forms import ShadeForm, ThreadAddForm
from inventory.models import Shade
from inventory.page_helpers import habits, saved, say_with_undo
from inventory.views._shade_page import render_shade_page, thread_form_initial


def _saved(form: ShadeForm) -> bool:
    return saved(form, form.save, field="code", problem="This code has just been taken.")


@require_http_methods(["GET", "HEAD", "POST"])
def shade_new(request: HttpRequest) -> HttpResponse:
    form = ShadeForm(request.POST or None)
    if request.method == "POST" and _saved(form):
        messages.success(request, f"{form.instance} is on your list. Now add its thread.")
        return redirect("shade_detail", pk=form.instance.pk)
    return render(request, "inventory/shade_form.html", {"section": "shelf", "form": form})


@require_safe
def shade_detail(request: HttpRequest, pk: int) -> HttpResponse:
    shade = get_object_or_404(Shade, pk=pk)
    initial = thread_form_initial(shade, go_on="adding" in request.GET)
    form = ThreadAddForm(shade=shade, unit=habits().length_unit, initial=initial)
    return render_shade_page(request, shade, form)


@require_http_methods(["GET", "HEAD", "POST"])
def shade_edit(request: HttpRequest, pk: int) -> HttpResponse:
    shade = get_object_or_404(Shade, pk=pk)
    form = ShadeForm(request.POST or None, instance=shade)
    if request.method == "POST" and _saved(form):
        messages.success(request, f"{form.instance} is saved.")
        return redirect("shade_detail", pk=pk)
    context = {"section": "shelf", "form": form, "shade": shade}
    return render(request, "inventory/shade_form.html", context)


@require_POST
def shade_remove(request: HttpRequest, pk: int) -> HttpResponse:
    shade = Shade.objects.filter(pk=pk).first()
    if shade is None:
        messages.info(request, "That shade was removed already.")
        return redirect("shelf")
    try:
        remove_shade(shade=shade)
    except ShelfError as error:
        messages.error(request, f"{shade} stays: {error}")
        return redirect("shade_detail", pk=pk)
    values = [("code", shade.code), ("name", shade.name), ("colour", shade.colour)]
    say_with_undo(request, f"{shade} is removed.", undo_url=reverse("shade_new"), values=values)
    return redirect("shelf")
