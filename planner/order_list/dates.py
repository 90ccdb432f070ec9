"""Due dates as people type them."""

import calendar
import re
import unicodedata
from dataclasses import dataclass
from datetime import date

from planner.order_list.cells import one_line, shown
from planner.order_list.problems import CellProblem

FIRST_YEAR = 2000
LAST_YEAR = 2100

MONTHS = (
    "January", "February", "March", "April", "May", "June",
    "July", "August", "September", "October", "November", "December",
)  # fmt: skip

# English, German, French, Dutch, Spanish; without accents. Three letters or more of one will do.
_MONTH_NAMES = (
    "january januar janvier januari enero jaenner",
    "february februar fevrier februari febrero",
    "march marz maerz mars maart marzo mrz mrt",
    "april avril abril",
    "may mai mei mayo",
    "june juni juin junio",
    "july juli juillet julio",
    "august aout augustus agosto",
    "september septembre septiembre setiembre",
    "october oktober octobre octubre",
    "november novembre noviembre",
    "december dezember decembre diciembre",
)
_FILLERS = {"st", "nd", "rd", "th", "of", "the", "de", "er"}
_LONGEST = 40
_LONGEST_SEARCH_YEARS = 9  # 29 February comes again within eight years

_YEAR_FIRST = re.compile(
    r"([0-9]{4})([-/.])([0-9]{1,2})\2([0-9]{1,2})(?:[T ][0-9]{1,2}:[0-9]{2}(?::[0-9]{2}(?:\.[0-9]+)?)?)?"
)
_YEAR_LAST = re.compile(r"([0-9]{1,2})([-/.])([0-9]{1,2})(?:\2([0-9]{4}|[0-9]{2})|\.)?")
_IN_WORDS = re.compile(r"[^\W_](?:[^\W_]|[ .,'’/-])*")
_WORDS = re.compile(r"\d+|[^\W\d_]+")


@dataclass(frozen=True)
class ReadDate:
    """A date, and a sentence to stand after "Row 7: " where it had to be guessed at."""

    day: date
    notice: str | None = None


def read_date(text: str, *, today: date, day_first: bool = True) -> ReadDate:
    """Read a due date.

    Parameters
    ----------
    text
        ``2026-12-05``, ``5.12.2026``, ``5/12/2026``, ``5-12-26``, ``5 Dec 2026``, ``Dec 5``.
    today
        Without a year, the date is the next such day from this one on.
    day_first
        Whether ``5/12/2026`` is 5 December, where both orders are possible. With full stops the
        day always comes first.

    Returns
    -------
    ReadDate
        The date; with a notice where the order or the year was not written.

    Raises
    ------
    CellProblem
        When the text is no date, the day does not exist, or the year is not 2000 to 2100.
    """
    line = one_line(text)
    if len(line) > _LONGEST:
        raise _not_a_date(line)
    squeezed = re.sub(r"(?<=[0-9]) ?([-/.]) ?(?=[0-9])", r"\1", line)
    if match := _YEAR_FIRST.fullmatch(squeezed):
        year, _, month, day = match.groups()
        return ReadDate(_existing(int(year), int(month), int(day)))
    if match := _YEAR_LAST.fullmatch(squeezed):
        return _read_year_last(line, match, today=today, day_first=day_first)
    return _read_words(line, today)


def long_date(day: date) -> str:
    """Write a date in words.

    Parameters
    ----------
    day
        The date.

    Returns
    -------
    str
        ``"5 December 2026"``.
    """
    return f"{day.day} {MONTHS[day.month - 1]} {day.year}"


def _read_year_last(line: str, match: re.Match[str], *, today: date, day_first: bool) -> ReadDate:
    first, separator, second, year = match.groups()
    day, month = int(first), int(second)
    either_way = day <= 12 and month <= 12
    if separator != "." and (not day_first if either_way else month > 12 >= day):
        day, month = month, day
    found = _on_year(day, month, year, today)
    if year is None or (separator != "." and first != second and (either_way or int(second) > 12)):
        return ReadDate(found, f"the due date {shown(line)} was read as {long_date(found)}.")
    return ReadDate(found)


def _read_words(line: str, today: date) -> ReadDate:
    plain = "".join(c for c in unicodedata.normalize("NFKD", line) if not unicodedata.combining(c))
    if not _IN_WORDS.fullmatch(plain):
        raise _not_a_date(line)
    year: str | None = None
    match [word for word in _WORDS.findall(plain.casefold()) if word not in _FILLERS]:
        case [first, second]:
            pass
        case [first, second, str(year)] if re.fullmatch("[0-9]{2}|[0-9]{4}", year):
            pass
        case _:
            raise _not_a_date(line)
    day, month = (first, second) if first[0].isdigit() else (second, first)
    if not re.fullmatch("[0-9]{1,2}", day):
        raise _not_a_date(line)
    found = _on_year(int(day), _month_named(month, line), year, today)
    if year is None:
        return ReadDate(found, f"the due date {shown(line)} was read as {long_date(found)}.")
    return ReadDate(found)


def _month_named(word: str, line: str) -> int:
    months = {
        number
        for number, names in enumerate(_MONTH_NAMES, start=1)
        if len(word) >= 3 and any(name.startswith(word) for name in names.split())
    }
    if len(months) != 1:
        raise _not_a_date(line)
    return months.pop()


def _on_year(day: int, month: int, year: str | None, today: date) -> date:
    if year is not None:
        return _existing(int(year) + (2000 if len(year) == 2 else 0), month, day)
    for later in range(_LONGEST_SEARCH_YEARS):
        try:
            found = date(today.year + later, month, day)
        except ValueError:
            continue
        if found >= today:
            return _existing(found.year, month, day)
    return _existing(today.year, month, day)


def _existing(year: int, month: int, day: int) -> date:
    if not FIRST_YEAR <= year <= LAST_YEAR:
        raise CellProblem(
            f"the due date's year is {year}; write one from {FIRST_YEAR} to {LAST_YEAR}."
        )
    if not 1 <= month <= 12:
        raise CellProblem(
            f"the due date has a month {month}, which does not exist. Write it like {year}-12-05."
        )
    last = calendar.monthrange(year, month)[1]
    if not 1 <= day <= last:
        last_day = date(year, month, last).isoformat()
        raise CellProblem(
            f"{day} {MONTHS[month - 1]} {year} does not exist: "
            f"{last_day} is the last day of that month.",
            last_day,
        )
    return date(year, month, day)


def _not_a_date(line: str) -> CellProblem:
    return CellProblem(f"{shown(line)} is not a due date. Write it like 2026-12-05 or 5 Dec 2026.")
