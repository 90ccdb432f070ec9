"""A plan with shades that failed or were stopped: kept, and never shown as the whole purchase."""

import csv
from io import BytesIO, StringIO
from typing import Any

import pytest
from django.test import Client
from django.urls import reverse
from pypdf import PdfReader

from planner.actions import make_plan
from planner.cutting import LotResult
from planner.models import Batch, Plan
from planner.planning import netting
from planner.plans.store import read_snapshot
from tests.factories import make_order


@pytest.fixture
def plan(colourway, batch: Batch, monkeypatch: pytest.MonkeyPatch) -> Plan:
    """Two bracelets in three shades, the second of which the solver fails on."""
    make_order(batch, colourway, quantity=2)
    solve, calls = netting.solve_with_lots, []

    def failing(*args: Any, **kwargs: Any) -> LotResult:
        calls.append(1)
        if len(calls) == 2:
            raise ZeroDivisionError("a secret detail")
        return solve(*args, **kwargs)

    monkeypatch.setattr(netting, "solve_with_lots", failing)
    return make_plan(batch=batch, user=None)


def text_of(page: Client, address: str) -> str:
    answer = page.get(address)
    assert answer.status_code == 200
    return " ".join(answer.content.decode().split())


def test_plan_with_a_failed_shade_is_stored_with_the_others(plan: Plan) -> None:
    assert plan.status == "feasible"
    assert sorted(shade.status for shade in plan.shades.all()) == ["failed", "optimal", "optimal"]
    failed = plan.shades.get(status="failed")
    assert failed.unplaced == [1, 2]
    assert not failed.stock.exists()
    assert failed.pieces.filter(stock=None).count() == failed.piece_count == 4
    for shade in plan.shades.exclude(status="failed"):
        assert not shade.pieces.filter(stock=None).exists()
    snapshot = read_snapshot(plan)
    assert next(s for s in snapshot.shades if s.status == "failed").proof.message


def test_plan_page_says_that_it_is_not_whole(page: Client, plan: Plan) -> None:
    text = text_of(page, reverse("plan_detail", args=[plan.pk]))
    failed = plan.shades.get(status="failed")
    assert "This is not the whole purchase: 1 of 3 shades was not worked out." in text
    assert f"<li>{failed.code} <bdi>{failed.name}</bdi>: An error in the program" in text
    assert "Work it out again" in text
    assert "a secret detail" not in text
    assert "Cheaper is impossible" not in text
    assert "No thread of" not in text


def test_shade_page_says_that_there_is_no_plan(page: Client, plan: Plan) -> None:
    failed = plan.shades.get(status="failed")
    text = text_of(page, reverse("plan_shade", args=[plan.pk, failed.pk]))
    assert "Not worked out: an error came up." in text
    assert "Buy nothing" not in text
    assert "No skein has to be bought" not in text


def test_bracelet_page_says_which_pieces_have_no_cut(page: Client, plan: Plan) -> None:
    text = text_of(page, reverse("bracelet", args=[plan.bracelets.all()[0].pk]))
    assert text.count("not worked out") == 2


def test_sheets_name_what_is_missing(page: Client, plan: Plan) -> None:
    failed = plan.shades.get(status="failed")
    answer = page.get(reverse("plan_sheet", args=[plan.pk, "purchase", "csv"]))
    rows = list(csv.reader(StringIO(answer.content.decode("utf-8-sig"))))
    found = {heading: cell for heading, cell in zip(rows[0], rows[-1], strict=True) if cell}
    assert found == {
        "Shade code": failed.code,
        "Shade name": failed.name,
        "Proof": "not worked out: an error came up",
    }
    for sheet in ("purchase", "cutting"):
        answer = page.get(reverse("plan_sheet", args=[plan.pk, sheet, "pdf"]))
        text = " ".join(page.extract_text() for page in PdfReader(BytesIO(answer.content)).pages)
        assert "It has no cuts, and what to buy of it is not known" in " ".join(text.split())
