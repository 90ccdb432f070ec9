from collections import Counter

import pytest

from patterns.knots import PatternError
from patterns.pattern_file import read_pattern
from tests.data_builders.hostile_patterns import HostilePattern, hostile_patterns

HOSTILE = list(hostile_patterns())


def message_of(entry: HostilePattern) -> PatternError | None:
    try:
        read_pattern(entry.text)
    except PatternError as error:
        return error
    return None


def test_hostile_files_are_told_what_and_where() -> None:
    """A message is one short sentence or two; what was done to a row is found in that row."""
    for entry in HOSTILE:
        error = message_of(entry)
        if entry.row is None and error is None:
            continue  # a random harm may leave a good pattern
        assert error is not None, entry
        message = str(error)
        assert message[0].isupper() or message[0] == "'", message
        assert message[-1] in '."', message  # a sentence, or the line to write
        assert len(message) < 400, message
        assert all(mark.isprintable() for mark in message), message
        if entry.row is not None:
            assert f"Row {entry.row}" in message, (message, entry)
            assert error.row == entry.row
        if entry.place is not None:
            word = "knot" if entry.technique == "diagonal" else "column"
            assert f"Row {entry.row}, {word} {entry.place}:" in message, (message, entry)
            assert error.knot == entry.place


def test_hostile_files_are_many_and_the_same_every_time() -> None:
    assert len(HOSTILE) == 2_000
    assert list(hostile_patterns()) == HOSTILE
    assert min(Counter(entry.name for entry in HOSTILE).values()) >= 200


@pytest.mark.parametrize("technique", ["diagonal", "grid"])
def test_most_hostile_files_are_refused(technique: str) -> None:
    own = [entry for entry in HOSTILE if entry.technique == technique]
    refused = [entry for entry in own if message_of(entry)]
    assert len(refused) > 0.85 * len(own)
