"""The typeface of the sheets: embedded, measured, and never short of a glyph."""

import unicodedata
from functools import cache, lru_cache
from importlib.resources import files

from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

from planner.sheets.wording import plain_text

REGULAR = "Flosswright"
STRONG = "Flosswright-Strong"
_FILES = {REGULAR: "SourceSansPro-Regular.ttf", STRONG: "SourceSansPro-Semibold.ttf"}

ELLIPSIS = "\u2026"
# The typeface has no glyph for U+25A1 or U+FFFD; this open box it has.
MISSING = "\u2610"


@cache
def ready_fonts() -> frozenset[int]:
    """Register both weights once and tell the code points that both can show.

    Notes
    -----
    The digits of this typeface all have one width, so columns of figures align.
    """
    folder = files("font_source_sans_pro") / "files"
    shown: set[int] | None = None
    for name, file_name in _FILES.items():
        font = TTFont(name, str(folder / file_name))
        pdfmetrics.registerFont(font)
        glyphs = set(font.face.charToGlyph)
        shown = glyphs if shown is None else shown & glyphs
    return frozenset(shown or ())


def _stand_in(character: str, shown: frozenset[int]) -> str:
    """Find what to print for a character without a glyph."""
    simpler = unicodedata.normalize("NFKD", character)
    if simpler != character and all(ord(part) in shown for part in simpler):
        return simpler
    if unicodedata.category(character).startswith("Z"):
        return " "
    if unicodedata.category(character) == "Mn":
        return ""
    return MISSING


@lru_cache(maxsize=8192)
def printable(text: str) -> str:
    """Return the text with an open box for each character the typeface lacks."""
    shown = ready_fonts()
    plain = plain_text(text)
    if all(ord(character) in shown for character in plain):
        return plain
    return "".join(
        character if ord(character) in shown else _stand_in(character, shown) for character in plain
    )


@lru_cache(maxsize=8192)
def width_of(text: str, font: str, size_pt: float) -> float:
    """Measure a printable text [pt]."""
    ready_fonts()
    return float(pdfmetrics.stringWidth(text, font, size_pt))


@lru_cache(maxsize=8192)
def shortened(text: str, font: str, size_pt: float, room_pt: float) -> str:
    """Make a text printable and cut it, with an ellipsis, to the room there is.

    Parameters
    ----------
    text
        Any text.
    font
        REGULAR or STRONG.
    size_pt
        Type size [pt].
    room_pt
        Width that the text may take [pt].

    Returns
    -------
    str
        The text itself, its longest fitting beginning with an ellipsis, or nothing.
    """
    whole = printable(text)
    if width_of(whole, font, size_pt) <= room_pt:
        return whole
    least, most = 0, len(whole)
    while least < most:
        middle = (least + most + 1) // 2
        if width_of(whole[:middle].rstrip() + ELLIPSIS, font, size_pt) <= room_pt:
            least = middle
        else:
            most = middle - 1
    return whole[:least].rstrip() + ELLIPSIS if least else ""


def wrapped(text: str, font: str, size_pt: float, room_pt: float, most_lines: int) -> list[str]:
    """Break a text into lines between words; the last one ends in an ellipsis if it must."""
    lines: list[str] = []
    words = printable(text).split(" ")
    while words and words[0]:
        if len(lines) == most_lines - 1:
            lines.append(shortened(" ".join(words), font, size_pt, room_pt))
            break
        taken = 1
        while (
            taken < len(words) and width_of(" ".join(words[: taken + 1]), font, size_pt) <= room_pt
        ):
            taken += 1
        lines.append(shortened(" ".join(words[:taken]), font, size_pt, room_pt))
        words = words[taken:]
    return lines
