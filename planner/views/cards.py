"""Knotting cards as PDF: of a bracelet chosen now, and of one as a plan has it."""

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.utils import timezone
from django.utils.http import content_disposition_header
from django.utils.text import slugify
from django.views.decorators.http import require_safe

from inventory.models import Workshop
from inventory.page_helpers import habits
from patterns.models import Pattern
from patterns.strand_answer import NoAnswer
from planner.card_choice import PAPER_OF_WORKSHOP, CardChoiceForm, chosen_card
from planner.models import PlanKind
from planner.planning.cards import kind_card
from planner.plans.store import read_habits, read_kind
from planner.sheets.contents import SheetHead
from planner.sheets.knotting_card import build_knotting_card
from planner.sheets.paper import CARD_PAPERS


@require_safe
def knotting_card(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern.objects.for_library_page(), pk=pk)
    workshop = habits()
    form = CardChoiceForm(request.GET, pattern=pattern, workshop=workshop)
    why_not = ""
    if form.is_valid():
        try:
            card = chosen_card(pattern, form, workshop, timezone.localdate())
        except NoAnswer as error:
            why_not = str(error)
        else:
            content = build_knotting_card(card, form.cleaned_data["paper"])
            return _pdf(content, f"{pattern.name} {card.size}")
    context = {"section": "patterns", "pattern": pattern, "form": form, "why_not": why_not}
    return render(request, "planner/card_choice.html", context, status=400)


@require_safe
def plan_card(request: HttpRequest, plan_pk: int, pk: int) -> HttpResponse:
    kind = get_object_or_404(PlanKind.objects.select_related("plan"), pk=pk, plan=plan_pk)
    plan, plan_habits = kind.plan, read_habits(kind.plan)
    head = SheetHead(
        workshop=plan_habits.workshop_name,
        batch=plan.batch_name,
        market_date=plan.market_date,
        plan_label=f"Plan {plan.number}",
        plan_date=plan.plan_date,
    )
    asked = request.GET.get("paper", "")
    usual = PAPER_OF_WORKSHOP[Workshop.Paper(plan_habits.paper)]
    paper = CARD_PAPERS.get(asked, CARD_PAPERS[usual])
    card = kind_card(read_kind(kind), head, plan_habits.length_unit)
    return _pdf(build_knotting_card(card, paper), f"{kind.pattern_name} {kind.size_name}")


def _pdf(content: bytes, name: str) -> HttpResponse:
    response = HttpResponse(content, content_type="application/pdf")
    file_name = slugify(name, allow_unicode=True)[:80] or "pattern"
    response["Content-Disposition"] = (
        content_disposition_header(False, f"{file_name} card.pdf") or "inline"
    )
    return response
