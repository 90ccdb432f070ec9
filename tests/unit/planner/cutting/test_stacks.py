"""Stacks and settings of the winding board, by hand and under Hypothesis."""

from collections import Counter
from itertools import pairwise

from hypothesis import given
from hypothesis import strategies as st

from planner.cutting.stacks import (
    Setting,
    Skein,
    Stack,
    Turns,
    board_settings,
    stacks,
    stop_settings,
)


def test_alike_skeins_of_one_lot_are_a_stack() -> None:
    cut = (1180, 1180, 1180, 1180, 960, 960)
    skeins = [Skein("new", cut)] * 3 + [Skein("8a", cut), Skein("8a", (700,))]
    counted = ((1180, 4), (960, 2))
    assert stacks(skeins) == (
        Stack(0, 3, counted),
        Stack(3, 1, counted),
        Stack(4, 1, ((700, 1),)),
    )


def test_stop_is_set_once_for_a_stack_and_where_lengths_go_on() -> None:
    """118 and 96 for two skeins at once, then 96 goes on, then 70: three settings."""
    skeins = [Skein("8a", (118, 96))] * 2 + [Skein("8a", (96, 96, 70))]
    assert stop_settings(stacks(skeins)) == 3
    assert stop_settings(()) == 0


def test_board_is_set_once_for_a_length() -> None:
    """Four turns each from new thread 1 to 3 and two from a remnant: 4 x 3 + 2 = 14 pieces."""
    skeins = [Skein("8a", (1180, 1180))] + [Skein("new", (1180,) * 4 + (960,))] * 3
    first, second = board_settings(skeins)
    assert first == Setting(1180, (Turns(2, 0, 0), Turns(4, 1, 3)))
    assert first.pieces == 14
    assert second == Setting(960, (Turns(1, 1, 3),))


def test_turns_of_two_lots_or_with_a_skein_between_stay_apart() -> None:
    lots = [Skein("8a", (500,)), Skein("8b", (500,)), Skein("8b", (400,)), Skein("8b", (500,))]
    (setting, _) = board_settings(lots)
    assert setting.turns == (Turns(1, 0, 0), Turns(1, 1, 1), Turns(1, 3, 3))


SKEINS = st.lists(
    st.builds(
        Skein,
        st.sampled_from(["8a", "8b"]),
        st.lists(st.sampled_from([30, 20, 10]), max_size=4).map(
            lambda cut: tuple(sorted(cut, reverse=True))
        ),
    ),
    max_size=8,
)


@given(SKEINS)
def test_every_piece_is_in_one_stack_and_at_one_setting(skeins: list[Skein]) -> None:
    wanted = Counter(
        (position, length) for position, skein in enumerate(skeins) for length in skein.lengths_mm
    )
    stacked: Counter[tuple[int, int]] = Counter()
    for stack in stacks(skeins):
        assert len({skeins[stack.first + n].lot for n in range(stack.count)}) == 1
        for length, count in stack.lengths:
            for n in range(stack.count):
                stacked[stack.first + n, length] += count
    assert stacked == wanted
    wound: Counter[tuple[int, int]] = Counter()
    settings = board_settings(skeins)
    for setting in settings:
        for turns in setting.turns:
            for position in range(turns.first, turns.last + 1):
                wound[position, setting.length_mm] += turns.count
    assert wound == wanted
    lengths = [setting.length_mm for setting in settings]
    assert lengths == sorted(set(lengths), reverse=True)


@given(SKEINS)
def test_stacks_are_as_few_as_can_be(skeins: list[Skein]) -> None:
    """No two neighbours could be laid together."""
    found = stacks(skeins)
    for before, after in pairwise(found):
        one, other = skeins[before.first], skeins[after.first]
        assert one.lot != other.lot or one.lengths_mm != other.lengths_mm
