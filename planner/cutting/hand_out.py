"""Hands out a lot's equal lengths anew: the pieces of a group from few skeins, near each other."""

from collections import Counter, defaultdict, deque
from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace
from itertools import islice
from typing import TypeVar

from planner.cutting.lot_problem import CutPiece, Opened

Need = tuple[tuple[int, int], ...]
"""What a group needs of a lot: lengths [mm] with their counts, longest first."""

Found = TypeVar("Found")

MOST_LOOKS = 12
"""So many begun groups, and so many kinds of new ones, are compared for a cut at the most."""


def handed_out(skeins: Sequence[Opened]) -> tuple[Opened, ...]:
    """Assign the pieces of one lot to its cuts anew.

    Parameters
    ----------
    skeins
        All that is cut from one lot, in its order.

    Returns
    -------
    tuple[Opened, ...]
        The same skeins cut into the same lengths, longest first and equal ones by group. Whatever
        is handed out stays in the lot, so groups stay where they were. There are never more pairs
        of a group and a skein it comes from than before.

    Notes
    -----
    The fewest pairs are a hard problem. Two sweeps over the skeins are compared with what was
    given: one hands whole groups to all skeins first and fills what is left, one finishes what the
    skein before began. Both look at a bounded number of groups a cut, so that the time grows with
    the number of pieces.
    """
    given = [list(skein.pieces) for skein in skeins]
    choices = [_whole_groups_first(given), _one_after_another(given), given]
    best = min(choices, key=_scatter)
    return tuple(
        replace(skein, pieces=tuple(sorted(pieces, key=_bench_order)))
        for skein, pieces in zip(skeins, best, strict=True)
    )


def _bench_order(piece: CutPiece) -> tuple[int, tuple[int, str], int]:
    return -piece.length_mm, _in_words(piece.group_key), piece.index


def _in_words(key: str) -> tuple[int, str]:
    """Order keys that are numbers by their value."""
    return len(key), key


def _scatter(cut: Sequence[Sequence[CutPiece]]) -> tuple[int, int]:
    """Count pairs of group and skein, and how many skeins lie between a group's first and last."""
    first: dict[str, int] = {}
    last: dict[str, int] = {}
    pairs = 0
    for position, pieces in enumerate(cut):
        for key in {piece.group_key for piece in pieces}:
            pairs += 1
            first.setdefault(key, position)
            last[key] = position
    return pairs, sum(last[key] - first[key] for key in last)


def _whole_groups_first(given: Sequence[Sequence[CutPiece]]) -> list[list[CutPiece]]:
    hands = _Hands(given)
    hands.sweep(hands.give_whole)
    hands.sweep(hands.finish, hands.fill)
    return hands.given


def _one_after_another(given: Sequence[Sequence[CutPiece]]) -> list[list[CutPiece]]:
    hands = _Hands(given)
    hands.sweep(hands.finish, hands.give_whole, hands.fill)
    return hands.given


class _Hands:
    """What groups still need, and what the cuts of each skein still have to give."""

    def __init__(self, cut: Sequence[Sequence[CutPiece]]) -> None:
        self.free = [Counter(piece.length_mm for piece in pieces) for pieces in cut]
        self.given: list[list[CutPiece]] = [[] for _ in cut]
        self.wanted = _wanted_by_group(piece for pieces in cut for piece in pieces)
        self.need = {key: _need_of(wanted) for key, wanted in self.wanted.items()}
        self.waiting: dict[Need, deque[str]] = defaultdict(deque)
        for key in sorted(self.wanted, key=_in_words):
            self.waiting[self.need[key]].append(key)
        # The largest first: of those a whole one saves the most pairs.
        kinds = sorted(self.waiting, key=lambda need: (-sum(count for _, count in need), need))
        self.by_longest: dict[int, list[Need]] = defaultdict(list)
        self.by_length: dict[int, dict[Need, None]] = defaultdict(dict)
        for need in kinds:
            self.by_longest[need[0][0]].append(need)
            for length_mm, _ in need:
                self.by_length[length_mm][need] = None
        self.begun: dict[int, dict[str, None]] = defaultdict(dict)

    def sweep(self, *steps: Callable[[int], None]) -> None:
        """Take every step at every skein."""
        for position in range(len(self.free)):
            for step in steps:
                step(position)

    def finish(self, position: int) -> None:
        """Give begun groups their last pieces, where this skein has all of them."""
        free = self.free[position]
        for length_mm in sorted(free, reverse=True):
            for key in _first_of(self.begun[length_mm]):
                if _fits(self.need[key], free):
                    self._give(key, position)

    def give_whole(self, position: int) -> None:
        """Give groups of several pieces all that they need."""
        free = self.free[position]
        for length_mm in sorted(free, reverse=True):
            for need in [need for need in self.by_longest[length_mm] if self.waiting[need]]:
                while self.waiting[need] and _is_several(need) and _fits(need, free):
                    self._give(self._next_of(need), position)

    def fill(self, position: int) -> None:
        """Give every cut that is left to the group that can use most beside it."""
        free = self.free[position]
        while free:
            self._give(self._best_for(max(free), free), position)

    def _best_for(self, length_mm: int, free: Counter[int]) -> str:
        begun = [
            ((*_use(self.need[key], free), True), key) for key in _first_of(self.begun[length_mm])
        ]
        new = [((*_use(need, free), False), need) for need in _first_of(self.by_length[length_mm])]
        best_begun = max(begun, key=lambda each: each[0], default=None)
        best_new = max(new, key=lambda each: each[0], default=None)
        if best_new is None or (best_begun is not None and best_begun[0] > best_new[0]):
            assert best_begun is not None  # every cut is some group's
            return best_begun[1]
        return self._next_of(best_new[1])

    def _next_of(self, need: Need) -> str:
        """Take the next group of a kind from those that wait."""
        key = self.waiting[need].popleft()
        if not self.waiting[need]:
            self.by_longest[need[0][0]].remove(need)
            for length_mm, _ in need:
                del self.by_length[length_mm][need]
        return key

    def _give(self, key: str, position: int) -> None:
        """Give a group whatever it needs and this skein has."""
        free, wanted = self.free[position], self.wanted[key]
        for length_mm in list(wanted):
            count = min(len(wanted[length_mm]), free[length_mm])
            for _ in range(count):
                self.given[position].append(wanted[length_mm].popleft())
            _take(free, length_mm, count)
            if wanted[length_mm]:
                self.begun[length_mm][key] = None
            else:
                del wanted[length_mm]
                self.begun[length_mm].pop(key, None)
        self.need[key] = _need_of(wanted)


def _wanted_by_group(pieces: Iterable[CutPiece]) -> dict[str, dict[int, deque[CutPiece]]]:
    wanted: dict[str, dict[int, deque[CutPiece]]] = defaultdict(lambda: defaultdict(deque))
    for piece in sorted(pieces, key=lambda piece: (-piece.length_mm, piece.index)):
        wanted[piece.group_key][piece.length_mm].append(piece)
    return wanted


def _need_of(wanted: dict[int, deque[CutPiece]]) -> Need:
    return tuple((length_mm, len(pieces)) for length_mm, pieces in wanted.items())


def _first_of(found: Iterable[Found]) -> list[Found]:
    return list(islice(found, MOST_LOOKS))


def _is_several(need: Need) -> bool:
    return len(need) > 1 or need[0][1] > 1


def _fits(need: Need, free: Counter[int]) -> bool:
    return all(free[length_mm] >= count for length_mm, count in need)


def _use(need: Need, free: Counter[int]) -> tuple[bool, int]:
    """Tell whether a group would be done with this skein, and how many pieces it would take."""
    used = sum(min(count, free[length_mm]) for length_mm, count in need)
    return used == sum(count for _, count in need), used


def _take(free: Counter[int], length_mm: int, count: int) -> None:
    free[length_mm] -= count
    if not free[length_mm]:
        del free[length_mm]
