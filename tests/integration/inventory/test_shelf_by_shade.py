"""The thread of every shade, for pages that choose among shades."""

from decimal import Decimal

import pytest

from inventory.actions import RemoveThread, change_shelf
from inventory.models import ShelfPiece
from inventory.on_shelf import OnShelf
from tests.factories import make_shade, put_thread

SHARE = Decimal("0.02")
pytestmark = pytest.mark.django_db


def test_by_shade_counts_what_is_marked_and_trusts_what_is_measured():
    madder = make_shade("M1")
    put_thread(madder, 8_000, 8_000, kind=ShelfPiece.Kind.WHOLE)
    put_thread(madder, 900, kind=ShelfPiece.Kind.REMNANT, lot="L2")
    # Whole skeins less 2 %, remnants as measured, lots apart.
    assert ShelfPiece.objects.by_shade(SHARE) == {
        madder.pk: OnShelf(16_900, 2, ((7_840, 7_840), (900,)), ("L1", "L2"))
    }


def test_by_shade_leaves_out_what_is_gone():
    madder, indigo = make_shade("M1"), make_shade("I1")
    piece, _ = put_thread(madder, 500, 700)
    change_shelf(changes=[RemoveThread(piece.pk)])
    [gone] = put_thread(indigo, 500)
    change_shelf(changes=[RemoveThread(gone.pk)])
    assert ShelfPiece.objects.by_shade(SHARE) == {madder.pk: OnShelf(700, 0, ((700,),), ("L1",))}


def test_by_shade_asks_once(django_assert_num_queries):
    for _ in range(4):
        put_thread(make_shade(), 500)
    with django_assert_num_queries(1):
        assert len(ShelfPiece.objects.by_shade(SHARE)) == 4
