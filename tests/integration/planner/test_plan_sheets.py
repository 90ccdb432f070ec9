"""The sheets of a saved plan, reopened and read."""

import csv
import io
import re
from collections import Counter
from collections.abc import Iterator, Mapping
from decimal import Decimal
from typing import Any

import pypdfium2
import pytest
import zxingcpp
from django.test import Client
from django.urls import reverse
from openpyxl import load_workbook
from pypdf import PdfReader

from patterns.models import Colourway
from planner.actions import make_plan
from planner.models import Batch, Plan, PlanPurchase
from planner.planning.snapshot import Snapshot
from planner.plans.store import read_snapshot
from planner.views import plans
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


# As the text of the pages reads. A shade: its code over what there is to cut from. A thread, or
# several cut alike: its reckoned length, then its source. A row of cuts: its length, how often it
# is cut from each thread (not told again in a further row), tags, strands with their slot, fold.
CUTTING_LINE = re.compile(
    r"^(?P<shade>\S+)\n(?:\(continued\)|\d+ threads? to cut from)$"
    r"|to count on\n(?P<source>.+?)(?: \(continued\))?$"
    r"|^(?P<length>[\d.]+)\n(?:× (?P<each>\d+)\n)?(?P<tags>\d[\d, –]*)\n"
    r"(?P<strands>\d+(?P<other> \+ \d+)?(?:, [\d +]+)*)  ?(?P<slot>[A-Z])$"
    r"(?(other)\n(?P<fold>[\d.]+)$)",
    re.MULTILINE,
)
Cut = tuple[int, str, str, int, int | None]
Threads = tuple[str, tuple[str, ...]]
TagPiece = tuple[str, str, int, int | None]


def test_cutting_sheet_has_every_cut_of_the_plan_once(page: Client, plan: Plan) -> None:
    _check_cuts(page, plan)


def test_skeins_cut_alike_are_on_the_cutting_sheet_once(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    """Their pieces are listed together: equal lengths of one lot are interchangeable."""
    make_order(batch, colourway, quantity=60)
    written = _check_cuts(page, make_plan(batch=batch, user=None))
    assert any(len(names) > 1 for _, names in written)


def _check_cuts(page: Client, plan: Plan) -> dict[Threads, list[Cut]]:
    written = _cuts_written(text_of(sheet(page, plan, "cutting", "pdf")))
    wanted = dict(_cuts_planned(read_snapshot(plan)))
    assert sum(len(cuts) for cuts in wanted.values()) == plan.piece_count
    named = [(shade, name) for shade, names in written for name in names]
    assert Counter(named) == Counter(list(wanted))
    for (shade, names), cuts in written.items():
        own = [wanted[shade, name] for name in names]
        assert Counter(cuts) == Counter(cut for each in own for cut in each)
        lengths = [sorted(cut[3] for cut in each) for each in own]
        assert lengths == [lengths[0]] * len(own)
    return written


def _cuts_written(text: str) -> dict[Threads, list[Cut]]:
    found: dict[Threads, list[Cut]] = {}
    shade = ""
    threads: Threads = ("", ())
    for line in CUTTING_LINE.finditer(text):
        shade = line["shade"] or shade
        if line["source"]:
            threads = shade, tuple(_names(line["source"]))
            found.setdefault(threads, [])
        if line["length"]:
            found[threads] += _cuts_of_row(line)
    return found


def _names(source: str) -> Iterator[str]:
    """Two and more are named together: "New thread 2 to 5: ...", "Pieces 4, 7: ..."."""
    name, _, numbers = source.partition(":")[0].rpartition("thread ")
    word = "new thread" if name else "piece"
    for part in (numbers if name else source.partition(":")[0].partition(" ")[2]).split(", "):
        first, _, last = part.partition(" to ")
        yield from (f"{word} {number}" for number in range(int(first), int(last or first) + 1))


def _cuts_of_row(line: re.Match[str]) -> Iterator[Cut]:
    for part in line["tags"].split(", "):
        first, _, last = part.partition("–")
        for tag in range(int(first), int(last or first) + 1):
            for strands in line["strands"].split(", "):
                fold = _whole_mm(line["fold"]) if line["fold"] else None
                yield tag, strands, line["slot"], _whole_mm(line["length"]), fold


def _whole_mm(centimetres: str) -> int:
    length_mm = Decimal(centimetres) * 10
    assert length_mm == int(length_mm)
    return int(length_mm)


def _cuts_planned(snapshot: Snapshot) -> Iterator[tuple[tuple[str, str], list[Cut]]]:
    kinds = {
        bracelet.number: snapshot.kinds[bracelet.kind_index] for bracelet in snapshot.bracelets
    }
    for shade in snapshot.shades:
        for stock in shade.stock:
            cuts = []
            for cut in stock.cuts:
                piece = kinds[cut.tag_number].pieces[cut.piece_index]
                strands = " + ".join(map(str, piece.strands))
                cuts.append((cut.tag_number, strands, piece.slot, cut.cut_mm, piece.fold_mm))
            yield (shade.code, stock.source.partition(":")[0]), cuts


# A tag: its number over the pattern's name. A piece: slot, strands, shade's code and name, length
# and, where it is folded, the fold.
TAG_LINE = re.compile(
    r"^(?P<tag>\d+)\nWave$"
    r"|^(?P<slot>[A-Z])\n(?P<strands>\d+(?: \+ \d+)?)\n\S+\n.+\n(?P<length>[\d.]+)"
    r"(?:\n(?P<fold>[\d.]+))?$",
    re.MULTILINE,
)


def test_tags_show_the_pieces_of_the_plan(page: Client, plan: Plan) -> None:
    """Six strands all forward, 0.9 mm, 10 % safety, up to 10 mm.

    Straight, 140 mm: see `test_plan_of_one_bracelet_worked_by_hand`. Folded, 110 mm: strands 1 to
    6 with safety take 518.7, 499.5, 518.7, 490.7, 499.5 and 490.7 mm and an end of 245 mm each, a
    pair 50 mm of loop. 1 and 2: 1558.2, so 1560; the fold leaves 788.7 for strand 1 and 769.5 for
    strand 2, so from 789 to 790 mm: on the step at 790. 3 and 4: 1549.4, so 1550, the fold from
    789 to 789 mm. 5 and 6: 1530.2, so 1540, from 770 to 779 mm: at 770.
    """
    tags = _tags_written(text_of(sheet(page, plan, "tags", "pdf")))
    straight, folded = plan.bracelets.get(number=1), plan.bracelets.get(number=10)
    assert tags[straight.number] == [
        ("A", "1", 1_050, None),
        ("A", "2", 1_030, None),
        ("B", "3", 1_050, None),
        ("B", "4", 1_030, None),
        ("C", "5", 1_040, None),
        ("C", "6", 1_030, None),
    ]
    assert tags[folded.number] == [
        ("A", "1 + 2", 1_560, 790),
        ("B", "3 + 4", 1_550, 789),
        ("C", "5 + 6", 1_540, 770),
    ]
    snapshot = read_snapshot(plan)
    for bracelet in (straight, folded):
        kept = snapshot.kinds[snapshot.bracelets[bracelet.number - 1].kind_index].pieces
        shown = [(cut_mm, fold_mm) for *_, cut_mm, fold_mm in tags[bracelet.number]]
        assert shown == [(piece.cut_mm, piece.fold_mm) for piece in kept]
        assert [cut_mm for cut_mm, _ in shown] == [
            piece.cut_mm for piece in bracelet.pieces.order_by("index")
        ]
    assert len(tags) == plan.bracelet_count


def _tags_written(text: str) -> dict[int, list[TagPiece]]:
    tags: dict[int, list[TagPiece]] = {}
    number = 0
    for line in TAG_LINE.finditer(text):
        if line["tag"]:
            number = int(line["tag"])
            tags[number] = []
        else:
            fold_mm = _whole_mm(line["fold"]) if line["fold"] else None
            tags[number].append((line["slot"], line["strands"], _whole_mm(line["length"]), fold_mm))
    return tags


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
    (sums,) = [row for row in named if not row["Shade code"]]
    assert sums["How many"] == sum(count for _, _, count, *_ in wanted)
    assert Decimal(str(sums["Cost (EUR)"])) == plan.cost
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


@pytest.mark.parametrize("name", ["tags", "cutting", "purchase"])
def test_sheet_of_many_bracelets_is_sent_as_it_is_drawn(
    page: Client, plan: Plan, monkeypatch: pytest.MonkeyPatch, name: str
) -> None:
    whole = page.get(reverse("plan_sheet", args=[plan.pk, name, "pdf"]))
    monkeypatch.setattr(plans, "STREAMED_FROM", 1)
    streamed = page.get(reverse("plan_sheet", args=[plan.pk, name, "pdf"]))
    assert (whole.streaming, streamed.streaming) == (False, True)
    assert b"".join(streamed.streaming_content) == whole.content  # type: ignore[arg-type]
    assert streamed["Content-Disposition"] == whole["Content-Disposition"]
