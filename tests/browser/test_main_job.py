"""The main job in a real browser: as a new user with the sample, and from an empty workshop."""

import csv
import io
import re
from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import Page, expect

from planner.models import Batch, OrderLine, Plan

pytestmark = pytest.mark.django_db(transaction=True)

LIST = Path(__file__).parents[2] / "planner" / "sample" / "saturday_market.csv"
Check = Callable[[Page], None]


class ClickCounter:
    """Clicks links and buttons by what stands on them, and counts."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.clicks = 0

    def click(self, role: str, name: str) -> None:
        self.page.get_by_role(role, name=name, exact=True).click()  # type: ignore[arg-type]
        self.clicks += 1

    def open_pdf(self, name: str) -> bytes:
        link = self.page.get_by_role("link", name=name, exact=True)
        address = link.get_attribute("href")
        with self.page.context.expect_event(
            "response", lambda response: str(address) in response.url
        ) as caught:
            link.click()
        self.clicks += 1
        assert caught.value.status == 200
        assert caught.value.headers["content-type"] == "application/pdf"
        return self.page.request.get(str(address)).body()


def tab_separated(rows: str) -> str:
    return "\n".join("\t".join(row) for row in csv.reader(io.StringIO(rows)))


def test_sample_workshop_from_paste_to_three_sheets(signed_in_page: Page, axe: Check) -> None:
    page = signed_in_page
    page.goto("/")
    axe(page)
    page.get_by_role("button", name="Open the sample workshop").click()
    expect(page.get_by_role("heading", name="What is next?")).to_be_visible()
    axe(page)
    page.get_by_role("link", name="New batch of orders").click()
    axe(page)
    page.get_by_label("What is this batch for?").fill("Next fair")
    page.get_by_role("button", name="Start the batch").click()
    axe(page)
    page.get_by_role("link", name="Paste or upload a list").click()
    axe(page)
    page.get_by_label("Paste here").fill(tab_separated(LIST.read_text(encoding="utf-8")))

    counter = ClickCounter(page)
    counter.click("button", "Look it through")
    expect(page.get_by_role("heading", name="Are these the orders you mean?")).to_be_visible()
    axe(page)
    assert not OrderLine.objects.filter(batch__name="Next fair").exists()
    counter.click("button", "Add 40 orders")
    axe(page)
    counter.click("button", "Make the plan")
    expect(page.get_by_role("heading", name="What do I buy for Next fair?")).to_be_visible()
    axe(page)
    for name in ("Purchase sheet", "Cutting sheet", "Cut tags"):
        assert counter.open_pdf(name).startswith(b"%PDF-")
    assert counter.clicks <= 6
    assert (
        Plan.objects.get().bracelet_count
        == Batch.objects.get(name="Next fair").lines.bracelet_count()
    )


def add_shade(page: Page, code: str, name: str) -> None:
    page.goto("/shelf/")
    page.get_by_role("link", name=re.compile("Add (a|your first) shade")).first.click()
    page.get_by_label("Code").fill(code)
    page.get_by_label("Name", exact=True).fill(name)
    page.get_by_role("button", name="Add the shade").click()


def add_put_up(page: Page) -> None:
    page.get_by_label("Name", exact=True).fill("8 m skein")
    page.get_by_label("Supplier").fill("Quay Threads")
    page.get_by_label("Length", exact=True).fill("8 m")
    page.get_by_label("Price").fill("1,20")
    page.get_by_role("button", name="Add the put-up").click()


PATTERN = '''name = "Ferry stripe"
technique = "diagonal"
strands = "A A B B"
rows = """
f f
f
"""
'''


def test_empty_workshop_to_a_plan_with_one_order_by_hand(
    signed_in_page: Page, axe: Check, tmp_path: Path
) -> None:
    page = signed_in_page
    page.goto("/")
    page.get_by_role("link", name="Start my own").click()
    axe(page)
    page.get_by_label("What is your workshop called?").fill("Sandpiper Knots")
    page.get_by_role("button", name="Start the workshop").click()
    axe(page)
    for code, name in (("SP1", "Sand"), ("SP2", "Slate")):
        add_shade(page, code, name)
        axe(page)
    page.goto("/")
    page.get_by_role("link", name="Say how your thread is sold").click()
    axe(page)
    add_put_up(page)
    axe(page)
    page.goto("/")
    page.get_by_role("link", name="Add a pattern").click()
    axe(page)
    file = tmp_path / "ferry.toml"
    file.write_text(PATTERN)
    add_pattern_file(page, file)
    axe(page)
    page.get_by_role("link", name="Choose its shades").first.click()
    axe(page)
    page.get_by_label("Name of the colourway").fill("Shore")
    for slot, shade in (("A", "SP1 Sand"), ("B", "SP2 Slate")):
        choice = page.get_by_label(f"{slot}: strand")
        value = choice.locator("option", has_text=shade).get_attribute("value")
        choice.select_option(value)
    page.get_by_role("button", name="Save the colourway").click()
    axe(page)
    page.get_by_role("link", name="Put it in an order").click()
    page.get_by_role("link", name="New batch of orders").click()
    page.get_by_label("What is this batch for?").fill("First fair")
    page.keyboard.press("Enter")
    page.get_by_label("Row 1, For whom").focus()
    for text in ("the choir", "ferry stripe", "shore", "16 cm", ""):
        page.keyboard.type(text)
        page.keyboard.press("Tab")
    page.keyboard.type("3")
    page.keyboard.press("Enter")
    expect(page.get_by_label("Row 2, How many")).to_be_focused()
    page.get_by_role("button", name="Save orders").click()
    expect(page.get_by_text("3 bracelets in 1 order")).to_be_visible()
    axe(page)
    page.get_by_role("button", name="Make the plan").click()
    expect(page.get_by_text("2 skeins for €2.40. Cheaper is impossible.")).to_be_visible()
    axe(page)
    page.get_by_role("link", name="SP1 Sand").click()
    expect(page.get_by_text("In which order do I cut?")).to_be_visible()
    axe(page)
    page.get_by_role("link", name="3 bracelets").click()
    axe(page)
    page.get_by_role("link", name="1", exact=True).click()
    expect(page.get_by_role("heading", name="Tag 1")).to_be_visible()
    axe(page)


def add_pattern_file(page: Page, file: Path) -> None:
    page.get_by_role("link", name="Choose files").click()
    page.get_by_label("Choose pattern files, or a ZIP of them").set_input_files(file)
    page.get_by_role("button", name="Look at them").click()
    page.get_by_role("button", name="Do so").click()
