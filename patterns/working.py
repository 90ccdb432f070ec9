"""How each length was made, in words and numbers that a maker can redo."""

from fractions import Fraction
from math import ceil

from patterns.cut_lengths import CutRule, Ending, Piece
from patterns.geometry import Gauge, StrandLength


def knotted_working(strand: StrandLength, gauge: Gauge) -> str:
    """Return how the thread in the knotted part of a strand adds up."""
    if strand.role != "strand":
        return _grid_working(strand, gauge)
    tied = f"{_counted(strand.tied, 'knot')} tied × {_mm(gauge.knotting_mm, 3)}"
    base = f"{strand.base} as base × {_mm(gauge.base_mm, 3)}"
    idle = f"{_counted(strand.idle, 'idle row')} × {_mm(gauge.idle_mm, 3)}"
    return f"{tied} + {base} + {idle} = {_mm(strand.knotted_mm)}"


def _grid_working(strand: StrandLength, gauge: Gauge) -> str:
    """A base strand hangs straight; the others tie, pass behind and go down."""
    if strand.role == "base":
        parts = [f"{_counted(strand.base, 'row')} as base × {_mm(gauge.base_mm, 3)}"]
    else:
        down = "turn" if strand.role == "leading" else "row"
        parts = [f"{_counted(strand.tied, 'cell')} tied × {_mm(gauge.knotting_mm, 3)}"]
        if strand.passed:
            passed = _counted(strand.passed, "column")
            parts.append(f"{passed} passed behind × {_mm(gauge.passing_mm, 3)}")
        if strand.turned:
            turned = _counted(strand.turned, down)
            parts.append(f"{turned}{' down' if down == 'row' else ''} × {_mm(gauge.turning_mm, 3)}")
    return f"{' + '.join(parts)} = {_mm(strand.knotted_mm)}"


def piece_working(piece: Piece, ending: Ending, rule: CutRule) -> tuple[str, ...]:
    """Return the steps from the knotted thread of a piece to its cut length, one a line."""
    if piece.role == "sliding":
        return (f"The sliding piece of {ending.name}: {_mm(piece.ends_mm)}", _rounding(piece, rule))
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


def _run_working(piece: Piece, rule: CutRule) -> tuple[str, ...]:
    tails = f"Two tails of {_mm(rule.join_tail_mm)} = {_mm(piece.ends_mm)}"
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
            f"{_safety(label, knotted_mm, rule)}, + end {_mm(ending.end_allowance_mm)}"
            f" + half the loop {_mm(half_loop)}: {_mm(half_mm)}, rounded up to whole millimetres"
            for label, knotted_mm, half_mm in zip(
                piece.labels, piece.knotted_mm, halves, strict=True
            )
        ),
        end_working(ending),
        _together([Fraction(half_mm) for half_mm in halves], piece, rule),
        f"Folded at {_mm(fold_mm)}: {_mm(fold_mm)} for {first},"
        f" {_mm(piece.cut_mm - fold_mm)} for {second}",
    )


def _safety(label: str, knotted_mm: float, rule: CutRule) -> str:
    per_cent = _number(rule.safety_share * 100, 1)
    safe_mm = rule.with_safety_mm(knotted_mm)
    named = label[0].upper() + label[1:]
    return f"{named}: {_mm(knotted_mm)} knotted + {per_cent} % safety = {_mm(safe_mm)}"


def start_working(ending: Ending) -> str:
    """Return what a strand that is cut alone needs before the first row."""
    if ending.start == "folded":
        return f"Start of a strand without a partner: {_mm(ending.single_start_mm)}"
    tie = _tie(ending.start_tie_mm, ending)
    return f"Start: {tie} = {_mm(ending.single_start_allowance_mm)}"


def end_working(ending: Ending) -> str:
    """Return what a strand needs after the last row."""
    return f"End: {_tie(ending.end_tie_mm, ending)} = {_mm(ending.end_allowance_mm)}"


def _tie(tie_mm: int, ending: Ending) -> str:
    return (
        f"tie {_mm(tie_mm)} × take-up {_number(ending.take_up, 2)}"
        f" + closing knot {_mm(ending.closing_knot_mm)} + grip {_mm(ending.grip_mm)}"
    )


def _together(parts: list[Fraction], piece: Piece, rule: CutRule) -> str:
    added = " + ".join(_mm(part) for part in parts)
    return f"{added} = {_mm(sum(parts))}, {_rounding(piece, rule).lower()}"


def _rounding(piece: Piece, rule: CutRule) -> str:
    return f"Rounded up to a multiple of {_mm(rule.rounding_step_mm)} = {_mm(piece.cut_mm)}"


def _counted(count: int, word: str) -> str:
    return f"{count} {word}" if count == 1 else f"{count} {word}s"


def _mm(length: float | Fraction, places: int = 1) -> str:
    return f"{_number(length, places)} mm"


def _number(value: float | Fraction, places: int) -> str:
    written = f"{float(value):,.{places}f}"
    return written.rstrip("0").rstrip(".") if "." in written else written
