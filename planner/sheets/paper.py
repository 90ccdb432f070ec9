"""Paper formats, as a table of data; all coordinates of the sheets are PDF points.

References
----------
ISO 216 (A4, A5) and ANSI/ASME Y14.1 (US Letter).
"""

from dataclasses import dataclass

POINTS_PER_MM = 72 / 25.4


class PaperError(ValueError):
    """A paper format that the sheets do not know."""


@dataclass(frozen=True)
class Paper:
    """One paper format.

    Parameters
    ----------
    key
        What stands in an address or a setting.
    name
        What a maker calls it.
    width_pt, height_pt
        Size, upright [pt].
    """

    key: str
    name: str
    width_pt: float
    height_pt: float


PAPERS: dict[str, Paper] = {
    paper.key: paper
    for paper in (
        Paper("a4", "A4", 595.2756, 841.8898),
        Paper("letter", "US Letter", 612.0, 792.0),
    )
}

# Knotting cards lie beside the knots, so they are half as large.
CARD_PAPERS: dict[str, Paper] = {
    paper.key: paper
    for paper in (
        Paper("a5", "A5", 419.5276, 595.2756),
        Paper("half-letter", "half Letter", 396.0, 612.0),
    )
}


def millimetres(length_mm: float) -> float:
    """Turn a length on paper [mm] into points [pt]."""
    return length_mm * POINTS_PER_MM


def paper_named(paper: "Paper | str") -> Paper:
    """Find a paper format by its key; a `Paper` is returned as it is.

    Raises
    ------
    PaperError
        When there is no such format; the message lists those that exist.
    """
    if isinstance(paper, Paper):
        return paper
    try:
        return PAPERS[paper.lower()]
    except KeyError:
        known = ", ".join(PAPERS)
        raise PaperError(f"No paper called {paper[:20]!r}. Choose one of: {known}.") from None
