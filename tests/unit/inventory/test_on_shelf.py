from decimal import Decimal
from itertools import product

import pytest
from hypothesis import given
from hypothesis import strategies as st

from inventory.on_shelf import OnShelf, reckoned_length

lengths = st.integers(1, 40)


def can_be_cut(pieces, stock) -> bool:
    """Brute force: every way to say from which length each piece comes."""
    return any(
        all(
            sum(piece for piece, at in zip(pieces, places, strict=True) if at == here) <= length
            for here, length in enumerate(stock)
        )
        for places in product(range(len(stock)), repeat=len(pieces))
    )


@given(st.lists(lengths, max_size=5), st.lists(lengths, min_size=1, max_size=3))
def test_what_holds_can_be_cut(pieces, stock):
    if OnShelf(lots=(tuple(stock),)).holds(pieces):
        assert can_be_cut(pieces, stock)
    elif sum(pieces) <= max(stock):
        pytest.fail("one length holds them all")


def test_holds_needs_lengths_not_a_total():
    # Common practice, no source: 10 strands of 1.2 m do not come out of 12 m of 0.9 m remnants, and only
    # 6 come out of a skein of 8 m.
    remnants = OnShelf(12_600, 0, ((900,) * 14,))
    skein = OnShelf(8_000, 1, ((8_000,),))
    assert not remnants.holds([1_200])
    assert skein.holds([1_200] * 6)
    assert not skein.holds([1_200] * 7)


def test_holds_takes_all_from_one_lot():
    # One shade in one bracelet comes from one dye lot: common practice, no source.
    assert not OnShelf(lots=((1_000,), (1_000,))).holds([800, 800])
    assert OnShelf(lots=((1_000,), (1_000, 900))).holds([800, 800])


def test_holds_of_an_empty_shelf_and_of_no_pieces():
    assert not OnShelf().holds([100])
    assert not OnShelf().holds([])
    assert OnShelf(lots=((1,),)).holds([])


@pytest.mark.parametrize(
    ("shelf", "unit", "words"),
    [
        (OnShelf(), "cm", "none on the shelf"),
        (OnShelf(23_040, 2), "cm", "23 m on the shelf, 2 whole skeins"),
        (OnShelf(8_000, 1), "cm", "8 m on the shelf, 1 whole skein"),
        (OnShelf(1_955, 0), "cm", "195.5 cm on the shelf"),
        # 9144 mm are 10 yards, by the agreement of 1959.
        (OnShelf(9_144, 1), "in", "10 yd on the shelf, 1 whole skein"),
    ],
)
def test_words_say_how_much_there_is(shelf, unit, words):
    assert shelf.words(unit) == words


@pytest.mark.parametrize(
    ("names", "words"), [((), ""), (("L1",), "lot L1"), (("L1", "L2"), "lots L1, L2")]
)
def test_lot_words_name_the_lots(names, words):
    assert OnShelf(lot_names=names).lot_words() == words


def test_reckoned_length_rounds_down() -> None:
    assert reckoned_length(8_000, Decimal("0.02")) == 7_840
    assert reckoned_length(7_999, Decimal("0.02")) == 7_839
    assert reckoned_length(8_000, Decimal(0)) == 8_000
