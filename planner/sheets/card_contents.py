"""What stands on a knotting card: plain data, drawn by knotting_card.py."""

from collections.abc import Mapping
from dataclasses import dataclass

from patterns.cut_lengths import Ending
from patterns.grid_lengths import Run
from patterns.techniques import Pattern
from planner.sheets.contents import SheetHead, TagPiece


@dataclass(frozen=True)
class CardRun:
    """A run of a grid pattern, and the scrap it needs."""

    run: Run
    shade_code: str
    shade_name: str
    shade_colour: str
    scrap_mm: int


@dataclass(frozen=True)
class KnottingCard:
    """Everything a maker needs at the knots: one pattern in one size, ending and colourway.

    Parameters
    ----------
    head
        Whose card it is, for which plan, from which day.
    unit
        The unit the maker measures in.
    pattern, colours
        The pattern, and "#rrggbb" for each of its slots.
    colourway, size, ending
        Their names; "" where none is chosen.
    ends
        How the bracelet begins and closes, for the thread to leave free.
    rows
        Rows of the whole band.
    band_length_mm, band_width_mm
        What the band measures, to the nearest whole number [mm].
    pieces
        The pieces to cut but for the runs.
    runs
        The runs of a grid pattern, by slot, in the order in which they begin.
    cautions
        Short sentences to pass on.
    """

    head: SheetHead
    unit: str
    pattern: Pattern
    colours: Mapping[str, str]
    colourway: str
    size: str
    ending: str
    ends: Ending
    rows: int
    band_length_mm: int
    band_width_mm: int
    pieces: tuple[TagPiece, ...]
    runs: tuple[CardRun, ...]
    cautions: tuple[str, ...]
