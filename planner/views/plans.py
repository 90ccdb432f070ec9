"""Plans, their shades and bracelets, and the sheets printed from them."""

from collections.abc import Iterable

from django.core.paginator import Paginator
from django.http import (
    Http404,
    HttpRequest,
    HttpResponse,
    HttpResponseBase,
    StreamingHttpResponse,
)
from django.shortcuts import get_object_or_404, render
from django.utils.text import slugify
from django.views.decorators.http import require_GET

from planner.models import Plan, PlanBracelet, PlanShade
from planner.planning.sheet_files import SHEET_FILES
from planner.plans.pages import bracelet_page, plan_page, shade_page
from planner.plans.store import read_snapshot

BRACELETS_A_PAGE = 100
STREAMED_FROM = 300  # bracelets: some seconds of drawing
PAPERS = {"a4": "A4", "letter": "Letter"}


@require_GET
def plan_detail(request: HttpRequest, pk: int) -> HttpResponse:
    plan = get_object_or_404(Plan.objects.select_related("batch"), pk=pk)
    return render(request, "planner/plan_detail.html", plan_page(plan))


@require_GET
def plan_shade(request: HttpRequest, pk: int, shade_pk: int) -> HttpResponse:
    shade = get_object_or_404(PlanShade.objects.select_related("plan__batch"), pk=shade_pk, plan=pk)
    template = "planner/_plan_shade.html" if request.htmx else "planner/plan_shade.html"  # type: ignore[attr-defined]
    response = render(
        request, template, shade_page(shade, request.GET.get("by"), request.GET.get("page"))
    )
    response["Vary"] = "HX-Request"
    return response


@require_GET
def plan_bracelets(request: HttpRequest, pk: int) -> HttpResponse:
    plan = get_object_or_404(Plan.objects.select_related("batch"), pk=pk)
    bracelets = plan.bracelets.select_related("kind").order_by("number")
    page = Paginator(bracelets, BRACELETS_A_PAGE).get_page(request.GET.get("page"))
    context = {"plan": plan, "page": page, "section": "orders"}
    return render(request, "planner/plan_bracelets.html", context)


@require_GET
def bracelet(request: HttpRequest, pk: int) -> HttpResponse:
    found = get_object_or_404(PlanBracelet.objects.for_bracelet_page(), pk=pk)
    return render(request, "planner/bracelet.html", bracelet_page(found))


@require_GET
def plan_sheet(request: HttpRequest, pk: int, sheet: str, ending: str) -> HttpResponseBase:
    kind = SHEET_FILES.get((sheet, ending))
    if kind is None:
        raise Http404
    plan = get_object_or_404(Plan.objects.select_related("batch"), pk=pk)
    snapshot = read_snapshot(plan)
    paper = PAPERS.get(request.GET.get("paper", "").lower(), snapshot.habits.paper)
    parts = kind.parts(snapshot, paper, request.build_absolute_uri("/"))
    response = _file(parts, kind.content_type, is_long=plan.bracelet_count > STREAMED_FROM)
    name = slugify(f"{sheet} {plan.batch_name} plan {plan.number}") or sheet
    disposition = "inline" if ending == "pdf" else "attachment"
    response["Content-Disposition"] = f'{disposition}; filename="{name}.{ending}"'
    return response


def _file(parts: Iterable[bytes], content_type: str, *, is_long: bool) -> HttpResponseBase:
    """A short file whole, with its length; a long one page by page as it is drawn."""
    if is_long:
        return StreamingHttpResponse(parts, content_type=content_type)
    return HttpResponse(b"".join(parts), content_type=content_type)
