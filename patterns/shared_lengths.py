"""The pieces of a bracelet in few distinct lengths, for a maker who cuts several at once."""

from dataclasses import replace

from patterns.cut_lengths import Piece
from patterns.grouping import costs_by_count, group_lengths


def with_distinct_lengths(pieces: tuple[Piece, ...], most: int | None) -> tuple[Piece, ...]:
    """Return the pieces in at most so many distinct lengths, with the least thread added.

    Parameters
    ----------
    pieces
        The pieces of one bracelet.
    most
        Distinct lengths at the most; None leaves every piece as it is.

    Returns
    -------
    The same pieces, some cut longer. A run is cut from whatever scrap serves and a sliding piece
    is no strand, so both stay as they are and do not count.

    Notes
    -----
    A fold point stays where it is: the first half is as long as before, and what is added falls
    to the second. See `patterns.grouping.group_lengths` for the choice.
    """
    if most is None:
        return pieces
    grouping = group_lengths((piece.cut_mm for piece in pieces if _is_grouped(piece)), most)
    return tuple(
        _lengthened(piece, grouping.level_of(piece.cut_mm)) if _is_grouped(piece) else piece
        for piece in pieces
    )


def costs_of_lengths(pieces: tuple[Piece, ...]) -> tuple[tuple[int, int], ...]:
    """Return for 1, 2, ... distinct lengths the thread that a bracelet takes more [mm]."""
    return costs_by_count(piece.needed_mm for piece in pieces if _is_grouped(piece))


def _is_grouped(piece: Piece) -> bool:
    return piece.role not in ("run", "sliding")


def _lengthened(piece: Piece, cut_mm: int) -> Piece:
    return replace(piece, cut_mm=cut_mm, added_mm=cut_mm - piece.cut_mm)
