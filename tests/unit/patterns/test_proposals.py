from hypothesis import given
from hypothesis import strategies as st

from patterns.colour_difference import Sight, difference_as_seen, hard_to_tell
from patterns.proposals import MOST_CONSIDERED, propose

colours = st.integers(0, 0xFFFFFF).map(lambda number: f"#{number:06x}")


def always(slot: str, shade: object) -> bool:
    return True


@given(st.lists(colours, max_size=8), st.integers(0, 5), st.sets(st.integers(0, 7)))
def test_propose_takes_the_shade_furthest_from_those_taken(found, slot_count, short):
    shades = dict(enumerate(found))
    proposed = propose("ABCDE"[:slot_count], shades, lambda slot, key: key not in short)
    enough = [key for key in shades if key not in short]
    assert list(proposed) == list("ABCDE"[: min(slot_count, len(enough))])
    assert len(set(proposed.values())) == len(proposed)
    taken: list[int] = []
    for key in proposed.values():
        assert key in enough

        def least(one: int) -> float:
            return min(
                (
                    difference_as_seen(shades[one], shades[other], sight)
                    for other in taken
                    for sight in Sight
                ),
                default=0,
            )

        assert least(key) >= max(least(one) for one in enough if one not in taken) - 1e-9
        taken.append(key)


def test_propose_spares_colour_blind_eyes():
    # Moss lies far from madder to usual eyes and close to it for some; slate is told by all.
    shades = {"madder": "#aa1122", "moss": "#2e7d32", "slate": "#20262c"}
    assert "deutan" in hard_to_tell(shades["madder"], shades["moss"])
    assert propose("AB", shades, always) == {"A": "madder", "B": "slate"}


def test_propose_is_the_same_every_time_and_takes_the_first_of_equals():
    shades = {"W1": "#ffffff", "K1": "#000000", "K2": "#000000"}
    assert propose("AB", shades, always) == {"A": "W1", "B": "K1"}
    assert propose("AB", shades, always) == propose("AB", shades, always)


def test_each_proposal_starts_from_another_shade_until_they_begin_again():
    shades = {"W1": "#ffffff", "K1": "#000000", "R1": "#aa1122", "B1": "#1122aa"}
    starts = [
        propose("AB", shades, lambda slot, key: key != "R1", number)["A"] for number in range(4)
    ]
    assert starts == ["W1", "K1", "B1", "W1"]


def test_propose_asks_for_each_slot_whether_there_is_enough():
    shades = {"W1": "#ffffff", "K1": "#000000"}
    only = {("A", "K1"), ("B", "W1")}
    assert propose("AB", shades, lambda *ask: ask in only) == {"A": "K1", "B": "W1"}


def test_propose_leaves_slots_open_where_no_shade_is_left():
    assert propose("ABC", {"W1": "#ffffff"}, always) == {"A": "W1"}
    assert propose("ABC", {}, always) == {}


def test_propose_looks_at_the_first_shades_only():
    shades = dict.fromkeys(range(MOST_CONSIDERED), "#ffffff") | {"black": "#000000"}
    assert "black" not in propose("AB", shades, always).values()
