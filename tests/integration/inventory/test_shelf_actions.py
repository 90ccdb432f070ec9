"""The one way in which thread is written, and what else changes several rows at once."""

from unittest import mock

import pytest
from django.db import IntegrityError
from django.db.models import QuerySet

from inventory.actions import (
    AddThread,
    ChangeThread,
    PutBackThread,
    RemoveThread,
    ShelfError,
    change_shelf,
    check_remove_shade,
    remove_shade,
    save_put_up,
)
from inventory.models import Lot, PutUp, Shade, ShelfPiece, Supplier
from tests.factories import make_put_up, make_shade, put_thread

pytestmark = pytest.mark.django_db


def test_added_thread_gets_its_lot_once() -> None:
    shade = make_shade()
    add = AddThread(shade=shade, lot_name="4471", kind="whole", length_mm=8_000, count=3, note="x")
    pieces = change_shelf(changes=[add, add])
    assert [piece.length_mm for piece in pieces] == [8_000] * 6
    assert Lot.objects.get().pieces.on_shelf().count() == 6
    assert all(piece.pk for piece in pieces)


def test_equal_lot_names_of_two_shades_are_two_lots() -> None:
    put_thread(make_shade(), 500, lot="4471")
    put_thread(make_shade(), 500, lot="4471")
    assert Lot.objects.count() == 2


def test_changed_thread_keeps_its_number() -> None:
    (piece,) = put_thread(make_shade(), 8_000, kind="whole")
    change_shelf(changes=[ChangeThread(piece.pk, "L2", "started", 7_600, "short")])
    changed = ShelfPiece.objects.get()
    assert (changed.pk, changed.lot.name, changed.kind) == (piece.pk, "L2", "started")
    assert (changed.length_mm, changed.note) == (7_600, "short")
    assert changed.is_measured


def test_removed_thread_can_be_put_back() -> None:
    (piece,) = put_thread(make_shade(), 500)
    change_shelf(changes=[RemoveThread(piece.pk)])
    assert not ShelfPiece.objects.on_shelf().exists()
    change_shelf(changes=[PutBackThread(piece.pk)])
    assert ShelfPiece.objects.on_shelf().get() == piece


def test_changes_happen_all_or_none() -> None:
    shade = make_shade()
    (piece,) = put_thread(shade, 500)
    add = AddThread(shade=shade, lot_name="new", kind="whole", length_mm=8_000)
    with pytest.raises(ShelfError, match="no piece 999"):
        change_shelf(changes=[RemoveThread(piece.pk), add, RemoveThread(999)])
    assert ShelfPiece.objects.on_shelf().get() == piece
    assert not Lot.objects.filter(name="new").exists()


def test_number_of_a_removed_shades_piece_is_not_used_again() -> None:
    shade = make_shade()
    (piece,) = put_thread(shade, 500)
    change_shelf(changes=[RemoveThread(piece.pk)])
    remove_shade(shade=shade)
    (later,) = put_thread(make_shade(), 500)
    assert later.pk > piece.pk


def test_shade_with_thread_stays() -> None:
    shade = make_shade()
    put_thread(shade, 500)
    with pytest.raises(ShelfError, match="1 piece of it lies on the shelf"):
        remove_shade(shade=shade)
    assert Shade.objects.get() == shade


def test_shade_ticked_in_a_put_up_stays() -> None:
    shade = make_shade()
    make_put_up("cone", shades=(shade,))
    with pytest.raises(ShelfError, match="“cone”"):
        check_remove_shade(shade)


def test_shade_used_by_another_app_stays() -> None:
    """The relation is found without its app's name; a pattern's colourway is one."""
    from patterns.models import Colourway, ColourwayShade, Pattern

    shade = make_shade()
    pattern = Pattern.objects.create(name="Ebb", text="", strand_count=4, repeat_rows=2)
    colourway = Colourway.objects.create(pattern=pattern, name="Dusk")
    ColourwayShade.objects.create(colourway=colourway, slot="A", shade=shade)
    with pytest.raises(ShelfError, match="It is used: 1 "):
        check_remove_shade(shade)


def test_unused_shade_goes_with_its_used_up_lots() -> None:
    shade, other = make_shade(), make_shade()
    (piece,) = put_thread(shade, 500)
    put_thread(other, 500)
    change_shelf(changes=[RemoveThread(piece.pk)])
    make_put_up()
    check_remove_shade(shade)
    remove_shade(shade=shade)
    assert Shade.objects.get() == other
    assert Lot.objects.get().shade == other


def test_shade_that_comes_into_use_meanwhile_stays() -> None:
    shade = make_shade()
    with (
        mock.patch.object(QuerySet, "delete", side_effect=IntegrityError),
        pytest.raises(ShelfError, match="just begun to use it"),
    ):
        remove_shade(shade=shade)
    assert Shade.objects.get() == shade


def save(name: str, supplier_name: str, *, every: bool = True, shades: list[Shade]) -> PutUp:
    put_up = PutUp(name=name, length_mm=8_000, price=1, for_every_shade=every)
    return save_put_up(put_up=put_up, supplier_name=supplier_name, shades=shades)


def test_put_up_finds_its_supplier_in_either_case() -> None:
    save("skein", "Quay Threads", shades=[])
    save("cone", "quay threads", shades=[])
    assert Supplier.objects.get().put_ups.count() == 2


def test_put_up_for_every_shade_ticks_none() -> None:
    assert not save("skein", "Quay Threads", shades=[make_shade()]).shades.exists()


def test_put_up_of_own_shades_keeps_them() -> None:
    shade = make_shade()
    assert save("skein", "Quay", every=False, shades=[shade]).shades.get() == shade
