"""What is bought, where, and at what price."""

import re
from decimal import Decimal

import pytest
from django.db import IntegrityError, connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.models import PutUp, Supplier
from tests.factories import make_put_up, make_shade, make_workshop

pytestmark = pytest.mark.django_db
GOOD = {
    "name": "skein",
    "supplier_name": "Quay Threads",
    "length_mm": "8 m",
    "price": "1,20",
    "for_every_shade": "on",
}


def text_of(html: str) -> str:
    return " ".join(re.sub(r"<[^>]*>", " ", html).split())


def list_page(client: Client) -> str:
    return client.get(reverse("put_up_list")).content.decode()


def test_empty_list_offers_the_first_step(maker: Client) -> None:
    assert "Add your first put-up" in list_page(maker)


def test_list_shows_price_per_metre(maker: Client) -> None:
    make_put_up(length_mm=8_000, price="1.20")  # 1.20 / 8 m = 0.15
    assert "skein Quay Threads 8 m €1.20 €0.15 every shade" in text_of(list_page(maker))


def test_list_shows_price_per_yard_in_inches(maker: Client) -> None:
    make_workshop(length_unit="in", currency="USD")
    make_put_up(length_mm=9_144, price="5.00")  # 10 yd
    words = text_of(list_page(maker))
    assert "Price per yd" in words
    assert "US$0.50" in words


def test_list_names_the_shades_of_a_put_up(maker: Client) -> None:
    make_put_up(shades=(make_shade("A10"), make_shade("B10")))
    assert "A10 , B10" in text_of(list_page(maker))


def test_list_asks_as_often_for_twice_as_many(maker: Client) -> None:
    def queries() -> int:
        with CaptureQueriesContext(connection) as caught:
            list_page(maker)
        return len(caught)

    for number in range(3):
        make_put_up(supplier=f"S{number}", shades=(make_shade(), make_shade()))
    first = queries()
    for number in range(3, 6):
        make_put_up(supplier=f"S{number}", shades=(make_shade(), make_shade()))
    assert queries() == first


def test_new_put_up_brings_its_supplier(maker: Client) -> None:
    response = maker.post(reverse("put_up_new"), GOOD, follow=True)
    put_up = PutUp.objects.get()
    assert put_up.supplier == Supplier.objects.get(name="Quay Threads")
    assert (put_up.length_mm, put_up.price, put_up.for_every_shade) == (
        8_000,
        Decimal("1.20"),
        True,
    )
    assert "skein, Quay Threads is saved." in response.content.decode()


def test_form_offers_suppliers_and_shades(maker: Client) -> None:
    make_put_up(supplier="Quay & Sons")
    make_shade("A10", "Madder")
    html = maker.get(reverse("put_up_new")).content.decode()
    assert '<option value="Quay &amp; Sons">' in html
    assert "A10 Madder" in text_of(html)


def test_form_asks_as_often_for_twice_as_many_shades(maker: Client) -> None:
    def queries() -> int:
        with CaptureQueriesContext(connection) as caught:
            maker.get(reverse("put_up_new"))
        return len(caught)

    make_shade(), make_shade()
    first = queries()
    make_shade(), make_shade()
    assert queries() == first


def test_put_up_of_ticked_shades(maker: Client) -> None:
    shade = make_shade()
    values = GOOD | {"for_every_shade": "", "shades": [shade.pk]}
    maker.post(reverse("put_up_new"), values)
    put_up = PutUp.objects.get()
    assert not put_up.for_every_shade
    assert put_up.shades.get() == shade


@pytest.mark.parametrize(
    ("field", "value", "problem"),
    [
        ("name", "", "Fill this in"),
        ("name", "x" * 81, "At most 80 characters"),
        ("name", "a\x00", "hidden character"),
        ("supplier_name", "", "Fill this in"),
        ("supplier_name", "x" * 10_000, "At most 80 characters"),
        ("supplier_name", "\u202equay", "hidden character"),
        ("length_mm", "", "required"),
        ("length_mm", "0", "from 1 mm"),
        ("length_mm", "-8 m", "negative"),
        ("length_mm", "99999999999 m", "too long"),
        ("price", "", "required"),
        ("price", "-0.01", "from 0 to 100000"),
        ("price", "100000.01", "from 0 to 100000"),
        ("price", "1.205", "decimal places"),
        ("price", "free", "not a number"),
        ("price", "1e5", "not a number"),
    ],
)
def test_wrong_put_up_is_refused_with_a_reason(
    maker: Client, field: str, value: str, problem: str
) -> None:
    response = maker.post(reverse("put_up_new"), GOOD | {field: value})
    assert response.status_code == 200
    assert list(response.context["form"].errors) == [field]
    assert problem in " ".join(response.context["form"].errors[field])
    assert not PutUp.objects.exists()
    assert not Supplier.objects.exists()


@pytest.mark.parametrize(
    ("shades", "problem"),
    [
        ([], "Tick the shades it is sold in"),
        (["999"], "One of the ticked lines is gone"),
        (["x"], "One of the ticked lines is gone"),
        (["-1"], "One of the ticked lines is gone"),
        (["\x00"], "One of the ticked lines is gone"),
        (["9" * 30], "One of the ticked lines is gone"),
    ],
)
def test_put_up_sold_in_no_shade_is_refused(maker: Client, shades: list[str], problem: str) -> None:
    values = GOOD | {"for_every_shade": "", "shades": shades}
    response = maker.post(reverse("put_up_new"), values)
    assert problem in " ".join(response.context["form"].errors["shades"])
    assert not PutUp.objects.exists()


def test_second_put_up_of_one_name_is_refused(maker: Client) -> None:
    make_put_up()
    response = maker.post(reverse("put_up_new"), GOOD | {"supplier_name": "quay threads"})
    assert "quay threads has a put-up called “skein” already." in response.content.decode()


def test_name_taken_at_the_same_moment_is_an_error_on_the_form(
    maker: Client, monkeypatch: pytest.MonkeyPatch
) -> None:
    def lose_the_race(**values: object) -> None:
        raise IntegrityError

    monkeypatch.setattr("inventory.views.put_ups.save_put_up", lose_the_race)
    response = maker.post(reverse("put_up_new"), GOOD)
    assert "This supplier has just got one of that name." in response.content.decode()


def test_edited_put_up_may_keep_its_name_and_change_supplier(maker: Client) -> None:
    put_up = make_put_up()
    url = reverse("put_up_edit", args=[put_up.pk])
    assert 'value="Quay Threads"' in maker.get(url).content.decode()
    maker.post(url, GOOD | {"price": "1.35"})
    maker.post(url, GOOD | {"price": "1.35", "supplier_name": "Longshore"})
    put_up.refresh_from_db()
    assert (put_up.supplier.name, put_up.price) == ("Longshore", Decimal("1.35"))


def test_edit_of_a_price_in_an_inch_workshop_leaves_the_length_alone(maker: Client) -> None:
    make_workshop(length_unit="in")
    put_up = make_put_up(length_mm=8_000)  # shown as 314 15/16 in = 7999.4 mm
    url = reverse("put_up_edit", args=[put_up.pk])
    shown = re.search(r'name="length_mm" value="([^"]+)"', maker.get(url).content.decode())
    assert shown
    maker.post(url, GOOD | {"length_mm": shown[1], "price": "9"})
    put_up.refresh_from_db()
    assert (put_up.length_mm, put_up.price) == (8_000, 9)


@pytest.mark.parametrize("every", [True, False])
def test_removed_put_up_can_be_undone(maker: Client, every: bool) -> None:
    shades = () if every else (make_shade(), make_shade())
    put_up = make_put_up("cone <1>", supplier="Quay & Sons", length_mm=100_005, shades=shades)
    response = maker.post(reverse("put_up_remove", args=[put_up.pk]), follow=True)
    assert not PutUp.objects.exists()
    form = re.search(r'action="([^"]+)" hidden>.*?</form>', response.content.decode(), re.DOTALL)
    assert form
    values: dict[str, list[str]] = {}
    for name, value in re.findall(r'name="(\w+)" value="([^"]*)"', form[0]):
        value = value.replace("&amp;", "&").replace("&lt;", "<").replace("&gt;", ">")
        values.setdefault(name, []).append(value)
    maker.post(form[1], values)
    back = PutUp.objects.get()
    assert (back.name, back.supplier.name, back.length_mm) == ("cone <1>", "Quay & Sons", 100_005)
    assert (back.price, back.for_every_shade) == (put_up.price, every)
    assert set(back.shades.all()) == set(shades)


def test_removing_a_put_up_twice_is_no_error(maker: Client) -> None:
    put_up = make_put_up()
    maker.post(reverse("put_up_remove", args=[put_up.pk]))
    response = maker.post(reverse("put_up_remove", args=[put_up.pk]), follow=True)
    assert "That put-up was removed already." in response.content.decode()


@pytest.mark.parametrize("name", ["pack_size", "minimum_packs", "pack_step"])
@pytest.mark.parametrize("typed", ["0", "-1", "1.5", "dozen", "1001", "9" * 40, "\x00"])
def test_bad_packs_are_refused_and_nothing_typed_is_lost(
    maker: Client, name: str, typed: str
) -> None:
    answer = maker.post(reverse("put_up_new"), GOOD | {"pack_size": "12", name: typed})
    assert answer.status_code in (200, 422)
    assert not PutUp.objects.exists()
    page = answer.content.decode()
    assert answer.context["form"].errors.keys() == {name}
    assert "Quay Threads" in page
    assert '<details class="packs" open>' in page


def test_pack_is_kept_and_shown_with_its_price_per_metre(maker: Client) -> None:
    # A box of twelve skeins of 8 m at 12.00 is 12.00 / 96 m = 0.125, shown as 0.12 or 0.13.
    values = {"price": "12.00", "pack_size": "12", "minimum_packs": "3", "pack_step": "2"}
    maker.post(reverse("put_up_new"), GOOD | values)
    put_up = PutUp.objects.get()
    assert (put_up.pack_size, put_up.minimum_packs, put_up.pack_step) == (12, 3, 2)
    words = text_of(list_page(maker))
    assert "skein pack of 12, at least 3, in steps of 2 Quay Threads 8 m €12.00 €0.1" in words


def test_single_skeins_need_no_word_about_packs(maker: Client) -> None:
    maker.post(reverse("put_up_new"), GOOD | {"pack_size": "", "minimum_packs": " "})
    put_up = PutUp.objects.get()
    assert (put_up.pack_size, put_up.minimum_packs, put_up.pack_step) == (1, 1, 1)
    assert put_up.pack_words == ""


def test_removed_pack_comes_back_as_it_was(maker: Client) -> None:
    maker.post(reverse("put_up_new"), GOOD | {"pack_size": "12"})
    page = maker.post(
        reverse("put_up_remove", args=[PutUp.objects.get().pk]), follow=True
    ).content.decode()
    assert 'name="pack_size" value="12"' in page
