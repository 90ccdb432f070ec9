"""Patterns for the tests of this folder: plain builders and Hypothesis strategies."""

from hypothesis import strategies as st

from patterns.knots import SLOT_LETTERS, DiagonalPattern, Finish, Knot, knots_in_row


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
    return DiagonalPattern(name, tuple(slots), rows, draw(st.sampled_from(Finish)))
