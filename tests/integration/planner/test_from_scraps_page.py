"""What can be made without buying: the page, bad input, and ordering what was found."""

from decimal import Decimal

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.models import Shade, ShelfPiece
from patterns.models import Colourway, Ending, Size
from planner.actions import make_plan
from planner.models import Batch
from tests.factories import make_colourway, make_pattern, make_workshop, put_thread

pytestmark = pytest.mark.django_db
ADDRESS = "/stall/from-scraps/"


def choices(*colourways: Colourway, sizes: tuple[str, ...] = ("Medium",), **more: object) -> dict:
    return {
        "colourways": [colourway.pk for colourway in colourways],
        "sizes": [Size.objects.get(name=name).pk for name in sizes],
        "ending": Ending.objects.get(is_default=True).pk,
        "most": "5",
        "aim": "count",
        **more,
    }


@pytest.fixture
def shelf(colourway: Colourway) -> Colourway:
    for shade in Shade.objects.all():
        put_thread(shade, 8_000, lot="whole", kind="whole")
        put_thread(shade, 2_500, 2_500, lot="scraps", kind="remnant")
    return colourway


def test_page_before_anything_is_there_says_what_to_do(page: Client) -> None:
    make_workshop()
    text = page.get(ADDRESS).content.decode()
    assert "There is no pattern with a colourway yet" in text


def test_page_asks_and_answers_with_proof(page: Client, shelf: Colourway) -> None:
    assert "Tick what you would make" in page.get(ADDRESS).content.decode()
    answer = page.post(ADDRESS, choices(shelf))
    assert answer.status_code == 200
    text = answer.content.decode()
    assert "5 bracelets; more is impossible." in text
    assert "Order these for the stall" in text
    assert f'value="{shelf.pk}" checked' in text


def test_whole_skeins_are_left_alone_where_the_maker_says_so(
    page: Client, shelf: Colourway
) -> None:
    every = page.post(ADDRESS, choices(shelf, most="50"))
    scraps = page.post(ADDRESS, choices(shelf, most="50", leave_whole="on"))
    count = every.context["found"].result.count
    fewer = scraps.context["found"].result.count
    assert 0 < fewer < count
    whole = set(ShelfPiece.objects.filter(kind="whole").values_list("pk", flat=True))
    used = {row.thread.number for use in scraps.context["found"].shades for row in use.rows}
    assert used
    assert not used & whole


def test_money_needs_prices_and_takes_the_dear_ones(page: Client, shelf: Colourway) -> None:
    other = make_colourway(make_pattern("Spray"), "Dusk")
    asked = choices(shelf, other, aim="money", **{f"price-{shelf.pk}": "9,50"})
    refused = page.post(ADDRESS, asked)
    assert refused.status_code == 422
    text = refused.content.decode()
    assert "What does one Spray cost at your stall?" in text
    assert 'value="9,50"' in text
    asked[f"price-{other.pk}"] = "1.00"
    found = page.post(ADDRESS, asked).context["found"]
    assert found.result.value == sum(row.value for row in found.made)
    assert found.made[0].wish.value == Decimal("9.50")


def test_found_is_ordered_and_its_plan_buys_nothing(page: Client, shelf: Colourway) -> None:
    found = page.post(ADDRESS, choices(shelf, sizes=("Small", "Medium"))).context["found"]
    answer = page.post(reverse("order_scraps"), {"made": [row.as_ordered for row in found.made]})
    batch = Batch.objects.get()
    assert answer["Location"] == reverse("batch_detail", args=[batch.pk])
    assert batch.lines.bracelet_count() == found.result.count > 0
    assert make_plan(batch=batch, user=None).cost == 0


def test_all_of_them_may_be_asked_at_once(page: Client, shelf: Colourway) -> None:
    make_colourway(make_pattern("Spray"), "Dusk")
    asked = {**choices(), "every": "on"}
    found = page.post(ADDRESS, asked).context["found"]
    assert found.result.count > 0
    assert found.result.status == "optimal"


BAD = [
    {},
    {"colourways": ["9" * 40]},
    {"colourways": ["x"]},
    {"sizes": ["-1"]},
    {"ending": "9" * 30},
    {"ending": "x"},
    {"most": "0"},
    {"most": "101"},
    {"most": "many"},
    {"most": "\x00"},
    {"aim": "fame"},
    {"aim": ""},
]


@pytest.mark.parametrize("bad", BAD, ids=str)
def test_bad_choices_are_refused_and_kept(
    page: Client, shelf: Colourway, bad: dict[str, object]
) -> None:
    posted = {**choices(shelf), **bad} if bad else {}
    answer = page.post(ADDRESS, posted)
    assert answer.status_code == 422
    text = answer.content.decode()
    assert 'class="problem"' in text
    if bad and "colourways" not in bad:
        assert f'value="{shelf.pk}" checked' in text


@pytest.mark.parametrize("price", ["-1", "a lot", "1e9", "9" * 50, "\x00", "1.234"])
def test_bad_price_is_named_beside_it(page: Client, shelf: Colourway, price: str) -> None:
    answer = page.post(ADDRESS, choices(shelf, aim="money", **{f"price-{shelf.pk}": price}))
    assert answer.status_code == 422
    assert f"id_price-{shelf.pk}_error" in answer.content.decode()


@pytest.mark.parametrize(
    "made",
    [
        [],
        ["x"],
        ["1.2.3"],
        ["1.2.3.0"],
        ["1.2.3.999"],
        ["999999999999999.1.1.1"],
        ["1.1.1.1\n"],
        ["٣.1.1.1"],
    ],
    ids=str,
)
def test_order_that_the_page_never_sent_orders_nothing(
    page: Client, shelf: Colourway, made: list[str]
) -> None:
    answer = page.post(reverse("order_scraps"), {"made": made}, follow=True)
    assert answer.status_code == 200
    assert "Nothing was ordered" in answer.content.decode()
    assert not Batch.objects.exists()


def test_kind_without_a_knotted_length_is_named(page: Client, shelf: Colourway) -> None:
    size = Size.objects.create(name="Giant", wrist_min_mm=300, wrist_max_mm=320)
    answer = page.post(ADDRESS, choices(shelf, sizes=("Medium", size.name)))
    text = answer.content.decode()
    assert "Wave in Dawn, Giant: Giant has no knotted length" in text
    assert "5 bracelets" in text


def test_page_asks_the_database_as_often_for_many_as_for_few(
    page: Client, shelf: Colourway
) -> None:
    def queries() -> int:
        with CaptureQueriesContext(connection) as caught:
            assert page.post(ADDRESS, choices(*Colourway.objects.all())).status_code == 200
        return len(caught)

    few = queries()
    for number in range(6):
        make_colourway(make_pattern(f"Wave {number}"), "Dawn")
    assert queries() <= few + 2
