"""A plan while it is worked out: begun, looked at, stopped."""

from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_POST

from planner.actions_runs import start_run, stop_run
from planner.models import Batch, PlanRun
from planner.planning.choices import ChoiceError
from planner.plans.posted_choice import posted_choice
from planner.plans.runs import SAVING, begin


@require_POST
def plan_new(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    try:
        choice = posted_choice(request.POST)
    except ChoiceError as reason:
        messages.error(request, str(reason))
        return redirect("batch_detail", pk=pk)
    run, is_new = start_run(batch=batch, user=request.user, choice=choice.as_json())
    if is_new:
        begin(run)
        run.refresh_from_db()
    elif run.choice != choice.as_json():
        messages.warning(
            request,
            "Another plan of this batch is being worked out. Wait for it, or stop it; then plan "
            "your choice again.",
        )
    if run.status == PlanRun.Status.FAILED:
        messages.error(request, run.message)
        return redirect("batch_detail", pk=pk)
    return _where_it_is(run)


@require_GET
def run_detail(request: HttpRequest, pk: int) -> HttpResponse:
    run = get_object_or_404(PlanRun.objects.select_related("batch", "plan"), pk=pk)
    if request.htmx:  # type: ignore[attr-defined]
        return _progress(request, run)
    if run.plan is not None:
        return redirect("plan_detail", pk=run.plan.pk)
    response = render(request, "planner/run_detail.html", run_context(run))
    response["Vary"] = "HX-Request"
    response["Cache-Control"] = "no-store"
    return response


@require_POST
def run_stop(request: HttpRequest, pk: int) -> HttpResponse:
    run = get_object_or_404(PlanRun.objects.select_related("plan"), pk=pk)
    stop_run(run=run)
    return _where_it_is(run)


def _where_it_is(run: PlanRun) -> HttpResponse:
    if run.plan is not None:
        return redirect("plan_detail", pk=run.plan.pk)
    return redirect("run_detail", pk=run.pk)


def _progress(request: HttpRequest, run: PlanRun) -> HttpResponse:
    """What has changed since the page was last told: nothing, a step, or the end."""
    if not run.is_running:
        return HttpResponse(headers={"HX-Refresh": "true", "Vary": "HX-Request"})
    context = run_context(run)
    if request.GET.get("seen") == context["seen"]:
        return HttpResponse(status=204, headers={"Vary": "HX-Request"})
    response = render(request, "planner/_run.html", context)
    response["Vary"] = "HX-Request"
    return response


def run_context(run: PlanRun) -> dict[str, Any]:
    return {
        "run": run,
        "batch": run.batch,
        "position": run.shades_done + 1,
        "is_saving": run.doing == SAVING,
        # What a screen reader has read out need not be read out again.
        "seen": f"{run.shades_done}-{run.shades_total}-{run.doing == SAVING:d}",
        "section": "orders",
    }
