"""Patterns for the tests of this folder: plain builders and Hypothesis strategies."""

from hypothesis import strategies as st

from patterns.grid import Carry, GridPattern
from patterns.knots import SLOT_LETTERS, DiagonalPattern, Finish, Knot, knots_in_row

DIAGONAL_FINISHES = [finish for finish in Finish if finish is not Finish.CENTRED]


def make_pattern(rows, slots=None, finish=Finish.EXACT, name="Test"):
    """Rows as text ("fb b bf"); every strand its own slot unless told otherwise."""
    knots = tuple(tuple(Knot(word) for word in row.split()) for row in rows)
    strands = len(slots) if slots else len(knots[0]) + len(knots[1]) + 1
    return DiagonalPattern(name, tuple(slots or SLOT_LETTERS[:strands]), knots, finish)


def all_same(strands, knot="f", rows=2, slots=None):
    return DiagonalPattern(
        "All the same",
        tuple(slots or [SLOT_LETTERS[i % 26] for i in range(strands)]),
        tuple((Knot(knot),) * knots_in_row(strands, row) for row in range(1, rows + 1)),
    )


@st.composite
def patterns(draw, min_strands=2, max_strands=16, max_double_rows=5, names=None):
    strands = draw(st.integers(min_strands, max_strands))
    row_count = 2 * draw(st.integers(1, max_double_rows))
    slots = draw(st.lists(st.sampled_from("ABCDZ"), min_size=strands, max_size=strands))
    rows = tuple(
        tuple(draw(st.lists(st.sampled_from(Knot), min_size=count, max_size=count)))
        for count in (knots_in_row(strands, row) for row in range(1, row_count + 1))
    )
    name = draw(names) if names is not None else "Test"
    return DiagonalPattern(name, tuple(slots), rows, draw(st.sampled_from(DIAGONAL_FINISHES)))


@st.composite
def grid_patterns(draw, max_columns=12, max_rows=16, names=None):
    columns = draw(st.integers(2, max_columns))
    cells = st.lists(st.sampled_from("ABCZ"), min_size=columns, max_size=columns)
    rows = draw(st.lists(cells.map(tuple), min_size=1, max_size=max_rows))
    return GridPattern(
        name=draw(names) if names is not None else "Test",
        background=draw(st.sampled_from("AB")),
        rows=tuple(rows),
        finish=draw(st.sampled_from(Finish)),
        carry=draw(st.sampled_from(Carry)),
    )
