"""The order of the cuts, against every order there is and under Hypothesis."""

import time
from collections import Counter, defaultdict
from collections.abc import Sequence
from itertools import groupby, pairwise, permutations

from hypothesis import given, settings
from hypothesis import strategies as st

from planner.cutting import CutPiece, Opened
from planner.cutting.cut_order import cut_order, stop_changes
from planner.cutting.hand_out import handed_out

SUPPLIERS = {"a": "Ropewalk", "b": "Ropewalk", "c": "Net loft"}


def opened(
    *lengths: int, lot: str = "1", key: str = "1", groups: str = "", offer: str = ""
) -> Opened:
    """A skein with 100 mm to spare, cut into these lengths, each for the group at its place."""
    pieces = [
        CutPiece(group, index, length)
        for index, (length, group) in enumerate(zip(lengths, groups or "g" * 99, strict=False))
    ]
    total = sum(lengths) + 100
    if offer:
        return Opened(None, offer, None, total, tuple(pieces), 100)
    return Opened(key, None, lot, total, tuple(pieces), 100)


def of(*skeins: Sequence[int]) -> list[Opened]:
    return [opened(*lengths, key=str(number)) for number, lengths in enumerate(skeins)]


def cuts(skeins: Sequence[Opened]) -> list[list[int]]:
    return [[piece.length_mm for piece in skein.pieces] for skein in skeins]


def changes(cut: Sequence[Sequence[int]]) -> int:
    """Counted anew: alike skeins side by side are one, then every other length is a change."""
    stacks = [lengths for lengths, _ in groupby(cut)]
    stops = [length for lengths in stacks for length in lengths]
    return sum(before != after for before, after in pairwise(stops))


def test_alike_skeins_are_together_and_the_stop_leads_on() -> None:
    skeins = of([96, 70], [118, 96], [96, 70], [118, 118])
    assert cuts(cut_order(skeins)) == [[118, 118], [118, 96], [96, 70], [96, 70]]


def test_longest_comes_first_and_one_bracelet_stays_together() -> None:
    skein = opened(70, 96, 96, 96, groups="abab")
    (ordered,) = cut_order([skein])
    assert [(piece.length_mm, piece.group_key) for piece in ordered.pieces] == [
        (96, "a"),
        (96, "b"),
        (96, "b"),
        (70, "a"),
    ]


def test_bracelets_stand_in_the_order_of_their_numbers() -> None:
    pieces = tuple(CutPiece(key, 0, 96) for key in ("10", "9", "100"))
    (ordered,) = cut_order([Opened("1", None, "1", 288, pieces, 0)])
    assert [piece.group_key for piece in ordered.pieces] == ["9", "10", "100"]


def test_equal_lengths_are_exchanged_so_that_a_bracelet_has_one_skein() -> None:
    skeins = [
        opened(96, 96, key="1", groups="ab"),
        opened(96, 96, key="2", groups="ab"),
    ]
    ordered = cut_order(skeins)
    assert [{piece.group_key for piece in skein.pieces} for skein in ordered] == [{"a"}, {"b"}]


def test_equal_lengths_of_other_lots_are_left_alone() -> None:
    skeins = [
        opened(96, 96, lot="1", key="1", groups="ab"),
        opened(96, 96, lot="2", key="2", groups="ab"),
    ]
    assert cut_order(skeins) == tuple(skeins)


def test_shelf_comes_before_new_thread_and_suppliers_are_kept_apart() -> None:
    skeins = [
        opened(96, 50, offer="a", groups="xy"),
        opened(96, offer="c", groups="x"),
        opened(50, 40, offer="b", groups="yx"),
        opened(70, lot="1", key="1", groups="z"),
    ]
    ordered = cut_order(skeins, suppliers=SUPPLIERS)
    assert [skein.offer_key for skein in ordered] == [None, "a", "b", "c"]


def test_next_lot_begins_where_the_stop_stands() -> None:
    first = of([96, 70], [118, 80])
    then = [opened(80, 60, lot="2", key="8"), opened(110, 50, lot="2", key="9")]
    assert cuts(cut_order([*first, *then])) == [[96, 70], [118, 80], [80, 60], [110, 50]]


def test_lucky_order_across_lots_is_kept() -> None:
    """The middle lot alone has fewest changes as 100, 80, 50; the stop of both others is at 80."""
    before = [
        opened(200, 80, lot="1", key="1", groups="aa"),
        opened(80, 50, lot="2", key="2", groups="bb"),
        opened(100, 80, lot="2", key="3", groups="cc"),
        opened(80, 30, lot="3", key="4", groups="dd"),
    ]
    assert cut_order(before) == tuple(before)
    assert stop_changes(before) == 5


def test_hand_out_that_finds_nothing_better_leaves_bracelets_alone() -> None:
    """Whoever serves the first piece of 30 to "e", which needs the 40 beside one, needs a pair more."""
    before = [
        opened(30, key="1", groups="d"),
        opened(30, key="2", groups="d"),
        opened(10, key="3", groups="e"),
        opened(40, 30, key="4", groups="ee"),
    ]
    assert pairs(handed_out(before)) <= pairs(before) == 4


def test_nothing_opened_needs_no_order() -> None:
    assert cut_order([]) == ()
    assert stop_changes([]) == 0


LENGTHS = st.integers(1, 6).map(lambda step: step * 10)
CUT_LISTS = st.lists(LENGTHS, min_size=1, max_size=5).map(lambda cut: sorted(cut, reverse=True))


@settings(max_examples=300, deadline=None)
@given(st.lists(CUT_LISTS, min_size=1, max_size=6))
def test_no_order_of_the_skeins_changes_the_stop_less(skeins: list[list[int]]) -> None:
    ordered = cut_order(of(*skeins))
    fewest = min(changes(order) for order in permutations(skeins))
    assert changes(cuts(ordered)) == stop_changes(ordered) == fewest


@st.composite
def plans(draw: st.DrawFn) -> list[Opened]:
    """A plan as the solver leaves it: shelf first, lot by lot, longest first, groups at random."""
    places = draw(
        st.lists(
            st.sampled_from([("1", ""), ("2", ""), ("", "a"), ("", "b"), ("", "c")]), max_size=14
        )
    )
    in_order = [("1", ""), ("2", ""), ("", "a"), ("", "b"), ("", "c")]
    found = []
    next_index: Counter[str] = Counter()
    for number, (lot, offer) in enumerate(sorted(places, key=in_order.index)):
        pieces = []
        for length in draw(CUT_LISTS):
            # A group keeps to one lot; new thread of one supplier is one.
            own = lot or SUPPLIERS[offer]
            group = f"{own} {draw(st.integers(1, 5))}"
            pieces.append(CutPiece(group, next_index[group], length))
            next_index[group] += 1
        total = sum(piece.length_mm for piece in pieces)
        left = draw(st.integers(0, 50))
        found.append(
            Opened(
                None if offer else str(number),
                offer or None,
                lot or None,
                total + left,
                tuple(pieces),
                left,
            )
        )
    return found


def pairs(skeins: Sequence[Opened]) -> int:
    return sum(len({piece.group_key for piece in skein.pieces}) for skein in skeins)


def lots_of_groups(skeins: Sequence[Opened]) -> dict[str, set[str]]:
    found = defaultdict(set)
    for skein in skeins:
        for piece in skein.pieces:
            found[piece.group_key].add(skein.lot_key or SUPPLIERS[skein.offer_key or ""])
    return found


@settings(max_examples=400, deadline=None)
@given(plans())
def test_order_loses_nothing_and_is_never_worse(before: list[Opened]) -> None:
    after = cut_order(before, suppliers=SUPPLIERS)
    assert Counter(p for s in after for p in s.pieces) == Counter(
        p for s in before for p in s.pieces
    )

    def stock(skeins: Sequence[Opened]) -> Counter[tuple[object, ...]]:
        return Counter(
            (s.stock_key, s.offer_key, s.lot_key, s.length_mm, s.left_mm, tuple(lengths))
            for s, lengths in zip(skeins, cuts(skeins), strict=True)
        )

    assert stock(after) == stock(before)
    assert lots_of_groups(after) == lots_of_groups(before)
    assert pairs(after) <= pairs(before)
    assert stop_changes(after, suppliers=SUPPLIERS) <= stop_changes(before, suppliers=SUPPLIERS)
    assert after == cut_order(before, suppliers=SUPPLIERS)
    places = [skein.lot_key or SUPPLIERS[skein.offer_key or ""] for skein in after]
    assert len({place for place, _ in groupby(places)}) == len(list(groupby(places)))
    assert [s.offer_key is not None for s in after] == sorted(
        s.offer_key is not None for s in after
    )


@settings(max_examples=200, deadline=None)
@given(plans())
def test_pieces_stand_longest_first_and_by_bracelet(before: list[Opened]) -> None:
    for skein in cut_order(before, suppliers=SUPPLIERS):
        places = [(-piece.length_mm, piece.group_key) for piece in skein.pieces]
        assert places == sorted(places)


def many(skeins: int) -> list[Opened]:
    """Ten pieces a skein, spread over bracelets of five pieces as badly as can be."""
    return [
        Opened(
            str(number),
            None,
            "1",
            8000,
            tuple(
                CutPiece(
                    str((number + place * skeins // 5) % (2 * skeins)),
                    place,
                    700 - 10 * (place // 2) - 10 * (number % 7),
                )
                for place in range(10)
            ),
            0,
        )
        for number in range(skeins)
    ]


def test_time_grows_with_the_pieces() -> None:
    """20,000 pieces take at most twenty times as long as 2,000: ten would be in proportion."""
    seconds = []
    for skeins in (200, 2000):
        plan = many(skeins)
        started = time.perf_counter()
        ordered = cut_order(plan)
        seconds.append(time.perf_counter() - started)
        assert pairs(ordered) <= pairs(plan)
    assert seconds[1] < 20 * seconds[0] + 1
