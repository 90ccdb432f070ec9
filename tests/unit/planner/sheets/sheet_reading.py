"""Sheets read back with another program than the one that wrote them."""

from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache
from io import BytesIO

import pypdfium2
import zxingcpp
from PIL import Image
from pypdf import PdfReader
from pypdfium2 import raw


@dataclass(frozen=True)
class Run:
    """Letters of one size that stand together on one base line [pt]."""

    page: int
    text: str
    size: float
    left: float
    bottom: float
    right: float
    top: float
    base: float


@dataclass(frozen=True)
class Letter:
    text: str
    size: float
    box: tuple[float, float, float, float]
    x: float
    base: float


def page_count(document: bytes) -> int:
    return len(PdfReader(BytesIO(document)).pages)


@lru_cache(maxsize=64)
def page_texts(document: bytes) -> list[str]:
    return [page.extract_text() for page in PdfReader(BytesIO(document)).pages]


def all_text(document: bytes) -> str:
    return "\n".join(page_texts(document))


@lru_cache(maxsize=64)
def runs(document: bytes) -> list[Run]:
    """Read all runs of letters in the order they were drawn."""
    pdf = pypdfium2.PdfDocument(document)
    found = []
    for number, page in enumerate(pdf, start=1):
        group: list[Letter] = []
        for letter in _letters(page.get_textpage()):
            if group and not _belongs(group[-1], letter):
                found.append(_run(number, group))
                group = []
            group.append(letter)
        if group:
            found.append(_run(number, group))
    return [run for run in found if run.text]


def _letters(textpage: pypdfium2.PdfTextPage) -> Iterator[Letter]:
    for index in range(textpage.count_chars()):
        if raw.FPDFText_IsGenerated(textpage.raw, index):
            continue
        x, base = raw.c_double(), raw.c_double()
        raw.FPDFText_GetCharOrigin(textpage.raw, index, x, base)
        size = raw.FPDFText_GetFontSize(textpage.raw, index)
        code = raw.FPDFText_GetUnicode(textpage.raw, index)
        box = textpage.get_charbox(index)
        yield Letter(chr(code), round(size, 2), box, x.value, base.value)


def _belongs(before: Letter, letter: Letter) -> bool:
    gap = letter.x - before.box[2]
    return (
        letter.size == before.size
        and abs(letter.base - before.base) < 0.1
        and -0.3 * letter.size < gap < 0.45 * letter.size
    )


def _run(page: int, letters: list[Letter]) -> Run:
    boxes = [each.box for each in letters if not each.text.isspace()] or [letters[0].box]
    return Run(
        page,
        "".join(each.text for each in letters).strip(),
        letters[0].size,
        min(box[0] for box in boxes),
        min(box[1] for box in boxes),
        max(box[2] for box in boxes),
        max(box[3] for box in boxes),
        letters[0].base,
    )


def overlapping(found: list[Run]) -> list[tuple[str, str]]:
    """List texts that run into each other."""
    pairs = []
    for page in {run.page for run in found}:
        ordered = sorted((run for run in found if run.page == page), key=lambda run: run.left)
        for place, run in enumerate(ordered):
            for other in ordered[place + 1 :]:
                if other.left >= run.right - 0.2:
                    break
                if other.bottom < run.top - 0.2 and run.bottom < other.top - 0.2:
                    pairs.append((run.text, other.text))
    return pairs


def rendered(document: bytes, dots_per_inch: float, page: int = 0) -> Image.Image:
    """Print a page as grey pixels."""
    pdf = pypdfium2.PdfDocument(document)
    return pdf[page].render(scale=dots_per_inch / 72).to_pil().convert("L")


def decoded(image: Image.Image) -> list[zxingcpp.Barcode]:
    return [code for code in zxingcpp.read_barcodes(image) if code.valid]
