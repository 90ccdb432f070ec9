import pytest
from pattern_factories import all_same

from patterns.colour_difference import Sight
from patterns.colours import ColourError
from patterns.grid import GridPattern
from patterns.look_alikes import LookAlike, look_alikes, sights_to_show

RED, GREEN = "#aa1122", "#2e7d32"
# A | B | C, four rows: each pair of neighbours shares a side a row.
STRIPES = GridPattern("Stripes", "A", (("A", "B", "C"),))


def test_look_alikes_are_neighbours_that_somebody_cannot_tell_apart():
    # Red and green thread are confused by red-green colour-blind eyes: common knowledge, no source.
    [pair] = look_alikes(STRIPES, 4, {"A": RED, "B": GREEN, "C": "#f4f1e8"})
    assert pair.slots == ("A", "B")
    assert pair.sides == 4
    assert Sight.DEUTAN in pair.sights
    assert Sight.USUAL not in pair.sights
    assert not pair.same
    assert pair.to_whom == "to people with red-green colour blindness"


def test_look_alikes_that_never_touch_are_left_out():
    assert look_alikes(STRIPES, 4, {"A": RED, "B": "#f4f1e8", "C": GREEN}) == ()


def test_look_alikes_of_one_shade_in_two_slots():
    [pair] = look_alikes(STRIPES, 1, {"A": RED, "B": RED.upper()})
    assert pair.same
    assert pair.sights == tuple(Sight)
    assert pair.to_whom == "to everybody"


def test_look_alikes_that_meet_most_often_come_first():
    pattern = GridPattern("Stripes", "A", (("A", "B", "A", "B", "C"),))
    pairs = look_alikes(pattern, 2, dict.fromkeys("ABC", RED))
    assert [(pair.slots, pair.sides) for pair in pairs] == [(("A", "B"), 6), (("B", "C"), 2)]


def test_look_alikes_without_shades():
    assert look_alikes(all_same(6), 20, {}) == ()


def test_look_alikes_refuses_what_is_no_colour():
    with pytest.raises(ColourError):
        look_alikes(STRIPES, 4, {"A": "red", "B": GREEN})


@pytest.mark.parametrize(
    ("sights", "words"),
    [
        ((Sight.PROTAN,), "to people with red-green colour blindness"),
        ((Sight.TRITAN,), "to people with blue-yellow colour blindness"),
        (
            (Sight.DEUTAN, Sight.TRITAN),
            "to people with red-green or blue-yellow colour blindness",
        ),
    ],
)
def test_to_whom(sights, words):
    assert LookAlike(("A", "B"), 1, sights, False).to_whom == words


def test_sights_to_show_are_those_that_lose_more_than_usual_eyes():
    everybody = LookAlike(("A", "B"), 1, tuple(Sight), False)
    some = LookAlike(("B", "C"), 1, (Sight.TRITAN, Sight.PROTAN), False)
    assert sights_to_show((everybody,)) == ()
    assert sights_to_show((everybody, some)) == (Sight.PROTAN, Sight.TRITAN)
