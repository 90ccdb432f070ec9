"""Batches of orders and their grid."""

from typing import Any

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from inventory.page_helpers import say_with_undo
from planner.actions import BatchChanged, put_back_lines, save_lines
from planner.forms import BatchForm
from planner.models import Batch, OrderLine
from planner.orders.catalogue import how_to_read, load_catalogue
from planner.orders.grid import (
    HEADINGS,
    GridRow,
    blank_rows,
    cells_of_line,
    read_grid,
    saved_rows,
)

LINES_A_PAGE = 100
BATCHES_A_PAGE = 50
MOST_NOTICES = 6


@require_GET
def batch_list(request: HttpRequest) -> HttpResponse:
    page = Paginator(Batch.objects.for_batch_list(), BATCHES_A_PAGE).get_page(
        request.GET.get("page")
    )
    context = {"page": page, "section": "orders", "today": timezone.localdate()}
    return render(request, "planner/batch_list.html", context)


@require_http_methods(["GET", "POST"])
def batch_new(request: HttpRequest) -> HttpResponse:
    form = BatchForm(request.POST or None)
    if request.method == "POST" and form.is_valid():
        return redirect("batch_detail", pk=form.save().pk)
    context = {"form": form, "section": "orders"}
    return render(request, "planner/batch_form.html", context, status=422 if form.is_bound else 200)


@require_http_methods(["GET", "POST"])
def batch_edit(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    form = BatchForm(request.POST or None, instance=batch)
    if request.method == "POST" and form.is_valid():
        # Not the revision: it may have moved on while this request was read.
        form.save(commit=False).save(update_fields=form.Meta.fields)
        return redirect("batch_detail", pk=pk)
    context = {"form": form, "batch": batch, "section": "orders"}
    return render(request, "planner/batch_form.html", context, status=422 if form.is_bound else 200)


@require_http_methods(["GET", "POST"])
def batch_detail(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    if request.method == "GET":
        return _grid_page(request, batch)
    grid = read_grid(request.POST.dict(), load_catalogue(batch), how_to_read(batch.market_date))
    if grid.bad:
        return _grid_page(request, batch, rows=grid.as_rows(), wrong=len(grid.bad))
    removed = list(batch.lines.for_grid().filter(pk__in=grid.removed))
    try:
        save_lines(
            batch=batch,
            revision=_whole_number(request.POST.get("revision")),
            changed=grid.changed,
            added=grid.added,
            removed=grid.removed,
        )
    except BatchChanged as reason:
        messages.error(request, str(reason))
        batch.refresh_from_db()
        return _grid_page(request, batch, rows=grid.as_rows())
    _say_saved(request, batch, grid.notices, removed)
    return redirect(request.get_full_path())


def _say_saved(
    request: HttpRequest, batch: Batch, notices: list[str], removed: list[OrderLine]
) -> None:
    for notice in notices[:MOST_NOTICES]:
        messages.info(request, notice)
    if len(notices) > MOST_NOTICES:
        messages.info(request, f"And {len(notices) - MOST_NOTICES} more rows were read so.")
    if not removed:
        messages.success(request, "Saved.")
        return
    named = ", ".join(str(line) for line in removed[:3])
    more = f" and {len(removed) - 3} more" if len(removed) > 3 else ""
    say_with_undo(
        request,
        f"Saved. Removed: {named}{more}.",
        undo_url=reverse("lines_put_back", args=[batch.pk]),
        values=[
            (f"row-{number}-{name}", text)
            for number, line in enumerate(removed, start=1)
            for name, text in cells_of_line(line).items()
        ],
    )


@require_POST
def lines_put_back(request: HttpRequest, pk: int) -> HttpResponse:
    """Undo of a removal: the rows come back at the end, as they were written."""
    batch = get_object_or_404(Batch, pk=pk)
    catalogue = load_catalogue(batch, archived_too=True)
    grid = read_grid(request.POST.dict(), catalogue, how_to_read(batch.market_date))
    if grid.bad:
        return _grid_page(request, batch, rows=grid.as_rows(), wrong=len(grid.bad))
    put_back_lines(batch=batch, good=grid.added)
    messages.success(request, "Put back, at the end.")
    return redirect("batch_detail", pk=pk)


def _whole_number(text: str | None) -> int:
    return int(text) if text and text.isascii() and text.isdigit() and len(text) < 10 else -1


def _grid_page(
    request: HttpRequest, batch: Batch, *, rows: list[GridRow] | None = None, wrong: int = 0
) -> HttpResponse:
    lines = batch.lines.for_grid()
    page = Paginator(lines, LINES_A_PAGE).get_page(request.GET.get("page"))
    first = page.start_index() or 1
    refused = rows is not None
    if rows is None:
        rows = saved_rows(list(page.object_list), first)
    last = max((row.number for row in rows), default=first - 1)
    context: dict[str, Any] = {
        "batch": batch,
        "page": page,
        "rows": rows,
        "blank_rows": blank_rows(last + 1),
        "headings": HEADINGS,
        "wrong": wrong,
        "wrong_rows": [row for row in rows if row.wrong_cells or row.whole_row][:20],
        "bracelets": lines.bracelet_count(),
        "catalogue": load_catalogue(batch),
        "plans": batch.plans.all()[:10],
        "drafts": batch.drafts.all(),
        "run": batch.runs.under_way().first(),
        "section": "orders",
    }
    return render(request, "planner/batch_detail.html", context, status=422 if refused else 200)
