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
    """Strands that a flat length does not do for, and what each of them lacks [mm]."""

    label: str
    strands: int
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
        Strands that would run short, those that lack most first.
    tight
        Strands that would just do, on the thread of their safety.
    tight_strands
        How many they are.
    """

    flat_mm: int
    too_much_mm: int
    working: str
    short: tuple[Shortfall, ...]
    tight: str
    tight_strands: int


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
    tight = [need.label for need in needs if need.bare_mm <= flat_mm < need.cut_mm]
    return FlatLength(
        flat_mm=flat_mm,
        too_much_mm=sum(flat_mm - need.cut_mm for need in over),
        working=_over_working(over, flat_mm),
        short=_shortfalls(needs, flat_mm),
        tight=listed(tight),
        tight_strands=len(tight),
    )


def _shortfalls(needs: tuple[StrandNeed, ...], flat_mm: int) -> tuple[Shortfall, ...]:
    """Strands that lack the same are told together."""
    by_need: dict[int, list[str]] = {}
    for need in needs:
        if flat_mm < need.bare_mm:
            by_need.setdefault(need.bare_mm, []).append(need.label)
    return tuple(
        _shortfall(labels, bare_mm, flat_mm)
        for bare_mm, labels in sorted(by_need.items(), reverse=True)
    )


def _shortfall(labels: list[str], bare_mm: int, flat_mm: int) -> Shortfall:
    short_mm = bare_mm - flat_mm
    working = (
        f"knots and ends {in_mm(bare_mm)}, without safety, - {in_mm(flat_mm)} = {in_mm(short_mm)}"
    )
    return Shortfall(listed(labels), len(labels), short_mm, working)


def listed(labels: list[str]) -> str:
    """Return "strands 1, 3 and 4", or "base strand 2 and leading strand"."""
    kinds: dict[str, list[str]] = {}
    for label in labels:
        kind, _, number = label.rpartition(" ")
        kinds.setdefault(kind if number.isdigit() else label, []).append(number)
    return _joined([_of_one_kind(kind, numbers) for kind, numbers in kinds.items()])


def _of_one_kind(kind: str, numbers: list[str]) -> str:
    if not numbers[0].isdigit():
        return kind
    return f"{kind}{'' if len(numbers) == 1 else 's'} {_joined(numbers)}"


def _joined(words: list[str]) -> str:
    return " and ".join([", ".join(words[:-1]), words[-1]] if len(words) > 1 else words)


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
