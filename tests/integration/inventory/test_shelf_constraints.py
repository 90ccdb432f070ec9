"""What the database itself refuses, whoever writes."""

from collections.abc import Callable
from decimal import Decimal

import pytest
from django.db import IntegrityError, transaction

from inventory.models import Lot, PutUp, ShelfPiece, Supplier, Workshop
from tests.factories import make_put_up, make_shade, make_workshop, put_thread

pytestmark = pytest.mark.django_db


def assert_refused(constraint: str, write: Callable[[], object]) -> None:
    """SQLite names a CHECK, but for a broken UNIQUE over columns it names those instead."""
    with pytest.raises(IntegrityError, match=constraint), transaction.atomic():
        write()


def test_second_workshop_is_refused() -> None:
    assert_refused("workshop_is_one", lambda: Workshop.objects.create(pk=2, name="Other"))


@pytest.mark.parametrize(
    ("changes", "constraint"),
    [
        ({"safety_share": Decimal("0.501")}, "workshop_safety_share_in_range"),
        ({"safety_share": Decimal("-0.001")}, "workshop_safety_share_in_range"),
        ({"short_measure_share": Decimal("0.501")}, "workshop_short_measure_share_in_range"),
        ({"short_measure_share": Decimal("-0.001")}, "workshop_short_measure_share_in_range"),
        ({"rounding_step_mm": Decimal("0.99")}, "workshop_rounding_step_positive"),
    ],
)
def test_workshop_habit_out_of_range_is_refused(
    changes: dict[str, Decimal], constraint: str
) -> None:
    make_workshop()
    assert_refused(constraint, lambda: Workshop.objects.update(**changes))


def test_shade_code_twice_is_refused_in_either_case() -> None:
    make_shade("Ab1")
    assert_refused("shade_code_once", lambda: make_shade("aB1"))


def test_put_up_name_twice_at_one_supplier_is_refused() -> None:
    put_up = make_put_up()
    twin = {"name": put_up.name, "supplier": put_up.supplier, "length_mm": 1, "price": 1}
    assert_refused(r"put_up_name_once|putup\.name", lambda: PutUp.objects.create(**twin))


def test_put_up_name_at_another_supplier_is_taken() -> None:
    make_put_up()
    make_put_up(supplier="Longshore")
    assert PutUp.objects.count() == 2


@pytest.mark.parametrize(
    ("changes", "constraint"),
    [
        ({"length_mm": 0}, "put_up_length_positive"),
        ({"price": Decimal("-0.01")}, "put_up_price_not_negative"),
    ],
)
def test_put_up_out_of_range_is_refused(changes: dict[str, object], constraint: str) -> None:
    make_put_up()
    assert_refused(constraint, lambda: PutUp.objects.update(**changes))


def test_supplier_name_twice_is_refused() -> None:
    Supplier.objects.create(name="Quay Threads")
    assert_refused(r"supplier[._]name", lambda: Supplier.objects.create(name="Quay Threads"))


def test_lot_name_twice_in_one_shade_is_refused() -> None:
    lot = Lot.objects.create(shade=make_shade(), name="4471")
    assert_refused(
        r"lot_name_once|lot\.name", lambda: Lot.objects.create(shade=lot.shade, name="4471")
    )


@pytest.mark.parametrize(
    ("changes", "constraint"),
    [
        ({"length_mm": 0}, "shelf_piece_length_positive"),
        ({"kind": "ball"}, "shelf_piece_kind_known"),
    ],
)
def test_piece_out_of_range_is_refused(changes: dict[str, object], constraint: str) -> None:
    put_thread(make_shade(), 500)
    assert_refused(constraint, lambda: ShelfPiece.objects.update(**changes))
