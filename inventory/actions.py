"""Every write to the shelf that touches more than one model."""

from collections.abc import Iterable
from dataclasses import dataclass

from django.db import transaction
from django.utils import timezone

from inventory.models import Lot, Shade, ShelfPiece


class ShelfError(ValueError):
    """The shelf cannot be changed so; the text says why."""


@dataclass(frozen=True)
class AddThread:
    """Put `count` equal pieces on the shelf."""

    shade: Shade
    lot_name: str
    kind: str
    length_mm: int
    count: int = 1
    note: str = ""


@dataclass(frozen=True)
class ChangeThread:
    """Give one piece another length, kind, lot or note."""

    piece_id: int
    lot_name: str
    kind: str
    length_mm: int
    note: str = ""


@dataclass(frozen=True)
class RemoveThread:
    """Take one piece off the shelf; it can be put back."""

    piece_id: int


@dataclass(frozen=True)
class PutBackThread:
    """Undo a removal."""

    piece_id: int


ShelfChange = AddThread | ChangeThread | RemoveThread | PutBackThread


@transaction.atomic
def change_shelf(*, changes: Iterable[ShelfChange]) -> list[ShelfPiece]:
    """The one place where lengths on the shelf are written; all changes happen, or none.

    The coming ledger hooks in here, so nothing else may create, re-measure or remove thread.
    """
    touched: list[ShelfPiece] = []
    for change in changes:
        match change:
            case AddThread():
                touched += _add(change)
            case ChangeThread():
                touched.append(_change(change))
            case RemoveThread():
                touched.append(_mark(change.piece_id, removed=True))
            case PutBackThread():
                touched.append(_mark(change.piece_id, removed=False))
    return touched


def _add(change: AddThread) -> list[ShelfPiece]:
    lot, _ = Lot.objects.get_or_create(shade=change.shade, name=change.lot_name)
    return ShelfPiece.objects.bulk_create(
        ShelfPiece(lot=lot, kind=change.kind, length_mm=change.length_mm, note=change.note)
        for _ in range(change.count)
    )


def _change(change: ChangeThread) -> ShelfPiece:
    piece = _locked(change.piece_id)
    piece.lot, _ = Lot.objects.get_or_create(shade=piece.lot.shade, name=change.lot_name)
    piece.kind = change.kind
    piece.length_mm = change.length_mm
    piece.note = change.note
    piece.save()
    return piece


def _mark(piece_id: int, *, removed: bool) -> ShelfPiece:
    piece = _locked(piece_id)
    piece.removed_at = timezone.now() if removed else None
    piece.save(update_fields=["removed_at"])
    return piece


def _locked(piece_id: int) -> ShelfPiece:
    pieces = ShelfPiece.objects.select_for_update(of=("self",)).select_related("lot__shade")
    try:
        return pieces.get(pk=piece_id)
    except ShelfPiece.DoesNotExist:
        raise ShelfError(f"There is no piece {piece_id} on the shelf.") from None
