import pytest
from hypothesis import given
from hypothesis import strategies as st
from test_cut_lengths import METRIC, PLAITED, endings, rules, table_of, tables
from test_grid import make_grid

from patterns.cut_lengths import Ending, pieces_for
from patterns.geometry import Gauge
from patterns.grouping import costs_by_count
from patterns.shared_lengths import costs_of_lengths, with_distinct_lengths
from patterns.techniques import strand_table

STRAIGHT = Ending(**PLAITED)


def test_two_lengths_by_hand():
    # Cut alone: 500 x 1.1 = 550, 550 x 1.1 = 605, 900 x 1.1 = 990, each with the same ends.
    pieces = pieces_for(table_of(("A", 500), ("B", 550), ("C", 900)), STRAIGHT, METRIC)
    alone = [piece.cut_mm for piece in pieces]
    shared = with_distinct_lengths(pieces, 2)
    assert [piece.cut_mm for piece in shared] == [alone[1], alone[1], alone[2]]
    assert [piece.added_mm for piece in shared] == [alone[1] - alone[0], 0, 0]
    assert [piece.needed_mm for piece in shared] == alone
    assert costs_of_lengths(shared) == costs_of_lengths(pieces) == costs_by_count(alone)


def test_none_leaves_all_as_they_are():
    pieces = pieces_for(table_of(("A", 500), ("B", 700)), STRAIGHT, METRIC)
    assert with_distinct_lengths(pieces, None) == pieces


@given(tables, endings, rules, st.integers(1, 6))
def test_enough_for_every_strand_in_few_lengths(table, ending, rule, most):
    pieces = pieces_for(table, ending, rule)
    shared = with_distinct_lengths(pieces, most)
    strands = [piece for piece in shared if piece.role != "sliding"]
    assert len({piece.cut_mm for piece in strands}) <= most
    for before, after in zip(pieces, shared, strict=True):
        assert after.cut_mm >= before.cut_mm
        assert after.needed_mm == before.cut_mm
        assert (after.strands, after.slot, after.labels) == (
            before.strands,
            before.slot,
            before.labels,
        )
        if before.fold_mm is not None:
            assert after.fold_mm >= before.fold_mm
            assert after.cut_mm - after.fold_mm >= before.cut_mm - before.fold_mm
        if before.role == "sliding":
            assert after == before


def test_runs_of_a_grid_keep_their_scraps():
    pieces = pieces_for(strand_table(make_grid(), 150, Gauge()), STRAIGHT, METRIC)
    shared = with_distinct_lengths(pieces, 1)
    runs = [piece for piece in shared if piece.role == "run"]
    assert runs == [piece for piece in pieces if piece.role == "run"]
    assert len({piece.cut_mm for piece in shared if piece.role != "run"}) == 1


def test_at_least_one_length():
    pieces = pieces_for(table_of(("A", 500)), STRAIGHT, METRIC)
    with pytest.raises(ValueError, match="at least one"):
        with_distinct_lengths(pieces, 0)
