"""Painting a grid pattern on a phone and with keys, saving it, and never losing it."""

from collections.abc import Callable
from typing import Any

import pytest
from django.contrib.auth.models import User
from playwright.sync_api import Locator, Page, expect

from patterns.alphabet import lettering
from patterns.grid import GridPattern
from patterns.models import Pattern
from planner.sample.load import load_sample
from tests.browser.conftest import DESK, PHONE, OpenPage

pytestmark = pytest.mark.django_db(transaction=True)

COLUMNS, ROWS = 9, 40
NEW_GRID = "/patterns/new/draw/?technique=grid"


@pytest.fixture
def workshop(maker: User) -> None:
    load_sample()


@pytest.fixture
def phone(new_page: OpenPage, maker: User, workshop: None) -> Page:
    page = new_page(PHONE, user=maker, has_touch=True, is_mobile=True)
    page.goto(NEW_GRID)
    return page


@pytest.fixture
def desk(new_page: OpenPage, maker: User, workshop: None) -> Page:
    page = new_page(DESK, user=maker)
    page.goto(NEW_GRID)
    return page


def chart(page: Page) -> Locator:
    return page.get_by_label("Chart of the pattern, cell by cell")


def said(page: Page) -> Locator:
    return page.locator("[data-board] [data-said]")


def cell(page: Page, row: int, column: int) -> Locator:
    """Cells are drawn row by row; rows and columns count from 1."""
    return page.locator(".grid-cells rect").nth((row - 1) * COLUMNS + column - 1)


def show_row(page: Page, row: int) -> None:
    """Scroll a row into the middle of the screen, away from the bar at its top."""
    cell(page, row, 1).evaluate("(cell) => cell.scrollIntoView({block: 'center'})")


def middle_of(page: Page, row: int, column: int) -> tuple[float, float]:
    """Where a cell stands on the screen."""
    box = cell(page, row, column).bounding_box()
    assert box is not None
    return box["x"] + box["width"] / 2, box["y"] + box["height"] / 2


def tap(page: Page, row: int, column: int) -> None:
    show_row(page, row)
    page.touchscreen.tap(*middle_of(page, row, column))


def drag(page: Page, *fingers: list[tuple[float, float]]) -> None:
    """Move fingers over the screen as a hand does: each along its own list of places."""
    touch = page.context.new_cdp_session(page)

    def send(kind: str, step: int) -> None:
        points = [{"x": f[step][0], "y": f[step][1], "id": i} for i, f in enumerate(fingers)]
        touch.send("Input.dispatchTouchEvent", {"type": kind, "touchPoints": points})

    send("touchStart", 0)
    for step in range(1, len(fingers[0])):
        send("touchMove", step)
    page.wait_for_timeout(150)  # a finger that is lifted at speed would swallow the next tap
    touch.send("Input.dispatchTouchEvent", {"type": "touchEnd", "touchPoints": []})


def drawn(page: Page) -> list[str]:
    """The chart's cells by their slots, row by row, a dot for the background."""
    cells = page.locator(".grid-cells rect")
    rows = cells.evaluate_all("(all) => all.map((cell) => cell.dataset.slot).join('')")
    rows = rows.replace("A", ".")
    return [rows[at : at + COLUMNS] for at in range(0, len(rows), COLUMNS)]


def rows_of(definition: Any) -> list[str]:
    assert isinstance(definition, GridPattern)
    return ["".join(row).replace(definition.background, ".") for row in definition.rows]


def undo_all(page: Page) -> int:
    undo = page.get_by_role("button", name="Undo", exact=True)
    steps = 0
    while undo.is_enabled():
        undo.click()
        steps += 1
    return steps


def test_a_word_is_painted_on_a_phone_and_saved(phone: Page) -> None:
    phone.get_by_label("Name", exact=True).fill("Ida's band")
    tap(phone, 1, 2)
    expect(said(phone)).to_have_text("Row 1, column 2: B")
    drag(phone, [middle_of(phone, 3, column) for column in range(2, 8)])
    phone.get_by_text("Write words into the band").tap()
    phone.get_by_label("Words", exact=True).fill("Ida")
    expect(phone.get_by_text("The words take 13 rows and 5 columns")).to_be_visible()
    phone.get_by_role("button", name="Set the words in").tap()
    phone.get_by_role("button", name="Save", exact=True).tap()
    expect(phone.get_by_text("Ida's band is in your library.")).to_be_visible()

    wanted = [["."] * COLUMNS for _ in range(ROWS)]
    wanted[0][1] = "B"
    wanted[2][1:7] = ["B"] * 6
    picture = lettering("Ida", 5, "along")
    for row, lit in enumerate(picture, start=(ROWS - len(picture)) // 2):
        for column, is_lit in enumerate(lit, start=(COLUMNS - 5) // 2):
            if is_lit:
                wanted[row][column] = "B"
    saved = rows_of(Pattern.objects.get(name="Ida's band").definition)
    assert saved == ["".join(row) for row in wanted]
    assert drawn(phone) == saved


def test_one_drag_is_one_step_and_all_is_undone_and_done_again(phone: Page) -> None:
    empty = drawn(phone)
    assert empty == ["." * COLUMNS] * ROWS
    tap(phone, 2, 2)
    drag(phone, [middle_of(phone, row, 4) for row in range(1, 7)])
    phone.get_by_text("Fill an area").tap()
    tap(phone, 10, 1)
    full = drawn(phone)
    assert "." not in "".join(full)
    assert undo_all(phone) == 3
    assert drawn(phone) == empty
    redo = phone.get_by_role("button", name="Redo", exact=True)
    for _ in range(3):
        redo.tap()
    assert drawn(phone) == full


def test_a_quick_finger_leaves_no_gap(phone: Page) -> None:
    show_row(phone, 2)
    drag(phone, [middle_of(phone, 2, 1), middle_of(phone, 2, 9)])
    assert drawn(phone)[1] == "B" * COLUMNS


def test_a_reload_in_the_middle_loses_nothing(phone: Page) -> None:
    tap(phone, 1, 1)
    drag(phone, [middle_of(phone, 2, column) for column in range(1, 5)])
    before = drawn(phone)
    phone.on("dialog", lambda dialog: dialog.accept())
    phone.reload()
    assert drawn(phone) == before
    expect(phone.get_by_text("Your unsaved work of")).to_be_visible()
    assert undo_all(phone) == 2
    assert drawn(phone) == ["." * COLUMNS] * ROWS


def scrolled(page: Page) -> float:
    return page.locator("[data-chart]").evaluate("(box) => box.scrollTop + window.scrollY")


def upwards(x: float, y: float) -> list[tuple[float, float]]:
    return [(x, y - 8 * step) for step in range(12)]


def test_two_fingers_scroll_and_do_not_paint(phone: Page) -> None:
    show_row(phone, 12)
    before = scrolled(phone)
    drag(phone, *(upwards(*middle_of(phone, 12, column)) for column in (2, 7)))
    assert scrolled(phone) > before + 40
    assert drawn(phone) == ["." * COLUMNS] * ROWS


def test_one_finger_scrolls_by_the_numbers(phone: Page) -> None:
    show_row(phone, 12)
    before = scrolled(phone)
    x, y = middle_of(phone, 12, 1)
    drag(phone, upwards(x - 28, y))
    assert scrolled(phone) > before + 40
    assert drawn(phone) == ["." * COLUMNS] * ROWS


def test_one_finger_scrolls_with_the_chart_in_hand(phone: Page) -> None:
    phone.get_by_text("Move the chart").tap()
    show_row(phone, 12)
    before = scrolled(phone)
    drag(phone, upwards(*middle_of(phone, 12, 5)))
    assert scrolled(phone) > before + 40
    assert drawn(phone) == ["." * COLUMNS] * ROWS


def test_words_are_dragged_to_their_place(phone: Page) -> None:
    phone.get_by_text("Write words into the band").tap()
    phone.get_by_label("Words", exact=True).fill("I")
    start = (ROWS - 3) // 2 + 1
    show_row(phone, start)
    path = [middle_of(phone, start + step, 4 - step) for step in range(3)]
    drag(phone, path)
    phone.get_by_role("button", name="Set the words in").tap()
    rows = drawn(phone)
    assert rows[start + 1 : start + 4] == ["B...B....", "BBBBB....", "B...B...."]
    assert "".join(rows).count("B") == 9


def press(page: Page, *keys: str) -> None:
    for key in keys:
        page.keyboard.press(key)


def test_a_picture_is_painted_with_keys_alone(desk: Page) -> None:
    chart(desk).focus()
    press(desk, "ArrowDown", "ArrowRight", "c")
    expect(said(desk)).to_have_text("Row 2, column 2: C")
    press(desk, "Shift+ArrowRight", "Shift+ArrowDown", "End", "Space", "Home", "d", "Backspace")
    desk.get_by_label("Fill a rectangle").check()
    chart(desk).focus()
    press(desk, "ArrowDown", "ArrowDown", "Enter", "ArrowRight", "ArrowRight", "ArrowDown", "Enter")
    desk.get_by_label("Fill an area").check()
    chart(desk).focus()
    press(desk, "PageDown", "Space", "Control+z", "PageUp", "Escape", "ArrowUp")
    assert drawn(desk)[:7] == [
        ".........",
        ".CC......",
        "..C.....C",
        ".........",
        "DDD......",
        "DDD......",
        ".........",
    ]
    desk.keyboard.press("Control+s")
    expect(desk.get_by_text("New picture is in your library.")).to_be_visible()
    assert rows_of(Pattern.objects.get(name="New picture").definition) == drawn(desk)


def test_rows_tell_from_which_side_they_are_tied(desk: Page) -> None:
    desk.get_by_label("The band ends").select_option("exact")
    chart(desk).focus()
    desk.keyboard.press("ArrowDown")
    expect(said(desk)).to_have_text("Row 2, tied from the right, column 1: A (background)")


def test_tools_change_the_whole_picture(desk: Page) -> None:
    chart(desk).focus()
    desk.keyboard.press("b")
    for summary in ("Turn, move or repeat", "Change rows and columns", "Change colours everywhere"):
        desk.get_by_text(summary).click()
    desk.get_by_label("Rows", exact=True).fill("4")
    desk.get_by_role("button", name="Make it this size").click()
    for button in (
        "Mirror left and right",
        "Shift left",
        "Shift to the end",
        "Repeat them mirrored",
    ):
        desk.get_by_role("button", name=button).click()
    blank = "." * COLUMNS
    half = [blank, ".......B.", blank, blank]
    assert drawn(desk) == half + half[::-1]
    desk.get_by_label("Columns", exact=True).fill("61")
    desk.get_by_role("button", name="Make it this size").click()
    expect(said(desk)).to_have_text("A grid pattern has 1 to 400 rows and 2 to 60 columns.")
    assert drawn(desk) == half + half[::-1]
    desk.get_by_role("button", name="Clear all cells").click()
    assert drawn(desk) == [blank] * 8


def test_words_that_do_not_fit_make_room(desk: Page) -> None:
    desk.get_by_text("Write words into the band").click()
    words = desk.get_by_label("Words", exact=True)
    words.fill("Zoé")
    expect(desk.get_by_text("There is no 'É' (letter 3) 5 cells high.")).to_be_visible()
    desk.get_by_label("7 cells").check()
    desk.get_by_label("One below the other").check()
    words.fill("Matilda Jo")
    desk.get_by_role("button", name="Make room and set the words in").click()
    rows = 9 * 7 + 2 + 9 + 2  # nine letters, a blank of two, the gaps, a row on either side
    expect(desk.locator(".grid-cells rect")).to_have_count(rows * COLUMNS)
    picture = lettering("Matilda Jo", 7, "down")
    lit = [line[2:7] for line in drawn(desk)[1:-1]]
    assert lit == ["".join("B" if cell else "." for cell in row) for row in picture]


def test_letters_stand_upright_when_the_band_lies(desk: Page) -> None:
    desk.get_by_text("Write words into the band").click()
    desk.get_by_label("Words", exact=True).fill("L")
    desk.get_by_role("button", name="Set the words in").click()
    desk.get_by_role("button", name="Lay the band down").click()
    lit = desk.locator(".grid-cells rect[data-slot=B]")
    boxes = [cell.bounding_box() for cell in lit.all()]
    places = sorted((round(box["y"]), round(box["x"])) for box in boxes if box)
    # A stem of five cells, and at its foot two more to the right.
    xs = [x for _, x in places]
    assert len(places) == 7
    assert xs.count(min(xs)) == 5
    assert [y for y, _ in places].count(max(places)[0]) == 3
    chart(desk).focus()
    press(desk, "ArrowUp", "ArrowRight")
    expect(said(desk)).to_have_text("Row 2, column 2: A (background)")


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [PHONE, DESK], ids=["phone", "desk"])
def test_board_is_open_to_everybody(
    new_page: OpenPage,
    maker: User,
    workshop: None,
    axe: Callable[[Page], None],
    viewport: dict[str, int],
    scheme: str,
) -> None:
    page = new_page(viewport, user=maker, color_scheme=scheme)
    sample = Pattern.objects.get(name="Outer light")
    page.goto(f"/patterns/{sample.pk}/edit/")
    for summary in page.locator("[data-board] summary").all():
        summary.click()
    page.get_by_label("Words", exact=True).fill("Ida")
    chart(page).focus()
    axe(page)
