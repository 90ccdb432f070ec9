"""Putting thread on the shelf, measuring it again, taking it off, and every undo."""

import re

import pytest
from django.test import Client
from django.urls import reverse

from inventory.actions import RemoveThread, change_shelf
from inventory.models import Lot, Shade, ShelfPiece
from tests.factories import make_shade, make_workshop, put_thread

pytestmark = pytest.mark.django_db
GOOD = {"kind": "whole", "length": "8 m", "count": "3", "lot_name": "4471", "note": "blue tin"}


def text_of(html: str) -> str:
    return " ".join(re.sub(r"<[^>]*>", " ", html).split())


def add(client: Client, shade: Shade, **changes: str) -> str:
    response = client.post(reverse("thread_add", args=[shade.pk]), GOOD | changes, follow=True)
    assert response.status_code == 200
    return response.content.decode()


def undo(client: Client, html: str) -> str:
    """Press the page's Undo button as a browser without JavaScript would."""
    message = re.search(r'<div class="message [^>]*>(.*?)</form>', html, re.DOTALL)
    assert message
    action = re.search(r'action="([^"]+)"', message[1])
    assert action
    fields = re.findall(r'type="hidden" name="(\w+)" value="([^"]*)"', message[1])
    response = client.post(action[1], dict(fields), follow=True)
    return response.content.decode()


def on_shelf() -> list[tuple[str, int, str, str]]:
    pieces = ShelfPiece.objects.on_shelf().select_related("lot")
    return [(piece.kind, piece.length_mm, piece.lot.name, piece.note) for piece in pieces]


def test_thread_is_put_on_the_shelf(maker: Client) -> None:
    html = add(maker, make_shade())
    assert on_shelf() == [("whole", 8_000, "4471", "blue tin")] * 3
    assert "On the shelf: 3 whole skeins of 8 m each, lot 4471." in text_of(html)


def test_one_piece_is_told_as_one(maker: Client) -> None:
    html = add(maker, make_shade(), count="1", kind="remnant", length="41")
    assert "On the shelf: 1 remnant of 41 cm, lot 4471." in text_of(html)


@pytest.mark.parametrize(
    ("unit", "typed", "length_mm"),
    [("cm", "7.84 m", 7_840), ("cm", "62", 620), ("in", "24 1/2", 622), ("in", "62 cm", 620)],
)
def test_length_is_read_in_the_workshops_unit(
    maker: Client, unit: str, typed: str, length_mm: int
) -> None:
    make_workshop(length_unit=unit)
    add(maker, make_shade(), length=typed, count="1")
    assert on_shelf()[0][1] == length_mm


def test_after_adding_the_form_stays_open_with_the_same_lot(maker: Client) -> None:
    shade = make_shade()
    html = add(maker, shade, kind="started", length="3 m")
    assert '<details class="add-thread" open>' in html
    assert 'name="lot_name" value="4471"' in html
    fresh = maker.get(reverse("shade_detail", args=[shade.pk])).content.decode()
    assert 'name="lot_name" value="4471"' not in fresh


@pytest.mark.parametrize(
    ("field", "value", "problem"),
    [
        ("kind", "", "required"),
        ("kind", "ball", "Select a valid choice"),
        ("length", "", "required"),
        ("length", "0", "from 1 mm"),
        ("length", "-3 cm", "negative"),
        ("length", "10001 m", "to 10000 m"),
        ("length", "8 elephants", "No unit"),
        ("length", "9" * 10_000, "too long"),
        ("length", "8\x00m", "hidden character"),
        ("length", "\u202e8 m", "hidden character"),
        ("count", "", "required"),
        ("count", "0", "from 1 to 200"),
        ("count", "201", "from 1 to 200"),
        ("count", "2.5", "whole number"),
        ("count", "-1", "from 1 to 200"),
        ("lot_name", "", "Fill this in"),
        ("lot_name", "x" * 41, "At most 40 characters"),
        ("lot_name", "a\x00", "hidden character"),
        ("note", "x" * 10_000, "At most 200 characters"),
        ("note", "\x07", "hidden character"),
    ],
)
def test_wrong_thread_is_refused_with_a_reason(
    maker: Client, field: str, value: str, problem: str
) -> None:
    shade = make_shade()
    response = maker.post(reverse("thread_add", args=[shade.pk]), GOOD | {field: value})
    assert response.status_code == 200
    form = response.context["form"]
    assert list(form.errors) == [field]
    assert problem in " ".join(form.errors[field])
    assert not on_shelf()
    assert not Lot.objects.exists()
    others = {"length": "8 m", "count": "3", "lot_name": "4471", "note": "blue tin"}
    for name in others.keys() - {field}:
        assert f'value="{others[name]}"' in response.content.decode()


def test_hostile_lot_is_shown_as_text(maker: Client) -> None:
    html = add(maker, make_shade(), lot_name="<script>x</script>", note="<b>&")
    assert "<script>x" not in html
    assert "<b>&" not in html


def test_adding_can_be_undone(maker: Client) -> None:
    shade = make_shade()
    put_thread(shade, 500)
    html = undo(maker, add(maker, shade))
    assert "Off the shelf again: 3 pieces." in html
    assert [length for _, length, _, _ in on_shelf()] == [500]


def test_undoing_an_addition_twice_is_no_error(maker: Client) -> None:
    html = add(maker, make_shade())
    undo(maker, html)
    assert "off the shelf already" in undo(maker, html)


@pytest.mark.parametrize(
    "pieces", ["", "x", "-1", "1.5", "٣", "9" * 30, "," * 9_999, "\x00", "9" * 18]
)
def test_undo_of_no_piece_changes_nothing(maker: Client, pieces: str) -> None:
    shade = make_shade()
    put_thread(shade, 500)
    url = reverse("thread_add_undo", args=[shade.pk])
    response = maker.post(url, {"pieces": pieces}, follow=True)
    assert response.status_code == 200
    assert len(on_shelf()) == 1


def test_undo_leaves_other_shades_alone(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 500)
    url = reverse("thread_add_undo", args=[make_shade().pk])
    maker.post(url, {"pieces": str(piece.pk)})
    assert len(on_shelf()) == 1


def edit(client: Client, piece: ShelfPiece, **values: str) -> str:
    response = client.post(reverse("thread_edit", args=[piece.pk]), values, follow=True)
    assert response.status_code == 200
    return response.content.decode()


CHANGED = {"kind": "started", "length": "7.6 m", "lot_name": "4502", "note": "short"}


def test_edit_form_shows_the_piece(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 8_000, kind="whole", note="blue tin")
    html = maker.get(reverse("thread_edit", args=[piece.pk])).content.decode()
    assert 'value="8 m"' in html
    assert 'value="blue tin"' in html
    assert "On the shelf as: whole skein, 8 m, lot L1" in text_of(html)


def test_piece_is_measured_again(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 8_000, kind="whole")
    html = edit(maker, piece, **CHANGED)
    assert on_shelf() == [("started", 7_600, "4502", "short")]
    assert f"Piece {piece.pk} is now: started skein, 7.6 m, lot 4502." in text_of(html)


def test_measuring_again_can_be_undone(maker: Client) -> None:
    make_workshop(length_unit="in")
    (piece,) = put_thread(make_shade(), 621, kind="whole", note="old")
    undo(maker, edit(maker, piece, **CHANGED))
    assert on_shelf() == [("whole", 621, "L1", "old")]


def test_new_note_in_an_inch_workshop_leaves_the_length_alone(maker: Client) -> None:
    """620 mm is shown as 24 7/16 in, which alone would read as 621 mm."""
    make_workshop(length_unit="in")
    (piece,) = put_thread(make_shade(), 620)
    edit(maker, piece, kind="started", length="24 7/16 in", lot_name="L1", note="new")
    assert on_shelf() == [("started", 620, "L1", "new")]


def test_unchanged_piece_is_told_so(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 620)
    html = edit(maker, piece, kind="started", length="62 cm", lot_name="L1", note="")
    assert f"Piece {piece.pk} is as it was." in html


@pytest.mark.parametrize(
    ("field", "value"),
    [("kind", "ball"), ("length", "-1"), ("length", "1e9"), ("lot_name", ""), ("note", "\x00")],
)
def test_wrong_change_is_refused(maker: Client, field: str, value: str) -> None:
    (piece,) = put_thread(make_shade(), 620)
    response = maker.post(reverse("thread_edit", args=[piece.pk]), CHANGED | {field: value})
    assert list(response.context["form"].errors) == [field]
    assert on_shelf() == [("started", 620, "L1", "")]


def test_piece_that_is_gone_cannot_be_measured(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 620)
    change_shelf(changes=[RemoveThread(piece.pk)])
    html = edit(maker, piece, **CHANGED)
    assert f"Piece {piece.pk}, 62 cm, is off the shelf." in text_of(html)
    assert ShelfPiece.objects.get().length_mm == 620


def take_off(client: Client, piece: ShelfPiece) -> str:
    response = client.post(reverse("thread_remove", args=[piece.pk]), follow=True)
    return response.content.decode()


def test_piece_taken_off_can_be_put_back(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 620)
    html = take_off(maker, piece)
    assert f"Piece {piece.pk}, 62 cm, is off the shelf. Undo" in text_of(html)
    assert not on_shelf()
    assert "is on the shelf again" in undo(maker, html)
    assert len(on_shelf()) == 1


def test_taking_off_twice_keeps_the_first_time(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 620)
    take_off(maker, piece)
    first = ShelfPiece.objects.get().removed_at
    assert "is off the shelf" in take_off(maker, piece)
    assert ShelfPiece.objects.get().removed_at == first


def test_putting_back_twice_is_no_error(maker: Client) -> None:
    (piece,) = put_thread(make_shade(), 620)
    html = take_off(maker, piece)
    undo(maker, html)
    assert "is on the shelf again" in undo(maker, html)
    assert len(on_shelf()) == 1
