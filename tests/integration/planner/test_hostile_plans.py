"""Plans of more than can be made: a sentence within seconds, and nothing kept."""

from django.test import Client

from planner.models import Batch, Plan
from planner.plans.work_out import MOST_BRACELETS, MOST_PIECES
from tests.factories import (
    make_colourway,
    make_order,
    make_pattern,
    make_put_up,
    make_ready_workshop,
    make_shade,
)


def plan(page: Client, batch: Batch) -> str:
    """What the page says after asking for a plan."""
    answer = page.post(f"/orders/{batch.pk}/plan/", follow=True)
    assert answer.status_code == 200
    return answer.content.decode()


def test_plan_refuses_more_bracelets_than_its_limit(page, batch, colourway):
    for _ in range(101):
        make_order(batch, colourway, quantity=9_999)
    said = plan(page, batch)
    assert f"1009899 bracelets are more than a plan takes: {MOST_BRACELETS} at most" in said
    assert not Plan.objects.exists()


def test_plan_refuses_more_pieces_than_its_limit(page, batch):
    make_ready_workshop()
    shade = make_shade()
    wide = make_pattern(
        "Wide", strands=" ".join("A" * 60), rows=("f " * 30, "f " * 29), finish="at least"
    )
    make_order(batch, make_colourway(wide, A=shade), quantity=9_999)
    assert f"pieces are more than a plan takes: {MOST_PIECES} at most" in plan(page, batch)
    assert not Plan.objects.exists()


def test_plan_with_too_many_put_ups_says_so(page, batch, colourway):
    for number in range(101):
        make_put_up(f"reel {number}", length_mm=8_000 + number)
    make_order(batch, colourway)
    assert "Too many put-ups to buy: at most 100." in plan(page, batch)
