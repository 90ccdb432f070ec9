"""A set from the pasted list to the plan's pages and tags."""

from io import BytesIO

import pytest
from django.test import Client
from django.urls import reverse
from pypdf import PdfReader

from inventory.models import Shade, Workshop
from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, OrderDraft, PlanPiece
from planner.plans.load import load_orders, orders_stamp
from planner.plans.store import read_proof, read_snapshot
from tests.factories import make_order, put_thread

pytestmark = pytest.mark.django_db
LIST = "for whom\tpattern\tsize\tmatched set\nAnna\tWave\tMedium\tPair\nBela\tWave\tMedium\tpair\n"


def test_set_is_read_from_a_list_and_comes_from_one_lot(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    for shade in Shade.objects.all():
        put_thread(shade, 4_000, lot="one")
        put_thread(shade, 4_000, lot="two")
    page.post(reverse("list_add", args=[batch.pk]), {"text": LIST, "pasted": LIST})
    draft = OrderDraft.objects.get()
    checked = page.get(reverse("list_check", args=[batch.pk, draft.pk])).content.decode()
    assert "Set of one lot" in checked
    page.post(reverse("list_confirm", args=[batch.pk, draft.pk]))
    assert [line.matched_set for line in batch.lines.order_by("position")] == ["Pair", "pair"]
    grid = page.get(reverse("batch_detail", args=[batch.pk])).content.decode()
    assert 'name="row-1-matched_set" value="Pair"' in grid
    plan = make_plan(batch=batch, user=None)
    for shade_row in plan.shades.all():
        lots = {
            (piece.stock.lot_name, piece.stock.is_new)
            for piece in PlanPiece.objects.filter(shade=shade_row).select_related("stock")
            if piece.stock
        }
        assert len(lots) == 1
    assert {b.matched_set for b in read_snapshot(plan).bracelets} == {"Pair", "pair"}
    tag = plan.bracelets.order_by("number").first()
    assert tag is not None
    words = page.get(reverse("bracelet", args=[tag.pk])).content.decode()
    assert "one lot of each shade" in words
    answer = page.get(reverse("plan_sheet", args=[plan.pk, "tags", "pdf"]))
    content = b"".join(answer) if answer.streaming else answer.content
    text = "\n".join(p.extract_text() for p in PdfReader(BytesIO(content)).pages)
    assert "for Anna, set Pair" in text


def test_removed_line_comes_back_with_its_set(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    line = make_order(batch, colourway, matched_set="Crew")
    answer = page.post(
        reverse("batch_detail", args=[batch.pk]),
        {"revision": batch.revision, "row-1-line": line.pk, "row-1-gone": "yes"},
        follow=True,
    )
    assert 'name="row-1-matched_set" value="Crew"' in answer.content.decode()


def test_orders_without_sets_keep_the_stamp_of_earlier_releases(
    colourway: Colourway, batch: Batch
) -> None:
    line = make_order(batch, colourway)
    current = Workshop.objects.get()
    plain = orders_stamp(load_orders([line], current).orders)
    line.matched_set = "Pair"
    assert orders_stamp(load_orders([line], current).orders) != plain
    line.matched_set = ""
    assert orders_stamp(load_orders([line], current).orders) == plain


def test_plan_says_what_keeping_lots_apart_costs(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    """Two lots with thread for a bracelet each: as a set of two they need one lot, so new thread."""
    make_order(batch, colourway, quantity=2, matched_set="Pair")
    first = make_plan(batch=batch, user=None)
    for shade_row in first.shades.all():
        shade = Shade.objects.get(code=shade_row.code)
        half = shade_row.need_mm // 2
        put_thread(shade, half, lot="one", kind="remnant")
        put_thread(shade, half, lot="two", kind="remnant")
        assert shade_row.bought
    plan = make_plan(batch=batch, user=None)
    text = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "lots cost" in text
    for row in plan.shades.all():
        assert read_proof(row.proof).cost_without_lots == 0 < row.cost
        opened = page.get(reverse("plan_shade", args=[plan.pk, row.pk])).content.decode()
        assert "Keeping dye lots apart costs 1 more to buy, €1.20" in opened
        assert "the shelf would do" in opened
