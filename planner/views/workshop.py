"""The workshop's habits, and the way to sizes, endings, gauges and put-ups."""

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.views.decorators.http import require_http_methods

from inventory.models import Workshop
from planner.forms import WorkshopForm


@require_http_methods(["GET", "POST"])
def workshop(request: HttpRequest) -> HttpResponse:
    current = Workshop.current()
    if current is None:
        return redirect("home")
    form = WorkshopForm(request.POST or None, instance=current)
    if request.method == "POST" and form.is_valid():
        form.save()
        messages.success(request, "Saved. Plans you have made stay as they are.")
        return redirect("workshop")
    context = {"form": form, "section": "workshop"}
    return render(request, "planner/workshop.html", context, status=422 if form.is_bound else 200)
