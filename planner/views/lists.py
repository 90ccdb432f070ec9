"""Lists of orders that are pasted or uploaded: looked through first, then added."""

from typing import Any, cast

from django.contrib import messages
from django.contrib.auth.models import User
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_http_methods, require_POST

from planner.actions import BatchChanged, confirm_draft, correct_draft
from planner.models import Batch, OrderDraft
from planner.order_list.limits import MAX_FILE_BYTES, OrderListError
from planner.order_list.lines import read_lines
from planner.order_list.results import Reading
from planner.order_list.table import Table, read_pasted, read_table
from planner.orders.catalogue import how_to_read, load_catalogue
from planner.orders.drafts import (
    bad_grid_rows,
    draft_row,
    read_draft,
    resolved_rows,
    rows_of_reading,
)
from planner.orders.grid import HEADINGS

MEGABYTE = 2**20


@require_http_methods(["GET", "POST"])
def list_add(request: HttpRequest, pk: int) -> HttpResponse:
    batch = get_object_or_404(Batch, pk=pk)
    context: dict[str, Any] = {
        "batch": batch,
        "section": "orders",
        "most_megabytes": MAX_FILE_BYTES // MEGABYTE,
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
            f"The file is larger than {MAX_FILE_BYTES // MEGABYTE} MB. Split the list."
        )
    name = upload.name or ""
    return name, read_table(upload.read(), name)


def _read(table: Table, batch: Batch) -> Reading:
    reading = read_lines(table, load_catalogue(), **how_to_read(batch.market_date))
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
    reading = read_draft(draft, catalogue, how_to_read(draft.batch.market_date))
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
    reading = read_draft(draft, load_catalogue(), how_to_read(draft.batch.market_date))
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
