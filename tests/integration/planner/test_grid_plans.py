"""A grid pattern from the order to the sheets."""

import io
from math import ceil, pi

import pytest
from django.test import Client
from django.urls import reverse
from pypdf import PdfReader

from inventory.models import Workshop
from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, PlanPiece
from planner.plans.store import read_snapshot
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_order,
    make_ready_workshop,
    put_thread,
)

ROWS = ("AAAAA", "ABBBA", "AABAA", "AAAAA")
D = 0.9
CELL = (2 + 3 * pi) * D


@pytest.fixture
def heart(db: None) -> Colourway:
    make_ready_workshop()
    return make_colourway(make_grid_pattern(rows=ROWS, finish="centred"))


def cut(knotted_mm: float, ends_mm: float) -> int:
    """10 % safety, then up to the next whole centimetre, as a new workshop has it."""
    return ceil(round((knotted_mm * 1.1 + ends_mm) / 10, 6)) * 10


def test_lengths_of_a_centred_picture_by_hand(heart: Colourway, batch: Batch) -> None:
    make_order(batch, heart)
    snapshot = read_snapshot(make_plan(batch=batch, user=None))
    (kind,) = snapshot.kinds
    rows = ceil(kind.knotted_length_mm / (2 * D))
    assert kind.rows == rows
    assert kind.band_length_mm == round(rows * 2 * D)
    ends_mm = kind.making["ends_mm"][0]
    # Four cells are B's, and the leading strand passes behind them; it ties all others.
    leading = (rows * 5 - 4) * CELL + 4 * 2.5 * D + rows * 2 * D
    # Three cells side by side end in column 4 or 2, as the row is tied from the left or from
    # the right; the fourth stands a row lower in column 3, one column along either way.
    run = 4 * CELL + 2 * D + 2.5 * D
    assert [(piece.label, piece.cut_mm) for piece in kind.pieces] == [
        *((f"base strand {n}", cut(rows * 2 * D, ends_mm)) for n in range(1, 6)),
        ("leading strand", cut(leading, ends_mm)),
        ("run 1 of B", cut(run, 100)),
    ]


def test_pages_and_sheets_name_the_runs(page: Client, heart: Colourway, batch: Batch) -> None:
    make_order(batch, heart, quantity=2)
    plan = make_plan(batch=batch, user=None)
    for name in ("tags", "cutting", "purchase"):
        response = page.get(reverse("plan_sheet", args=[plan.pk, name, "pdf"]))
        assert response.status_code == 200
        text = "".join(
            part.extract_text() for part in PdfReader(io.BytesIO(response.content)).pages
        )
        if name == "tags":
            assert "lead" in text
            assert "run 1" in text
        if name == "cutting":
            assert "leading strand" in text
            assert "run 1 of B" in text
    bracelet = plan.bracelets.first()
    assert bracelet is not None
    shown = page.get(reverse("bracelet", args=[bracelet.pk])).content.decode()
    assert "Run 1 of B" in shown
    assert "passed behind" in shown
    assert "two tails" in shown
    assert page.get(reverse("plan_detail", args=[plan.pk])).status_code == 200


def test_runs_come_from_scraps(heart: Colourway, batch: Batch) -> None:
    """A remnant too short for any hanging strand serves a run; nothing of B is bought."""
    put_thread(heart.shades_by_slot()["B"], 170, 170, kind="remnant")
    make_order(batch, heart, quantity=2)
    plan = make_plan(batch=batch, user=None)
    shade = plan.shades.get(code=heart.shades_by_slot()["B"].code)
    assert (shade.bought, shade.unplaced) == (0, [])
    assert PlanPiece.objects.filter(shade=shade, stock__is_new=False).count() == 2


def test_picture_too_long_for_a_size_is_named(heart: Colourway, batch: Batch) -> None:
    heart.pattern.text = heart.pattern.text.replace("AAAAA\nABBBA", "AAAAA\n" * 120 + "ABBBA")
    heart.pattern.save()
    make_order(batch, heart)
    make_order(batch, make_colourway(make_grid_pattern("Other")))
    snapshot = read_snapshot(make_plan(batch=batch, user=None))
    assert len(snapshot.bracelets) == 1
    (problem,) = snapshot.problems
    assert problem.startswith("Row 1: The picture of 123 rows is 221 mm, longer than")


def test_tail_at_a_join_belongs_to_the_plan(heart: Colourway, batch: Batch) -> None:
    make_order(batch, heart)
    before = read_snapshot(make_plan(batch=batch, user=None)).kinds[0].pieces[-1].cut_mm
    Workshop.objects.update(join_tail_mm=100)
    plan = make_plan(batch=batch, user=None)
    assert read_snapshot(plan).kinds[0].pieces[-1].cut_mm == before + 100


def test_tag_of_hundreds_of_runs_names_how_many(page: Client, db: None, batch: Batch) -> None:
    """Cells that never touch, each cut by the maker's wish: a tag has no room for a line each."""
    make_ready_workshop()
    dots = make_grid_pattern("Dots", rows=("ABABABABAB", "AAAAAAAAAA"), carry="cut")
    make_order(batch, make_colourway(dots))
    plan = make_plan(batch=batch, user=None)
    (kind,) = read_snapshot(plan).kinds
    runs = [piece for piece in kind.pieces if piece.role == "run"]
    assert len(runs) == 5 * ceil(kind.rows / 2)
    response = page.get(reverse("plan_sheet", args=[plan.pk, "tags", "pdf"]))
    text = "".join(part.extract_text() for part in PdfReader(io.BytesIO(response.content)).pages)
    assert f"{len(runs)} runs" in text
    for name in ("cutting", "purchase"):
        assert page.get(reverse("plan_sheet", args=[plan.pk, name, "pdf"])).status_code == 200
