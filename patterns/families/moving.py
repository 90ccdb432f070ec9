"""Families whose strands travel: stripes, chevrons, zigzags, diamonds.

Positions count from 0 on the left. A knot lies between the positions `left` and `left` + 1; its
middle is at `left` + 1, so that of the band at strands / 2.
"""

from collections.abc import Callable

from patterns.knots import Knot, knots_in_row

Rows = tuple[tuple[Knot, ...], ...]
KnotAt = Callable[[int], Knot]


def _row(strands: int, row: int, knot_at: KnotAt) -> tuple[Knot, ...]:
    """Return the knots of a row, from 1; `knot_at` takes a knot's middle."""
    first = (row - 1) % 2
    return tuple(knot_at(2 * place + first + 1) for place in range(knots_in_row(strands, row)))


def _rows(strands: int, knots: list[KnotAt]) -> Rows:
    return tuple(_row(strands, row, knot_at) for row, knot_at in enumerate(knots, start=1))


def _everywhere(knot: Knot) -> KnotAt:
    return lambda middle: knot


def _halves(strands: int, left: Knot, right: Knot, centre: Knot) -> KnotAt:
    def knot_at(middle: int) -> Knot:
        if 2 * middle == strands:
            return centre
        return left if 2 * middle < strands else right

    return knot_at


def stripe(strands: int) -> Rows:
    """All forward: every colour runs down to the right."""
    return _rows(strands, [_everywhere(Knot.F)] * 2)


def chevron(strands: int) -> Rows:
    """The left half forward, the right half backward: the colours meet in the middle."""
    return _rows(strands, [_halves(strands, Knot.F, Knot.B, Knot.F)] * 2)


def double_chevron(strands: int) -> Rows:
    """Two chevrons side by side: forward, backward, forward, backward by quarters."""

    def knot_at(middle: int) -> Knot:
        quarter = min(4 * middle // strands, 3)
        if 4 * middle % strands == 0 and quarter % 2:
            return Knot.F  # where two strands meet in the middle of a chevron
        return Knot.B if quarter % 2 else Knot.F

    return _rows(strands, [knot_at] * 2)


def zigzag(strands: int) -> Rows:
    """Stripes to the right, a row in which every strand turns, stripes to the left, a turn."""
    run = _run_of(strands)
    there, back = _everywhere(Knot.F), _everywhere(Knot.B)
    turns = _everywhere(Knot.FB), _everywhere(Knot.BF)
    return _rows(strands, [there] * run + [turns[0]] + [back] * run + [turns[1]])


def _run_of(strands: int) -> int:
    """Rows between two turns; a turn and its run together come to the strands, or nearly."""
    return max(2, strands - 1)


def diamond(strands: int) -> Rows:
    """A chevron that turns and opens again: strands go in to the middle and out to the edges."""
    run = max(2, strands // 2 - 1)
    inwards = _halves(strands, Knot.F, Knot.B, Knot.F)
    outwards = _halves(strands, Knot.B, Knot.F, Knot.F)
    turn_out = _halves(strands, Knot.FB, Knot.BF, Knot.FB)
    turn_in = _halves(strands, Knot.BF, Knot.FB, Knot.FB)
    return _rows(strands, [inwards] * run + [turn_out] + [outwards] * run + [turn_in])


def straight_stripes(strands: int) -> Rows:
    """No strand leaves its place: each colour runs straight down the band."""
    return _rows(strands, [_everywhere(Knot.FB)] * 2)


def in_blocks(strands: int, colours: tuple[str, ...]) -> tuple[str, ...]:
    """Colours side by side in equal blocks, left to right: A A B B C C."""
    count = min(len(colours), strands)
    return tuple(colours[place * count // strands] for place in range(strands))


def mirrored_halves(strands: int, colours: tuple[str, ...]) -> tuple[str, ...]:
    """Colours in blocks from the edge to the middle, the right half as in a mirror: A B C C B A."""
    half = in_blocks((strands + 1) // 2, colours)
    return half + half[: strands // 2][::-1]


def mirrored_quarters(strands: int, colours: tuple[str, ...]) -> tuple[str, ...]:
    """Twice as in a mirror, side by side."""
    left = mirrored_halves((strands + 1) // 2, colours)
    return left + mirrored_halves(strands // 2, colours)
