"""What is to be made: bracelets, and the pieces that each kind of them takes."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from patterns.cut_lengths import CutRule, Ending, Piece, pieces_for
from patterns.geometry import Gauge, StrandTable
from patterns.shared_lengths import with_distinct_lengths
from patterns.techniques import Pattern, strand_table


@dataclass(frozen=True)
class ShadeName:
    """A shade as a plan remembers it."""

    key: int
    code: str
    name: str
    colour: str


@dataclass(frozen=True)
class Kind:
    """Everything that makes two bracelets equal.

    Parameters
    ----------
    pattern_text : the pattern as its own text, kept with the plan.
    shades : slot and shade key, by slot; hashable so that equal kinds meet.
    knotted_length_mm : length of the band [mm].
    pattern_key, pattern_version : where the library had the text from.
    distinct_lengths : in how many lengths its pieces are cut at the most; None for each its own.
    """

    pattern: Pattern
    pattern_text: str
    colourway_name: str
    size_name: str
    is_child: bool
    has_metal_or_button: bool
    shades: tuple[tuple[str, int], ...]
    knotted_length_mm: int
    gauge: Gauge
    ending: Ending
    rule: CutRule
    distinct_lengths: int | None = None
    pattern_key: int | None = None
    pattern_version: int | None = None


@dataclass(frozen=True)
class Order:
    """So many bracelets of one kind for one person; `line_number` is the row in the batch.

    Bracelets of one `matched_set`, whatever its capitals, are cut from one dye lot of each shade.
    """

    line_number: int
    kind: Kind
    quantity: int
    for_whom: str = ""
    due_date: date | None = None
    note: str = ""
    matched_set: str = ""


@dataclass(frozen=True)
class ExplodedKind:
    """A kind with its rows, strands and pieces, worked out once for all its bracelets."""

    kind: Kind
    table: StrandTable
    pieces: tuple[Piece, ...]

    @property
    def shade_by_slot(self) -> Mapping[str, int]:
        return dict(self.kind.shades)


@dataclass(frozen=True, slots=True)
class Bracelet:
    """One bracelet to make; `kind_index` points into the exploded kinds."""

    number: int
    kind_index: int
    for_whom: str
    due_date: date | None
    note: str
    matched_set: str = ""


def explode_kind(kind: Kind) -> ExplodedKind:
    """Work out rows, strands and pieces of a kind.

    Parameters
    ----------
    kind : what to make.

    Returns
    -------
    The kind with its table and its pieces, exact over every row of the bracelet.

    Raises
    ------
    patterns.geometry.LengthError
        When the pattern cannot be ended at this length.
    """
    table = strand_table(kind.pattern, kind.knotted_length_mm, kind.gauge, kind.rule.join_tail_mm)
    pieces = pieces_for(table, kind.ending, kind.rule)
    return ExplodedKind(
        kind=kind, table=table, pieces=with_distinct_lengths(pieces, kind.distinct_lengths)
    )


def explode(orders: tuple[Order, ...]) -> tuple[tuple[ExplodedKind, ...], tuple[Bracelet, ...]]:
    """Turn orders into numbered bracelets; equal kinds are worked out once.

    Parameters
    ----------
    orders : the lines of a batch, in their order.

    Returns
    -------
    Kinds in order of first use, and bracelets numbered from 1 in the order of the lines.

    Raises
    ------
    patterns.geometry.LengthError
        As `explode_kind`.
    """
    index_of: dict[Kind, int] = {}
    kinds: list[ExplodedKind] = []
    bracelets: list[Bracelet] = []
    for order in orders:
        if order.kind not in index_of:
            index_of[order.kind] = len(kinds)
            kinds.append(explode_kind(order.kind))
        kind_index = index_of[order.kind]
        for _ in range(order.quantity):
            bracelets.append(
                Bracelet(
                    number=len(bracelets) + 1,
                    kind_index=kind_index,
                    for_whom=order.for_whom,
                    due_date=order.due_date,
                    note=order.note,
                    matched_set=order.matched_set,
                )
            )
    return tuple(kinds), tuple(bracelets)
