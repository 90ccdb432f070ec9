"""The first page: begin a workshop, or see what is next."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from inventory.models import PutUp, Shade, ShelfPiece, Workshop
from patterns.models import Colourway, Pattern
from planner.actions import WorkshopExists, start_workshop
from planner.forms import WorkshopForm
from planner.models import Batch


@require_GET
def home(request: HttpRequest) -> HttpResponse:
    if Workshop.current() is None:
        return render(request, "planner/welcome.html")
    today = timezone.localdate()
    upcoming = list(Batch.objects.for_home(today)[:7])
    next_batch = upcoming[0] if upcoming else None
    dated = next_batch and next_batch.market_date
    context = {
        "next_batch": next_batch,
        "days_left": (dated - today).days if dated else None,
        "upcoming": upcoming[1:],
        "steps": first_steps(),
    }
    return render(request, "planner/home.html", context)


def first_steps() -> list[dict[str, object]]:
    """What a workshop needs before its first plan, in the order that helps."""
    steps: list[dict[str, object]] = [
        {
            "done": Shade.objects.exists(),
            "text": "Add the shades you knot with",
            "url": "shade_new",
        },
        {
            "done": PutUp.objects.exists(),
            "text": "Say how your thread is sold: length and price",
            "url": "put_up_new",
        },
        {
            "done": ShelfPiece.objects.exists(),
            "text": "Enter the thread you have, on each shade's page (or leave the shelf empty)",
            "url": "shelf",
            "optional": True,
        },
        {
            "done": Pattern.objects.exists(),
            "text": "Add a pattern",
            "url": "pattern_new",
        },
        {
            "done": Colourway.objects.exists(),
            "text": "Give the pattern a colourway: which shade goes where",
            "url": "pattern_list",
        },
        {
            "done": Batch.objects.exists(),
            "text": "Start a batch of orders",
            "url": "batch_new",
        },
    ]
    open_steps = [step for step in steps if not step["done"] and not step.get("optional")]
    return steps if open_steps else []


@require_POST
def open_sample(request: HttpRequest) -> HttpResponse:
    from planner.sample.load import load_sample

    try:
        load_sample()
    except WorkshopExists as reason:
        messages.error(request, str(reason))
    else:
        messages.success(request, "The sample workshop is open. Change what you like.")
    return redirect("home")


@require_http_methods(["GET", "POST"])
def start_own(request: HttpRequest) -> HttpResponse:
    form = WorkshopForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        try:
            start_workshop(**form.cleaned_data)
        except WorkshopExists as reason:
            messages.error(request, str(reason))
        return redirect("home")
    status = 422 if form.is_bound else 200
    return render(request, "planner/start_own.html", {"form": form}, status=status)
