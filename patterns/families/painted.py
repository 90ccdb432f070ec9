"""Families painted on strands that keep their places: a motif in one colour on a ground.

Strands of the ground and of the motif take turns. Every knot has one of each, and fb or bf
choose which of the two shows; so any picture of squares in two colours can be tied.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import ceil

from patterns.knots import Knot, knots_in_row

Rows = tuple[tuple[Knot, ...], ...]


@dataclass(frozen=True)
class Motif:
    """What is painted, again and again along the band.

    Parameters
    ----------
    rows
        Rows from one motif to the next, an even number.
    first_row
        The row of the repeat, from 1, in which a motif begins.
    shows
        Whether the motif shows at a gap, counted from 1, and a row of the motif, from 0.
    """

    rows: int
    first_row: int
    shows: Callable[[int, int], bool]


def painted(strands: int, motif: Motif) -> Rows:
    """Return the knots that paint a motif; strands 1, 3, 5, ... are the ground.

    Notes
    -----
    In odd rows the left strand of each pair is one of the ground, in even rows the right one.
    fb shows the left strand, bf the right one, and neither changes their places.
    """
    return tuple(
        tuple(
            Knot.FB
            if _shows(motif, row, 2 * place + 1 + (row - 1) % 2) == (row % 2 == 0)
            else Knot.BF
            for place in range(knots_in_row(strands, row))
        )
        for row in range(1, motif.rows + 1)
    )


def motif_strands(rows: Rows, strands: int) -> tuple[int, ...]:
    """Return which strands of the motif, counted from 0, tie a knot and so are seen."""
    tying = {
        2 * place + number % 2 + (knot is Knot.BF)
        for number, row in enumerate(rows)
        for place, knot in enumerate(row)
    }
    return tuple(strand for strand in range(1, strands, 2) if strand in tying)


def slots_for(rows: Rows, strands: int, ground: str, motif: Sequence[str]) -> tuple[str, ...]:
    """Return the slots of a painted band.

    Parameters
    ----------
    rows
        Its knots.
    strands
        Number of strands.
    ground
        The slot of the ground.
    motif
        A slot for each strand of the motif that is seen; the others take the first or the last.
    """
    seen = motif_strands(rows, strands)
    number = {strand: place for place, strand in enumerate(seen)}
    return tuple(
        motif[number.get(strand, 0 if strand < seen[0] else -1)] if strand % 2 else ground
        for strand in range(strands)
    )


def _shows(motif: Motif, row: int, gap: int) -> bool:
    return motif.shows(gap, (row - motif.first_row) % motif.rows)


def _centred(
    strands: int, anchor: int, height: int, shows: Callable[[int, int], bool], apart: int = 2
) -> Motif:
    """Place a motif in the middle, or with N odd half a strand to the left of it.

    Parameters
    ----------
    strands
        Number of strands.
    anchor
        How far from the middle gap the knots of the motif's first row lie, in gaps.
    height
        Rows of the motif.
    shows
        As in `Motif`, but with the distance from the middle gap, to the left or to the right.
    apart
        Rows of ground between two motifs, or one more.
    """
    middle = strands // 2
    return Motif(
        rows=2 * ceil((height + apart) / 2),
        first_row=2 if (middle + anchor) % 2 == 0 else 3,
        shows=lambda gap, row: row < height and shows(abs(gap - middle), row),
    )


def heart(strands: int) -> Motif:
    """Two humps above and a point below, as wide as the band or two gaps less.

    Notes
    -----
    At a distance u from the middle it reaches from row |u - a| to row 2 U - a - u, with U the
    gaps on each side of the middle, an even number, and a = U/2 the top of a hump: every edge
    runs as knots do. Wide hearts lose the tips of their humps, a row in eight gaps of U.
    """
    reach = (strands // 2 - 1) // 2 * 2
    hump = reach // 2
    cut = reach // 8
    point = 2 * reach - hump

    def shows(u: int, row: int) -> bool:
        return max(cut, abs(u - hump)) <= row + cut <= point - u

    return _centred(strands, hump + cut, point + 1 - cut, shows)


def cross(strands: int) -> Motif:
    """Two bars that cross in the middle, as wide as the band.

    Notes
    -----
    The bars are the knots whose distances from the middle, along and across, differ by no more
    than 2 in 12 gaps of half a band: one line, or three, or five.
    """
    reach = strands // 2 - 1
    thick = 2 * (reach // 6)
    long = reach + thick
    return _centred(
        strands, long, 2 * long + 1, lambda u, row: abs(u - abs(row - long)) <= thick, apart=3
    )


def arrowhead(strands: int) -> Motif:
    """A point, and behind it a triangle as wide as the band with a straight back."""
    reach = strands // 2 - 1
    return _centred(strands, 0, reach + 1, lambda u, row: u <= row)


def checks(strands: int) -> Motif:
    """Fields of motif and ground in turn, 3 gaps wide and 3 rows high, in wide bands 5 or 7.

    Notes
    -----
    What is left over is divided between the two edges. Rows of knots are offset, so a field of
    3 by 3 has 4 knots or, with its corners, 5; those of the motif have the 4 (or 12, or 24).
    """
    side = min(7, 3 + 2 * (strands // 16))
    over = (strands - 1) % side
    edge = over // 2 if over % 2 == 0 else (over + side) // 2
    return Motif(
        rows=2 * side,
        first_row=1,
        shows=lambda gap, row: ((gap - 1 - edge) // side + row // side + edge) % 2 == 1,
    )


def ladder(strands: int) -> Motif:
    """A rail along each edge, and rungs of two rows between them."""
    rail = 2 + strands // 20
    inside = strands - 1 - 2 * rail
    return Motif(
        rows=2 * ceil((max(4, inside) + 2) / 2),
        first_row=3,
        shows=lambda gap, row: row < 2 or gap <= rail or gap >= strands - rail,
    )


def bars(strands: int) -> Motif:
    """Bars across the band, three rows of ground and three of the motif."""
    return Motif(rows=6, first_row=4, shows=lambda gap, row: row < 3)
