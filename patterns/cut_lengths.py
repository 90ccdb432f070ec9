"""From a strand's knotted thread to the pieces to cut: endings, safety, folds, rounding."""

from dataclasses import dataclass
from fractions import Fraction
from math import ceil
from typing import Literal, get_args

from patterns.geometry import Role, StrandLength, StrandTable
from patterns.grid_lengths import DEFAULT_JOIN_TAIL_MM

Start = Literal["straight", "folded"]
PieceRole = Role | Literal["sliding"]
MAX_ENDING_MM = 3000
MAX_STEP_MM = 200
_LENGTH_NAMES = {
    "start_tie_mm": "start tie",
    "end_tie_mm": "end tie",
    "closing_knot_mm": "closing knot",
    "grip_mm": "grip",
    "fold_loop_mm": "loop of the fold",
    "single_start_mm": "start of a single strand",
    "sliding_piece_mm": "sliding piece",
}


class EndingError(ValueError):
    """An ending or a cutting rule that cannot be used."""


@dataclass(frozen=True)
class Ending:
    """How a bracelet begins and closes, and what its ends cost in thread.

    Parameters
    ----------
    name
        What the maker calls it.
    start
        "straight" (every strand alone, a tie at the start) or "folded" (two strands of a slot
        are one piece, folded to a loop at the start).
    start_tie_mm
        Finished tie at a straight start [mm].
    end_tie_mm
        Finished tie at the end [mm].
    take_up
        Thread a finished length of tie takes [times], 1 to 3.
    closing_knot_mm
        Closing knot of a tie [mm].
    grip_mm
        Tail that fingers need to tie the last rows [mm].
    fold_loop_mm
        Thread in the loop, for both strands of a folded piece together [mm].
    single_start_mm
        Start of a strand that finds no partner to fold with [mm].
    sliding_piece_mm
        Separate piece of a sliding closure [mm]; 0 for none.

    Raises
    ------
    EndingError
        When a value has the wrong type or is out of range.

    Notes
    -----
    Allowance at an end = tie * take-up + closing knot + grip, rounded up to whole
    millimetres. A folded start has neither tie, closing knot nor grip.
    """

    name: str
    start: Start
    start_tie_mm: int
    end_tie_mm: int
    take_up: float
    closing_knot_mm: int
    grip_mm: int
    fold_loop_mm: int
    single_start_mm: int
    sliding_piece_mm: int

    def __post_init__(self) -> None:
        if not isinstance(self.name, str) or not self.name.strip():
            raise EndingError("The ending has no name. Give it one.")
        if self.start not in get_args(Start):
            raise EndingError("An ending starts straight or folded.")
        for field, name in _LENGTH_NAMES.items():
            _check_whole_mm(name, getattr(self, field))
        if not _is_number(self.take_up) or not 1 <= self.take_up <= 3:
            raise EndingError("The take-up has to be from 1 to 3.")

    @property
    def end_allowance_mm(self) -> int:
        """Thread a strand needs beyond the last row [mm]."""
        return self._tie_allowance_mm(self.end_tie_mm)

    @property
    def single_start_allowance_mm(self) -> int:
        """Thread a strand cut alone needs before the first row [mm]."""
        if self.start == "folded":
            return self.single_start_mm
        return self._tie_allowance_mm(self.start_tie_mm)

    def _tie_allowance_mm(self, tie_mm: int) -> int:
        return ceil(tie_mm * _as_written(self.take_up)) + self.closing_knot_mm + self.grip_mm


def _check_whole_mm(name: str, value: int) -> None:
    if isinstance(value, bool) or not isinstance(value, int) or not 0 <= value <= MAX_ENDING_MM:
        raise EndingError(f"The {name} has to be a whole number from 0 to {MAX_ENDING_MM} mm.")


def _is_number(value: float) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _as_written(value: float) -> Fraction:
    """0.1 means one tenth here, not the binary number next to it that costs a step more."""
    return Fraction(str(value))


@dataclass(frozen=True)
class CutRule:
    """How a maker cuts: share added for safety, step of the ruler, tails at a join.

    Parameters
    ----------
    safety_share
        Added to the knotted part [share], 0 to 1; 0.1 is 10 %.
    rounding_step_mm
        Cut lengths are rounded up to it [mm], 1 to 200; half an inch is Fraction(127, 10).
    join_tail_mm
        In a grid, what is left hanging at each end of a run [mm], 0 to 3000.

    Raises
    ------
    EndingError
        When a value has the wrong type or is out of range.
    """

    safety_share: float
    rounding_step_mm: int | Fraction
    join_tail_mm: int = DEFAULT_JOIN_TAIL_MM

    def __post_init__(self) -> None:
        _check_whole_mm("tail at a join", self.join_tail_mm)
        if not _is_number(self.safety_share) or not 0 <= self.safety_share <= 1:
            raise EndingError("The safety share has to be from 0 % to 100 %.")
        step = self.rounding_step_mm
        if isinstance(step, bool) or not isinstance(step, int | Fraction):
            raise EndingError("The rounding step has to be a whole number or a fraction of mm.")
        if not 1 <= step <= MAX_STEP_MM:
            raise EndingError(f"The rounding step has to be from 1 to {MAX_STEP_MM} mm.")

    def with_safety_mm(self, knotted_mm: float) -> Fraction:
        """Return the knotted part with its safety share [mm], exact."""
        return Fraction(knotted_mm) * (1 + _as_written(self.safety_share))

    def round_up_mm(self, length_mm: Fraction | int) -> int:
        """Return the next multiple of the step, as the whole millimetre nearest to it [mm].

        A multiple of half an inch is shown as one again (1054 mm reads as 41 1/2 in); where the
        nearest millimetre would fall short of the length, the multiple after it is taken.
        """
        multiple = ceil(Fraction(length_mm) / self.rounding_step_mm)
        rounded_mm = round(multiple * self.rounding_step_mm)
        if rounded_mm < length_mm:
            rounded_mm = round((multiple + 1) * self.rounding_step_mm)
        return rounded_mm


@dataclass(frozen=True)
class Piece:
    """One length to cut.

    Parameters
    ----------
    slot
        The colour slot it is cut from.
    strands
        The strand it becomes; two when folded, the longer first; none for a sliding piece.
    cut_mm
        Length to cut [mm].
    fold_mm
        Where to fold, from the end of the first listed strand [mm]; None unless folded.
    knotted_mm
        Thread of each strand in the knotted part [mm].
    ends_mm
        What the ends, the loop of a fold, or the tails of a run take together [mm].
    labels
        What each of its strands is called, in the same order.
    role
        What it becomes; a folded piece goes by its first strand.
    added_mm
        How much longer it is cut than it needs, to share a length with others [mm].
    """

    slot: str
    strands: tuple[int, ...]
    cut_mm: int
    fold_mm: int | None
    knotted_mm: tuple[float, ...]
    ends_mm: int
    labels: tuple[str, ...]
    role: PieceRole = "strand"
    added_mm: int = 0

    @property
    def needed_mm(self) -> int:
        """What it would be cut to if it did not share a length with others [mm]."""
        return self.cut_mm - self.added_mm

    @property
    def label(self) -> str:
        """What sheets call it: "strands 4 and 1", "leading strand", "run 2 of B"."""
        if self.role == "sliding":
            return "sliding piece"
        kinds = {label.rpartition(" ")[0] for label in self.labels}
        if len(self.labels) == 2 and len(kinds) == 1:
            return f"{kinds.pop()}s {self.strands[0]} and {self.strands[1]}"
        return " and ".join(self.labels)

    @property
    def short_label(self) -> str:
        """The same where there is little room: "4 + 1", "lead", "run 2"."""
        if self.role == "sliding":
            return "slide"
        return " + ".join(_short(label) for label in self.labels)


def _short(label: str) -> str:
    if label.startswith("run"):
        return label.partition(" of ")[0]
    return "lead" if label == "leading strand" else label.rpartition(" ")[2]


def pieces_for(table: StrandTable, ending: Ending, rule: CutRule) -> tuple[Piece, ...]:
    """Return the pieces to cut for one bracelet.

    Parameters
    ----------
    table
        The strands and their knotted thread.
    ending
        How the bracelet begins and closes.
    rule
        Safety share and rounding step.

    Returns
    -------
    Pieces by their leftmost strand; a sliding piece, in strand 1's slot, comes last. In a grid
    the leading strand and the runs follow the base strands.

    Notes
    -----
    Alone: cut = knotted * (1 + safety) + start + end, rounded up to the step.
    Folded: each half = knotted * (1 + safety) + end + half the loop; cut = both halves,
    rounded up to the step, and a step more where no whole millimetre to fold at leaves both
    enough. Within a slot the longest strand goes with the shortest, so that pieces come out
    even; of an odd number the longest is cut alone.
    A run is never folded: cut = knotted * (1 + safety) + two tails, rounded up to the step.
    """
    pieces = []
    hanging = tuple(strand for strand in table.strands if strand.role != "run")
    for group in _cut_together(hanging, folded=ending.start == "folded"):
        if len(group) == 2:
            pieces.append(_folded_piece(group[0], group[1], ending, rule))
        else:
            pieces.append(_single_piece(group[0], ending, rule))
    pieces.sort(key=lambda piece: min(piece.strands))
    pieces.extend(_run_piece(strand, rule) for strand in table.strands if strand.role == "run")
    if ending.sliding_piece_mm and table.strands:
        pieces.append(_sliding_piece(table.strands[0].slot, ending, rule))
    return tuple(pieces)


def _cut_together(
    strands: tuple[StrandLength, ...], *, folded: bool
) -> list[tuple[StrandLength, ...]]:
    if not folded:
        return [(strand,) for strand in strands]
    by_slot: dict[str, list[StrandLength]] = {}
    for strand in strands:
        by_slot.setdefault(strand.slot, []).append(strand)
    return [group for members in by_slot.values() for group in _pair_up(members)]


def _pair_up(strands: list[StrandLength]) -> list[tuple[StrandLength, ...]]:
    longest_first = sorted(strands, key=lambda strand: (-strand.knotted_mm, strand.strand))
    single = len(longest_first) % 2
    paired = longest_first[single:]
    alone: list[tuple[StrandLength, ...]] = [(strand,) for strand in longest_first[:single]]
    return alone + [(paired[i], paired[-1 - i]) for i in range(len(paired) // 2)]


def _single_piece(strand: StrandLength, ending: Ending, rule: CutRule) -> Piece:
    ends_mm = ending.single_start_allowance_mm + ending.end_allowance_mm
    return Piece(
        slot=strand.slot,
        strands=(strand.strand,),
        cut_mm=rule.round_up_mm(rule.with_safety_mm(strand.knotted_mm) + ends_mm),
        fold_mm=None,
        knotted_mm=(strand.knotted_mm,),
        ends_mm=ends_mm,
        labels=(strand.label,),
        role=strand.role,
    )


def _run_piece(run: StrandLength, rule: CutRule) -> Piece:
    tails_mm = 2 * rule.join_tail_mm
    return Piece(
        slot=run.slot,
        strands=(run.strand,),
        cut_mm=rule.round_up_mm(rule.with_safety_mm(run.knotted_mm) + tails_mm),
        fold_mm=None,
        knotted_mm=(run.knotted_mm,),
        ends_mm=tails_mm,
        labels=(run.label,),
        role="run",
    )


def _folded_piece(
    longer: StrandLength, shorter: StrandLength, ending: Ending, rule: CutRule
) -> Piece:
    half_end = ending.end_allowance_mm + Fraction(ending.fold_loop_mm, 2)
    first = rule.with_safety_mm(longer.knotted_mm) + half_end
    second = rule.with_safety_mm(shorter.knotted_mm) + half_end
    cut_mm = rule.round_up_mm(first + second)
    if ceil(first) + ceil(second) > cut_mm:  # no whole millimetre to fold at
        cut_mm = rule.round_up_mm(ceil(first) + ceil(second))
    return Piece(
        slot=longer.slot,
        strands=(longer.strand, shorter.strand),
        cut_mm=cut_mm,
        fold_mm=_fold_point_mm(ceil(first), cut_mm - ceil(second), rule.rounding_step_mm),
        knotted_mm=(longer.knotted_mm, shorter.knotted_mm),
        ends_mm=2 * ending.end_allowance_mm + ending.fold_loop_mm,
        labels=(longer.label, shorter.label),
        role=longer.role,
    )


def _fold_point_mm(lowest_mm: int, highest_mm: int, step_mm: int | Fraction) -> int:
    """Choose the easiest mark to find on the ruler between two whole millimetres.

    On the step if one lies there, else on 5 mm (on half the step of an inch ruler), else
    in the middle.
    """
    finer_mm = 5 if Fraction(step_mm).denominator == 1 else Fraction(step_mm) / 2
    middle = Fraction(lowest_mm + highest_mm, 2)
    for between_marks_mm in (step_mm, finer_mm):
        # If any mark lies between the two, the one nearest the middle does.
        mark_mm = round(round(middle / between_marks_mm) * Fraction(between_marks_mm))
        if lowest_mm <= mark_mm <= highest_mm:
            return mark_mm
    return int(middle)


def _sliding_piece(slot: str, ending: Ending, rule: CutRule) -> Piece:
    return Piece(
        slot=slot,
        strands=(),
        cut_mm=rule.round_up_mm(ending.sliding_piece_mm),
        fold_mm=None,
        knotted_mm=(),
        ends_mm=ending.sliding_piece_mm,
        labels=(),
        role="sliding",
    )
