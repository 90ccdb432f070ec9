"""What cutting every strand to one flat length would have wasted, or left short."""

from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from math import ceil

from patterns.cut_lengths import Piece
from patterns.working import in_mm

# The beginners' rule of thumb, 0.75 to 1 m a strand whatever the pattern: common practice, no
# source.
FLAT_LENGTHS_MM = (750, 1000)


@dataclass(frozen=True)
class StrandNeed:
    """What one strand needs.

    Parameters
    ----------
    label
        What sheets call it.
    cut_mm
        Its own length as it is cut, with safety and rounding [mm].
    bare_mm
        Its thread in the knots and its ends, without safety [whole mm, rounded up].
    """

    label: str
    cut_mm: int
    bare_mm: int


@dataclass(frozen=True)
class Shortfall:
    """A strand that a flat length does not do for, and what it lacks [mm]."""

    label: str
    short_mm: int
    working: str


@dataclass(frozen=True)
class FlatLength:
    """One flat length, held against what each strand needs.

    Parameters
    ----------
    flat_mm
        The length every strand is cut to [mm].
    too_much_mm
        What is cut too much, over all strands that need less [mm].
    working
        How that adds up.
    short
        Strands that would run short, by their number.
    tight
        Strands that would just do, on the thread of their safety.
    """

    flat_mm: int
    too_much_mm: int
    working: str
    short: tuple[Shortfall, ...]
    tight: tuple[str, ...]


def strand_needs(pieces: Iterable[Piece]) -> tuple[StrandNeed, ...]:
    """Return what each hanging strand needs; of a folded piece, each half.

    Notes
    -----
    Runs of a grid come from scraps, and a sliding piece is no strand: both are left out. So is
    what a piece is cut longer only to share its length with others.
    """
    return tuple(
        need
        for piece in pieces
        if piece.role not in ("run", "sliding")
        for need in _needs_of(piece)
    )


def _needs_of(piece: Piece) -> list[StrandNeed]:
    ends_mm = Fraction(piece.ends_mm, len(piece.strands))
    cuts_mm = [piece.needed_mm]
    if piece.fold_mm is not None:
        cuts_mm = [piece.fold_mm, piece.needed_mm - piece.fold_mm]
    return [
        StrandNeed(label, cut_mm, ceil(Fraction(knotted_mm) + ends_mm))
        for label, cut_mm, knotted_mm in zip(piece.labels, cuts_mm, piece.knotted_mm, strict=True)
    ]


def flat_length(needs: tuple[StrandNeed, ...], flat_mm: int) -> FlatLength:
    """Hold one flat length against what each strand needs.

    Parameters
    ----------
    needs
        Every hanging strand.
    flat_mm
        The flat length [mm].

    Notes
    -----
    Too much: what is over the strand's own cut length. Short: what lacks for knots and ends
    alone, since the safety share is there to be used up. What lies between does, tightly.
    """
    over = [need for need in needs if flat_mm > need.cut_mm]
    return FlatLength(
        flat_mm=flat_mm,
        too_much_mm=sum(flat_mm - need.cut_mm for need in over),
        working=_over_working(over, flat_mm),
        short=tuple(_shortfall(need, flat_mm) for need in needs if flat_mm < need.bare_mm),
        tight=tuple(need.label for need in needs if need.bare_mm <= flat_mm < need.cut_mm),
    )


def _shortfall(need: StrandNeed, flat_mm: int) -> Shortfall:
    short_mm = need.bare_mm - flat_mm
    working = (
        f"knots and ends {in_mm(need.bare_mm)}, without safety, - {in_mm(flat_mm)}"
        f" = {in_mm(short_mm)}"
    )
    return Shortfall(need.label, short_mm, working)


def _over_working(over: list[StrandNeed], flat_mm: int) -> str:
    if not over:
        return f"No strand is cut to less than {in_mm(flat_mm)}."
    cuts_mm = sum(need.cut_mm for need in over)
    total_mm = len(over) * flat_mm
    return (
        f"{len(over)} × {in_mm(flat_mm)} - their own lengths {in_mm(cuts_mm)}"
        f" = {in_mm(total_mm - cuts_mm)}"
    )


def smallest_flat_mm(needs: tuple[StrandNeed, ...]) -> int:
    """Return the smallest flat length that would do for every strand [mm], safety included."""
    return max(need.cut_mm for need in needs)
