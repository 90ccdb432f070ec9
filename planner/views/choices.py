"""Before anything is bought: ways to make a batch, side by side."""

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.views.decorators.http import require_GET

from inventory.models import Supplier
from inventory.page_helpers import habits
from planner.models import Batch
from planner.planning.choices import LENGTHS, Choice, ChoiceError
from planner.plans.compare import Way, substitutes_of, usual_ways, work_out_way
from planner.plans.posted_choice import posted_choice
from planner.plans.work_out import PlanError

PARTS = ("remnants", "start", "lengths", "supplier", "substitutes")


@require_GET
def choices(request: HttpRequest, pk: int) -> HttpResponse:
    """The page; with `show`, or a choice of the maker's own, that row is worked out at once."""
    batch = get_object_or_404(Batch, pk=pk)
    context: dict[str, Any] = {
        "batch": batch,
        "ways": usual_ways(),
        "section": "orders",
        "suppliers": Supplier.objects.filter(put_ups__isnull=False).distinct().order_by("name"),
        "lengths": LENGTHS[2:],
        "asked": {name: request.GET.get(name, "") for name in PARTS},
        "substitutes": None,
    }
    status = 200
    if any(request.GET.get(name) for name in PARTS) or "show" in request.GET:
        row, status = _row(batch, request)
        context["mine"] = row
    if "substitutes_too" in request.GET:
        context["substitutes"], context["problem"] = _substitutes(batch)
    return render(request, "planner/choices.html", context, status=status)


@require_GET
def choice_row(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    row, _ = _row(batch, request)
    # A refusal is a row too: htmx puts only what is answered with 200 in its place.
    return render(request, "planner/_choice_row.html", {"batch": batch, "row": row})


@require_GET
def choice_substitutes(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    ways, problem = _substitutes(batch)
    context = {"batch": batch, "substitutes": ways, "problem": problem}
    return render(request, "planner/_choice_substitutes.html", context)


def _substitutes(batch: Batch) -> tuple[list[Way], str]:
    try:
        return substitutes_of(batch, habits()), ""
    except PlanError as reason:
        return [], str(reason)


def _row(batch: Batch, request: HttpRequest) -> tuple[dict[str, Any], int]:
    title = request.GET.get("title", "")[:120] or "Your own choice"
    try:
        choice = posted_choice(request.GET)
        way = next((one for one in usual_ways() if one.choice == choice), Way(choice, title))
        found = work_out_way(batch, habits(), way)
    except (ChoiceError, PlanError) as reason:
        return {"way": Way(Choice(), title), "problem": str(reason)}, 422
    return {"way": way, "found": found}, 200
