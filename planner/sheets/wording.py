"""Words and figures as the sheets print them, whatever was typed into a name."""

import unicodedata
from collections.abc import Iterable
from datetime import date
from decimal import Decimal

NARROW_SPACE = "\u202f"
SEPARATOR = " \u00b7 "

# strftime() follows the machine's locale; the sheets must not.
WEEKDAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
MONTHS = (
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
)


def plain_text(text: str, limit: int = 2000) -> str:
    """Drop what no sheet can show: control, format and half characters; one line.

    Parameters
    ----------
    text
        Anything that was typed or imported.
    limit
        Longest text to look at [characters].

    Notes
    -----
    Composed to Unicode's form NFC, so that an accent typed separately finds its glyph.
    """
    kept = []
    for character in unicodedata.normalize("NFC", text[:limit]):
        category = unicodedata.category(character)
        if category == "Cs":
            kept.append("\ufffd")
        elif character in "\t\n\r\v\f" or category in ("Zl", "Zp"):
            kept.append(" ")
        elif category not in ("Cc", "Cf"):
            kept.append(character)
    return " ".join(word for word in "".join(kept).split(" ") if word)


def long_date(day: date) -> str:
    """Write "Saturday 5 December 2026"."""
    return f"{WEEKDAYS[day.weekday()]} {day.day} {MONTHS[day.month - 1]} {day.year}"


def short_date(day: date) -> str:
    """Write "Sat 5 Dec 2026"."""
    return f"{WEEKDAYS[day.weekday()][:3]} {day.day} {MONTHS[day.month - 1][:3]} {day.year}"


def batch_words(batch: str) -> str:
    """Name the batch; two batches of one market day must not look alike."""
    return plain_text(batch) or "the next market"


def counted(count: int, one: str, many: str | None = None) -> str:
    """Write "1 skein", "3 skeins"."""
    return f"{count} {one if count == 1 else many or one + 's'}"


def money(amount: Decimal) -> str:
    """Write an amount with two places and narrow spaces between thousands."""
    return f"{amount:,.2f}".replace(",", NARROW_SPACE)


def whole_part(figure: str) -> str:
    """Return what stands before ".5" or " 1/2", so that figures align in a column."""
    return figure.split(".")[0].split(" ")[0]


def joined(parts: Iterable[str], separator: str = SEPARATOR) -> str:
    """Join what there is, so that an empty field leaves no hole."""
    return separator.join(part for part in parts if part)
