from datetime import date, datetime, timedelta

import pytest

from planner.order_list.dates import read_date
from planner.order_list.problems import CellProblem
from tests.data_builders.small_workshop import TODAY


def read(text: str, **options: bool) -> date:
    return read_date(text, today=TODAY, **options).day


@pytest.mark.parametrize(
    "pattern",
    [
        "%Y-%m-%d", "%Y/%m/%d", "%Y.%m.%d", "%Y-%m-%d %H:%M", "%Y-%m-%dT%H:%M:%S",
        "%d.%m.%Y", "%d. %m. %Y", "%d.%m.%y", "%d/%m/%Y", "%d/%m/%y", "%d-%m-%Y", "%d - %m - %y",
        "%d %b %Y", "%d %B %Y", "%d. %B %Y", "%d-%b-%y", "%d-%b-%Y", "%d/%b/%Y", "%B %d, %Y", "%b %d %Y",
        "%dth of %B %Y", "%d de %B de %Y", "  %d   %b   %Y ",
    ],
)  # fmt: skip
def test_date_in_every_way_of_writing_it(pattern: str) -> None:
    # Outside reference: the standard library writes the dates (strftime, C locale).
    for days in range(0, 800, 7):
        day = date(2026, 1, 1) + timedelta(days=days)
        assert read(datetime(day.year, day.month, day.day, 14, 30).strftime(pattern)) == day


@pytest.mark.parametrize(
    ("text", "month"),
    [
        ("5 Januar 2027", 1), ("5 janv. 2027", 1), ("5 févr 2027", 2), ("5 März 2027", 3), ("5 Mrz 2027", 3),
        ("5 maart 2027", 3), ("5 avril 2027", 4), ("5 mai 2027", 5), ("5 mei 2027", 5), ("5 mayo 2027", 5),
        ("5 juin 2027", 6), ("5 juil. 2027", 7), ("5 août 2027", 8), ("5 agosto 2027", 8), ("5 Sept 2027", 9),
        ("5 Okt 2027", 10), ("5. Dezember 2027", 12), ("5 DÉC 2027", 12), ("5 diciembre 2027", 12),
    ],
)  # fmt: skip
def test_date_with_month_in_another_language(text: str, month: int) -> None:
    # Month names as these languages write them, from memory.
    assert read(text) == date(2027, month, 5)


@pytest.mark.parametrize(
    ("text", "day_first", "expected", "is_guess"),
    [
        ("5/12/2026", True, date(2026, 12, 5), True),
        ("5/12/2026", False, date(2026, 5, 12), True),
        ("5-12-26", False, date(2026, 5, 12), True),
        ("5.12.2026", False, date(2026, 12, 5), False),
        ("25/12/2026", False, date(2026, 12, 25), False),
        ("12/25/2026", True, date(2026, 12, 25), True),
        ("12/12/2026", True, date(2026, 12, 12), False),
        ("2026-05-12", False, date(2026, 5, 12), False),
    ],
)
def test_date_that_could_be_two(text: str, day_first: bool, expected: date, is_guess: bool) -> None:
    found = read_date(text, today=TODAY, day_first=day_first)
    assert found.day == expected
    assert (found.notice is not None) is is_guess


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("5 Dec", date(2026, 12, 5)),
        ("Dec 5", date(2026, 12, 5)),
        ("5.12.", date(2026, 12, 5)),
        ("5/12", date(2026, 12, 5)),
        ("1 Nov", date(2026, 11, 1)),
        ("31 Oct", date(2027, 10, 31)),
        ("29 Feb", date(2028, 2, 29)),
    ],
)
def test_date_without_year_is_the_next_from_today(text: str, expected: date) -> None:
    found = read_date(text, today=TODAY)
    assert found.day == expected
    assert found.notice is not None
    assert str(expected.year) in found.notice


def test_date_that_does_not_exist_names_the_last_day() -> None:
    with pytest.raises(CellProblem) as caught:
        read("30.2.2027")
    assert caught.value.sentence == (
        "30 February 2027 does not exist: 2027-02-28 is the last day of that month."
    )
    assert caught.value.suggestion == "2027-02-28"


@pytest.mark.parametrize("year", [1999, 2101])
def test_date_out_of_range_says_which_years(year: int) -> None:
    with pytest.raises(CellProblem, match="2000 to 2100"):
        read(f"{year}-06-01")


@pytest.mark.parametrize("text", ["2000-01-01", "2100-12-31"])
def test_date_at_the_edge_of_the_range(text: str) -> None:
    assert read(text).isoformat() == text


@pytest.mark.parametrize(
    "text",
    ["soon", "5", "Dec", "5 Jui 2026", "5 Fe 2026", "5.12-2026", "5 Dec 202", "1e5", "٥ Dec 2026"],
)
def test_date_that_is_none(text: str) -> None:
    with pytest.raises(CellProblem, match="is not a due date"):
        read(text)
