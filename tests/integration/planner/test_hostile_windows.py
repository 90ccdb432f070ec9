"""Two windows at the same moment: neither ends in a failure, and neither undoes the other."""

from collections.abc import Callable
from typing import Any

import pytest
from django.test import Client

from inventory.actions import remove_shade
from inventory.models import Lot
from inventory.views import thread
from planner.models import Batch, OrderDraft
from planner.views import batches, lists
from tests.factories import make_shade

BAD_LIST = "for whom\tpattern\tsize\tquantity\nHarbour choir\tNo such\tMedium\t3\n"


def first(
    monkeypatch: pytest.MonkeyPatch, module: Any, name: str, elsewhere: Callable[[], object]
) -> None:
    """Let the other window act just before this one's request does what it came for."""
    action = getattr(module, name)

    def late(*args: Any, **kwargs: Any) -> Any:
        elsewhere()
        return action(*args, **kwargs)

    monkeypatch.setattr(module, name, late)


def add_list(page: Client, batch: Batch) -> OrderDraft:
    page.post(f"/orders/{batch.pk}/add-list/", {"pasted": BAD_LIST})
    return OrderDraft.objects.get()


def test_correcting_a_list_that_was_put_away_says_so(page, batch, colourway, monkeypatch):
    draft = add_list(page, batch)
    first(monkeypatch, lists, "correct_draft", OrderDraft.objects.all().delete)
    number = draft.rows[0]["number"]
    answer = page.post(
        f"/orders/{batch.pk}/lists/{draft.pk}/", {f"row-{number}-pattern": "Wave"}, follow=True
    )
    assert answer.status_code == 200
    assert "added or put away in another window" in answer.content.decode()


def test_correcting_a_list_keeps_what_another_window_corrected(page, batch, colourway, monkeypatch):
    draft = add_list(page, batch)
    number = draft.rows[0]["number"]

    def name_the_pattern() -> None:
        other = OrderDraft.objects.get()
        other.rows[0]["cells"]["pattern"] = "Wave"
        other.save()

    first(monkeypatch, lists, "correct_draft", name_the_pattern)
    page.post(f"/orders/{batch.pk}/lists/{draft.pk}/", {f"row-{number}-quantity": "5"})
    cells = OrderDraft.objects.get().rows[0]["cells"]
    assert (cells["pattern"], cells["quantity"]) == ("Wave", "5")


def test_renaming_a_batch_leaves_its_revision(page, batch, monkeypatch):
    """The revision tells a stale grid; set back, it would let that grid overwrite a newer one."""

    def save_the_grid() -> None:
        Batch.objects.update(revision=7)

    first(monkeypatch, batches.BatchForm, "is_valid", save_the_grid)
    page.post(f"/orders/{batch.pk}/edit/", {"name": "Sunday's market", "market_date": ""})
    batch.refresh_from_db()
    assert (batch.name, batch.revision) == ("Sunday's market", 7)


@pytest.mark.django_db(transaction=True)
def test_thread_for_a_shade_that_is_removed_meanwhile_is_told(page, monkeypatch):
    shade = make_shade()
    first(monkeypatch, thread, "change_shelf", lambda: remove_shade(shade=shade))
    answer = page.post(
        f"/shelf/shades/{shade.pk}/thread/",
        {"kind": "whole", "length": "8 m", "count": "1", "lot_name": "L1", "note": ""},
    )
    assert answer.status_code == 409
    assert "changed in another window" in answer.content.decode()
    assert not Lot.objects.exists()
