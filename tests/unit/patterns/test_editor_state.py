import json
from contextlib import suppress

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, patterns
from test_grid import make_grid

from patterns.editor_state import read_state, write_state
from patterns.knots import PatternError


@given(st.one_of(patterns(), grid_patterns()))
def test_state_reads_back_the_same(pattern):
    assert read_state(json.loads(json.dumps(write_state(pattern)))) == pattern


def test_state_as_documented():
    assert write_state(all_same(2)) == {
        "technique": "diagonal",
        "name": "All the same",
        "finish": "exact",
        "rows": [["f"], []],
        "slots": ["A", "B"],
    }
    assert write_state(make_grid("AB"))["rows"] == [["A", "B"]]


@pytest.mark.parametrize("state", [None, 7, "f", [], {}, {"technique": []}, {"technique": "x"}])
def test_no_pattern_is_refused(state):
    with pytest.raises(PatternError):
        read_state(state)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"name": 7}, "name has to be text"),
        ({"name": ""}, "no name"),
        ({"slots": "AB"}, "strands have to be a list"),
        ({"slots": [1, 2]}, "strands have to be a list"),
        ({"slots": ["A", "?"]}, "Strand 2: '\\?'"),
        ({"rows": 7}, "rows have to be a list"),
        ({"rows": [7, []]}, "words of row 1"),
        ({"rows": [["f"], [{}]]}, "words of row 2"),
        ({"rows": [["g"], []]}, "Row 1, knot 1: 'g' is not a knot"),
        ({"rows": [["f", "f"], []]}, "Row 1 has 2 knots; 2 strands need 1"),
        ({"rows": [["f"]]}, "1"),
        ({"finish": "never"}, "no finish 'never'"),
        ({"finish": ["exact"]}, "no finish"),
        ({"finish": "centred"}, "Only grid patterns can be centred"),
    ],
)
def test_diagonal_state_says_what_is_wrong(changes, message):
    with pytest.raises(PatternError, match=message):
        read_state(write_state(all_same(2)) | changes)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"background": 7}, "background has to be text"),
        ({"background": "a"}, "background 'a'"),
        ({"carry": None}, "no carry"),
        ({"rows": []}, "1 to 400 rows"),
        ({"rows": [["A", "B"], ["A"]]}, "Row 2 has 1 cell"),
        ({"rows": [["A", "B"]] * 401}, "1 to 400 rows"),
        ({"rows": [["A"] * 100_000]}, "2 to 60 columns"),
    ],
)
def test_grid_state_says_what_is_wrong(changes, message):
    with pytest.raises(PatternError, match=message):
        read_state(write_state(make_grid()) | changes)


json_values = st.recursive(
    st.one_of(st.none(), st.booleans(), st.integers(), st.floats(), st.text(max_size=5)),
    lambda inner: st.one_of(
        st.lists(inner, max_size=4), st.dictionaries(st.text(max_size=5), inner, max_size=4)
    ),
    max_leaves=20,
)


@given(
    st.sampled_from(["diagonal", "grid"]),
    st.dictionaries(
        st.sampled_from(["name", "slots", "rows", "finish", "background", "carry"]), json_values
    ),
)
def test_any_json_is_read_or_refused(technique, values):
    good = write_state(all_same(4) if technique == "diagonal" else make_grid())
    with suppress(PatternError):
        read_state(good | values)
