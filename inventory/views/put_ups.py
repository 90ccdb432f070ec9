from decimal import Decimal

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from inventory.actions import save_put_up
from inventory.forms import PACK_FIELDS, PutUpForm
from inventory.measures import UNITS
from inventory.models import PutUp, Shade
from inventory.page_helpers import habits, saved, say_with_undo


@require_safe
def put_up_list(request: HttpRequest) -> HttpResponse:
    put_ups = PutUp.objects.for_put_up_page()
    unit = "yd" if habits().length_unit == "in" else "m"
    rows = [(put_up, _price_per(put_up, unit)) for put_up in put_ups]
    context = {"section": "shelf", "rows": rows, "unit": unit}
    return render(request, "inventory/put_up_list.html", context)


def _price_per(put_up: PutUp, unit: str) -> Decimal:
    exact = UNITS[unit]
    pack_mm = put_up.length_mm * put_up.pack_size
    return put_up.price * exact.numerator / (pack_mm * exact.denominator)


@require_http_methods(["GET", "HEAD", "POST"])
def put_up_new(request: HttpRequest) -> HttpResponse:
    return _put_up_form(request, PutUp())


@require_http_methods(["GET", "HEAD", "POST"])
def put_up_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return _put_up_form(request, get_object_or_404(PutUp.objects.select_related("supplier"), pk=pk))


def _put_up_form(request: HttpRequest, put_up: PutUp) -> HttpResponse:
    workshop = habits()
    form = PutUpForm(
        request.POST or None,
        instance=put_up,
        unit=workshop.length_unit,
        currency=workshop.currency,
    )
    if request.method == "POST" and _saved(form):
        messages.success(request, f"{form.instance} is saved.")
        return redirect("put_up_list")
    context = {"section": "shelf", "form": form, "put_up": put_up}
    return render(request, "inventory/put_up_form.html", context)


def _saved(form: PutUpForm) -> bool:
    def save() -> None:
        save_put_up(
            put_up=form.instance,
            supplier_name=form.cleaned_data["supplier_name"],
            shades=form.cleaned_data["shades"],
        )

    return saved(form, save, field="name", problem="This supplier has just got one of that name.")


@require_POST
def put_up_remove(request: HttpRequest, pk: int) -> HttpResponse:
    put_up = PutUp.objects.for_put_up_page().filter(pk=pk).first()
    if put_up is None:
        messages.info(request, "That put-up was removed already.")
        return redirect("put_up_list")
    values = _values(put_up)
    put_up.delete()
    text = f"{put_up} is no longer on your list. Plans that you made keep it."
    say_with_undo(request, text, undo_url=reverse("put_up_new"), values=values)
    return redirect("put_up_list")


def _values(put_up: PutUp) -> list[tuple[str, object]]:
    values: list[tuple[str, object]] = [
        ("name", put_up.name),
        ("supplier_name", put_up.supplier.name),
        ("length_mm", f"{put_up.length_mm} mm"),
        ("price", put_up.price),
        *((name, getattr(put_up, name)) for name in PACK_FIELDS),
    ]
    if put_up.for_every_shade:
        values.append(("for_every_shade", "on"))
    shades: list[Shade] = list(put_up.shades.all())
    return values + [("shades", shade.pk) for shade in shades]
