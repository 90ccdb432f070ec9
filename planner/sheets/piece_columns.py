"""Columns of a tag's list of pieces, as wide as what stands in them. All lengths are points."""

from collections.abc import Iterable
from dataclasses import dataclass

from inventory.measures import format_number
from planner.sheets.contents import TagPiece
from planner.sheets.fonts import REGULAR, STRONG, printable, width_of
from planner.sheets.wording import whole_part

_MOST_SIZE_PT = 10.5
_SIZE_SHARE = 0.85
_LEAST_FIGURE_PT = 25.0


@dataclass(frozen=True)
class PieceColumns:
    """Where each column begins, from the list's left edge; for figures, where units end.

    Parameters
    ----------
    size
        Type size [pt].
    knot_half
        Half the diagonal of a slot's knot; knots in lines below each other do not touch [pt].
    strand, code, name
        Left edges [pt].
    name_room
        What is left for the shade's name [pt].
    cut, cut_tail, fold
        Where whole numbers end, and the room behind them for fractions [pt].
    folded
        Whether any piece is folded; without, there is no fold column.
    """

    size: float
    knot_half: float
    strand: float
    code: float
    name: float
    name_room: float
    cut: float
    cut_tail: float
    fold: float
    folded: bool


def columns_for(
    pieces: tuple[TagPiece, ...], unit: str, width: float, row_pt: float
) -> PieceColumns:
    """Place the columns; the shade's name takes what the others leave.

    Parameters
    ----------
    pieces
        All pieces of the tag, so that lists side by side align.
    unit
        The unit of the figures.
    width
        Width of one list [pt].
    row_pt
        Distance of its lines [pt]; it sets the type size.
    """
    size = min(_MOST_SIZE_PT, row_pt * _SIZE_SHARE)
    cuts = [format_number(piece.cut_mm, unit) for piece in pieces]
    folds = [format_number(piece.fold_mm, unit) for piece in pieces if piece.fold_mm is not None]
    strands = _widest((piece.label for piece in pieces), REGULAR, size)
    codes = _widest((printable(piece.shade_code) for piece in pieces), STRONG, size)
    strand = size * 1.24 + 4
    code = strand + min(max(strands, 22.0), size * 5) + 6
    name = code + min(max(codes, 16.0), size * 6) + 5
    fold_tail, cut_tail = _tail(folds, REGULAR, size), _tail(cuts, STRONG, size)
    fold = width - fold_tail
    fold_left = fold - max(_whole(folds, REGULAR, size), _LEAST_FIGURE_PT - fold_tail)
    cut = (fold_left - 12 if folds else width) - cut_tail
    cut_left = cut - max(_whole(cuts, STRONG, size), _LEAST_FIGURE_PT - cut_tail)
    return PieceColumns(
        size,
        min(size * 0.62, row_pt * 0.49),
        strand,
        code,
        name,
        cut_left - 6 - name,
        cut,
        cut_tail,
        fold,
        bool(folds),
    )


def _widest(words: Iterable[str], font: str, size: float) -> float:
    return max((width_of(word, font, size) for word in words), default=0.0)


def _whole(figures: Iterable[str], font: str, size: float) -> float:
    return _widest((whole_part(figure) for figure in figures), font, size)


def _tail(figures: Iterable[str], font: str, size: float) -> float:
    """Room behind the whole numbers, for ".5" or " 13/16"."""
    return _widest((figure[len(whole_part(figure)) :] for figure in figures), font, size)
