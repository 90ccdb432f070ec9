"""From scraps: what can be made for the stall without buying."""

import re
from decimal import Decimal

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.views.decorators.http import require_http_methods, require_POST

from inventory.page_helpers import habits
from inventory.templatetags.measures import money_words
from patterns.models import Colourway, Ending, Size
from planner.actions import order_from_scraps
from planner.cutting import CuttingError, scraps_words
from planner.forms_scraps import MOST_OF_EACH, ScrapsForm
from planner.plans.from_scraps import FromScraps, MadeRow, Wish, work_out_from_scraps

MADE = re.compile(r"([0-9]{1,15})\.([0-9]{1,15})\.([0-9]{1,15})\.([0-9]{1,3})\Z")


@require_http_methods(["GET", "POST"])
def from_scraps(request: HttpRequest) -> HttpResponse:
    form = ScrapsForm(request.POST) if request.method == "POST" else ScrapsForm()
    context: dict[str, object] = {"section": "shelf", "form": form}
    status = 200
    if form.is_bound:
        found = _worked_out(form) if form.is_valid() else None
        status = 200 if found else 422
        if found:
            of_money = form.cleaned_data["aim"] == "money"
            currency = habits().currency
            context |= {
                "found": found,
                "of_money": of_money,
                "words": scraps_words(
                    found.result,
                    of_money=of_money,
                    money=lambda amount: money_words(amount, currency),
                ),
            }
    return render(request, "planner/from_scraps.html", context, status=status)


def _worked_out(form: ScrapsForm) -> FromScraps | None:
    chosen = form.cleaned_data
    ending = Ending.objects.get(pk=chosen["ending"])
    wishes = [
        Wish(colourway, size, ending, chosen["most"], form.price_of(colourway))
        for colourway in chosen["colourways"]
        for size in chosen["sizes"]
    ]
    try:
        return work_out_from_scraps(
            wishes=wishes, workshop=habits(), leave_whole=chosen["leave_whole"]
        )
    except CuttingError as reason:
        form.add_error(None, str(reason))
        return None


@require_POST
def order_scraps(request: HttpRequest) -> HttpResponse:
    """Make a batch for the stall of what the page found."""
    rows = _made_rows(request.POST.getlist("made"))
    if not rows:
        messages.error(request, "Nothing was ordered: work out again what can be made.")
        return redirect("from_scraps")
    batch = order_from_scraps(rows=rows)
    messages.success(request, "Ordered for the stall. Make the plan: it cuts from your shelf.")
    return redirect("batch_detail", pk=batch.pk)


def _made_rows(texts: list[str]) -> list[MadeRow]:
    """All rows, or none where one of them is not what the page sent or is gone by now."""
    matches = [MADE.match(text) for text in texts[:1_000]]
    if not matches or not all(matches):
        return []
    keys = [[int(number) for number in match.groups()] for match in matches if match]
    colourways = Colourway.objects.select_related("pattern").in_bulk({row[0] for row in keys})
    sizes = Size.objects.in_bulk({row[1] for row in keys})
    endings = Ending.objects.in_bulk({row[2] for row in keys})
    rows = []
    for colourway, size, ending, count in keys:
        known = colourway in colourways and size in sizes and ending in endings
        if not known or not 1 <= count <= MOST_OF_EACH:
            return []
        wish = Wish(colourways[colourway], sizes[size], endings[ending], count, Decimal(1))
        rows.append(MadeRow(wish, count))
    return rows
