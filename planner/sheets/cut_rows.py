"""Rows of a list of cuts: equal lengths once, with their count and the tags they are for."""

import re
from collections import Counter, defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from planner.sheets.contents import SheetCut, StackCut
from planner.sheets.wording import joined, plain_text

MOST_TAGS_A_ROW = 24
_RUN = re.compile(r"run (\d+) (of .+)")

Pieces = tuple[str, int | None, tuple[str, ...]]
"""Slot, fold [mm] and labels of the pieces that a tag gets of one length."""


@dataclass(frozen=True)
class CutRow:
    """Pieces of one length that some tags get alike.

    Parameters
    ----------
    cut_mm
        Their length [mm].
    from_each
        How many of this length, whatever the tags, are cut from each skein of the stack; None in
        a further row of a length.
    tags
        The tags, in their order.
    strands
        Which strands of each of these tags they are, with their slot.
    fold_mm
        Where each is folded [mm], or None.
    pieces
        How many pieces they are, for all these tags together.
    """

    cut_mm: int
    from_each: int | None
    tags: tuple[int, ...]
    strands: str
    fold_mm: int | None
    pieces: int


def rows_of_stack(stack: StackCut) -> tuple[CutRow, ...]:
    """List the cuts of a stack, longest first.

    Parameters
    ----------
    stack
        Skeins of one lot that are cut alike, so that their equal lengths are interchangeable.

    Returns
    -------
    tuple[CutRow, ...]
        Every piece is in one row; of equal lengths, tags that get the same strands share one.
    """
    cuts: dict[int, list[SheetCut]] = defaultdict(list)
    for skein in stack.skeins:
        for cut in skein.cuts:
            cuts[cut.cut_mm].append(cut)
    rows: list[CutRow] = []
    for cut_mm, own in sorted(cuts.items(), reverse=True):
        from_each: int | None = len(own) // len(stack.skeins)
        for (slot, fold_mm, labels), tags in _tags_by_pieces(own).items():
            strands = joined((strand_words(labels), plain_text(slot)), "  ")
            for start in range(0, len(tags), MOST_TAGS_A_ROW):
                some = tuple(tags[start : start + MOST_TAGS_A_ROW])
                pieces = len(labels) * len(some)
                rows.append(CutRow(cut_mm, from_each, some, strands, fold_mm, pieces))
                from_each = None
    return tuple(rows)


def _tags_by_pieces(cuts: Iterable[SheetCut]) -> dict[Pieces, list[int]]:
    labels: dict[tuple[int, str, int | None], list[str]] = defaultdict(list)
    for cut in sorted(cuts, key=lambda cut: cut.tag_number):
        labels[cut.tag_number, cut.slot, cut.fold_mm].append(cut.label)
    tags: dict[Pieces, list[int]] = defaultdict(list)
    for (tag_number, slot, fold_mm), own in labels.items():
        tags[slot, fold_mm, tuple(own)].append(tag_number)
    return tags


def strand_words(labels: Sequence[str]) -> str:
    """Name several pieces in few words: "2, 4 + 1", "runs 1-3, 7 of B".

    Parameters
    ----------
    labels
        The label of each piece.

    Returns
    -------
    str
        All of them; runs of one colour by their numbers alone, equal labels with their count.
    """
    runs: dict[str, list[int]] = defaultdict(list)
    others: Counter[str] = Counter()
    for label in map(plain_text, labels):
        run = _RUN.fullmatch(label)
        if run:
            runs[run[2]].append(int(run[1]))
        else:
            others[label] += 1
    words = [label if count == 1 else f"{count} x {label}" for label, count in others.items()]
    for of_colour, numbers in runs.items():
        plural = "s" if len(numbers) > 1 else ""
        words.append(f"run{plural} {number_ranges(sorted(numbers))} {of_colour}")
    return ", ".join(words)


def number_ranges(numbers: Sequence[int], to: str = "\u2013") -> str:
    """Write ascending numbers, three and more in a row as a range: "1, 2, 5-9".

    Parameters
    ----------
    numbers
        The numbers, each once.
    to
        What stands between the ends of a range; by default a dash.

    Returns
    -------
    str
        The numbers with commas between.
    """
    ranges: list[tuple[int, int]] = []
    for number in numbers:
        if ranges and ranges[-1][1] == number - 1:
            ranges[-1] = ranges[-1][0], number
        else:
            ranges.append((number, number))
    words: list[str] = []
    for first, last in ranges:
        words += [f"{first}{to}{last}"] if last - first > 1 else map(str, range(first, last + 1))
    return ", ".join(words)
