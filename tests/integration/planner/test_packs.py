"""Thread that is sold by the pack, from the shelf's page to what is bought."""

import csv
from decimal import Decimal
from io import StringIO

import pytest
from django.test import Client
from django.urls import reverse

from inventory.models import PutUp, Workshop
from planner.actions import make_plan
from planner.models import Plan
from planner.plans.load import load_shelf
from planner.plans.store import read_snapshot
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_put_up,
    make_ready_workshop,
)

pytestmark = pytest.mark.django_db


def plan_by_the_pack(**packs: int) -> Plan:
    make_ready_workshop()
    PutUp.objects.all().delete()
    make_put_up(name="skein", length_mm=8_000, price="9.00", **packs)
    batch = make_batch()
    make_order(batch, make_colourway(make_pattern()), quantity=3)
    return make_plan(batch=batch, user=None)


def test_plan_buys_whole_packs_and_tells_what_is_spare(owner_client: Client) -> None:
    plan = plan_by_the_pack(pack_size=12)
    snapshot = read_snapshot(plan)
    bought = [item for shade in snapshot.shades for item in shade.purchases]
    assert bought
    for shade in snapshot.shades:
        for item in shade.purchases:
            assert (item.count, item.pack_size, item.packs) == (12, 12, 1)
            assert item.cost == item.unit_price == Decimal("9.00")
            assert shade.spare(item) == 12 - sum(stock.is_new for stock in shade.stock) > 0
            cut_mm = sum(cut.cut_mm for stock in shade.stock for cut in stock.cuts)
            assert shade.left_mm == shade.shelf_mm + 12 * item.reckoned_mm - cut_mm
    assert plan.cost == 9 * len(bought)
    page = owner_client.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "pack of 12" in page
    shade_row = plan.shades.filter(bought__gt=0).first()
    assert shade_row is not None
    words = owner_client.get(reverse("plan_shade", args=[plan.pk, shade_row.pk])).content.decode()
    assert "spare from the packs" in words


def test_purchase_list_counts_packs(owner_client: Client) -> None:
    plan = plan_by_the_pack(pack_size=2, minimum_packs=2)
    answer = owner_client.get(reverse("plan_sheet", args=[plan.pk, "purchase", "csv"]))
    text = b"".join(answer) if answer.streaming else answer.content
    header, *rows = csv.reader(StringIO(text.decode("utf-8-sig"), newline=""))
    assert rows
    for row in rows:
        told = dict(zip(header, row, strict=True))
        packs = int(told["How many"])
        assert packs >= 2
        assert told["In a pack"] == "2"
        assert Decimal(told["Cost (EUR)"]) == packs * Decimal("9.00")


def test_packs_change_the_stamp_of_the_shelf_and_single_skeins_do_not() -> None:
    make_ready_workshop()
    workshop = Workshop.objects.get()
    before = load_shelf([], workshop).stamp
    put_up = PutUp.objects.first()
    assert put_up is not None
    put_up.pack_size = 12
    put_up.save()
    assert load_shelf([], workshop).stamp != before
    put_up.pack_size = 1
    put_up.save()
    assert load_shelf([], workshop).stamp == before
