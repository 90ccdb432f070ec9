"""Orders become numbered bracelets, and each kind is worked out once."""

from datetime import date

import pytest

from patterns.cut_lengths import Ending
from patterns.geometry import Gauge, LengthError
from patterns.techniques import strand_table
from planner.planning.demand import Order, explode
from tests.plain import make_kind


def test_explode_numbers_bracelets_in_line_order() -> None:
    chevron, stripe = make_kind("A A B B"), make_kind("A B C D")
    orders = (
        Order(1, chevron, 2, "the choir", date(2026, 12, 5)),
        Order(2, stripe, 1),
        Order(3, chevron, 3),
    )
    kinds, bracelets = explode(orders)
    assert [kind.kind for kind in kinds] == [chevron, stripe]
    assert [bracelet.number for bracelet in bracelets] == [1, 2, 3, 4, 5, 6]
    assert [bracelet.kind_index for bracelet in bracelets] == [0, 0, 1, 0, 0, 0]
    assert bracelets[0].for_whom == "the choir"
    assert bracelets[2].due_date is None


def test_exploded_pieces_follow_the_strands() -> None:
    """One straight piece a strand: cut = knotted * (1 + safety) + both ends, up to the step.

    A worked example: all-forward on 6 strands, 150 mm at 0.9 mm is 118 rows (common practice,
    no source); the ends are those of TIES, 2 x (60 x 1.25 + 30 + 90) = 390 mm.
    """
    kinds, _ = explode((Order(1, make_kind("A A B B C C"), 1),))
    exploded = kinds[0]
    assert exploded.table.rows == 118
    assert len(exploded.pieces) == 6
    for piece, strand in zip(exploded.pieces, exploded.table.strands, strict=True):
        wanted = strand.knotted_mm * 1.1 + 390
        assert wanted <= piece.cut_mm < wanted + 10
        assert piece.cut_mm % 10 == 0


def test_explode_refuses_a_length_the_finish_cannot_meet() -> None:
    kind = make_kind("A A B B", rows=("f f", "f") * 100, finish="at_most")
    with pytest.raises(LengthError, match="longer than"):
        explode((Order(1, kind, 1),))


def test_kinds_that_differ_only_in_ending_are_worked_out_apart() -> None:
    other = Ending("Bare", "straight", 0, 0, 1.0, 30, 90, 0, 0, 0)
    kinds, _ = explode((Order(1, make_kind(), 1), Order(2, make_kind(ending=other), 1)))
    assert len(kinds) == 2
    assert kinds[0].table == kinds[1].table == strand_table(make_kind().pattern, 150, Gauge())
    assert kinds[0].pieces != kinds[1].pieces
