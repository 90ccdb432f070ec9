"""Fewer lengths to measure, from the order to the sheets."""

import io

import pytest
from django.test import Client
from django.urls import reverse
from pypdf import PdfReader

from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, OrderLine
from planner.plans.store import read_snapshot
from tests.factories import make_order


def pdf_text(page: Client, plan_pk: int, sheet: str) -> str:
    answer = page.get(reverse("plan_sheet", args=[plan_pk, sheet, "pdf"]))
    assert answer.status_code == 200
    return "\n".join(part.extract_text() for part in PdfReader(io.BytesIO(answer.content)).pages)


def cuts(batch: Batch) -> list[int]:
    (kind,) = read_snapshot(make_plan(batch=batch, user=None)).kinds
    return [piece.cut_mm for piece in kind.pieces]


def test_plan_in_two_lengths_by_hand(page: Client, batch: Batch, colourway: Colourway) -> None:
    line = make_order(batch, colourway, quantity=3)
    alone = cuts(batch)
    OrderLine.objects.filter(pk=line.pk).update(distinct_lengths=2)
    plan = make_plan(batch=batch, user=None)
    snapshot = read_snapshot(plan)
    (kind,) = snapshot.kinds
    shared = [piece.cut_mm for piece in kind.pieces]
    # Two levels: the longest piece, and one of the others; every choice of it is tried.
    longest = max(alone)
    least = min(
        sum((level if need <= level else longest) - need for need in alone) for level in alone
    )
    assert len(set(shared)) == 2
    assert sum(shared) - sum(alone) == least == kind.added_mm
    assert snapshot.added_mm == 3 * least
    assert all(after >= before for before, after in zip(alone, shared, strict=True))
    # The sheets cut what the plan says.
    in_cm = {f"{length / 10:g}" for length in shared}
    tags = pdf_text(page, plan.pk, "tags")
    cutting = pdf_text(page, plan.pk, "cutting")
    assert "cut in 2 lengths" in tags
    assert "18 pieces of 2 lengths in" in cutting
    for text in (tags, cutting):
        assert in_cm <= set(text.split())
    shown = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "Pieces that share lengths take" in shown
    bracelet = plan.bracelets.first()
    assert bracelet is not None
    answer = page.get(reverse("bracelet", args=[bracelet.pk])).content.decode()
    assert "more, to share a length with others" in answer


def test_lines_with_other_lengths_are_other_kinds(batch: Batch, colourway: Colourway) -> None:
    make_order(batch, colourway)
    make_order(batch, colourway, distinct_lengths=1)
    make_order(batch, colourway, distinct_lengths=1)
    snapshot = read_snapshot(make_plan(batch=batch, user=None))
    assert [kind.distinct_lengths for kind in snapshot.kinds] == [None, 1]


def test_plan_is_stale_once_the_lengths_change(
    page: Client, batch: Batch, colourway: Colourway
) -> None:
    make_order(batch, colourway)
    plan = make_plan(batch=batch, user=None)
    changed = "The orders, or the patterns and sizes behind them, have changed since"
    assert changed not in page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    OrderLine.objects.update(distinct_lengths=2)
    assert changed in page.get(reverse("plan_detail", args=[plan.pk])).content.decode()


def test_lengths_in_the_order_grid(page: Client, batch: Batch, colourway: Colourway) -> None:
    line = make_order(batch, colourway)
    url = reverse("batch_detail", args=[batch.pk])
    row = {
        "revision": "0",
        "row-1-line": str(line.pk),
        "row-1-pattern": colourway.pattern.name,
        "row-1-colourway": colourway.name,
        "row-1-size": "Medium",
        "row-1-quantity": "1",
    }
    page.post(url, row | {"row-1-distinct_lengths": "3"})
    line.refresh_from_db()
    assert line.distinct_lengths == 3
    assert 'name="row-1-distinct_lengths" value="3"' in page.get(url).content.decode()
    refused = page.post(url, row | {"revision": "1", "row-1-distinct_lengths": "many"})
    assert "are not a whole number from 1 to 60" in refused.content.decode()
    page.post(url, row | {"revision": "1", "row-1-distinct_lengths": ""})
    line.refresh_from_db()
    assert line.distinct_lengths is None


@pytest.mark.parametrize("name", ["lengths", "Lengths", "cut lengths"])
def test_lengths_in_a_pasted_list(
    page: Client, batch: Batch, colourway: Colourway, name: str
) -> None:
    text = f"pattern\tsize\t{name}\n{colourway.pattern.name}\tMedium\t2\n"
    answer = page.post(reverse("list_add", args=[batch.pk]), {"pasted": text}, follow=True)
    address = answer.redirect_chain[-1][0]
    page.post(f"{address}add/")
    assert OrderLine.objects.get().distinct_lengths == 2


def test_pattern_page_shows_what_sharing_costs(page: Client, colourway: Colourway) -> None:
    url = reverse("pattern_detail", args=[colourway.pattern_id])
    alone = page.get(url).context["answer"]
    costs = dict(alone.length_costs)
    assert costs[len(costs)] == 0
    shared = page.get(url, {"lengths": "1"}).context["answer"]
    assert shared.total_mm - alone.total_mm == shared.added_mm == costs[1] > 0
    assert len({line.piece.cut_mm for line in shared.pieces}) == 1
    assert any("to share a length" in step for line in shared.pieces for step in line.working)
    for wrong in ("0", "-1", "x", "99"):
        assert page.get(url, {"lengths": wrong}).status_code == 200
