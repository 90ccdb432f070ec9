"""What is cut together: stacks of alike skeins, and turns round a winding board, by length.

A *winding board* is set to a length; every turn of thread round it becomes one piece when all of
them are cut through at one place.
"""

from collections import Counter, defaultdict
from collections.abc import Hashable, Sequence
from dataclasses import dataclass
from itertools import groupby


@dataclass(frozen=True)
class Skein:
    """A skein or remnant at the bench.

    Parameters
    ----------
    lot
        What may be laid together: thread of different lots never is.
    lengths_mm
        What is cut from it, longest first [mm].
    """

    lot: Hashable
    lengths_mm: tuple[int, ...]


@dataclass(frozen=True)
class Stack:
    """Skeins that follow each other and are cut exactly alike.

    Parameters
    ----------
    first
        Position of the first of them, from 0.
    count
        How many they are.
    lengths
        Each length [mm] with how often it is cut from one of them, longest first.
    """

    first: int
    count: int
    lengths: tuple[tuple[int, int], ...]


@dataclass(frozen=True)
class Turns:
    """Equally many turns from each of some skeins that follow each other, of one lot.

    Parameters
    ----------
    count
        Turns from each.
    first, last
        Positions of the first and the last of the skeins, from 0.
    """

    count: int
    first: int
    last: int

    @property
    def pieces(self) -> int:
        """How many pieces they make together."""
        return self.count * (self.last - self.first + 1)


@dataclass(frozen=True)
class Setting:
    """One setting of the board, and everything that is wound at it.

    Parameters
    ----------
    length_mm
        What the board is set to [mm].
    turns
        What is wound, in the order of the skeins.
    """

    length_mm: int
    turns: tuple[Turns, ...]

    @property
    def pieces(self) -> int:
        """How many pieces are cut at this setting."""
        return sum(turns.pieces for turns in self.turns)


def stacks(skeins: Sequence[Skein]) -> tuple[Stack, ...]:
    """Lay skeins together that follow each other, come from one lot and are cut alike.

    Parameters
    ----------
    skeins
        In the order of the cuts.

    Returns
    -------
    tuple[Stack, ...]
        In that order; every skein is in one of them.
    """
    found, first = [], 0
    for skein, alike in groupby(skeins):
        count = len(list(alike))
        lengths = Counter(skein.lengths_mm)
        found.append(Stack(first, count, tuple(sorted(lengths.items(), reverse=True))))
        first += count
    return tuple(found)


def stop_settings(stacked: Sequence[Stack]) -> int:
    """Count how often the measuring stop is set when stacks are cut one after another.

    Parameters
    ----------
    stacked
        In the order of the cuts.

    Returns
    -------
    int
        One for the first cut and one for each change of the length.
    """
    stops = [length_mm for stack in stacked for length_mm, _ in stack.lengths]
    return len(list(groupby(stops)))


def board_settings(skeins: Sequence[Skein]) -> tuple[Setting, ...]:
    """Take all cuts length by length, so that the board is set once for each.

    Parameters
    ----------
    skeins
        In the order of the cuts.

    Returns
    -------
    tuple[Setting, ...]
        One for each length there is, longest first.
    """
    wound: dict[int, list[Turns]] = defaultdict(list)
    for position, skein in enumerate(skeins):
        for length_mm, count in Counter(skein.lengths_mm).items():
            own = wound[length_mm]
            last = own[-1] if own else None
            if last and _goes_on(last, position, count, skeins):
                own[-1] = Turns(count, last.first, position)
            else:
                own.append(Turns(count, position, position))
    return tuple(
        Setting(length_mm, tuple(turns)) for length_mm, turns in sorted(wound.items(), reverse=True)
    )


def _goes_on(last: Turns, position: int, count: int, skeins: Sequence[Skein]) -> bool:
    follows = last.last == position - 1 and last.count == count
    return follows and skeins[last.last].lot == skeins[position].lot
