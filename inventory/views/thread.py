from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST

from inventory.actions import AddThread, ChangeThread, PutBackThread, RemoveThread, change_shelf
from inventory.forms import MOST_PIECES_AT_ONCE, ThreadAddForm, ThreadForm
from inventory.measures import format_length
from inventory.models import Shade, ShelfPiece
from inventory.page_helpers import habits, say_with_undo
from inventory.views._shade_page import render_shade_page

LONGEST_NUMBER = 18  # digits that a database key surely holds
PLURALS = {"whole": "whole skeins", "started": "started skeins", "remnant": "remnants"}


@require_POST
def thread_add(request: HttpRequest, pk: int) -> HttpResponse:
    shade = get_object_or_404(Shade, pk=pk)
    unit = habits().length_unit
    form = ThreadAddForm(request.POST, shade=shade, unit=unit)
    if not form.is_valid():
        return render_shade_page(request, shade, form)
    values = form.cleaned_data
    pieces = change_shelf(
        changes=[
            AddThread(
                shade=shade,
                lot_name=values["lot_name"],
                kind=values["kind"],
                length_mm=values["length"],
                count=values["count"],
                note=values["note"],
            )
        ]
    )
    say_with_undo(
        request,
        f"On the shelf: {_described(pieces, unit)}, lot {values['lot_name']}.",
        undo_url=reverse("thread_add_undo", args=[pk]),
        values=[("pieces", ",".join(str(piece.pk) for piece in pieces))],
    )
    return redirect(f"{reverse('shade_detail', args=[pk])}?adding=yes")


def _described(pieces: list[ShelfPiece], unit: str) -> str:
    piece = pieces[0]
    length = format_length(piece.length_mm, unit)
    if len(pieces) == 1:
        return f"1 {piece.get_kind_display()} of {length}"
    return f"{len(pieces)} {PLURALS[piece.kind]} of {length} each"


@require_POST
def thread_add_undo(request: HttpRequest, pk: int) -> HttpResponse:
    shade = get_object_or_404(Shade, pk=pk)
    numbers = _piece_numbers(request.POST.get("pieces", ""))
    pieces = ShelfPiece.objects.on_shelf().filter(lot__shade=shade, pk__in=numbers)
    removed = change_shelf(changes=[RemoveThread(piece.pk) for piece in pieces])
    if removed:
        count = "1 piece" if len(removed) == 1 else f"{len(removed)} pieces"
        messages.info(request, f"Off the shelf again: {count}.")
    else:
        messages.info(request, "That thread is off the shelf already.")
    return redirect("shade_detail", pk=pk)


def _piece_numbers(text: str) -> list[int]:
    numbers = text.split(",")[:MOST_PIECES_AT_ONCE]
    return [int(n) for n in numbers if n.isascii() and n.isdigit() and len(n) <= LONGEST_NUMBER]


@require_http_methods(["GET", "HEAD", "POST"])
def thread_edit(request: HttpRequest, pk: int) -> HttpResponse:
    piece = get_object_or_404(ShelfPiece.objects.select_related("lot__shade"), pk=pk)
    shade = piece.lot.shade
    if piece.removed_at:
        _say_removed(request, piece)
        return redirect("shade_detail", pk=shade.pk)
    form = ThreadForm(
        request.POST or None, initial=_values(piece), shade=shade, unit=habits().length_unit
    )
    if request.method == "POST" and form.is_valid():
        _change(request, piece, form)
        return redirect("shade_detail", pk=shade.pk)
    context = {"section": "shelf", "form": form, "piece": piece, "shade": shade}
    return render(request, "inventory/thread_form.html", context)


def _values(piece: ShelfPiece) -> dict[str, Any]:
    return {
        "kind": piece.kind,
        "length": piece.length_mm,
        "lot_name": piece.lot.name,
        "note": piece.note,
    }


def _change(request: HttpRequest, piece: ShelfPiece, form: ThreadForm) -> None:
    before, now = _values(piece), form.cleaned_data
    if before == now:
        messages.info(request, f"Piece {piece.pk} is as it was.")
        return
    change_shelf(
        changes=[
            ChangeThread(
                piece_id=piece.pk,
                lot_name=now["lot_name"],
                kind=now["kind"],
                length_mm=now["length"],
                note=now["note"],
            )
        ]
    )
    length = format_length(now["length"], habits().length_unit)
    say_with_undo(
        request,
        f"Piece {piece.pk} is now: {ShelfPiece.Kind(now['kind']).label}, {length},"
        f" lot {now['lot_name']}.",
        undo_url=reverse("thread_edit", args=[piece.pk]),
        values=[*(before | {"length": f"{piece.length_mm} mm"}).items()],
    )


@require_POST
def thread_remove(request: HttpRequest, pk: int) -> HttpResponse:
    piece = get_object_or_404(ShelfPiece.objects.select_related("lot__shade"), pk=pk)
    if not piece.removed_at:
        change_shelf(changes=[RemoveThread(pk)])
    _say_removed(request, piece)
    return redirect("shade_detail", pk=piece.lot.shade_id)


def _say_removed(request: HttpRequest, piece: ShelfPiece) -> None:
    """The same words for the second hand that removes it: the answer is the same."""
    length = format_length(piece.length_mm, habits().length_unit)
    say_with_undo(
        request,
        f"Piece {piece.pk}, {length}, is off the shelf.",
        undo_url=reverse("thread_put_back", args=[piece.pk]),
    )


@require_POST
def thread_put_back(request: HttpRequest, pk: int) -> HttpResponse:
    piece = get_object_or_404(ShelfPiece.objects.select_related("lot__shade"), pk=pk)
    if piece.removed_at:
        change_shelf(changes=[PutBackThread(pk)])
    length = format_length(piece.length_mm, habits().length_unit)
    messages.success(request, f"Piece {pk}, {length}, is on the shelf again.")
    return redirect("shade_detail", pk=piece.lot.shade_id)
