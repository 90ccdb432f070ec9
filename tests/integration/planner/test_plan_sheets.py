"""The sheets of a saved plan, reopened and read."""

import csv
import io
import re
from collections import Counter
from decimal import Decimal

import pypdfium2
import pytest
import zxingcpp
from django.test import Client
from django.urls import reverse
from openpyxl import load_workbook
from pypdf import PdfReader

from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, Plan
from planner.plans.store import read_snapshot
from tests.factories import make_order, put_thread


@pytest.fixture
def plan(colourway: Colourway, batch: Batch) -> Plan:
    put_thread(colourway.shades_by_slot()["A"], 2_500, 900, 400)
    make_order(batch, colourway, quantity=9, for_whom="the choir")
    make_order(batch, colourway, quantity=4, ending="Folded start, plaited end", size="Child")
    return make_plan(batch=batch, user=None)


def sheet(page: Client, plan: Plan, name: str, ending: str, **query: str) -> bytes:
    response = page.get(reverse("plan_sheet", args=[plan.pk, name, ending]), query)
    assert response.status_code == 200
    return response.content


def text_of(pdf: bytes) -> str:
    return "\n".join(page.extract_text() for page in PdfReader(io.BytesIO(pdf)).pages)


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_tags_every_code_opens_its_own_bracelet(page: Client, plan: Plan, paper: str) -> None:
    document = pypdfium2.PdfDocument(sheet(page, plan, "tags", "pdf", paper=paper))
    decoded: Counter[str] = Counter()
    for index in range(len(document)):
        image = document[index].render(scale=203 / 72).to_pil()
        decoded.update(code.text for code in zxingcpp.read_barcodes(image))
    wanted = {f"http://testserver/b/{key}/" for key in plan.bracelets.values_list("pk", flat=True)}
    assert decoded == Counter(wanted)
    for address in decoded:
        assert page.get(address.removeprefix("http://testserver")).status_code == 200


def test_cutting_sheet_has_every_piece_once(page: Client, plan: Plan) -> None:
    text = text_of(sheet(page, plan, "cutting", "pdf"))
    snapshot = read_snapshot(plan)
    pieces = [
        piece
        for bracelet in snapshot.bracelets
        for piece in snapshot.kinds[bracelet.kind_index].pieces
    ]
    assert len(pieces) == plan.piece_count
    for shade in plan.shades.all():
        assert shade.code in text
    written = Counter(re.findall(r"^\d+(?: \+ \d+)? [A-Z]$", text, re.MULTILINE))
    wanted = Counter(f"{' + '.join(map(str, piece.strands))} {piece.slot}" for piece in pieces)
    assert written == wanted


def test_purchase_lists_agree_with_the_plan(page: Client, plan: Plan) -> None:
    rows = list(csv.reader(io.StringIO(sheet(page, plan, "purchase", "csv").decode("utf-8-sig"))))
    header, body = rows[0], rows[1:]
    bought = {shade.code: shade.bought for shade in plan.shades.all() if shade.bought}
    code_column = next(i for i, name in enumerate(header) if "code" in name.lower())
    assert {row[code_column] for row in body} >= set(bought)
    workbook = load_workbook(io.BytesIO(sheet(page, plan, "purchase", "xlsx")))
    numbers = [
        Decimal(str(cell)).quantize(Decimal("0.01"))
        for row in workbook.active.iter_rows(values_only=True)
        for cell in row
        if isinstance(cell, int | float | Decimal)
    ]
    assert plan.cost in numbers or sum(bought.values()) in numbers
    assert re.search(rf"{plan.cost:.2f}", text_of(sheet(page, plan, "purchase", "pdf")))


@pytest.mark.parametrize(
    ("name", "ending"),
    [
        ("purchase", "pdf"),
        ("cutting", "pdf"),
        ("tags", "pdf"),
        ("purchase", "csv"),
        ("purchase", "xlsx"),
    ],
)
def test_sheets_are_the_same_bytes_each_time(
    page: Client, plan: Plan, name: str, ending: str
) -> None:
    assert sheet(page, plan, name, ending) == sheet(page, plan, name, ending)


def test_unknown_sheet_is_not_found(page: Client, plan: Plan) -> None:
    for name, ending in (("tags", "csv"), ("secrets", "pdf")):
        address = reverse("plan_sheet", args=[plan.pk, name, ending])
        assert page.get(address).status_code == 404


def test_sheets_need_sign_in(client: Client, plan: Plan) -> None:
    address = reverse("plan_sheet", args=[plan.pk, "tags", "pdf"])
    assert client.get(address).status_code == 302
