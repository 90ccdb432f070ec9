"""The order grid: saving all or nothing, and losing nothing."""

import re
from datetime import date

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.models import Workshop
from patterns.models import Colourway
from planner.models import Batch, OrderLine
from tests.factories import make_batch, make_order


def cells(number: int, **texts: str) -> dict[str, str]:
    return {f"row-{number}-{name}": text for name, text in texts.items()}


def good_cells(number: int, **changes: str) -> dict[str, str]:
    return cells(number, **{"pattern": "Wave", "size": "Medium"} | changes)


def post(page: Client, batch: Batch, *rows: dict[str, str], revision: int = 0) -> object:
    body = {"revision": str(revision)}
    for row in rows:
        body |= row
    return page.post(reverse("batch_detail", args=[batch.pk]), body)


def test_batch_new_opens_the_grid(page: Client, colourway: Colourway) -> None:
    response = page.post(reverse("batch_new"), {"name": "Quay fair", "market_date": "2026-12-05"})
    batch = Batch.objects.get()
    assert response.status_code == 302
    assert batch.market_date == date(2026, 12, 5)
    assert b"No orders yet" in page.get(response.url).content


@pytest.mark.parametrize(
    ("name", "market_date"),
    [("", "2026-12-05"), ("x" * 10_000, ""), ("Fair", "2026-02-30"), ("Fair", "soon"), ("\0", "")],
)
def test_batch_new_refuses_bad_input(
    page: Client, colourway: Colourway, name: str, market_date: str
) -> None:
    response = page.post(reverse("batch_new"), {"name": name, "market_date": market_date})
    assert response.status_code == 422
    assert not Batch.objects.exists()


def test_grid_saves_new_rows_in_order(page: Client, colourway: Colourway, batch: Batch) -> None:
    response = post(
        page,
        batch,
        good_cells(1, for_whom="the choir", quantity="3", due_date="2026-12-04"),
        good_cells(2, size="16 cm", note="wedding"),
        cells(3, pattern="", size=""),
    )
    assert response.status_code == 302
    first, second = OrderLine.objects.all()
    assert (first.for_whom, first.quantity, first.due_date) == ("the choir", 3, date(2026, 12, 4))
    assert (second.size.name, second.note, second.colourway) == ("Medium", "wedding", colourway)


def test_grid_with_one_bad_row_saves_nothing_and_keeps_the_text(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    response = post(page, batch, good_cells(1, note="kept"), good_cells(2, size="Larg"))
    assert response.status_code == 422
    assert not OrderLine.objects.exists()
    text = response.content.decode()
    assert "Did you mean Large?" in text
    assert 'value="kept"' in text
    assert 'value="Larg"' in text


def test_grid_changes_and_removes_saved_rows(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    lines = [make_order(batch, colourway, quantity=number) for number in (1, 2, 3)]
    post(
        page,
        batch,
        good_cells(1, line=str(lines[0].pk), quantity="7"),
        good_cells(2, line=str(lines[1].pk), gone="yes"),
        cells(3, line=str(lines[2].pk), pattern="", size=""),
    )
    assert [(line.pk, line.quantity) for line in batch.lines.all()] == [(lines[0].pk, 7)]


def test_grid_saved_elsewhere_meanwhile_is_kept_on_the_page(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    post(page, batch, good_cells(1), revision=0)
    response = post(page, batch, good_cells(1, note="mine"), revision=0)
    assert response.status_code == 422
    assert "another window" in response.content.decode()
    assert 'value="mine"' in response.content.decode()
    assert OrderLine.objects.count() == 1


def test_grid_does_not_touch_lines_of_another_batch(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    foreign = make_order(make_batch("Another"), colourway, quantity=2)
    response = post(page, batch, good_cells(1, line=str(foreign.pk), quantity="9"))
    assert response.status_code == 422
    post(page, batch, good_cells(1, line=str(foreign.pk), gone="yes"))
    foreign.refresh_from_db()
    assert foreign.quantity == 2


@pytest.mark.parametrize(
    "row",
    [
        {"quantity": "-2"},
        {"quantity": "0"},
        {"quantity": "1e3"},
        {"due_date": "2027-02-30"},
        {"pattern": "x" * 10_000},
        {"note": "n" * 501},
        {"for_whom": "\0"},
        {"for_whom": "\udcff"},
        {"colourway": "=cmd()"},
        {"line": "9" * 15},
        {"line": "-1; drop"},
    ],
)
def test_grid_hostile_cells_never_break_the_page(
    page: Client, colourway: Colourway, batch: Batch, row: dict[str, str]
) -> None:
    texts = {name: text.encode("utf-8", "replace").decode() for name, text in row.items()}
    response = post(page, batch, good_cells(1, **texts))
    assert response.status_code in (302, 422)
    assert OrderLine.objects.count() == (1 if response.status_code == 302 else 0)


def test_grid_keeps_right_to_left_text(page: Client, colourway: Colourway, batch: Batch) -> None:
    post(page, batch, good_cells(1, for_whom="שלום"))
    assert OrderLine.objects.get().for_whom == "שלום"


def test_grid_escapes_what_was_typed(page: Client, colourway: Colourway, batch: Batch) -> None:
    response = post(page, batch, good_cells(1, size="<script>alert(1)</script>"))
    assert b"<script>alert" not in response.content


@pytest.mark.parametrize("name", ["batch_list", "batch_new", "home", "workshop", "start_own"])
def test_pages_send_signed_out_people_to_the_door(client: Client, db: None, name: str) -> None:
    response = client.get(reverse(name))
    assert response.status_code == 302
    assert response.url.startswith(reverse("sign_in"))


@pytest.mark.parametrize("name", ["batch_list", "home"])
def test_pages_refuse_wrong_methods(page: Client, colourway: Colourway, name: str) -> None:
    assert page.post(reverse(name)).status_code == 405


def test_batch_pages_query_count_is_flat(page: Client, colourway: Colourway, batch: Batch) -> None:
    def queries(name: str, *arguments: int) -> int:
        with CaptureQueriesContext(connection) as captured:
            assert page.get(reverse(name, args=arguments)).status_code == 200
        return len(captured)

    def all_queries() -> list[int]:
        return [queries("batch_detail", batch.pk), queries("batch_list"), queries("home")]

    for _ in range(5):
        make_order(batch, colourway)
        make_batch("Other")
    before = all_queries()
    for _ in range(5):
        make_order(batch, colourway)
        make_batch("Other")
    assert all_queries() == before


def test_removed_orders_can_be_put_back(page: Client, colourway: Colourway, batch: Batch) -> None:
    line = make_order(batch, colourway, quantity=3, for_whom="the choir", note="blue")
    body = {"revision": "0"} | good_cells(1, line=str(line.pk), gone="yes")
    text = page.post(reverse("batch_detail", args=[batch.pk]), body, follow=True).content.decode()
    assert "Removed: 3 x Wave for the choir" in text
    assert not batch.lines.exists()
    fields = dict(re.findall(r'type="hidden" name="(row-[\w-]+)" value="([^"]*)"', text))
    page.post(reverse("lines_put_back", args=[batch.pk]), fields)
    back = batch.lines.get()
    assert (back.quantity, back.for_whom, back.note) == (3, "the choir", "blue")
    assert (back.colourway, back.size, back.ending) == (line.colourway, line.size, line.ending)


def test_grid_says_how_a_wrist_and_a_date_were_read(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    Workshop.objects.update(date_order="month")
    Batch.objects.update(market_date=date(2030, 12, 6))
    body = {"revision": "0"} | good_cells(1, size="16 cm", due_date="12/7/2030")
    text = page.post(reverse("batch_detail", args=[batch.pk]), body, follow=True).content.decode()
    assert batch.lines.get().due_date == date(2030, 12, 7)
    assert "Medium" in text
    assert "is after the market" in text
