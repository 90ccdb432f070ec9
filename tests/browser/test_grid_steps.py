"""The editor's steps on grid patterns, in the browser's own JavaScript, against numpy.

numpy's flip, roll, vstack, insert and delete are the outside check; areas are checked against a
search written out here.
"""

import random
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from playwright.sync_api import Page

from patterns.alphabet import HEIGHTS, MAX_LETTERS, LetteringError, alphabet_data, lettering

pytestmark = pytest.mark.django_db(transaction=True)

LIMITS = {"minColumns": 2, "maxColumns": 12, "minRows": 1, "maxRows": 24}
STATES = 150
# Every state is frozen through and through: a step that altered one would throw.
RUN_STEPS = """async ([module, calls]) => {
  const steps = await import(module);
  const frozen = (value) => {
    if (value && typeof value === "object") Object.values(value).forEach(frozen);
    return Object.freeze(value);
  };
  return calls.map(([name, state, ...rest]) => {
    const before = frozen(state);
    try {
      const after = steps[name](before, ...rest);
      return {state: after, same: after === before};
    } catch (error) {
      if (error.constructor.name !== "StepRefused") throw error;
      return {refused: error.message};
    }
  });
}"""
WRITE_WORDS = """async ([module, data, calls]) => {
  const {Alphabet, LetteringError} = await import(module);
  const alphabet = new Alphabet(data);
  return calls.map((call) => {
    try { return alphabet.write(...call); }
    catch (error) {
      if (!(error instanceof LetteringError)) throw error;
      return error.message;
    }
  });
}"""

State = dict[str, Any]
RunSteps = Callable[[list[list[Any]]], list[dict[str, Any]]]


@pytest.fixture
def steps(page: Page) -> RunSteps:
    page.goto("/")

    def run(calls: list[list[Any]]) -> list[dict[str, Any]]:
        module = "/static/flosswright/editor/grid_steps.js"
        return page.evaluate(RUN_STEPS, [module, calls])

    return run


@pytest.fixture
def chance() -> random.Random:
    return random.Random(20240611)


def random_state(chance: random.Random) -> State:
    columns, rows = chance.randint(2, 10), chance.randint(1, 10)
    slots = "ABCZ"[: chance.randint(1, 4)]
    cells = [[chance.choice(slots) for _ in range(columns)] for _ in range(rows)]
    return {
        "technique": "grid",
        "name": "Nora",
        "finish": "exact",
        "background": chance.choice("AB"),
        "carry": "least",
        "rows": cells,
    }


def random_states(chance: random.Random) -> list[State]:
    return [random_state(chance) for _ in range(STATES)]


def grid(state: State) -> np.ndarray:
    return np.array(state["rows"])


def place_in(state: State, chance: random.Random) -> list[int]:
    return [chance.randrange(len(state["rows"])), chance.randrange(len(state["rows"][0]))]


def expect_rows(results: list[dict[str, Any]], states: list[State], wanted: list[Any]) -> None:
    """The rows are the ones wanted, all else is as before, and no change gives the same object."""
    for result, state, rows in zip(results, states, wanted, strict=True):
        rows = np.asarray(rows).tolist()
        assert result["state"] == {**state, "rows": rows}
        assert result["same"] == (rows == state["rows"])


def test_mirrors_and_shifts_are_numpys(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    expect_rows(
        steps([["mirrorLeftRight", s] for s in states]),
        states,
        [np.fliplr(grid(s)) for s in states],
    )
    expect_rows(
        steps([["mirrorTopBottom", s] for s in states]),
        states,
        [np.flipud(grid(s)) for s in states],
    )
    ways = [(chance.randint(-25, 25), chance.randint(-25, 25)) for _ in states]
    expect_rows(
        steps([["shift", s, right, down] for s, (right, down) in zip(states, ways, strict=True)]),
        states,
        [
            np.roll(grid(s), (down, right), axis=(0, 1))
            for s, (right, down) in zip(states, ways, strict=True)
        ],
    )


def test_there_and_back_is_where_it_was(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    right, down = 7, -5
    for there, back in (
        (["mirrorLeftRight"], ["mirrorLeftRight"]),
        (["mirrorTopBottom"], ["mirrorTopBottom"]),
        (["shift", right, down], ["shift", -right, -down]),
        (["addRows", 0, 2, LIMITS], ["removeRows", 0, 2, LIMITS]),
        (["addColumns", 1, 2, LIMITS], ["removeColumns", 1, 2, LIMITS]),
    ):
        gone = [r["state"] for r in steps([[there[0], s, *there[1:]] for s in states])]
        home = [r["state"] for r in steps([[back[0], s, *back[1:]] for s in gone])]
        assert home == states


def test_painting_changes_the_named_cells_only(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    calls, wanted = [], []
    for state in states:
        cells = [place_in(state, chance) for _ in range(chance.randint(0, 6))]
        beyond = [[-1, 0], [0, -1], [99, 0], [0, 99]]
        painted = grid(state)
        for row, column in cells:
            painted[row, column] = "C"
        calls.append(["paint", state, cells + beyond, "C"])
        wanted.append(painted)
    expect_rows(steps(calls), states, wanted)


def area(cells: np.ndarray, row: int, column: int) -> np.ndarray:
    """Grow the area by one cell each way, within its colour, until it grows no more."""
    of_colour = cells == cells[row, column]
    found = np.zeros_like(of_colour)
    found[row, column] = True
    while True:
        padded = np.pad(found, 1)
        wider = padded[:-2, 1:-1] | padded[2:, 1:-1] | padded[1:-1, :-2] | padded[1:-1, 2:]
        grown = found | (wider & of_colour)
        if (grown == found).all():
            return found
        found = grown


def test_fill_takes_the_whole_area_and_no_more(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    places = [place_in(state, chance) for state in states]
    expect_rows(
        steps([["fillArea", s, *place, "D"] for s, place in zip(states, places, strict=True)]),
        states,
        [
            np.where(area(grid(s), *place), "D", grid(s))
            for s, place in zip(states, places, strict=True)
        ],
    )


def test_rectangles_are_filled_from_either_corner(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    calls, wanted = [], []
    for state in states:
        one, other = place_in(state, chance), place_in(state, chance)
        (top, bottom), (left, right) = (sorted(pair) for pair in zip(one, other, strict=True))
        filled = grid(state)
        filled[top : bottom + 1, left : right + 1] = "B"
        calls.append(["fillRectangle", state, one, other, "B"])
        wanted.append(filled)
    expect_rows(steps(calls), states, wanted)


def test_rows_and_columns_come_and_go(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    rows = [chance.randint(0, len(s["rows"])) for s in states]
    columns = [chance.randint(0, len(s["rows"][0])) for s in states]
    expect_rows(
        steps([["addRows", s, at, 2, LIMITS] for s, at in zip(states, rows, strict=True)]),
        states,
        [
            np.insert(grid(s), [at, at], s["background"], axis=0)
            for s, at in zip(states, rows, strict=True)
        ],
    )
    expect_rows(
        steps([["addColumns", s, at, 1, LIMITS] for s, at in zip(states, columns, strict=True)]),
        states,
        [
            np.insert(grid(s), at, s["background"], axis=1)
            for s, at in zip(states, columns, strict=True)
        ],
    )
    thick = [s for s in states if len(s["rows"]) > 1 and len(s["rows"][0]) > 2]
    places = [place_in(s, chance) for s in thick]
    for name, axis in (("removeRows", 0), ("removeColumns", 1)):
        expect_rows(
            steps([[name, s, p[axis], 1, LIMITS] for s, p in zip(thick, places, strict=True)]),
            thick,
            [np.delete(grid(s), p[axis], axis=axis) for s, p in zip(thick, places, strict=True)],
        )


def test_repeats_stand_below(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    expect_rows(
        steps([["repeatRows", s, LIMITS] for s in states]),
        states,
        [np.vstack([grid(s), grid(s)]) for s in states],
    )
    expect_rows(
        steps([["repeatRows", s, LIMITS, {"mirrored": True}] for s in states]),
        states,
        [np.vstack([grid(s), np.flipud(grid(s))]) for s in states],
    )


def test_colours_change_in_cells_and_background(steps: RunSteps, chance: random.Random) -> None:
    states = random_states(chance)
    for result, state in zip(
        steps([["replaceColour", s, "B", "Q"] for s in states]), states, strict=True
    ):
        assert result["state"]["rows"] == np.where(grid(state) == "B", "Q", grid(state)).tolist()
        assert result["state"]["background"] == state["background"].replace("B", "Q")
    for result, state in zip(
        steps([["setBackground", s, "Z"] for s in states]), states, strict=True
    ):
        assert result["state"] == {**state, "background": "Z"}
    expect_rows(
        steps([["clear", s] for s in states]),
        states,
        [np.full_like(grid(s), s["background"]) for s in states],
    )


def test_steps_stop_at_the_limits_of_a_pattern(steps: RunSteps) -> None:
    def state(rows: int, columns: int) -> State:
        return {"background": "A", "rows": [["A"] * columns for _ in range(rows)]}

    said = steps(
        [
            ["addRows", state(24, 2), 0, 1, LIMITS],
            ["removeRows", state(1, 2), 0, 1, LIMITS],
            ["addColumns", state(1, 12), 0, 1, LIMITS],
            ["removeColumns", state(1, 2), 0, 1, LIMITS],
            ["repeatRows", state(13, 2), LIMITS],
            ["makeRoom", state(13, 2), 5, 13, LIMITS],
            ["insertPicture", state(3, 3), [[True, True]], 0, 2, "B"],
        ]
    )
    assert [result["refused"] for result in said] == [
        "A grid pattern has at most 24 rows.",
        "A grid pattern has at least 1 row.",
        "A grid pattern has at most 12 columns.",
        "A grid pattern has at least 2 columns.",
        "Twice 13 rows is more than 24, which is the most.",
        "A grid pattern has at most 12 columns.",
        "The words take 1 row and 2 columns: there is no room for them here.",
    ]


def test_words_are_set_in_after_making_room(steps: RunSteps) -> None:
    picture = [list(row) for row in lettering("Ida", 5, "along")]
    small = {"background": "A", "rows": [["A", "C"]]}
    (roomy,) = steps([["makeRoom", small, 15, 7, LIMITS]])
    assert np.shape(roomy["state"]["rows"]) == (15, 7)
    assert roomy["state"]["rows"][0] == ["A", "C", "A", "A", "A", "A", "A"]
    (lettered,) = steps([["insertPicture", roomy["state"], picture, 1, 1, "B"]])
    wanted = grid(roomy["state"])
    wanted[1:14, 1:6][np.array(picture)] = "B"
    assert lettered["state"]["rows"] == wanted.tolist()


def test_lettering_equals_the_servers(page: Page, chance: random.Random) -> None:
    page.goto("/")
    texts = ["Nora", "weiß & Ø", "Zoé", "a  b", " ", "漢", "Šárka", "♥", "❤️’", "x" * 61, "\u202e"]
    marks = "ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789&!?.-'+♥ äöüéèñçåøæ"
    texts += ["".join(chance.choices(marks, k=chance.randint(1, 20))) for _ in range(200)]
    texts += list(marks)
    calls = [[text, h, way] for text in texts for h in HEIGHTS for way in ("along", "down")]
    module = "/static/flosswright/editor/lettering.js"
    written = page.evaluate(WRITE_WORDS, [module, alphabet_data(), calls])
    assert len("x" * 61) > MAX_LETTERS
    for call, found in zip(calls, written, strict=True):
        try:
            wanted: object = [list(row) for row in lettering(*call)]
        except LetteringError as error:
            wanted = str(error)
        assert found == wanted, call
