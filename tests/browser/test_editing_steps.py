"""The editor's steps on diagonal patterns, in the browser's own JavaScript.

Checked against patterns.knots and against what each step promises about the band: the colours of
its knots, row by row, read from a band that Python ties.
"""

import random
from collections.abc import Callable
from typing import Any

import pytest
from playwright.sync_api import Page

from patterns.editor_state import read_state, write_state
from patterns.knots import (
    MAX_REPEAT_ROWS,
    MAX_STRANDS,
    MIN_REPEAT_ROWS,
    MIN_STRANDS,
    DiagonalPattern,
    Knot,
    knots_in_row,
)
from patterns.tying import mirrored, order_after, tie_rows

pytestmark = pytest.mark.django_db(transaction=True)

SEED = 20261201
STATES = 120
MODULES = "/static/flosswright/editor/"

# Every state is frozen through and through: a step that altered one would throw.
RUN_STEPS = """async ([folder, calls]) => {
  const steps = await import(`${folder}diagonal_steps.js`);
  const frozen = (value) => {
    if (value && typeof value === "object") Object.values(value).forEach(frozen);
    return Object.freeze(value);
  };
  return calls.map(([name, state, ...rest]) => {
    try {
      return steps[name](frozen(state), ...rest);
    } catch (error) {
      if (error.constructor.name !== "StepRefused") throw error;
      return error.message;
    }
  });
}"""

State = dict[str, Any]
RunSteps = Callable[[list[list[Any]]], list[Any]]


@pytest.fixture
def steps(page: Page) -> RunSteps:
    page.goto("/")
    return lambda calls: page.evaluate(RUN_STEPS, [MODULES, calls])


@pytest.fixture
def chance() -> random.Random:
    return random.Random(SEED)


def random_state(chance: random.Random, most_strands: int = 13, most_rows: int = 12) -> State:
    strands = chance.randint(MIN_STRANDS, most_strands)
    rows = 2 * chance.randint(1, most_rows // 2)
    return {
        "technique": "diagonal",
        "name": "Random",
        "finish": "exact",
        "slots": [chance.choice("ABCDZ") for _ in range(strands)],
        "rows": [
            [str(chance.choice(list(Knot))) for _ in range(knots_in_row(strands, row))]
            for row in range(1, rows + 1)
        ],
    }


def random_states(chance: random.Random) -> list[State]:
    return [random_state(chance) for _ in range(STATES)]


def pattern_of(state: State) -> DiagonalPattern:
    pattern = read_state(state)
    assert isinstance(pattern, DiagonalPattern)
    return pattern


def band(state: State, rows: int = 40) -> list[list[tuple[str, str]]]:
    """The knots of a band with the slot that shows, row by row, left to right."""
    pattern = pattern_of(state)
    return [
        [(str(tied.knot), pattern.slots[tied.tying - 1]) for tied in row]
        for row in tie_rows(pattern, rows)
    ]


def random_calls(state: State, chance: random.Random) -> list[list[Any]]:
    """Every step once, on a random place of the state."""
    row = chance.choice([row for row, knots in enumerate(state["rows"]) if knots])
    place = chance.randrange(len(state["rows"][row]))
    knot = str(chance.choice(list(Knot)))
    slot = chance.choice("ABY")
    return [
        ["setKnot", state, row, place, knot],
        ["fillRow", state, row, knot],
        ["setSlot", state, chance.randrange(len(state["slots"])), slot],
        ["addLeftStrand", state, slot],
        ["addRightStrand", state, slot],
        ["removeLeftStrand", state],
        ["removeRightStrand", state],
        ["widen", state, 2 * place + row % 2],
        ["narrow", state, 2 * place + row % 2],
        ["addRows", state, row],
        ["copyRows", state, row],
        ["removeRows", state, row],
        ["mirror", state],
        ["turnRound", state],
        ["beginLater", state],
        ["beginEarlier", state],
        ["shiftColours", state, chance.choice([-1, 1])],
        ["repeatTwice", state],
        ["repeatMirrored", state],
        ["clear", state],
    ]


def test_every_step_gives_a_pattern_and_is_taken_back(
    steps: RunSteps, page: Page, chance: random.Random
) -> None:
    calls = [call for state in random_states(chance) for call in random_calls(state, chance)]
    refused = 0
    pairs = []
    for call, after in zip(calls, steps(calls), strict=True):
        if isinstance(after, str):
            assert call[0].startswith(("remove", "narrow")), after
            assert "at least 2" in after
            refused += 1
            continue
        assert write_state(pattern_of(after)) == after, call
        pairs.append((call[1], after))
    assert 0 < refused < len(calls) / 10
    taken_back = page.evaluate(
        """async ([folder, pairs]) => {
          const { difference, applied } = await import(`${folder}session.js`);
          return pairs.map(([before, after]) => {
            const step = JSON.parse(JSON.stringify(difference(before, after)));
            return [applied(after, step, false), applied(before, step)];
          });
        }""",
        [MODULES, pairs],
    )
    for (before, after), (undone, redone) in zip(pairs, taken_back, strict=True):
        assert undone == before
        assert redone == after


def test_mirror_is_pythons(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    images = steps([["mirror", state] for state in states])
    assert images == [write_state(mirrored(pattern_of(state))) for state in states]


def test_mirror_twice_is_the_identity(steps: RunSteps, chance: random.Random) -> None:
    """With an odd number of strands each image begins a row later, so two rows are to go back."""
    states = random_states(chance)
    twice = steps([["mirror", image] for image in steps([["mirror", s] for s in states])])
    earlier = steps([["beginEarlier", state] for state in twice])
    for state, image, moved in zip(states, twice, earlier, strict=True):
        assert (moved if len(state["slots"]) % 2 else image) == state


def test_turning_round_shows_the_band_from_its_other_end(
    steps: RunSteps, chance: random.Random
) -> None:
    """Seen from the end, f was tied from the right: it is b. The last row stays the last."""
    backwards = {"f": "b", "b": "f", "fb": "fb", "bf": "bf"}
    states = random_states(chance)
    turned = steps([["turnRound", state] for state in states])
    for state, other in zip(states, turned, strict=True):
        rows = len(state["rows"]) - 1
        seen = [[(backwards[knot], slot) for knot, slot in row] for row in band(state, rows)]
        assert band(other, rows) == seen[::-1]
    assert steps([["turnRound", state] for state in turned]) == states


def test_strands_inside_are_tied_as_the_two_beside_them(
    steps: RunSteps, chance: random.Random
) -> None:
    """By positions: up to the two strands all is as before, from there on it comes again."""
    states = random_states(chance)
    places = [chance.randrange(len(state["slots"]) - 1) for state in states]
    pairs = list(zip(states, places, strict=True))
    wide = steps([["widen", state, left] for state, left in pairs])
    for (state, left), wider in zip(pairs, wide, strict=True):
        assert wider["slots"] == state["slots"][: left + 2] + state["slots"][left:]
        for number, (old, new) in enumerate(zip(state["rows"], wider["rows"], strict=True)):
            knots = {2 * place + number % 2: knot for place, knot in enumerate(old)}
            for place, knot in enumerate(new):
                at = 2 * place + number % 2
                beside = knots.get(at if at <= left + 1 else at - 2)
                assert knot == (beside or (old[-1] if old else "f")), (state, left, number)
    assert (
        steps([["narrow", state, left] for state, (_, left) in zip(wide, pairs, strict=True)])
        == states
    )


def test_walk_is_pythons(page: Page, chance: random.Random) -> None:
    states = random_states(chance)
    page.goto("/")
    walked = page.evaluate(
        """async ([folder, states]) => {
          const { walk } = await import(`${folder}walk.js`);
          return states.map(({ slots, rows }) => walk(slots.length, rows));
        }""",
        [MODULES, states],
    )
    for state, found in zip(states, walked, strict=True):
        pattern = pattern_of(state)
        assert [strand + 1 for strand in found["order"]] == list(
            order_after(pattern, len(pattern.rows))
        )
        tied = list(tie_rows(pattern, len(pattern.rows)))
        assert [
            [(k["left"] + 1, k["knot"], k["tying"] + 1, k["base"] + 1) for k in row]
            for row in found["tied"]
        ] == [[tuple(knot) for knot in row] for row in tied]


def test_beginning_later_shows_the_same_band(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    later = steps([["beginLater", state] for state in states])
    for state, moved in zip(states, later, strict=True):
        assert band(moved, 38) == band(state)[2:]
    assert steps([["beginEarlier", state] for state in later]) == states


def test_strand_at_an_edge_leaves_the_others_as_they_are(
    steps: RunSteps, chance: random.Random
) -> None:
    """At the left the band begins one row earlier, with the last row of the repeat."""
    states = random_states(chance)
    right = steps([["addRightStrand", state, "Y"] for state in states])
    left = steps([["addLeftStrand", state, "Y"] for state in states])
    for state, wide in zip(states, right, strict=True):
        assert [row[: len(old)] for row, old in zip(band(wide), band(state), strict=True)] == band(
            state
        )
    for state, wide in zip(states, left, strict=True):
        for number, (row, old) in enumerate(zip(band(wide)[1:], band(state), strict=False)):
            assert row[len(row) - len(old) :] == old, number
    assert steps([["removeRightStrand", state] for state in right]) == states
    assert steps([["removeLeftStrand", state] for state in left]) == states


def test_rows_come_and_go_in_pairs(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    at = [2 * chance.randrange(len(state["rows"]) // 2) for state in states]
    in_pair = [row + chance.randint(0, 1) for row in at]
    places = list(zip(states, at, in_pair, strict=True))
    added = steps([["addRows", state, row] for state, _, row in places])
    copied = steps([["copyRows", state, row] for state, _, row in places])
    for (state, pair, _), longer, doubled in zip(places, added, copied, strict=True):
        rows, strands = state["rows"], len(state["slots"])
        plain = [["f"] * knots_in_row(strands, row) for row in (1, 2)]
        assert longer["rows"] == rows[: pair + 2] + plain + rows[pair + 2 :]
        assert doubled["rows"] == rows[: pair + 2] + rows[pair : pair + 2] + rows[pair + 2 :]
    taken = [["removeRows", more, row + 2] for (_, _, row), more in zip(places, added, strict=True)]
    assert steps(taken) == states


def test_repeats_are_tied_after_one_another(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    twice = steps([["repeatTwice", state] for state in states])
    turned = steps([["repeatMirrored", state] for state in states])
    for state, double, back in zip(states, twice, turned, strict=True):
        assert double == {**state, "rows": state["rows"] * 2}
        image = write_state(mirrored(pattern_of(state)))
        assert back == {**state, "rows": state["rows"] + image["rows"]}


def test_colours_move_along_the_strands(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    right = steps([["shiftColours", state, 1] for state in states])
    for state, moved in zip(states, right, strict=True):
        assert moved == {**state, "slots": state["slots"][-1:] + state["slots"][:-1]}
    assert steps([["shiftColours", state, -1] for state in right]) == states


def test_limits_are_pythons(steps: RunSteps, page: Page) -> None:
    limits = page.evaluate(
        "async (folder) => (await import(`${folder}diagonal_steps.js`)).LIMITS", MODULES
    )
    assert limits == {
        "minStrands": MIN_STRANDS,
        "maxStrands": MAX_STRANDS,
        "minRows": MIN_REPEAT_ROWS,
        "maxRows": MAX_REPEAT_ROWS,
    }
    widest = plain_state(MAX_STRANDS, 2)
    longest = plain_state(2, MAX_REPEAT_ROWS)
    refused = steps(
        [
            ["addLeftStrand", widest, "A"],
            ["addRightStrand", widest, "A"],
            ["addRows", longest, 0],
            ["copyRows", longest, 0],
            ["repeatTwice", longest],
            ["repeatMirrored", longest],
        ]
    )
    assert (
        refused
        == ["A pattern has at most 60 strands."] * 2 + ["A pattern has at most 400 rows."] * 4
    )


def plain_state(strands: int, rows: int) -> State:
    return {
        "technique": "diagonal",
        "name": "Plain",
        "finish": "exact",
        "slots": ["A"] * strands,
        "rows": [["f"] * knots_in_row(strands, row) for row in range(1, rows + 1)],
    }
