"""The sheets of a saved plan, reopened and read."""

import csv
import io
import re
from collections import Counter
from collections.abc import Mapping
from decimal import Decimal
from typing import Any

import pypdfium2
import pytest
import zxingcpp
from django.test import Client
from django.urls import reverse
from openpyxl import load_workbook
from pypdf import PdfReader

from inventory.measures import format_number
from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, Plan, PlanPurchase
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


# As the text of a page reads: the cut's place, its length, the tag, the strands with their slot,
# and the fold of two strands.
CUT = re.compile(
    r"^\d+\n([\d.]+)\n(\d+)\n(?:(\d+ \+ \d+ [A-Z])\n([\d.]+)|(\d+ [A-Z]))$", re.MULTILINE
)


def test_cutting_sheet_has_every_cut_of_the_plan_once(page: Client, plan: Plan) -> None:
    text = text_of(sheet(page, plan, "cutting", "pdf"))
    written = Counter(
        (length, tag, folded or single, fold)
        for length, tag, folded, fold, single in CUT.findall(text)
    )
    snapshot = read_snapshot(plan)
    wanted: Counter[tuple[str, str, str, str]] = Counter()
    for bracelet in snapshot.bracelets:
        for piece in snapshot.kinds[bracelet.kind_index].pieces:
            strands = f"{' + '.join(map(str, piece.strands))} {piece.slot}"
            fold = format_number(piece.fold_mm, "cm") if piece.fold_mm else ""
            wanted[format_number(piece.cut_mm, "cm"), str(bracelet.number), strands, fold] += 1
    assert wanted.total() == plan.piece_count
    assert written == wanted


def test_purchase_lists_agree_with_the_plan(page: Client, plan: Plan) -> None:
    wanted = [
        (item.supplier_name, item.shade.code, item.count, item.unit_price, item.cost)
        for item in PlanPurchase.objects.filter(shade__plan=plan).select_related("shade")
    ]
    assert wanted
    lines = csv.DictReader(io.StringIO(sheet(page, plan, "purchase", "csv").decode("utf-8-sig")))
    assert sorted(_purchase_of(line) for line in lines) == sorted(wanted)
    cells = load_workbook(io.BytesIO(sheet(page, plan, "purchase", "xlsx"))).active
    header, *rows = cells.iter_rows(values_only=True)
    named = [dict(zip(header, row, strict=True)) for row in rows]
    bought = [row for row in named if row["Shade code"]]
    assert sorted(_purchase_of(row) for row in bought) == sorted(wanted)
    assert sum(cost for *_, cost in wanted) == plan.cost
    assert f"{plan.cost:.2f} EUR" in text_of(sheet(page, plan, "purchase", "pdf"))


def _purchase_of(row: Mapping[str, Any]) -> tuple[str, str, int, Decimal, Decimal]:
    def amount(name: str) -> Decimal:
        return Decimal(str(row[name])).quantize(Decimal("0.01"))

    count = int(row["How many"])
    return row["Supplier"], row["Shade code"], count, amount("Each (EUR)"), amount("Cost (EUR)")


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
