"""The editor's way back, in the browser's own JavaScript: every step, whatever its size."""

import itertools
import random
from typing import Any

import pytest
from playwright.sync_api import Page

from patterns.knots import MAX_REPEAT_ROWS, MAX_STRANDS
from tests.browser.test_editing_steps import MODULES, State, plain_state, random_states

pytestmark = pytest.mark.django_db(transaction=True)

SEED = 20261202

# A session on a storage that holds so many characters, as a browser's does.
OPEN = """
  const { EditingSession } = await import(`${folder}session.js`);
  const kept = new Map();
  const storage = {
    getItem: (key) => kept.get(key) ?? null,
    removeItem: (key) => kept.delete(key),
    setItem: (key, text) => {
      if (text.length > most) throw new DOMException("full", "QuotaExceededError");
      kept.set(key, text);
    },
  };
  const open = () => new EditingSession({ key: "test", start, version: 3, storage });
"""
PLAY = f"""async ([folder, start, states, most]) => {{
  {OPEN}
  const first = open();
  const done = states.map((state) => first.do(state, "Step"));
  first.store();
  const session = open();
  const back = [session.state];
  while (session.undo()) back.push(session.state);
  const again = [session.state];
  while (session.redo()) again.push(session.state);
  return {{ done, back: back.reverse(), again, characters: [...kept.values()][0]?.length }};
}}"""
PLAY_KNOTS = f"""async ([folder, start, places, most]) => {{
  {OPEN}
  const {{ setKnot }} = await import(`${{folder}}diagonal_steps.js`);
  const first = open();
  for (const [row, place] of places) first.do(setKnot(first.state, row, place, "b"), "Step");
  first.store();
  const session = open();
  let back = 0;
  while (session.undo()) back += 1;
  const isStart = JSON.stringify(session.state) === JSON.stringify(start);
  while (session.redo());
  const isEnd = JSON.stringify(session.state) === JSON.stringify(first.state);
  return {{ back, isStart, isEnd }};
}}"""


@pytest.fixture
def chance() -> random.Random:
    return random.Random(SEED)


def one_knot_after_another(start: State, number: int, chance: random.Random) -> list[State]:
    states = []
    state = start
    knots = itertools.cycle(["b", "fb", "bf", "f"])
    for knot in itertools.islice(knots, number):
        row = 2 * chance.randrange(len(state["rows"]) // 2)
        place = chance.randrange(len(state["rows"][row]))
        changed = [*state["rows"][row]]
        changed[place] = knot if changed[place] != knot else {"f": "b"}.get(knot, "f")
        rows = [*state["rows"]]
        rows[row] = changed
        state = {**state, "rows": rows}
        states.append(state)
    return states


def play(page: Page, start: State, states: list[State], most: int = 5_000_000) -> dict[str, Any]:
    page.goto("/")
    return page.evaluate(PLAY, [MODULES, start, states, most])


def test_session_brings_back_every_step(page: Page, chance: random.Random) -> None:
    """The states are of all sizes, so each step changes rows, strands and name at once."""
    start, *states = random_states(chance)
    states = [{**state, "name": f"Step {number}"} for number, state in enumerate(states)]
    played = play(page, start, states)
    assert played["done"] == [True] * len(states)
    assert played["back"] == [start, *states]
    assert played["again"] == [start, *states]


def test_session_keeps_two_thousand_steps_of_the_largest_pattern(
    page: Page, chance: random.Random
) -> None:
    """5 million characters is about what Chromium gives one origin."""
    start = plain_state(MAX_STRANDS, MAX_REPEAT_ROWS)
    places = [
        (row, place) for row, knots in enumerate(start["rows"]) for place in range(len(knots))
    ]
    changed = chance.sample(places, 2_000)
    page.goto("/")
    played = page.evaluate(PLAY_KNOTS, [MODULES, start, changed, 5_000_000])
    assert played == {"back": 2_000, "isStart": True, "isEnd": True}


def test_full_storage_drops_the_oldest_steps_and_never_the_work(
    page: Page, chance: random.Random
) -> None:
    start = plain_state(8, 8)
    states = one_knot_after_another(start, 200, chance)
    played = play(page, start, states, most=6_000)
    kept = played["back"]
    assert played["characters"] <= 6_000
    assert 1 < len(kept) < 201
    assert kept == states[-len(kept) :]
    assert played["again"] == kept


def test_same_state_is_no_step(page: Page) -> None:
    start = plain_state(4, 4)
    played = play(page, start, [start, {**start}])
    assert played["done"] == [False, False]
    assert played["back"] == [start]
