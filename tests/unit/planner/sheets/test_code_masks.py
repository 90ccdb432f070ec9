"""The mask of a square code: code_masks.py, against the encoder's own symbols and a plain count."""

from itertools import pairwise

import numpy as np
import segno
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.sheets.code_masks import penalties, symbol_of

TEXTS = st.one_of(
    st.integers(1, 10**7).map(lambda number: f"https://stall.example/b/{number}/"),
    st.text(min_size=1, max_size=60),
    st.from_regex(r"[0-9]{1,40}", fullmatch=True),
    st.from_regex(r"[A-Z0-9:/.-]{1,40}", fullmatch=True),
)


def made_by_the_encoder(text: str, mask: int) -> tuple[bytes, ...]:
    symbol = segno.make_qr(text, error="L", encoding="utf-8", boost_error=True, mask=mask)
    return tuple(bytes(row) for row in symbol.matrix)


def penalty_counted(rows: tuple[bytes, ...]) -> int:
    """ISO/IEC 18004, evaluation of data masking, written out module by module (from memory).

    N1: 3 + i for 5 + i modules of one colour in a row or column. N2: 3 for each two by two of one
    colour. N3: 40 for dark and light as 1:1:3:1:1 with four light modules before or behind, the
    quiet zone being light. N4: 10 for each whole 5 % by which dark differs from 50 %.
    """
    size = len(rows)
    columns = tuple(bytes(row[place] for row in rows) for place in range(size))
    total = 0
    for line in (*rows, *columns):
        start = 0
        for place in range(1, size + 1):
            if place == size or line[place] != line[start]:
                total += place - start - 2 if place - start >= 5 else 0
                start = place
        lit = bytes(4) + line + bytes(4)
        for place in range(4, size + 4 - 6):
            if lit[place : place + 7] == bytes((1, 0, 1, 1, 1, 0, 1)):
                beside = (lit[place - 4 : place], lit[place + 7 : place + 11])
                total += 40 if bytes(4) in beside else 0
    for upper, lower in pairwise(rows):
        for place in range(size - 1):
            four = {*upper[place : place + 2], *lower[place : place + 2]}
            total += 3 if len(four) == 1 else 0
    dark = 100 * sum(map(sum, rows)) / size**2
    return total + 10 * int(abs(dark - 50) / 5)


@settings(max_examples=60)
@given(TEXTS)
def test_symbol_is_the_encoders_with_the_least_penalty(text):
    found = tuple(bytes(row) for row in symbol_of(text).astype(np.uint8))
    symbols = [made_by_the_encoder(text, mask) for mask in range(8)]
    assert found in symbols
    assert penalty_counted(found) == min(map(penalty_counted, symbols))


@given(st.integers(8, 24), st.integers(0, 2**32 - 1), st.sampled_from([0.1, 0.5, 0.9]))
def test_penalties_are_those_counted_module_by_module(size, seed, share):
    symbols = np.random.default_rng(seed).random((3, size, size)) < share
    counted = [
        penalty_counted(tuple(bytes(row) for row in symbol.astype(np.uint8))) for symbol in symbols
    ]
    assert penalties(symbols).tolist() == counted


def test_penalties_see_a_finder_at_the_edge():
    """Found by chance in one of many thousand symbols only."""
    symbol = np.ones((1, 12, 12), dtype=bool)
    symbol[0, 5] = [1, 0, 1, 1, 1, 0, 1, 0, 1, 0, 1, 0]
    rows = tuple(bytes(row) for row in symbol[0].astype(np.uint8))
    assert penalties(symbol).tolist() == [penalty_counted(rows)]
