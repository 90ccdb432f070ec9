"""Fill a knotting card: for a bracelet that is chosen now, or for one as a plan has it."""

from collections.abc import Mapping, Sequence
from itertools import groupby
from typing import Protocol

from patterns.cut_lengths import Ending
from patterns.geometry import Gauge
from patterns.grid import GridPattern
from patterns.grid_lengths import DEFAULT_JOIN_TAIL_MM, Run, find_runs
from patterns.pattern_file import read_pattern
from patterns.pictures import neutral_colours
from patterns.techniques import Pattern
from planner.planning.demand import ShadeName
from planner.planning.snapshot import SnapshotKind
from planner.sheets.card_contents import CardRun, KnottingCard
from planner.sheets.contents import SheetHead, TagPiece


class CutPiece(Protocol):
    """A piece to cut, of a plan or worked out now."""

    @property
    def slot(self) -> str: ...
    @property
    def role(self) -> str: ...
    @property
    def short_label(self) -> str: ...
    @property
    def cut_mm(self) -> int: ...
    @property
    def fold_mm(self) -> int | None: ...


def kind_card(kind: SnapshotKind, head: SheetHead, unit: str) -> KnottingCard:
    """Return the card of a planned bracelet, its pattern as it was when the plan was made."""
    making = kind.making
    pattern = read_pattern(kind.pattern_text)
    return fill_card(
        head=head,
        unit=unit,
        pattern=pattern,
        shades={slot: ShadeName(**shade) for slot, shade in making["shades"].items()},
        names=(kind.colourway_name, kind.size_name, kind.ending_name),
        ends=Ending(**making["ending"]),
        rows=kind.rows,
        band_mm=(kind.band_length_mm, round(kind.band_width_mm)),
        pieces=kind.pieces,
        gauge=Gauge(**making["gauge"]),
        join_tail_mm=making.get("join_tail_mm", DEFAULT_JOIN_TAIL_MM),
        cautions=kind.cautions,
    )


def fill_card(
    *,
    head: SheetHead,
    unit: str,
    pattern: Pattern,
    shades: Mapping[str, ShadeName],
    names: tuple[str, str, str],
    ends: Ending,
    rows: int,
    band_mm: tuple[int, int],
    pieces: Sequence[CutPiece],
    gauge: Gauge,
    join_tail_mm: float,
    cautions: tuple[str, ...],
) -> KnottingCard:
    """Return a card.

    Parameters
    ----------
    head
        Whose card it is.
    unit
        The unit the maker measures in.
    pattern
        The pattern.
    shades
        The shade of each slot; a slot without one is drawn in a tone of undyed thread.
    names
        Of colourway, size and ending.
    ends
        How the bracelet begins and closes.
    rows
        Rows of the whole band.
    band_mm
        Length and width of the band [mm].
    pieces
        The pieces to cut, runs in the order of `find_runs`.
    gauge, join_tail_mm
        What the runs were found with.
    cautions
        What to pass on.
    """
    shown = _shown_shades(pattern, shades)
    runs: tuple[Run, ...] = ()
    if isinstance(pattern, GridPattern):
        runs = find_runs(pattern, rows, gauge, join_tail_mm)
    scraps = [piece for piece in pieces if piece.role == "run"]
    colourway, size, ending = names
    return KnottingCard(
        head=head,
        unit=unit,
        pattern=pattern,
        colours={slot: shade.colour for slot, shade in shown.items()},
        colourway=colourway,
        size=size,
        ending=ending,
        ends=ends,
        rows=rows,
        band_length_mm=band_mm[0],
        band_width_mm=band_mm[1],
        pieces=_hanging_pieces(pieces, shown),
        runs=tuple(
            _card_run(run, scrap, shown[run.slot]) for run, scrap in zip(runs, scraps, strict=True)
        ),
        cautions=cautions,
    )


def _shown_shades(pattern: Pattern, shades: Mapping[str, ShadeName]) -> dict[str, ShadeName]:
    undyed = {
        slot: ShadeName(0, slot, "no shade chosen", colour)
        for slot, colour in neutral_colours(pattern).items()
    }
    return undyed | dict(shades)


def _hanging_pieces(
    pieces: Sequence[CutPiece], shades: Mapping[str, ShadeName]
) -> tuple[TagPiece, ...]:
    """A line a piece; base strands, which are all cut to one length, share a line."""
    lines = []
    hanging = [piece for piece in pieces if piece.role != "run"]
    for key, group in groupby(hanging, key=_same_line):
        alike = list(group)
        label = alike[0].short_label
        if key[0] == "base":
            label = _base_label(len(alike), is_folded=alike[0].fold_mm is not None)
        lines.append(_tag_piece(alike[0], label, shades[alike[0].slot]))
    return tuple(lines)


def _base_label(count: int, *, is_folded: bool) -> str:
    if is_folded:
        return "1 pair" if count == 1 else f"{count} pairs"
    return f"{count} base"


def _same_line(piece: CutPiece) -> tuple[str, ...]:
    if piece.role == "base":
        return ("base", str(piece.cut_mm), str(piece.fold_mm))
    return (piece.role, piece.short_label)


def _tag_piece(piece: CutPiece, label: str, shade: ShadeName) -> TagPiece:
    return TagPiece(
        label=label,
        slot=piece.slot,
        shade_code=shade.code,
        shade_name=shade.name,
        shade_colour=shade.colour,
        cut_mm=piece.cut_mm,
        fold_mm=piece.fold_mm,
    )


def _card_run(run: Run, scrap: CutPiece, shade: ShadeName) -> CardRun:
    return CardRun(run, shade.code, shade.name, shade.colour, scrap.cut_mm)
