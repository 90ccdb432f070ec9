"""What the editor in the browser sends and gets: patterns as plain JSON data."""

from collections.abc import Mapping

from patterns.grid import Carry, GridPattern
from patterns.knots import DiagonalPattern, Finish, Knot, PatternError, shown
from patterns.techniques import Pattern

State = dict[str, object]


def write_state(pattern: Pattern) -> State:
    """Return a pattern as the editor's state; `read_state` gives the same pattern back."""
    state: State = {
        "technique": pattern.technique,
        "name": pattern.name,
        "finish": pattern.finish.value,
        "rows": [[str(word) for word in row] for row in pattern.rows],
    }
    if isinstance(pattern, GridPattern):
        return state | {"background": pattern.background, "carry": pattern.carry.value}
    return state | {"slots": list(pattern.slots)}


def read_state(state: object) -> Pattern:
    """Read a pattern from the editor's state.

    Parameters
    ----------
    state
        Parsed JSON of any kind: `technique`, `name`, `finish`, `rows` (lists of words), and
        `slots` of a diagonal pattern or `background` and `carry` of a grid.

    Raises
    ------
    PatternError
        When it is no pattern; names the row and the knot or column where there is one.
    """
    if not isinstance(state, Mapping):
        raise PatternError("The editor sent no pattern. Load the page again.")
    technique = state.get("technique")
    if technique == "diagonal":
        return DiagonalPattern(
            name=_text(state, "name"),
            slots=tuple(_words(state.get("slots"), "strands")),
            rows=_knot_rows(state),
            finish=Finish(_choice(state, "finish", tuple(Finish))),
        )
    if technique == "grid":
        return GridPattern(
            name=_text(state, "name"),
            background=_text(state, "background"),
            rows=tuple(tuple(row) for row in _rows(state)),
            finish=Finish(_choice(state, "finish", tuple(Finish))),
            carry=Carry(_choice(state, "carry", tuple(Carry))),
        )
    raise PatternError(f"There is no technique '{shown(technique)}'. Load the page again.")


def _text(state: Mapping[str, object], key: str) -> str:
    value = state.get(key)
    if not isinstance(value, str):
        raise PatternError(f"The {key} has to be text.")
    return value


def _choice(state: Mapping[str, object], key: str, choices: tuple[str, ...]) -> str:
    value = state.get(key)
    if value not in choices:
        raise PatternError(f"There is no {key} '{shown(value)}'. Choose another.")
    return str(value)


def _words(value: object, name: str) -> list[str]:
    if not isinstance(value, list) or not all(isinstance(word, str) for word in value):
        raise PatternError(f"The {name} have to be a list of words.")
    return value


def _rows(state: Mapping[str, object]) -> list[list[str]]:
    rows = state.get("rows")
    if not isinstance(rows, list):
        raise PatternError("The rows have to be a list.")
    return [_words(row, f"words of row {number}") for number, row in enumerate(rows, start=1)]


def _knot_rows(state: Mapping[str, object]) -> tuple[tuple[Knot, ...], ...]:
    return tuple(
        tuple(_knot(word, number, place) for place, word in enumerate(row, start=1))
        for number, row in enumerate(_rows(state), start=1)
    )


def _knot(word: str, row: int, place: int) -> Knot:
    try:
        return Knot(word)
    except ValueError:
        raise PatternError(
            f"Row {row}, knot {place}: '{shown(word)}' is not a knot. Use f, b, fb or bf.",
            row=row,
            knot=place,
        ) from None
