"""Rows of the list of cuts, expanded again: cut_rows.py."""

import re
from collections import Counter
from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.sheets.contents import SheetCut, StackCut, StockCut
from planner.sheets.cut_rows import CutRow, number_ranges, rows_of_stack, strand_words


def skein(*cuts: SheetCut) -> StockCut:
    total = sum(cut.cut_mm for cut in cuts)
    return StockCut("new thread 1: 8 m skein", True, total, cuts, 0, False)


def test_equal_lengths_are_told_once_with_their_tags() -> None:
    stack = StackCut(
        "",
        (
            skein(SheetCut(1, "1", "A", 870, None), SheetCut(1, "2", "A", 870, None)),
            skein(SheetCut(2, "1", "A", 870, None), SheetCut(2, "2", "A", 870, None)),
            skein(SheetCut(5, "3", "A", 870, None), SheetCut(6, "3", "A", 870, None)),
        ),
    )
    assert rows_of_stack(stack) == (
        CutRow(870, 2, (1, 2), "1, 2  A", None, 4),
        CutRow(870, None, (5, 6), "3  A", None, 2),
    )


def test_other_folds_and_other_slots_have_rows_of_their_own() -> None:
    cuts = (
        SheetCut(1, "1 + 2", "A", 800, 400),
        SheetCut(1, "3 + 4", "A", 800, 410),
        SheetCut(1, "5", "B", 800, None),
    )
    rows = rows_of_stack(StackCut("", (skein(*cuts),)))
    assert [(row.strands, row.fold_mm) for row in rows] == [
        ("1 + 2  A", 400),
        ("3 + 4  A", 410),
        ("5  B", None),
    ]


@pytest.mark.parametrize(
    ("labels", "words"),
    [
        (["1"], "1"),
        (["2", "4 + 1"], "2, 4 + 1"),
        (["run 1 of B", "run 2 of B", "run 3 of B", "run 7 of B"], "runs 1\u20133, 7 of B"),
        (["run 4 of B", "run 4 of C", "leading strand"], "leading strand, run 4 of B, run 4 of C"),
        (["sliding piece"], "sliding piece"),
    ],
)
def test_strands_in_few_words(labels: list[str], words: str) -> None:
    assert strand_words(labels) == words


@given(st.sets(st.integers(1, 60)))
def test_ranges_name_every_number_once(numbers: set[int]) -> None:
    found = []
    for part in number_ranges(sorted(numbers)).split(", ") if numbers else []:
        first, _, last = part.partition("\u2013")
        found += range(int(first), int(last or first) + 1)
    assert found == sorted(numbers)


CUTS = st.tuples(st.integers(1, 40), st.sampled_from([(500, None), (500, 240), (400, None)]))


@given(st.lists(CUTS, min_size=1, max_size=60), st.integers(1, 3))
def test_every_piece_is_in_one_row(
    pairs: list[tuple[int, tuple[int, int | None]]], skeins: int
) -> None:
    """Every skein of a stack is cut alike; labels are numbered, so that each is one piece."""
    cut = [
        skein(
            *(
                SheetCut(tag + 100 * each, str(number), "A", *length)
                for number, (tag, length) in enumerate(pairs)
            )
        )
        for each in range(skeins)
    ]
    rows = rows_of_stack(StackCut("", tuple(cut)))
    found: Counter[SheetCut] = Counter()
    for row in rows:
        labels = re.sub("  A$", "", row.strands).split(", ")
        found.update(
            SheetCut(tag, label, "A", row.cut_mm, row.fold_mm)
            for tag in row.tags
            for label in labels
        )
        assert len(row.tags) <= 24
        assert row.pieces == len(row.tags) * len(labels)
    assert found == Counter(each for one in cut for each in one.cuts)
    for length in (500, 400):
        own = [row for row in rows if row.cut_mm == length]
        counts = [row.from_each for row in own if row.from_each is not None]
        assert counts == [sum(one[0] == length for _, one in pairs)][: len(own)]
    assert all(before.cut_mm >= after.cut_mm for before, after in pairwise(rows))
