"""The page that answers: what thread do I have?"""

import re

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.actions import RemoveThread, change_shelf
from inventory.models import Shade
from tests.factories import make_shade, make_workshop, put_thread

pytestmark = pytest.mark.django_db
HTMX = {"HX-Request": "true"}


def text_of(html: str) -> str:
    return " ".join(re.sub(r"<[^>]*>", " ", html).split())


def page(client: Client, **query: str) -> str:
    response = client.get(reverse("shelf"), query)
    assert response.status_code == 200
    return response.content.decode()


def stocked_shade() -> Shade:
    shade = make_shade("A10", "Madder")
    put_thread(shade, 8_000, 8_000, kind="whole", lot="4471")
    put_thread(shade, 3_120, kind="started", lot="4471")
    put_thread(shade, 845, 410, 300, kind="remnant", lot="March")
    return shade


def test_empty_shelf_offers_the_first_step(maker: Client) -> None:
    html = page(maker)
    assert "Add your first shade" in html
    assert "<table" not in html


def test_shelf_without_thread_says_what_to_do(maker: Client) -> None:
    make_shade("A10")
    assert "1 shade, and no thread yet. Open a shade to add" in text_of(page(maker))


def test_shelf_says_how_much_there_is(maker: Client) -> None:
    stocked_shade()
    make_shade("B10")
    words = text_of(page(maker))
    # 2 x 8000 + 3120 + 845 + 410 + 300 = 20675 mm, halves rounded up
    assert "20.68 m in 6 pieces, of 1 shade. One more shade has run out." in words
    assert "A10 Madder 20.68 m 2 1 3 4471 , March" in words
    assert "B10 Harbour grey none" in words


def test_shelf_in_inches_counts_in_yards(maker: Client) -> None:
    make_workshop(length_unit="in")
    put_thread(make_shade(), 9_144)
    assert "10.00 yd in 1 piece" in text_of(page(maker))


def test_shelf_leaves_out_removed_thread(maker: Client) -> None:
    shade = stocked_shade()
    (piece,) = put_thread(shade, 5_000, lot="gone")
    change_shelf(changes=[RemoveThread(piece.pk)])
    html = page(maker)
    assert "20.68 m in 6 pieces" in text_of(html)
    assert "gone" not in html


def test_shelf_is_in_the_order_of_codes(maker: Client) -> None:
    for code in ("b2", "B1", "a9"):
        make_shade(code)
    assert re.findall(r'class="code">(\w+)<', page(maker)) == ["a9", "B1", "b2"]


@pytest.mark.parametrize(
    ("words", "codes"),
    [
        ("a10", ["A10"]),
        ("MADDER", ["A10"]),
        ("4471", ["A10"]),
        ("red a", ["A10"]),
        ("b kelp", ["B10"]),
        ("red kelp", []),
        ("50%", []),
        ("_", []),
        ("   ", ["A10", "B10"]),
    ],
)
def test_search_finds_code_name_and_lot(maker: Client, words: str, codes: list[str]) -> None:
    put_thread(make_shade("A10", "Madder red"), 500, lot="4471")
    make_shade("B10", "Kelp green")
    assert re.findall(r'class="code">(\w+)<', page(maker, q=words)) == codes


def test_search_by_lot_counts_thread_once(maker: Client) -> None:
    """Both lots match; a join would show 4 m, or 2 whole skeins of each."""
    shade = make_shade("A10")
    put_thread(shade, 1_000, kind="whole", lot="March 1")
    put_thread(shade, 1_000, kind="whole", lot="March 2")
    assert "2.00 m 2 0 0 March 1 , March 2" in text_of(page(maker, q="march"))


def test_search_leaves_out_lots_that_are_used_up(maker: Client) -> None:
    (piece,) = put_thread(make_shade("A10"), 500, lot="4471")
    change_shelf(changes=[RemoveThread(piece.pk)])
    assert "0 shades found" in text_of(page(maker, q="4471"))


def test_search_that_finds_nothing_says_so(maker: Client) -> None:
    make_shade("A10")
    words = text_of(page(maker, q="zzz"))
    assert "0 shades found for “ zzz ”" in words
    assert "Try fewer letters" in words


@pytest.mark.parametrize(
    ("words", "problem"),
    [
        ("a\x00b", "hidden character"),
        ("x" * 10_000, "At most 100 characters"),
        ("\u202eA", "hidden"),
    ],
)
def test_search_that_cannot_be_shows_all_and_why(maker: Client, words: str, problem: str) -> None:
    make_shade("A10")
    html = page(maker, q=words)
    assert problem in html
    assert 'class="code">A10<' in html


def test_search_words_are_escaped(maker: Client) -> None:
    make_shade("A10", name="<script>alert(1)</script>")
    html = page(maker, q="<script>")
    assert "<script>alert" not in html
    assert "“<bdi>&lt;script&gt;</bdi>”" in html
    assert 'value="&lt;script&gt;"' in html


def test_htmx_gets_the_list_alone(maker: Client) -> None:
    stocked_shade()
    response = maker.get(reverse("shelf"), {"q": "mad"}, headers=HTMX)
    html = response.content.decode()
    assert html.strip().startswith('<div id="shade-list">')
    assert "<html" not in html
    assert "HX-Request" in response["Vary"]


def test_full_page_holds_the_same_list(maker: Client) -> None:
    stocked_shade()
    response = maker.get(reverse("shelf"), {"q": "mad"})
    fragment = maker.get(reverse("shelf"), {"q": "mad"}, headers=HTMX).content.decode()
    assert fragment.strip() in response.content.decode()
    assert "HX-Request" in response["Vary"]


def test_htmx_history_gets_the_full_page(maker: Client) -> None:
    headers = {**HTMX, "HX-History-Restore-Request": "true"}
    assert b"<html" in maker.get(reverse("shelf"), headers=headers).content


@pytest.mark.parametrize(
    ("number", "count"), [("2", 1), ("999", 1), ("-1", 1), ("x", 100), ("9" * 5_000, 100)]
)
def test_shades_over_a_hundred_go_on_a_second_page(maker: Client, number: str, count: int) -> None:
    Shade.objects.bulk_create(
        Shade(code=f"S{number:03}", name="grey", colour="#6b7a86") for number in range(101)
    )
    codes = re.findall(r'class="code">(\w+)<', page(maker, page=number))
    assert len(codes) == count


def test_pages_keep_the_search(maker: Client) -> None:
    Shade.objects.bulk_create(
        Shade(code=f"S{number:03}", name="R&D", colour="#6b7a86") for number in range(101)
    )
    html = page(maker, q="R&D")
    assert f'href="{reverse("shelf")}?q=R%26D&amp;page=2"' in html
    assert "Shades 1 to 100 of 101" in text_of(html)


def test_shelf_asks_as_often_for_twice_as_many(maker: Client) -> None:
    def queries() -> int:
        with CaptureQueriesContext(
            connection,
        ) as caught:
            page(maker)
        return len(caught)

    for number in range(5):
        put_thread(make_shade(f"A{number}"), 500, 600, lot="4471")
        put_thread(make_shade(f"B{number}"), 500, lot="4502")
    first = queries()
    for number in range(5, 10):
        put_thread(make_shade(f"A{number}"), 500, 600, lot="4471")
        put_thread(make_shade(f"B{number}"), 500, lot="4502")
    assert queries() == first
