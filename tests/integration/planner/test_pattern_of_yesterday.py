"""Plans keep their patterns; archived patterns stay where they are used."""

import pytest
from django.test import Client
from django.urls import reverse
from django.utils import timezone

from patterns.actions import archive_pattern, change_pattern
from patterns.models import Colourway, Pattern
from planner.actions import make_plan
from planner.models import Batch, OrderLine
from planner.plans.store import read_snapshot
from tests.factories import make_order, pattern_text

ARCHIVED = "Wave is archived. Bring it back in the library first."


@pytest.fixture
def pattern(colourway: Colourway) -> Pattern:
    return colourway.pattern


def test_plan_of_yesterday_shows_the_pattern_of_yesterday(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    make_order(batch, colourway)
    plan = make_plan(batch=batch, user=None)
    before = read_snapshot(plan)
    bracelet = plan.bracelets.get()
    drawn = page.get(reverse("bracelet", args=[bracelet.pk])).context["drawing"]
    change_pattern(pattern=pattern, text=pattern_text("Wave", rows=("b fb f", "bf b")))
    assert read_snapshot(plan) == before
    again = page.get(reverse("bracelet", args=[bracelet.pk]))
    assert again.context["drawing"] == drawn
    assert "version 1, changed since" in again.content.decode()
    shown = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "This plan has version 1 of" in shown
    assert "the library is at version 2" in shown
    newer = make_plan(batch=batch, user=None)
    assert read_snapshot(newer).kinds[0].pattern_version == 2
    assert (
        "This plan has version"
        not in page.get(reverse("plan_detail", args=[newer.pk])).content.decode()
    )


def test_pattern_that_was_changed_back_is_as_the_plan_has_it(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    make_order(batch, colourway)
    plan = make_plan(batch=batch, user=None)
    text = pattern.text
    change_pattern(pattern=pattern, text=pattern_text("Wave", rows=("b fb f", "bf b")))
    change_pattern(pattern=pattern, text=text)
    shown = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "This plan has version" not in shown
    tag = page.get(reverse("bracelet", args=[plan.bracelets.get().pk])).content.decode()
    assert "version 1" in tag
    assert "changed since" not in tag


def test_plan_notes_what_was_made(batch: Batch, colourway: Colourway, pattern: Pattern) -> None:
    assert pattern.last_planned_on is None
    make_order(batch, colourway)
    make_plan(batch=batch, user=None)
    pattern.refresh_from_db()
    assert pattern.last_planned_on == timezone.localdate()


def test_list_that_names_an_archived_pattern_is_told(
    page: Client, batch: Batch, pattern: Pattern
) -> None:
    archive_pattern(pattern=pattern, at=timezone.now())
    text = "pattern\tsize\nWave\tMedium\n"
    answer = page.post(reverse("list_add", args=[batch.pk]), {"pasted": text}, follow=True)
    assert ARCHIVED in answer.content.decode()
    grid = page.post(
        reverse("batch_detail", args=[batch.pk]),
        {"revision": "0", "row-1-pattern": "Wave", "row-1-size": "Medium"},
    )
    assert ARCHIVED in grid.content.decode()
    assert not OrderLine.objects.exists()


def test_orders_that_have_an_archived_pattern_keep_it(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    line = make_order(batch, colourway)
    archive_pattern(pattern=pattern, at=timezone.now())
    url = reverse("batch_detail", args=[batch.pk])
    row = {
        "revision": "0",
        "row-1-line": str(line.pk),
        "row-1-pattern": "Wave",
        "row-1-size": "Medium",
        "row-1-quantity": "5",
    }
    assert page.post(url, row).status_code == 302
    line.refresh_from_db()
    assert line.quantity == 5
    assert len(read_snapshot(make_plan(batch=batch, user=None)).bracelets) == 5


def test_removed_order_of_an_archived_pattern_can_be_put_back(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    line = make_order(batch, colourway, quantity=3)
    archive_pattern(pattern=pattern, at=timezone.now())
    url = reverse("batch_detail", args=[batch.pk])
    row = {"revision": "0", "row-1-line": str(line.pk), "row-1-gone": "yes"}
    assert page.post(url, row).status_code == 302
    assert not OrderLine.objects.exists()
    back = {"row-1-pattern": "Wave", "row-1-size": "Medium", "row-1-quantity": "3"}
    assert page.post(reverse("lines_put_back", args=[batch.pk]), back).status_code == 302
    assert OrderLine.objects.get().quantity == 3


def test_archived_pattern_is_not_suggested_where_it_is_ordered(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    make_order(batch, colourway)
    archive_pattern(pattern=pattern, at=timezone.now())
    shown = page.get(reverse("batch_detail", args=[batch.pk])).content.decode()
    assert '<option value="Wave"' not in shown
    assert f'<datalist id="colourways-{pattern.pk}">' in shown


def test_archived_pattern_is_not_suggested(page: Client, batch: Batch, pattern: Pattern) -> None:
    url = reverse("batch_detail", args=[batch.pk])
    assert '<option value="Wave"' in page.get(url).content.decode()
    archive_pattern(pattern=pattern, at=timezone.now())
    assert '<option value="Wave"' not in page.get(url).content.decode()


def test_pattern_in_orders_is_archived_instead_of_removed(
    page: Client, batch: Batch, colourway: Colourway, pattern: Pattern
) -> None:
    make_order(batch, colourway)
    url = reverse("pattern_remove", args=[pattern.pk])
    assert "You may archive it instead" in page.get(url).content.decode()
    page.post(url)
    assert Pattern.objects.filter(pk=pattern.pk).exists()
