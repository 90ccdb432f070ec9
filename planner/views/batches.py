"""Batches of orders: the grid, and lists added by pasting or as files."""

from typing import Any, cast

from django.contrib import messages
from django.contrib.auth.models import User
from django.core.paginator import Paginator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.utils import timezone
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from planner.actions import BatchChanged, confirm_draft, correct_draft, save_lines
from planner.forms import BatchForm
from planner.models import Batch, OrderDraft
from planner.order_list.limits import MAX_FILE_BYTES, OrderListError
from planner.order_list.lines import read_lines
from planner.order_list.results import Reading
from planner.order_list.table import Table, read_pasted, read_table
from planner.orders.catalogue import load_catalogue
from planner.orders.drafts import (
    bad_grid_rows,
    draft_row,
    read_draft,
    resolved_rows,
    rows_of_reading,
)
from planner.orders.grid import HEADINGS, GridRow, blank_rows, read_grid, saved_rows

LINES_A_PAGE = 100
BATCHES_A_PAGE = 50


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
    catalogue = load_catalogue()
    grid = read_grid(
        request.POST.dict(), catalogue, today=timezone.localdate(), market_date=batch.market_date
    )
    if grid.bad:
        return _grid_page(request, batch, rows=grid.as_rows(), wrong=len(grid.bad))
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
    messages.success(request, "Saved.")
    return redirect(request.get_full_path())


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
        "bracelets": lines.bracelet_count(),
        "catalogue": load_catalogue(),
        "plans": batch.plans.all()[:10],
        "drafts": batch.drafts.all(),
        "section": "orders",
    }
    return render(request, "planner/batch_detail.html", context, status=422 if refused else 200)


@require_http_methods(["GET", "POST"])
def list_add(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    context: dict[str, Any] = {
        "batch": batch,
        "section": "orders",
        "most_megabytes": MAX_FILE_BYTES // 1_000_000,
    }
    if request.method == "GET":
        return render(request, "planner/list_add.html", context)
    try:
        name, table = _posted_table(request)
        reading = _read(table, batch)
    except OrderListError as reason:
        context |= {"problem": str(reason), "pasted": request.POST.get("pasted", "")}
        return render(request, "planner/list_add.html", context, status=422)
    draft = OrderDraft.objects.create(
        batch=batch,
        created_by=cast(User, request.user),
        source_name=name[:200],
        rows=rows_of_reading(reading),
        notices=_notices(reading),
    )
    return redirect("list_check", pk=pk, draft_pk=draft.pk)


def _posted_table(request: HttpRequest) -> tuple[str, Table]:
    upload = request.FILES.get("file")
    if upload is None:
        return "", read_pasted(request.POST.get("pasted", ""))
    if upload.size is not None and upload.size > MAX_FILE_BYTES:
        raise OrderListError(
            f"The file is larger than {MAX_FILE_BYTES // 1_000_000} MB. Split the list."
        )
    name = upload.name or ""
    return name, read_table(upload.read(), name)


def _read(table: Table, batch: Batch) -> Reading:
    reading = read_lines(
        table, load_catalogue(), today=timezone.localdate(), market_date=batch.market_date
    )
    if not reading.good and not reading.bad:
        raise OrderListError("There are no orders in it. Paste the rows, or choose a file.")
    return reading


def _notices(reading: Reading) -> list[str]:
    notices = list(reading.notices)
    if reading.ignored_columns:
        notices.append("Not read: " + ", ".join(reading.ignored_columns) + ".")
    return notices


@require_http_methods(["GET", "POST"])
def list_check(request: HttpRequest, pk: int, draft_pk: int) -> HttpResponse:
    draft = get_object_or_404(OrderDraft.objects.select_related("batch"), pk=draft_pk, batch=pk)
    if request.method == "POST":
        return _list_correct(request, draft)
    catalogue = load_catalogue()
    reading = read_draft(
        draft, catalogue, today=timezone.localdate(), market_date=draft.batch.market_date
    )
    context = {
        "batch": draft.batch,
        "draft": draft,
        "good": resolved_rows(reading, catalogue),
        "notices": [*draft.notices, *(n for line in reading.good for n in line.notices)],
        "bad_rows": bad_grid_rows(reading),
        "bracelets": sum(line.quantity for line in reading.good),
        "headings": HEADINGS,
        "catalogue": catalogue,
        "section": "orders",
    }
    return render(request, "planner/list_check.html", context)


def _list_correct(request: HttpRequest, draft: OrderDraft) -> HttpResponse:
    try:
        correct_draft(draft=draft, posted=request.POST.dict())
    except BatchChanged as reason:
        messages.error(request, str(reason))
        return redirect("batch_detail", pk=draft.batch_id)
    return redirect("list_check", pk=draft.batch_id, draft_pk=draft.pk)


@require_POST
def list_confirm(request: HttpRequest, pk: int, draft_pk: int) -> HttpResponse:
    draft = OrderDraft.objects.select_related("batch").filter(pk=draft_pk, batch=pk).first()
    if draft is None:
        messages.error(request, "That list was added or put away already.")
        return redirect("batch_detail", pk=pk)
    reading = read_draft(
        draft, load_catalogue(), today=timezone.localdate(), market_date=draft.batch.market_date
    )
    waiting = [draft_row(line) for line in reading.bad]
    try:
        confirm_draft(draft=draft, good=reading.good, waiting=waiting)
    except BatchChanged as reason:
        messages.error(request, str(reason))
        return redirect("batch_detail", pk=pk)
    message = f"{len(reading.good)} orders added."
    if waiting:
        message += f" {len(waiting)} rows still wait to be put right."
    messages.success(request, message)
    return redirect("batch_detail", pk=pk)


@require_POST
def list_discard(request: HttpRequest, pk: int, draft_pk: int) -> HttpResponse:
    OrderDraft.objects.filter(pk=draft_pk, batch=pk).delete()
    messages.success(request, "The list was put away. Nothing was ordered.")
    return redirect("batch_detail", pk=pk)
