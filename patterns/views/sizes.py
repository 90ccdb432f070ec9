"""Sizes: wrist ranges, and how long the band is with each ending."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from inventory.page_helpers import habits, say_with_undo
from patterns.actions import LibraryError, set_size
from patterns.forms import SizeForm
from patterns.models import Ending, Size
from patterns.views._shared import note_refusal, posted, removed


@require_safe
def size_list(request: HttpRequest) -> HttpResponse:
    endings = list(Ending.objects.all())
    rows = []
    for size in Size.objects.prefetch_related("knotted_lengths"):
        known = {row.ending_id: row.knotted_length_mm for row in size.knotted_lengths.all()}
        rows.append((size, [(ending, known.get(ending.pk)) for ending in endings]))
    context = {"section": "patterns", "endings": endings, "rows": rows}
    return render(request, "patterns/size_list.html", context)


@require_http_methods(["GET", "HEAD", "POST"])
def size_new(request: HttpRequest) -> HttpResponse:
    return _size_form(request, Size())


@require_http_methods(["GET", "HEAD", "POST"])
def size_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return _size_form(request, get_object_or_404(Size, pk=pk))


def _size_form(request: HttpRequest, size: Size) -> HttpResponse:
    is_new = size.pk is None
    form = SizeForm(posted(request), instance=size, unit=habits().length_unit)
    if request.method == "POST" and form.is_valid() and _saved(form):
        messages.success(request, f"{size} is saved.")
        return redirect("size_list")
    context = {"section": "patterns", "form": form, "size": None if is_new else size}
    return render(request, "patterns/size_form.html", context)


def _saved(form: SizeForm) -> bool:
    try:
        set_size(size=form.instance, knotted_lengths_mm=form.knotted_lengths_mm)
    except LibraryError as error:
        note_refusal(form, error)
        return False
    return True


@require_POST
def size_remove(request: HttpRequest, pk: int) -> HttpResponse:
    size = get_object_or_404(Size, pk=pk)
    values = _values(size)
    if removed(request, size):
        text = f"{size} is removed. Plans that you made keep it."
        say_with_undo(request, text, undo_url=reverse("size_new"), values=values)
    return redirect("size_list")


def _values(size: Size) -> list[tuple[str, object]]:
    values: list[tuple[str, object]] = [
        ("name", size.name),
        ("wrist_min_mm", f"{size.wrist_min_mm} mm"),
        ("wrist_max_mm", f"{size.wrist_max_mm} mm"),
    ]
    if size.is_child:
        values.append(("is_child", "on"))
    lengths = size.knotted_lengths.all()
    return values + [(f"knotted_{row.ending_id}", f"{row.knotted_length_mm} mm") for row in lengths]
