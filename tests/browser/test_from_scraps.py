"""What can be made without buying, in a real browser: by keys, at both sizes, in both themes."""

from collections.abc import Callable

import pytest
from playwright.sync_api import Page

from inventory.models import Shade
from patterns.models import Colourway
from tests.factories import make_colourway, make_pattern, make_ready_workshop, put_thread

OpenPage = Callable[..., Page]


@pytest.fixture
def scraps(transactional_db: None) -> Colourway:
    make_ready_workshop()
    colourway = make_colourway(make_pattern("Wave"), "Dawn")
    for shade in Shade.objects.all():
        put_thread(shade, 2_500, 2_500, lot="scraps", kind="remnant")
    return colourway


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", [360, 1280])
def test_from_scraps_by_keyboard_to_an_order(
    new_page: OpenPage,
    maker: object,
    scraps: Colourway,
    axe: Callable[[Page], None],
    width: int,
    scheme: str,
) -> None:
    page = new_page({"width": width, "height": 800}, user=maker, color_scheme=scheme)
    page.goto("/shelf/")
    page.get_by_role("link", name="What can I make of it?").click()
    axe(page)
    price = page.get_by_label("Price of one Wave, Dawn")
    assert not price.is_visible()
    page.get_by_label("as much money as can be").focus()
    page.keyboard.press("Space")
    price.fill("9.50")
    page.get_by_label("Wave, Dawn", exact=True).focus()
    page.keyboard.press("Space")
    page.get_by_label("Medium", exact=True).check()
    page.get_by_role("button", name="What can I make?").press("Enter")
    page.get_by_text("more is impossible").wait_for()
    axe(page)
    page.get_by_role("button", name="Order these for the stall").click()
    page.get_by_text("Ordered for the stall").wait_for()
    assert scraps.order_lines.count() == 1
