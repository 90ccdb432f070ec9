"""Pattern files and pastes that are wrong in every way that was thought of.

The same seed gives the same ones. Where the harm was done to one knot, cell or row, the entry
knows its row and place, both from 1, so that a test can ask for them in the message.
"""

import random
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import partial

NOT_KNOTS = ("x", "ff", "bfb", "f-", "FBF", "1", "é", "→", "f.b", "<b>", "'", "𝔣", "fbfb", "?")
NOT_CELLS = ("?", "1", "é", "_", "ß", "\u202e", "→", "*", "<", "𝔸", "·")
KNOTS = ("f", "b", "fb", "bf")


@dataclass(frozen=True)
class HostilePattern:
    """One text; `row` and `place` where the harm has them, `technique` of what was harmed."""

    name: str
    text: str
    technique: str
    row: int | None = None
    place: int | None = None


@dataclass(frozen=True)
class _Good:
    """A good pattern as lists of words, to be harmed."""

    technique: str
    first_line: str
    rows: list[list[str]]

    def text(self, rows: list[list[str]] | None = None) -> str:
        lines = "\n".join(" ".join(row) for row in (self.rows if rows is None else rows))
        return (
            f'name = "Quay"\ntechnique = "{self.technique}"\n{self.first_line}\n'
            f'rows = """\n{lines}\n"""\n'
        )


def _diagonal(random_: random.Random) -> _Good:
    strands = random_.randint(4, 24)
    rows = [
        [random_.choice(KNOTS) for _ in range((strands - row % 2) // 2)]
        for row in range(2 * random_.randint(1, 12))
    ]
    slots = " ".join(random_.choice("ABCDEF") for _ in range(strands))
    return _Good("diagonal", f'strands = "{slots}"', rows)


def _grid(random_: random.Random) -> _Good:
    columns = random_.randint(2, 20)
    rows = [[random_.choice("ABC") for _ in range(columns)] for _ in range(random_.randint(2, 30))]
    return _Good("grid", 'background = "A"', rows)


def _copy(good: _Good) -> list[list[str]]:
    return [list(row) for row in good.rows]


def _wrong_word(good: _Good, random_: random.Random) -> HostilePattern:
    rows = _copy(good)
    row = random_.randrange(len(rows))
    place = random_.randrange(len(rows[row]))
    words = NOT_KNOTS if good.technique == "diagonal" else NOT_CELLS
    rows[row][place] = random_.choice(words)
    return HostilePattern("wrong word", good.text(rows), good.technique, row + 1, place + 1)


def _missing(good: _Good, random_: random.Random) -> HostilePattern:
    """Row 1 of a grid sets the width, so the others are harmed."""
    rows = _copy(good)
    row = random_.randrange(good.technique == "grid", len(rows))
    if len(rows[row]) > 1:
        rows[row].pop()
    else:
        rows[row].append(rows[row][0])
    return HostilePattern("missing or extra", good.text(rows), good.technique, row + 1)


def _extra(good: _Good, random_: random.Random) -> HostilePattern:
    rows = _copy(good)
    row = random_.randrange(good.technique == "grid", len(rows))
    rows[row].extend([rows[row][0]] * random_.choice((1, 2, 500)))
    return HostilePattern("too many", good.text(rows), good.technique, row + 1)


def _random_marks(good: _Good, random_: random.Random) -> HostilePattern:
    text = list(good.text())
    for _ in range(random_.randint(1, 30)):
        text[random_.randrange(len(text))] = chr(random_.choice((0, 9, 34, 92, 65533, 128578, 1)))
    return HostilePattern("random marks", "".join(text), good.technique)


def _cut_off(good: _Good, random_: random.Random) -> HostilePattern:
    text = good.text()
    return HostilePattern("cut off", text[: random_.randrange(len(text))], good.technique)


def _shuffled_lines(good: _Good, random_: random.Random) -> HostilePattern:
    lines = good.text().splitlines()
    random_.shuffle(lines)
    return HostilePattern("shuffled", "\n".join(lines), good.technique)


def _other_values(good: _Good, random_: random.Random) -> HostilePattern:
    value = random_.choice(
        ("7", "true", "[]", "{}", "1979-05-27", "nan", '""', "[[[[[]]]]]", '"' + "x" * 5_000 + '"')
    )
    key = random_.choice(("name", "technique", "strands", "background", "rows", "finish", "carry"))
    lines = [line for line in good.text().splitlines() if not line.startswith(f"{key} =")]
    return HostilePattern("other value", f"{key} = {value}\n" + "\n".join(lines), good.technique)


def _grown(good: _Good, random_: random.Random) -> HostilePattern:
    return HostilePattern(
        "grown", good.text(_copy(good) * random_.choice((50, 500))), good.technique
    )


def _noise(good: _Good, random_: random.Random) -> HostilePattern:
    length = random_.choice((1, 10, 300))
    marks = (
        chr(random_.choice((random_.randrange(1, 0xD7FF), random_.randrange(32, 127))))
        for _ in range(length)
    )
    return HostilePattern("noise", "".join(marks), good.technique)


_HARMS: tuple[Callable[[_Good, random.Random], HostilePattern], ...] = (
    _wrong_word,
    _wrong_word,
    _missing,
    _extra,
    _random_marks,
    _cut_off,
    _shuffled_lines,
    _other_values,
    _grown,
    _noise,
)


def hostile_patterns(count: int = 2_000, seed: int = 2026) -> Iterator[HostilePattern]:
    """Yield so many texts, both techniques and every harm in turn."""
    random_ = random.Random(seed)
    makers = (partial(_diagonal, random_), partial(_grid, random_))
    for number in range(count):
        good = makers[number % 2]()
        yield _HARMS[number // 2 % len(_HARMS)](good, random_)
