"""Purchase sheets, reopened: purchase.py."""

from dataclasses import replace
from decimal import Decimal

import pytest
from sheet_factories import HEAD, SHADES, order, purchase_row, purchase_sheet
from sheet_reading import all_text, overlapping, page_count, page_texts, runs

from planner.sheets.contents import MissingShade
from planner.sheets.paper import PAPERS
from planner.sheets.purchase import build_purchase_sheet

A4 = PAPERS["a4"]
PAPER_CASES = pytest.mark.parametrize("paper", PAPERS.values(), ids=PAPERS.keys())


def two_suppliers():
    return purchase_sheet(
        order("Quay Threads", purchase_row(0, 3), purchase_row(1, 5, "1.35")),
        order("Wool loft", purchase_row(2, 1, "12.50", put_up="spool of 100 m")),
    )


@PAPER_CASES
def test_sheet_answers_what_to_buy(paper):
    text = all_text(build_purchase_sheet(two_suppliers(), paper))
    assert "What to buy for Saltmarch harbour fair" in text
    # 3 x 1.20 + 5 x 1.35 = 10.35; 10.35 + 12.50 = 22.85
    assert "9 put-ups from 2 suppliers, 22.85" in text
    assert "ask for one dye lot of each shade" in text
    for words in ("Quay Threads", "Wool loft", "10.35", "22.85", "spool of 100 m", "each (EUR)"):
        assert words in text
    for code, name, _ in SHADES[:3]:
        assert code in text
        assert name in text
    assert "fewer than 3 is impossible" in text


def test_costs_in_the_column_add_up_to_its_sum():
    found = runs(build_purchase_sheet(two_suppliers(), A4))
    right = A4.width_pt - 16 / 25.4 * 72
    column = [
        Decimal(run.text)
        for run in found
        if abs(run.right - right) < 1.0 and run.text.replace(".", "").isdigit()
    ]
    assert column == [Decimal(c) for c in ("3.60", "6.75", "10.35", "12.50", "12.50")]


def test_nothing_to_buy_is_said_plainly():
    for sheet in (purchase_sheet(), purchase_sheet(order("Quay Threads"))):
        text = all_text(build_purchase_sheet(sheet, A4))
        assert "Nothing to buy: the thread on your shelf is enough." in text
        assert "Quay Threads" not in text


def test_sheet_that_lacks_shades_does_not_look_whole():
    missing = (MissingShade("T09", "Net green", "not worked out"),)
    for sheet, so_far in (
        (two_suppliers(), "So far 9 put-ups from 2 suppliers"),
        (purchase_sheet(), "So far nothing to buy."),
    ):
        text = all_text(build_purchase_sheet(replace(sheet, missing=missing), A4))
        assert "Not the whole purchase: 1 shade without a plan." in text
        assert so_far in text
        assert "is enough" not in text


def test_batch_without_a_date_gives_its_name():
    sheet = replace(two_suppliers(), head=replace(HEAD, market_date=None))
    assert "What to buy for Saltmarch harbour fair" in all_text(build_purchase_sheet(sheet, A4))


@PAPER_CASES
def test_long_order_repeats_its_supplier_on_each_page(paper):
    rows = [purchase_row(n % 6, n + 1, shade_code=f"K{n:03d}") for n in range(60)]
    document = build_purchase_sheet(purchase_sheet(order("Quay Threads", *rows)), paper)
    pages = page_texts(document)
    assert len(pages) > 2
    assert all("Quay Threads" in page for page in pages)
    codes = [run.text for run in runs(document) if run.text.startswith("K0")]
    assert codes == [f"K{n:03d}" for n in range(60)]
    for number, page in enumerate(pages, start=1):
        assert f"page {number} of {page_count(document)}" in page
        assert "Saltmarch harbour fair" in page
        assert "Saturday 5 December 2026" in page


@PAPER_CASES
@pytest.mark.parametrize("name", ["W" * 80, "Зимний вечер " * 7, "ערב\x00\x1b\n" * 20, ""])
def test_names_of_any_kind_never_run_into_each_other(paper, name):
    row = purchase_row(
        0, 9999, "99999.99", shade_code=name, shade_name=name, put_up=name, proof=name
    )
    sheet = replace(
        purchase_sheet(order(name, row, row), order(name, row), currency=name),
        head=replace(HEAD, workshop=name, batch=name, plan_label=name, market_date=None),
        notices=(name,),
    )
    found = runs(build_purchase_sheet(sheet, paper))
    assert overlapping(found) == []
    # Three rows, and the sum of the order that has one row.
    assert sum(run.text == "9999" for run in found) == 4


def test_proof_is_whole_beside_a_long_put_up():
    row = purchase_row(0, 3, put_up="W" * 80)
    text = all_text(build_purchase_sheet(purchase_sheet(order("Quay Threads", row)), A4))
    assert "… · fewer than 3 is impossible" in text
