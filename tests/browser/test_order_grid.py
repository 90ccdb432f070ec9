"""The order grid by keyboard and by pasting, as in a spreadsheet."""

import pytest
from django.contrib.auth.models import User
from playwright.sync_api import Page, expect

from planner.models import Batch, OrderLine
from planner.sample.load import load_sample
from tests.browser.conftest import PHONE, OpenPage
from tests.factories import make_batch

pytestmark = pytest.mark.django_db(transaction=True)

PASTE = """(text) => {
  const data = new DataTransfer();
  data.setData("text/plain", text);
  document.activeElement.dispatchEvent(
    new ClipboardEvent("paste", {clipboardData: data, bubbles: true, cancelable: true}));
}"""


@pytest.fixture
def batch(maker: User) -> Batch:
    load_sample()
    return make_batch("Grid fair")


@pytest.fixture
def grid(signed_in_page: Page, batch: Batch) -> Page:
    signed_in_page.goto(f"/orders/{batch.pk}/")
    return signed_in_page


def cell(page: Page, row: int, heading: str) -> object:
    return page.get_by_label(f"Row {row}, {heading}", exact=True)


def test_keys_move_like_a_spreadsheet(grid: Page) -> None:
    cell(grid, 1, "Pattern").focus()
    for key, row, heading in (
        ("ArrowDown", 2, "Pattern"),
        ("Enter", 3, "Pattern"),
        ("Shift+Enter", 2, "Pattern"),
        ("ArrowRight", 2, "Colourway"),
        ("ArrowUp", 1, "Colourway"),
        ("ArrowLeft", 1, "Pattern"),
        ("Tab", 1, "Colourway"),
    ):
        grid.keyboard.press(key)
        expect(cell(grid, row, heading)).to_be_focused()


def test_enter_in_the_last_row_adds_one(grid: Page) -> None:
    cell(grid, 5, "Pattern").focus()
    grid.keyboard.press("Enter")
    expect(cell(grid, 6, "Pattern")).to_be_focused()


def test_many_pasted_cells_fill_the_grid_and_are_saved(grid: Page, batch: Batch) -> None:
    rows = [f"Breakwater\tEvening\tMedium\t\t{number}" for number in range(1, 13)]
    cell(grid, 1, "Pattern").focus()
    grid.evaluate(PASTE, "\n".join(rows) + "\n")
    expect(cell(grid, 12, "How many")).to_have_value("12")
    expect(grid.get_by_text("12 rows pasted, not saved yet")).to_be_visible()
    grid.get_by_role("button", name="Save orders").click()
    expect(grid.get_by_text("78 bracelets in 12 orders")).to_be_visible()
    assert OrderLine.objects.filter(batch=batch).count() == 12


def test_wrong_rows_say_why_and_take_the_suggestion(grid: Page, batch: Batch) -> None:
    cell(grid, 1, "Pattern").fill("Breakwater")
    cell(grid, 1, "Colourway").fill("Evening")
    cell(grid, 1, "Size or wrist").fill("Larg")
    grid.get_by_role("button", name="Save orders").click()
    expect(grid.get_by_text("Did you mean Large?")).to_be_visible()
    assert not batch.lines.exists()
    grid.get_by_role("button", name="Use Large").click()
    grid.get_by_role("button", name="Save orders").click()
    expect(grid.get_by_text("1 bracelet in 1 order")).to_be_visible()


def test_plan_from_unsaved_rows_asks_to_save_first(grid: Page, batch: Batch) -> None:
    cell(grid, 1, "Pattern").fill("Breakwater")
    cell(grid, 1, "Colourway").fill("Evening")
    cell(grid, 1, "Size or wrist").fill("Large")
    grid.get_by_role("button", name="Save orders").click()
    cell(grid, 1, "How many").fill("2")
    grid.get_by_role("button", name="Make the plan").click()
    expect(grid.get_by_text("Save the orders first")).to_be_visible()
    assert not batch.plans.exists()


def test_grid_works_without_javascript(new_page: OpenPage, maker: User, batch: Batch) -> None:
    page = new_page(PHONE, user=maker, java_script_enabled=False)
    page.goto(f"/orders/{batch.pk}/")
    cell(page, 1, "Pattern").fill("Breakwater")
    cell(page, 1, "Colourway").fill("Evening")
    cell(page, 1, "Size or wrist").fill("16 cm")
    page.get_by_role("button", name="Save orders").click()
    assert batch.lines.get().size.name == "Medium"
