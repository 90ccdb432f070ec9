"""How each length was made, in words and numbers that a maker can redo."""

from dataclasses import replace
from fractions import Fraction
from math import ceil

from patterns.cut_lengths import CutRule, Ending, Piece
from patterns.geometry import Gauge, StrandLength


def knotted_working(strand: StrandLength, gauge: Gauge) -> str:
    """Return how the thread in the knotted part of a strand adds up."""
    if strand.role != "strand":
        return _grid_working(strand, gauge)
    tied = f"{counted(strand.tied, 'knot')} tied × {in_mm(gauge.knotting_mm, 3)}"
    base = f"{strand.base} as base × {in_mm(gauge.base_mm, 3)}"
    idle = f"{counted(strand.idle, 'idle row')} × {in_mm(gauge.idle_mm, 3)}"
    return f"{tied} + {base} + {idle} = {in_mm(strand.knotted_mm)}"


def _grid_working(strand: StrandLength, gauge: Gauge) -> str:
    """A base strand hangs straight; the others tie, pass behind and go down."""
    if strand.role == "base":
        parts = [f"{counted(strand.base, 'row')} as base × {in_mm(gauge.base_mm, 3)}"]
    else:
        down = "turn" if strand.role == "leading" else "row"
        parts = [f"{counted(strand.tied, 'cell')} tied × {in_mm(gauge.knotting_mm, 3)}"]
        if strand.passed:
            passed = counted(strand.passed, "column")
            parts.append(f"{passed} passed behind × {in_mm(gauge.passing_mm, 3)}")
        if strand.turned:
            turned = counted(strand.turned, down)
            parts.append(
                f"{turned}{' down' if down == 'row' else ''} × {in_mm(gauge.turning_mm, 3)}"
            )
    return f"{' + '.join(parts)} = {in_mm(strand.knotted_mm)}"


def piece_working(piece: Piece, ending: Ending, rule: CutRule) -> tuple[str, ...]:
    """Return the steps from the knotted thread of a piece to its cut length, one a line."""
    if piece.added_mm:
        alone = replace(piece, cut_mm=piece.needed_mm, added_mm=0)
        return (*piece_working(alone, ending, rule), shared_working(piece))
    if piece.role == "sliding":
        return (
            f"The sliding piece of {ending.name}: {in_mm(piece.ends_mm)}",
            _rounding(piece, rule),
        )
    if len(piece.strands) == 2:
        return _folded_working(piece, ending, rule)
    if piece.role == "run":
        return _run_working(piece, rule)
    return (
        _safety(piece.labels[0], piece.knotted_mm[0], rule),
        start_working(ending),
        end_working(ending),
        _together([rule.with_safety_mm(piece.knotted_mm[0]), Fraction(piece.ends_mm)], piece, rule),
    )


def shared_working(piece: Piece) -> str:
    """Return how a piece came to share its length with others."""
    where = f" at the end of {piece.labels[1]}" if len(piece.labels) == 2 else ""
    return f"{in_mm(piece.added_mm)} more{where}, to share a length: {in_mm(piece.cut_mm)}"


def _run_working(piece: Piece, rule: CutRule) -> tuple[str, ...]:
    tails = f"Two tails of {in_mm(rule.join_tail_mm)} = {in_mm(piece.ends_mm)}"
    parts = [rule.with_safety_mm(piece.knotted_mm[0]), Fraction(piece.ends_mm)]
    return (
        _safety(piece.labels[0], piece.knotted_mm[0], rule),
        tails,
        _together(parts, piece, rule),
    )


def _folded_working(piece: Piece, ending: Ending, rule: CutRule) -> tuple[str, ...]:
    half_loop = Fraction(ending.fold_loop_mm, 2)
    halves = [
        ceil(rule.with_safety_mm(knotted_mm) + ending.end_allowance_mm + half_loop)
        for knotted_mm in piece.knotted_mm
    ]
    first, second = piece.labels
    fold_mm = piece.fold_mm or 0
    return (
        *(
            f"{_safety(label, knotted_mm, rule)}, + end {in_mm(ending.end_allowance_mm)}"
            f" + half the loop {in_mm(half_loop)}: {in_mm(half_mm)}, rounded up to whole millimetres"
            for label, knotted_mm, half_mm in zip(
                piece.labels, piece.knotted_mm, halves, strict=True
            )
        ),
        end_working(ending),
        _together([Fraction(half_mm) for half_mm in halves], piece, rule),
        f"Folded at {in_mm(fold_mm)}: {in_mm(fold_mm)} for {first},"
        f" {in_mm(piece.cut_mm - fold_mm)} for {second}",
    )


def _safety(label: str, knotted_mm: float, rule: CutRule) -> str:
    per_cent = number(rule.safety_share * 100, 1)
    safe_mm = rule.with_safety_mm(knotted_mm)
    named = label[0].upper() + label[1:]
    return f"{named}: {in_mm(knotted_mm)} knotted + {per_cent} % safety = {in_mm(safe_mm)}"


def start_working(ending: Ending) -> str:
    """Return what a strand that is cut alone needs before the first row."""
    if ending.start == "folded":
        return f"Start of a strand without a partner: {in_mm(ending.single_start_mm)}"
    tie = _tie(ending.start_tie_mm, ending)
    return f"Start: {tie} = {in_mm(ending.single_start_allowance_mm)}"


def end_working(ending: Ending) -> str:
    """Return what a strand needs after the last row."""
    return f"End: {_tie(ending.end_tie_mm, ending)} = {in_mm(ending.end_allowance_mm)}"


def _tie(tie_mm: int, ending: Ending) -> str:
    return (
        f"tie {in_mm(tie_mm)} × take-up {number(ending.take_up, 2)}"
        f" + closing knot {in_mm(ending.closing_knot_mm)} + grip {in_mm(ending.grip_mm)}"
    )


def _together(parts: list[Fraction], piece: Piece, rule: CutRule) -> str:
    added = " + ".join(in_mm(part) for part in parts)
    return f"{added} = {in_mm(sum(parts))}, {_rounding(piece, rule).lower()}"


def _rounding(piece: Piece, rule: CutRule) -> str:
    return f"Rounded up to a multiple of {in_mm(rule.rounding_step_mm)} = {in_mm(piece.cut_mm)}"


def counted(count: int, word: str) -> str:
    """Return "1 knot", "2 knots"."""
    return f"{count} {word}" if count == 1 else f"{count} {word}s"


def in_mm(length: float | Fraction, places: int = 1) -> str:
    """Return a length in millimetres, without trailing zeros."""
    return f"{number(length, places)} mm"


def number(value: float | Fraction, places: int) -> str:
    """Return a number with at most so many places, without trailing zeros."""
    written = f"{float(value):,.{places}f}"
    return written.rstrip("0").rstrip(".") if "." in written else written
