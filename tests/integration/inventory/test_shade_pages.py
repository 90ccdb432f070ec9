"""One shade: its page, its form, its removal."""

import re

import pytest
from django.db import IntegrityError, connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.forms import ShadeForm
from inventory.models import Shade, ShelfPiece
from tests.factories import make_put_up, make_shade, make_workshop, put_thread

pytestmark = pytest.mark.django_db
GOOD = {"code": "A10", "name": "Madder red", "colour": "#94292f"}


def text_of(html: str) -> str:
    return " ".join(re.sub(r"<[^>]*>", " ", html).split())


def shade_page(client: Client, shade: Shade, query: str = "") -> str:
    response = client.get(reverse("shade_detail", args=[shade.pk]) + query)
    assert response.status_code == 200
    return response.content.decode()


def test_new_shade_is_added_and_its_page_opens(maker: Client) -> None:
    response = maker.post(reverse("shade_new"), GOOD, follow=True)
    shade = Shade.objects.get()
    assert (shade.code, shade.name, shade.colour) == ("A10", "Madder red", "#94292f")
    assert response.redirect_chain[-1][0] == reverse("shade_detail", args=[shade.pk])
    assert "Now add its thread" in response.content.decode()


def test_new_shade_form_opens(maker: Client) -> None:
    assert 'type="color"' in maker.get(reverse("shade_new")).content.decode()


def test_colour_in_capitals_is_taken(maker: Client) -> None:
    maker.post(reverse("shade_new"), GOOD | {"colour": "#94292F"})
    assert Shade.objects.get().colour == "#94292f"


@pytest.mark.parametrize(
    ("field", "value", "problem"),
    [
        ("code", "", "Fill this in"),
        ("code", " \t ", "Fill this in"),
        ("code", "x" * 21, "At most 20 characters: this has 21"),
        ("code", "A\x00", "hidden character"),
        ("code", "\u202eA", "hidden character"),
        ("name", "", "Fill this in"),
        ("name", "x" * 10_000, "At most 80 characters: this has 10000"),
        ("name", "a\x1bb", "hidden character"),
        ("colour", "", "required"),
        ("colour", "red", "Choose a colour"),
        ("colour", "#12345", "Choose a colour"),
        ("colour", '#fff"><script>', "Choose a colour"),
        ("colour", "#94292f\n", ""),
        ("colour", "\x00" * 7, "Null characters"),
    ],
)
def test_shade_form_says_what_is_wrong(maker: Client, field: str, value: str, problem: str) -> None:
    response = maker.post(reverse("shade_new"), GOOD | {field: value})
    if not problem:
        assert Shade.objects.get().colour == "#94292f"
        return
    assert response.status_code == 200
    assert problem in str(response.context["form"].errors[field])
    assert not Shade.objects.exists()


def test_taken_code_names_the_shade_that_has_it(maker: Client) -> None:
    make_shade("a10", "Kelp")
    response = maker.post(reverse("shade_new"), GOOD)
    assert "The code a10 belongs to Kelp." in response.content.decode()
    assert 'value="Madder red"' in response.content.decode()


def test_code_taken_at_the_same_moment_is_an_error_on_the_form(
    maker: Client, monkeypatch: pytest.MonkeyPatch
) -> None:
    def lose_the_race(form: ShadeForm) -> None:
        raise IntegrityError

    monkeypatch.setattr(ShadeForm, "save", lose_the_race)
    response = maker.post(reverse("shade_new"), GOOD)
    assert "This code has just been taken." in response.content.decode()


@pytest.mark.parametrize("name", ["<script>alert(1)</script>", "שזיף כהה", "O'Hara & co"])
def test_every_name_is_shown_as_text(maker: Client, name: str) -> None:
    response = maker.post(reverse("shade_new"), GOOD | {"name": name}, follow=True)
    html = response.content.decode()
    assert Shade.objects.get().name == name
    assert "<script>alert" not in html


def test_edited_shade_keeps_its_own_code(maker: Client) -> None:
    shade = make_shade("A10", "Madder")
    response = maker.post(reverse("shade_edit", args=[shade.pk]), GOOD)
    assert response.status_code == 302
    shade.refresh_from_db()
    assert shade.name == "Madder red"


def test_edit_form_shows_the_shade(maker: Client) -> None:
    shade = make_shade("A10", "Madder")
    html = maker.get(reverse("shade_edit", args=[shade.pk])).content.decode()
    assert 'value="Madder"' in html


def test_edit_to_a_taken_code_is_refused(maker: Client) -> None:
    make_shade("B10", "Kelp")
    shade = make_shade("A10", "Madder")
    response = maker.post(reverse("shade_edit", args=[shade.pk]), GOOD | {"code": "b10"})
    assert "belongs to Kelp" in response.content.decode()
    shade.refresh_from_db()
    assert shade.code == "A10"


def test_page_of_an_empty_shade_has_the_form_open(maker: Client) -> None:
    make_put_up(length_mm=8_000)
    html = shade_page(maker, make_shade())
    assert "None on the shelf." in html
    assert '<details class="add-thread" open>' in html
    assert 'value="8 m"' in html  # of the put-up


def test_page_shows_thread_by_lot_longest_first(maker: Client) -> None:
    shade = make_shade("A10", "Madder")
    put_thread(shade, 410, 3_120, kind="remnant", lot="March")
    put_thread(shade, 8_000, kind="whole", lot="4471", note="blue tin")
    words = text_of(shade_page(maker, shade))
    # 410 + 3120 + 8000 = 11530 mm
    assert "11.53 m in 3 pieces, of 2 dye lots: do not mix them in one bracelet." in words
    places = [words.index(part) for part in ("Lot 4471", "8 m whole skein", "Lot March")]
    places += [words.index(part) for part in ("3.12 m remnant", "41 cm remnant")]
    assert places == sorted(places)
    assert "blue tin" in words
    assert '<details class="add-thread">' in shade_page(maker, shade)


def test_bars_are_drawn_to_scale(maker: Client) -> None:
    shade = make_shade(colour="#3d6b4a")
    put_thread(shade, 8_000, kind="whole")
    put_thread(shade, 2_000, kind="remnant")
    put_thread(shade, 1, kind="remnant")
    html = shade_page(maker, shade)
    widths = [float(width) for width in re.findall(r'width="([\d.]+)%" height="14" rx', html)]
    # 98 % for the longest; 2000/8000 of it; the shortest stays visible
    assert widths == [98, 24.5, 0.4]
    assert html.count('height="14"') == html.count('fill="#3d6b4a" stroke="currentColor" ')
    assert html.count('class="band-of-paper"') == 2


def test_page_in_inches(maker: Client) -> None:
    make_workshop(length_unit="in")
    shade = make_shade()
    put_thread(shade, 622)  # 24.49 in
    assert "24 1/2 in" in shade_page(maker, shade)


def test_pieces_over_a_hundred_go_on_a_second_page(maker: Client) -> None:
    shade = make_shade()
    put_thread(shade, *range(301, 402))
    words = text_of(shade_page(maker, shade, "?page=2"))
    assert "Pieces 101 to 101 of 101" in words
    assert "30.1 cm" in words
    assert "in 101 pieces" in words


def test_page_asks_as_often_for_twice_as_many(maker: Client) -> None:
    shade = make_shade()

    def queries() -> int:
        with CaptureQueriesContext(connection) as caught:
            shade_page(maker, shade)
        return len(caught)

    for number in range(4):
        put_thread(shade, 500, 600, lot=f"L{number}")
    first = queries()
    for number in range(4, 8):
        put_thread(shade, 500, 600, lot=f"L{number}")
    assert queries() == first


def test_removed_shade_can_be_undone(maker: Client) -> None:
    shade = make_shade("A10", "Kelp & co", "#3d6b4a")
    response = maker.post(reverse("shade_remove", args=[shade.pk]), follow=True)
    html = response.content.decode()
    assert not Shade.objects.exists()
    assert "A10 Kelp &amp; co is removed." in html
    fields = dict(re.findall(r'type="hidden" name="(code|name|colour)" value="([^"]*)"', html))
    assert fields == {"code": "A10", "name": "Kelp &amp; co", "colour": "#3d6b4a"}
    maker.post(reverse("shade_new"), fields | {"name": "Kelp & co"})
    assert Shade.objects.get().name == "Kelp & co"


def test_removing_a_shade_twice_is_no_error(maker: Client) -> None:
    shade = make_shade()
    maker.post(reverse("shade_remove", args=[shade.pk]))
    response = maker.post(reverse("shade_remove", args=[shade.pk]), follow=True)
    assert "That shade was removed already." in response.content.decode()


def test_shade_with_thread_stays_and_says_why(maker: Client) -> None:
    shade = make_shade("A10", "Madder")
    put_thread(shade, 500)
    page_before = shade_page(maker, shade)
    assert "It cannot be removed now. 1 piece of it lies on the shelf." in page_before
    assert reverse("shade_remove", args=[shade.pk]) not in page_before
    response = maker.post(reverse("shade_remove", args=[shade.pk]), follow=True)
    assert "A10 Madder stays: 1 piece of it lies on the shelf." in response.content.decode()
    assert ShelfPiece.objects.exists()
