"""The order of the cuts: lot by lot, alike skeins together, longest first, few changes of the stop.

Terms
-----
A *stop* is what a maker sets to a length and cuts against. Skeins of one lot that are cut exactly
alike are a *stack*: laid together, they need the stop once for all of them.
"""

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import replace
from itertools import groupby, pairwise

from planner.cutting.hand_out import handed_out
from planner.cutting.lot_problem import Opened

Stack = list[Opened]
Trail = list[Stack]


def cut_order(
    opened: Sequence[Opened], *, suppliers: Mapping[str, str] | None = None
) -> tuple[Opened, ...]:
    """Put skeins and their cuts into an order that suits the hand.

    Parameters
    ----------
    opened
        What is cut, shelf first and lot by lot, as a plan has it.
    suppliers
        Who sells each offer, by its key: the new thread of one supplier is one lot. An offer
        that is not named is a lot of its own.

    Returns
    -------
    tuple[Opened, ...]
        The same stock pieces, cut into the same lengths, shelf first, lots in their order. In each
        the longest pieces come first, equal ones by group. A lot's equal lengths are handed out
        anew, so that a group's pieces come from few skeins, near each other.

    Notes
    -----
    A stack is an arc from its longest to its shortest length. One stack follows another without a
    change of the stop where an arc begins at which the other ends, so the fewest changes of a lot
    come from the fewest trails over all its arcs. Arcs lead to shorter lengths or back to the same,
    so walks begun only where more arcs begin than end, each until it can go no further, are the
    fewest: every walk takes one from the sum of max(0, begun - ended) over the lengths, and no
    trail can take more. Splitting a stack never pays: it adds its own changes, at least one, and
    saves at most one; one of a single length fits into any trail that passes by. Between two
    lots a change is saved where it costs none elsewhere.
    """
    lots = _by_lot(opened, suppliers or {})
    trails = [_trails(lot) for lot in lots]
    ordered: list[list[Opened]] = []
    at_mm = 0
    for number, own in enumerate(trails):
        following = trails[number + 1] if number + 1 < len(trails) else []
        placed = _placed(own, at_mm, {_first_mm(trail[0]) for trail in following})
        at_mm = _last_mm(placed[-1][-1])
        ordered.append([skein for trail in placed for stack in trail for skein in stack])
    # By luck the given order may save more between lots than the one above gave up within them.
    if _changes_of(ordered) > _changes_of(lots):
        ordered = lots
    return tuple(skein for lot in ordered for skein in handed_out(lot))


def stop_changes(opened: Sequence[Opened], *, suppliers: Mapping[str, str] | None = None) -> int:
    """Count how often the stop is changed when skeins are cut in this order.

    Parameters
    ----------
    opened
        What is cut, in its order.
    suppliers
        Who sells each offer, as `cut_order` takes it.

    Returns
    -------
    int
        The changes after the first setting. Alike skeins of a lot that follow each other are laid
        together and count as one.
    """
    lots = groupby(opened, lambda skein: _lot_of(skein, suppliers or {}))
    return _changes_of([list(skeins) for _, skeins in lots])


def lengths_of(skein: Opened) -> tuple[int, ...]:
    """Give the lengths of a skein's cuts, longest first [mm]."""
    return tuple(sorted((piece.length_mm for piece in skein.pieces), reverse=True))


def _changes_of(lots: Sequence[Sequence[Opened]]) -> int:
    stops = [
        piece.length_mm
        for lot in lots
        for _, alike in groupby(lot, lambda skein: [piece.length_mm for piece in skein.pieces])
        for piece in next(alike).pieces
    ]
    return sum(before != after for before, after in pairwise(stops))


def _lot_of(skein: Opened, suppliers: Mapping[str, str]) -> tuple[bool, str | None]:
    if skein.offer_key is None:
        return False, skein.lot_key
    return True, suppliers.get(skein.offer_key, skein.offer_key)


def _by_lot(opened: Sequence[Opened], suppliers: Mapping[str, str]) -> list[list[Opened]]:
    lots: dict[tuple[bool, str | None], list[Opened]] = defaultdict(list)
    for skein in opened:
        longest_first = sorted(skein.pieces, key=lambda piece: -piece.length_mm)
        lots[_lot_of(skein, suppliers)].append(replace(skein, pieces=tuple(longest_first)))
    return [lots[key] for key in sorted(lots, key=lambda key: key[0])]


def _first_mm(stack: Stack) -> int:
    return max((piece.length_mm for piece in stack[0].pieces), default=0)


def _last_mm(stack: Stack) -> int:
    return min((piece.length_mm for piece in stack[0].pieces), default=0)


def _stacks(lot: Sequence[Opened]) -> list[Stack]:
    """Lay alike skeins together, the longer put-ups first; stacks with the longest pieces first."""
    stacks: dict[tuple[int, ...], Stack] = defaultdict(list)
    for skein in lot:
        stacks[lengths_of(skein)].append(skein)
    return [
        sorted(stacks[lengths], key=lambda skein: -skein.length_mm)
        for lengths in sorted(stacks, reverse=True)
    ]


def _trails(lot: Sequence[Opened]) -> list[Trail]:
    """Cover all stacks of a lot with the fewest trails, the one of the longest lengths first."""
    leading: dict[int, list[Stack]] = defaultdict(list)
    staying: dict[int, list[Stack]] = defaultdict(list)
    more_begin: dict[int, int] = defaultdict(int)
    for stack in reversed(_stacks(lot)):
        first_mm, last_mm = _first_mm(stack), _last_mm(stack)
        (staying if first_mm == last_mm else leading)[first_mm].append(stack)
        more_begin[first_mm] += 1
        more_begin[last_mm] -= 1
    found: list[Trail] = []
    for length_mm in sorted(more_begin, reverse=True):
        for _ in range(more_begin[length_mm]):
            found.append(_walk(length_mm, leading, staying))
    found += [list(reversed(stacks)) for stacks in staying.values()]
    return sorted(found, key=lambda trail: -_first_mm(trail[0]))


def _walk(at_mm: int, leading: dict[int, list[Stack]], staying: dict[int, list[Stack]]) -> Trail:
    """Take stacks out while one begins where the last ended."""
    trail: Trail = []
    while True:
        trail += reversed(staying.pop(at_mm, []))
        if not leading[at_mm]:
            return trail
        trail.append(leading[at_mm].pop())
        at_mm = _last_mm(trail[-1])


def _placed(trails: Sequence[Trail], at_mm: int, next_mm: set[int]) -> list[Trail]:
    """Begin with a trail at which the stop stands, end with one that leads to the next lot."""
    rest = list(trails)
    begin = next((trail for trail in rest if _first_mm(trail[0]) == at_mm), None)
    if begin is not None:
        rest.remove(begin)
    end = next((trail for trail in rest if _last_mm(trail[-1]) in next_mm), None)
    if end is not None:
        rest.remove(end)
    return [trail for trail in (begin, *rest, end) if trail is not None]
