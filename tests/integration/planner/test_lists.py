"""Lists: preview first, nothing saved until confirmed, then all or none."""

from unittest.mock import patch

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.db import DatabaseError
from django.test import Client
from django.urls import reverse

from patterns.models import Colourway
from planner.models import Batch, OrderDraft, OrderLine
from tests.data_builders.bad_order_lists import BadOrderList, bad_order_lists

GOOD = "for whom\tpattern\tsize\thow many\nchoir\tWave\tMedium\t2\nstall\twave\t16 cm\t\n"
MIXED = GOOD + "café\tWafe\tMedium\t1\n"


def add(page: Client, batch: Batch, pasted: str) -> OrderDraft:
    response = page.post(reverse("list_add", args=[batch.pk]), {"pasted": pasted})
    assert response.status_code == 302, response.content.decode()
    return OrderDraft.objects.latest("pk")


def confirm(page: Client, draft: OrderDraft) -> object:
    return page.post(reverse("list_confirm", args=[draft.batch_id, draft.pk]))


def check_page(page: Client, draft: OrderDraft) -> str:
    response = page.get(reverse("list_check", args=[draft.batch_id, draft.pk]))
    assert response.status_code == 200
    return response.content.decode()


def test_list_is_shown_before_anything_is_saved(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    draft = add(page, batch, MIXED)
    text = check_page(page, draft)
    assert "2 orders" in text
    assert "1 row needs a look" in text
    assert "Did you mean Wave?" in text
    assert not OrderLine.objects.exists()


def test_list_confirmed_adds_the_good_rows_and_keeps_the_bad(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    draft = add(page, batch, MIXED)
    confirm(page, draft)
    assert [line.for_whom for line in batch.lines.all()] == ["choir", "stall"]
    draft.refresh_from_db()
    assert [row["number"] for row in draft.rows] == [4]


def test_list_corrected_by_the_suggestion(page: Client, colourway: Colourway, batch: Batch) -> None:
    draft = add(page, batch, MIXED)
    page.post(reverse("list_check", args=[batch.pk, draft.pk]), {"use": "4|pattern|Wave"})
    assert "need" not in check_page(page, draft).split("answer")[1].split("</p>")[0]
    confirm(page, draft)
    assert batch.lines.count() == 3
    assert not OrderDraft.objects.exists()


def test_list_checked_again_unchanged_keeps_the_problem_of_a_whole_row(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    draft = add(page, batch, "pattern\tsize\nWave\tMedium\textra\tcells\n")
    cells = {f"row-2-{name}": text for name, text in draft.rows[0]["cells"].items()}
    address = reverse("list_check", args=[batch.pk, draft.pk])
    page.post(address, cells)
    assert "0 orders" in check_page(page, draft)
    page.post(address, cells | {"row-2-note": "as meant"})
    assert "1 order " in check_page(page, draft)


def test_list_confirmed_twice_adds_once(page: Client, colourway: Colourway, batch: Batch) -> None:
    draft = add(page, batch, GOOD)
    confirm(page, draft)
    assert confirm(page, draft).status_code == 302
    assert batch.lines.count() == 2


def test_list_confirm_that_fails_half_way_saves_nothing(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    draft = add(page, batch, GOOD)
    with patch.object(OrderDraft, "delete", side_effect=DatabaseError("disk full")):
        assert confirm(page, draft).status_code == 500
    assert not OrderLine.objects.exists()
    assert OrderDraft.objects.filter(pk=draft.pk).exists()


def test_list_put_away_orders_nothing(page: Client, colourway: Colourway, batch: Batch) -> None:
    draft = add(page, batch, GOOD)
    page.post(reverse("list_discard", args=[batch.pk, draft.pk]))
    assert not OrderDraft.objects.exists()
    assert not OrderLine.objects.exists()


def test_list_refused_keeps_the_pasted_text(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    response = page.post(
        reverse("list_add", args=[batch.pk]), {"pasted": "note\tcolour\nkept\tred\n"}
    )
    assert response.status_code == 422
    assert "kept" in response.content.decode()


def test_list_of_another_batch_is_not_found(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    draft = add(page, batch, GOOD)
    other = Batch.objects.create(name="Other")
    assert page.get(reverse("list_check", args=[other.pk, draft.pk])).status_code == 404
    page.post(reverse("list_confirm", args=[other.pk, draft.pk]))
    assert not OrderLine.objects.exists()


BAD = bad_order_lists()


def test_there_are_300_bad_lists() -> None:
    assert len(BAD) >= 300


@pytest.mark.parametrize("chunk", range(6))
def test_bad_lists_never_break_the_page_and_save_nothing(
    page: Client, colourway: Colourway, batch: Batch, chunk: int
) -> None:
    for bad in BAD[chunk::6]:
        response = page.post(reverse("list_add", args=[batch.pk]), _body(bad))
        assert response.status_code in (302, 400, 413, 422), bad.name
        if response.status_code == 302:
            assert page.get(response.url).status_code == 200, bad.name
        assert not OrderLine.objects.exists(), bad.name
        if bad.outcome == "refused":
            assert response.status_code != 302, bad.name
        if bad.outcome == "bad rows":
            draft = OrderDraft.objects.latest("pk")
            confirm(page, draft)
            assert batch.lines.count() == len(bad.good_rows), bad.name
            batch.lines.all().delete()


def _body(bad: BadOrderList) -> dict[str, object]:
    if bad.text is not None:
        # A browser sends U+FFFD for half a character.
        text = bad.text.encode("utf-16", "surrogatepass").decode("utf-16", "replace")
        return {"pasted": text}
    name = bad.filename or "list"
    return {"pasted": "", "file": SimpleUploadedFile(name, bad.data)}
