"""Every write to the shelf that touches more than one model."""

from collections.abc import Iterable
from dataclasses import dataclass

from django.db import IntegrityError, transaction
from django.utils import timezone

from inventory.models import Lot, PutUp, Shade, ShelfPiece, Supplier


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


def check_remove_shade(shade: Shade) -> None:
    """Raise with the reason why this shade has to stay.

    Apps above this one hold shades too; they are found through Django's own list of relations,
    because this app must not know their names.
    """
    on_shelf = ShelfPiece.objects.on_shelf().filter(lot__shade=shade).count()
    if on_shelf:
        pieces = "1 piece of it lies" if on_shelf == 1 else f"{on_shelf} pieces of it lie"
        raise ShelfError(f"{pieces} on the shelf. Take the thread off the shelf first.")
    own_put_up = shade.own_put_ups.filter(for_every_shade=False).first()
    if own_put_up:
        raise ShelfError(
            f"The put-up “{own_put_up.name}” is for shades that you ticked, and this is one of"
            " them. Untick it there first."
        )
    for relation in Shade._meta.related_objects:
        model = relation.related_model
        if relation.many_to_many or model is Lot:
            continue
        uses = model._default_manager.filter(**{relation.field.name: shade}).count()
        if uses:
            name = model._meta.verbose_name if uses == 1 else model._meta.verbose_name_plural
            raise ShelfError(f"It is used: {uses} {name}. Choose another shade there first.")


def remove_shade(*, shade: Shade) -> Shade:
    """Forget a shade that nothing uses, with the thread that was taken off the shelf before."""
    try:
        with transaction.atomic():
            check_remove_shade(shade)
            ShelfPiece.objects.filter(lot__shade=shade).delete()
            shade.lots.all().delete()
            Shade.objects.filter(pk=shade.pk).delete()
    except IntegrityError:
        raise ShelfError("Somebody has just begun to use it.") from None
    return shade


@transaction.atomic
def save_put_up(*, put_up: PutUp, supplier_name: str, shades: Iterable[Shade]) -> PutUp:
    """Save a put-up with its supplier, who is added when the name is new."""
    supplier = Supplier.objects.filter(name__iexact=supplier_name).first()
    put_up.supplier = supplier or Supplier.objects.create(name=supplier_name)
    put_up.save()
    put_up.shades.set([] if put_up.for_every_shade else shades)
    return put_up
