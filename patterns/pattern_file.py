"""Patterns as text files: read with errors that name the row and the knot, written back."""

import tomllib
from collections.abc import Callable, Mapping
from difflib import get_close_matches

from patterns.grid import Carry, CellRow, GridPattern
from patterns.knots import DiagonalPattern, Finish, Knot, PatternError, clean_name, shown
from patterns.techniques import Pattern

MAX_FILE_BYTES = 64 * 1024
NO_KNOTS = "-"
# A key of thousands of dotted parts takes the TOML reader a minute; no pattern needs one.
_MAX_DOTS_A_LINE = 100
_KEYS = {
    "diagonal": ("name", "technique", "strands", "rows", "finish"),
    "grid": ("name", "technique", "background", "rows", "finish", "carry"),
}
_ALL_KEYS = tuple(dict.fromkeys(key for keys in _KEYS.values() for key in keys))


def read_pattern(text: str) -> Pattern:
    """Read a pattern from the text of its file.

    Parameters
    ----------
    text
        TOML, at most 64 KB. Diagonal: `name`, `technique`, `strands`, `rows` and perhaps
        `finish`. Grid: `name`, `technique`, `background`, `rows` and perhaps `finish` and
        `carry`. Upper and lower case, commas and blanks between letters and knots, blank lines
        and comments after `#` are all accepted in `strands` and `rows`; the letters of a grid's
        row may also stand without blanks.

    Returns
    -------
    The pattern.

    Raises
    ------
    PatternError
        When the text is not such a file; says what is wrong, where, and what to do.
    """
    content = _parse(text)
    for key in content:
        if key not in _ALL_KEYS:
            raise PatternError(f"There is no setting '{shown(key)}'. {_nearest(key, _ALL_KEYS)}")
    technique = _text(content, "technique").strip().lower()
    reader = _READERS.get(technique)
    if reader is None:
        raise PatternError(
            f"There is no technique '{shown(technique)}'. {_nearest(technique, tuple(_READERS))}"
        )
    for key in content:
        if key not in _KEYS[technique]:
            raise PatternError(f"A {technique} pattern has no '{key}'. Take that line out.")
    return reader(content)


def _parse(text: str) -> dict[str, object]:
    if not isinstance(text, str):
        raise PatternError("A pattern file is text.")
    if len(text.encode("utf-8", errors="replace")) > MAX_FILE_BYTES:
        raise PatternError(f"The file is larger than {MAX_FILE_BYTES // 1024} KB; no pattern is.")
    for number, line in enumerate(text.split("\n"), start=1):
        if line.count(".") > _MAX_DOTS_A_LINE and not line.lstrip().startswith("#"):
            raise PatternError(f"Line {number} is not part of a pattern: too many dots.")
    try:
        return tomllib.loads(text.removeprefix("\ufeff"))
    except tomllib.TOMLDecodeError as error:
        raise PatternError(f"The file is not valid TOML: {_one_line(error)}.") from error
    except (ValueError, RecursionError) as error:
        raise PatternError(
            "The file is not valid TOML: it holds a value no pattern needs."
        ) from error


def _one_line(error: Exception) -> str:
    return shown(" ".join(str(error).split()), 200)


def _nearest(word: str, choices: tuple[str, ...]) -> str:
    close = get_close_matches(word[:30].lower(), choices, n=1)
    if close:
        return f"Did you mean {close[0]}?"
    *others, last = choices
    return f"Use {', '.join(others)} or {last}." if others else f"Use {last}."


def _text(content: Mapping[str, object], key: str) -> str:
    if key not in content:
        raise PatternError(f"The file has no '{key}'. Add a line: {_EXAMPLES[key]}")
    value = content[key]
    if not isinstance(value, str):
        raise PatternError(f"'{key}' has to be text in quotes: {_EXAMPLES[key]}")
    return value


_EXAMPLES = {
    "name": 'name = "Harbour stripes"',
    "technique": 'technique = "diagonal"',
    "strands": 'strands = "A A B B C C"',
    "background": 'background = "A"',
    "rows": 'rows = """..."""',
    "finish": 'finish = "nearest"',
    "carry": 'carry = "least"',
}


def _read_diagonal(content: Mapping[str, object]) -> DiagonalPattern:
    return DiagonalPattern(
        name=clean_name(_text(content, "name")),
        slots=_read_slots(_text(content, "strands")),
        rows=_read_rows(_text(content, "rows")),
        finish=_read_finish(content),
    )


def _read_grid(content: Mapping[str, object]) -> GridPattern:
    return GridPattern(
        name=clean_name(_text(content, "name")),
        background=_capitals(_text(content, "background").strip()),
        rows=_read_cells(_text(content, "rows")),
        finish=_read_finish(content),
        carry=_read_carry(content),
    )


_READERS: dict[str, Callable[[Mapping[str, object]], Pattern]] = {
    "diagonal": _read_diagonal,
    "grid": _read_grid,
}


def _capitals(letters: str) -> str:
    """One letter stays one letter, which upper() would not promise: the sharp s becomes two."""
    return "".join(letter.upper() if len(letter.upper()) == 1 else letter for letter in letters)


def _words(line: str) -> list[str]:
    return line.partition("#")[0].replace(",", " ").split()


def _read_slots(text: str) -> tuple[str, ...]:
    slots = tuple(_capitals(word) for line in text.splitlines() for word in _words(line))
    for number, slot in enumerate(slots, start=1):
        if len(slot) != 1 and slot.isalpha():
            raise PatternError(
                f"Strand {number}: '{shown(slot)}' is more than one letter. "
                "Put a space between the letters."
            )
    return slots


def _read_rows(text: str) -> tuple[tuple[Knot, ...], ...]:
    lines = [words for line in text.splitlines() if (words := _words(line))]
    return tuple(_read_row(words, number) for number, words in enumerate(lines, start=1))


def _read_row(words: list[str], row: int) -> tuple[Knot, ...]:
    if words == [NO_KNOTS]:
        return ()
    return tuple(_read_knot(word, row, place) for place, word in enumerate(words, start=1))


def _read_knot(word: str, row: int, place: int) -> Knot:
    try:
        return Knot(word.lower())
    except ValueError:
        raise PatternError(
            f"Row {row}, knot {place}: '{shown(word)}' is not a knot. Use f, b, fb or bf.",
            row=row,
            knot=place,
        ) from None


def _read_cells(text: str) -> tuple[CellRow, ...]:
    lines = [_capitals("".join(_words(line))) for line in text.splitlines()]
    return tuple(tuple(line) for line in lines if line)


def _read_finish(content: Mapping[str, object]) -> Finish:
    return Finish(_choice(content, "finish", tuple(finish.value for finish in Finish)))


def _read_carry(content: Mapping[str, object]) -> Carry:
    return Carry(_choice(content, "carry", tuple(carry.value for carry in Carry)))


def _choice(content: Mapping[str, object], key: str, choices: tuple[str, ...]) -> str:
    """The first choice is meant where the file says nothing."""
    if key not in content:
        return choices[0]
    text = _text(content, key)
    word = text.strip().lower().replace(" ", "_").replace("-", "_")
    if word not in choices:
        raise PatternError(f"There is no {key} '{shown(text)}'. {_nearest(word, choices)}")
    return word


def write_pattern(pattern: Pattern) -> str:
    """Write a pattern as the text of its file; `read_pattern` gives the same pattern back."""
    lines = [f"name = {_quoted(pattern.name)}", f'technique = "{pattern.technique}"']
    if isinstance(pattern, GridPattern):
        lines.append(f'background = "{pattern.background}"')
    else:
        lines.append(f'strands = "{" ".join(pattern.slots)}"')
    rows = "\n".join(" ".join(row) or NO_KNOTS for row in pattern.rows)
    lines.append(f'rows = """\n{rows}\n"""')
    if pattern.finish is not Finish.EXACT:
        lines.append(f'finish = "{pattern.finish}"')
    if isinstance(pattern, GridPattern) and pattern.carry is not Carry.LEAST:
        lines.append(f'carry = "{pattern.carry}"')
    return "\n".join(lines) + "\n"


def _quoted(text: str) -> str:
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'
