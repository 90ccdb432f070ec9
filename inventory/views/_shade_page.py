"""The page of one shade, which several views show: its threads as bars, and a form to add more."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from django.core.paginator import Paginator
from django.db.models import Count, Max, Q, Sum
from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

from inventory.actions import ShelfError, check_remove_shade
from inventory.forms import ThreadAddForm
from inventory.models import Lot, PutUp, Shade, ShelfPiece

PIECES_A_PAGE = 100
SHORTEST_BAR = 0.4
SHORTEST_BANDED_BAR = 12
BANDS = {"whole": (0.2, 0.8), "started": (0.2,), "remnant": ()}
"""Paper bands round a skein, as shares of its bar: they tell the kinds apart without colour."""


@dataclass(frozen=True)
class ThreadBar:
    """A piece drawn to scale; places and widths in per cent of the longest piece."""

    piece: ShelfPiece
    width: float
    bands: tuple[float, ...]


@dataclass
class LotOnPage:
    lot: Lot
    bars: list[ThreadBar] = field(default_factory=list)


def thread_form_initial(shade: Shade, *, go_on: bool) -> dict[str, object]:
    """Offer a whole skein of what is bought; right after an addition, more of the same lot.

    A lot is never offered on a fresh visit: the next purchase may be another one.
    """
    if go_on:
        last = ShelfPiece.objects.on_shelf().filter(lot__shade=shade).select_related("lot").last()
        if last:
            length_mm = None if last.is_measured else last.length_mm
            return {"kind": last.kind, "length": length_mm, "lot_name": last.lot.name}
    put_up = PutUp.objects.filter(Q(for_every_shade=True) | Q(shades=shade)).first()
    return {"kind": "whole", "length": put_up.length_mm if put_up else None}


def render_shade_page(request: HttpRequest, shade: Shade, form: ThreadAddForm) -> HttpResponse:
    lots = shade.lots.filter(pieces__removed_at__isnull=True, pieces__isnull=False).annotate(
        piece_count=Count("pieces"),
        total_mm=Sum("pieces__length_mm"),
        longest_mm=Max("pieces__length_mm"),
    )
    lots_by_key = {lot.pk: lot for lot in lots}
    pieces = ShelfPiece.objects.for_shade_page().filter(lot__shade=shade)
    page = Paginator(pieces, PIECES_A_PAGE).get_page(request.GET.get("page"))
    longest_mm = max((lot.longest_mm for lot in lots), default=0)
    context = {
        "section": "shelf",
        "shade": shade,
        "form": form,
        "page": page,
        "lots": lots,
        "lots_on_page": _by_lot(page, lots_by_key, longest_mm),
        "longest_mm": longest_mm,
        "piece_count": sum(lot.piece_count for lot in lots),
        "total_mm": sum(lot.total_mm for lot in lots),
        "adding": form.is_bound or not lots or "adding" in request.GET,
        "why_not_removed": _why_not_removed(shade),
    }
    return render(request, "inventory/shade_detail.html", context)


def _by_lot(
    pieces: Iterable[ShelfPiece], lots: Mapping[int, Lot], longest_mm: int
) -> list[LotOnPage]:
    found: dict[int, LotOnPage] = {}
    for piece in pieces:
        lot = lots.get(piece.lot_id, piece.lot)
        width = max(SHORTEST_BAR, round(98 * piece.length_mm / longest_mm, 2))
        shares = BANDS[piece.kind] if width >= SHORTEST_BANDED_BAR else ()
        bands = tuple(round(width * share, 2) for share in shares)
        found.setdefault(lot.pk, LotOnPage(lot)).bars.append(ThreadBar(piece, width, bands))
    return list(found.values())


def _why_not_removed(shade: Shade) -> str:
    try:
        check_remove_shade(shade)
    except ShelfError as error:
        return str(error)
    return ""
