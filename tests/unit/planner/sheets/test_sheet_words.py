"""Words, figures and letters of the sheets: wording.py, fonts.py, paper.py."""

import unicodedata
from datetime import date
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.sheets import fonts
from planner.sheets.paper import PAPERS, PaperError, millimetres, paper_named
from planner.sheets.wording import (
    batch_words,
    counted,
    joined,
    long_date,
    money,
    plain_text,
    short_date,
    whole_part,
)


def test_paper_sizes_are_those_of_the_standards():
    # ISO 216: A4 is 210 mm x 297 mm; ANSI/ASME Y14.1: Letter is 8.5 in x 11 in. 1 in = 25.4 mm.
    a4, letter = PAPERS["a4"], PAPERS["letter"]
    assert (a4.width_pt, a4.height_pt) == pytest.approx(
        (210 / 25.4 * 72, 297 / 25.4 * 72), abs=1e-3
    )
    assert (letter.width_pt, letter.height_pt) == (8.5 * 72, 11 * 72)
    assert millimetres(25.4) == pytest.approx(72)


def test_paper_named_knows_both_and_lists_them_otherwise():
    assert paper_named("A4").name == "A4"
    with pytest.raises(PaperError, match=r"'foolscap'.*a4, letter"):
        paper_named("foolscap")


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("Tide\x00line\x07", "Tideline"),
        ("two\r\nlines\tand a tab", "two lines and a tab"),
        ("right\u202eto\u202cleft\u200f", "righttoleft"),
        ("e\u0301toile", "étoile"),
        ("half \ud83d", "half \ufffd"),
        ("   ", ""),
    ],
)
def test_plain_text_drops_what_no_sheet_shows(text, shown):
    assert plain_text(text) == shown


@given(st.text(st.characters(codec=None), max_size=60))
def test_plain_text_leaves_one_clean_line_of_anything(text):
    shown = plain_text(text)
    assert shown == shown.strip(" ")
    assert all(unicodedata.category(each) not in ("Cc", "Cf", "Cs", "Zl", "Zp") for each in shown)


def test_dates_are_written_in_words():
    # 5 December 2026 is a Saturday (Python's calendar, which follows ISO 8601).
    day = date(2026, 12, 5)
    assert long_date(day) == "Saturday 5 December 2026"
    assert short_date(day) == "Sat 5 Dec 2026"


def test_batch_is_named_and_two_of_one_day_differ():
    assert batch_words("Quay fair") == "Quay fair"
    assert batch_words("\u200b ") == "the next market"


def test_figures_and_words_are_joined_without_holes():
    assert money(Decimal("1234567.5")) == "1\u202f234\u202f567.50"
    assert joined(("Adult M", "", "Harbour lights")) == "Adult M · Harbour lights"
    assert (counted(1, "skein"), counted(2, "skein")) == ("1 skein", "2 skeins")
    assert [whole_part(each) for each in ("62.5", "24 1/2", "8")] == ["62", "24", "8"]


def test_typeface_has_every_letter_that_sheets_need():
    needed = "".join(map(chr, [*range(0x20, 0x7F), *range(0xA0, 0x17F)]))
    needed += "ΑΒΓΔΕΖΗΘΙΚΛΜΝΞΟΠΡΣΤΥΦΧΨΩαβγδεζηθικλμνξοπρςστυφχψωάέήίόύώϊϋ"
    needed += "".join(map(chr, range(0x400, 0x460))) + "\u202f½¼¾⅛⅜⅝⅞⅓⅔•…·×−–—’“”€₽₴"
    lacking = [each for each in needed if ord(each) not in fonts.ready_fonts()]
    assert [each for each in lacking if unicodedata.category(each) != "Cf"] == []


@pytest.mark.parametrize("font", [fonts.REGULAR, fonts.STRONG])
def test_digits_are_of_one_width(font):
    fonts.ready_fonts()
    assert len({fonts.width_of(digit, font, 10) for digit in "0123456789"}) == 1


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("Море и ветер", "Море и ветер"),
        ("Θάλασσα", "Θάλασσα"),
        ("ים", "☐☐"),
        ("海 tide", "☐ tide"),
        ("thin\u2009space", "thin space"),
        ("62 ㎝", "62 cm"),
        ("🧶", "☐"),
    ],
)
def test_printable_shows_an_open_box_for_what_the_typeface_lacks(text, shown):
    assert fonts.printable(text) == shown


@given(st.text(max_size=80), st.floats(0, 200))
def test_shortened_never_takes_more_room(text, room):
    short = fonts.shortened(text, fonts.REGULAR, 9.0, room)
    assert fonts.width_of(short, fonts.REGULAR, 9.0) <= room
    assert short in ("", fonts.printable(text)) or short.endswith("…")


def test_shortened_keeps_as_much_as_fits():
    text = "Saltmarch rowing club, upper boathouse"
    room = fonts.width_of("Saltmarch rowing…", fonts.REGULAR, 9.0) + 0.01
    assert fonts.shortened(text, fonts.REGULAR, 9.0, room) == "Saltmarch rowing…"


def test_wrapped_ends_its_last_line_with_an_ellipsis_only_if_it_must():
    text = "Take off for sleep, sport, machines and playgrounds."
    whole = fonts.wrapped(text, fonts.REGULAR, 7.0, 90.0, 8)
    assert " ".join(whole) == text
    assert len(whole) > 1
    assert fonts.wrapped(text, fonts.REGULAR, 7.0, 90.0, 1)[0].endswith("…")
    assert fonts.wrapped("", fonts.REGULAR, 7.0, 90.0, 8) == []
