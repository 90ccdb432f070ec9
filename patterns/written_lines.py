"""What every reader of typed rows has in common: lines, row numbers, repeats, and problems."""

import re
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Generic, TypeVar

from patterns.knots import MAX_REPEAT_ROWS, shown

MAX_TEXT_BYTES = 64 * 1024
MOST_PROBLEMS = 100

Word = TypeVar("Word")
_NUMBERED = (
    r"(?:(?:{word})\s*(?P<first>[0-9]{{1,6}})(?:\s*(?:-|to|and|&)\s*(?P<last>[0-9]{{1,6}}))?\s*[:.,)]?"
    r"|(?P<number>[0-9]{{1,6}})\s*(?:[:.)]|(?=\s+[^\s0-9x×*(])))(?=\s|\Z|[a-z(])"
)
_LABEL = re.compile(_NUMBERED.format(word="rows?|r"), re.IGNORECASE)
_WORD_LABEL = re.compile(_NUMBERED.format(word="rows?"), re.IGNORECASE)
_BULLET = re.compile(r"[-•·]\s+(?=\S)")
_TIMES = re.compile(r"[x×*]\s*([0-9]{1,9})\Z", re.IGNORECASE)
_ALONE = re.compile(r"\(?(?:[x×*]\s*([0-9]{1,9})|([0-9]{1,9})\s*[x×*])\)?[.:]?", re.IGNORECASE)
_DASHES = str.maketrans("‐‑‒–—−", "------")


@dataclass(frozen=True)
class WrittenProblem:
    """Something that was not understood.

    Parameters
    ----------
    line, row, place
        Where: the line of the text, the row of the repeat, and the knot or column in it; all
        from 1.
    place_word
        What `place` counts.
    word
        What was not understood, short.
    sentence
        What is wrong, and what to do.
    """

    line: int
    row: int
    place: int
    place_word: str
    word: str
    sentence: str

    @property
    def message(self) -> str:
        """The sentence, with the row and the place before it."""
        return f"Row {self.row}, {self.place_word} {self.place}: {self.sentence}"


@dataclass(frozen=True)
class Written(Generic[Word]):
    """What was understood of typed rows, and what was not.

    Parameters
    ----------
    rows
        Every row as far as it was understood, repeats written out.
    problems
        At most 100, in the order of the text.
    lines
        The line of the text that each row comes from.
    """

    rows: tuple[tuple[Word, ...], ...]
    problems: tuple[WrittenProblem, ...]
    lines: tuple[int, ...]


class CannotRead(ValueError):
    """A row that cannot be read on; the problem has been noted."""


@dataclass
class LineReader(Generic[Word]):
    """Reads a text line by line; what stands in a row is read by `read_row`.

    Parameters
    ----------
    read_row
        Reads one row without its number and without its repeat.
    place_word
        What `place` counts, "knot" or "column".
    x_is_a_word
        Whether the letter x may stand in a row, and r begin one; then only "x2" repeats all rows
        above, not "2x", and only "Row 2" is a row's number, not "R2".
    """

    read_row: Callable[["LineReader[Word]", str], tuple[Word, ...]]
    place_word: str
    x_is_a_word: bool = False
    line: int = 1
    place: int = 1
    rows: list[tuple[Word, ...]] = field(default_factory=list)
    lines: list[int] = field(default_factory=list)
    problems: list[WrittenProblem] = field(default_factory=list)
    block_start: int = 0
    # After a number that did not fit, the following ones are compared with it: one mistake, one problem.
    labels_ahead: int = 0

    def read(self, text: str) -> Written[Word]:
        """Read the text, at most 64 KB and 400 rows."""
        if len(text.encode("utf-8", errors="replace")) > MAX_TEXT_BYTES:
            self.problem("", f"this is more than {MAX_TEXT_BYTES // 1024} KB; no pattern is.")
            return Written((), tuple(self.problems), ())
        lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
        for self.line, line in enumerate(lines, start=1):
            self._read_line(line.partition("#")[0].translate(_DASHES).strip())
            if len(self.problems) >= MOST_PROBLEMS:
                break
        return Written(tuple(self.rows), tuple(self.problems), tuple(self.lines))

    def problem(self, word: str, sentence: str) -> None:
        """Note what was not understood; the sentence goes on after the row and the place."""
        if len(self.problems) >= MOST_PROBLEMS:
            return
        row = len(self.rows) + 1
        self.problems.append(
            WrittenProblem(self.line, row, self.place, self.place_word, shown(word), sentence)
        )

    def _read_line(self, line: str) -> None:
        self.place = 1
        alone = _ALONE.fullmatch(line)
        if alone and (alone[1] or not self.x_is_a_word):
            self._repeat_block(line, int(alone[1] or alone[2]))
            return
        line = _BULLET.sub("", line, count=1) if _BULLET.match(line) else line
        label = (_WORD_LABEL if self.x_is_a_word else _LABEL).match(line)
        times = self._rows_of(label) if label else 1
        line = line[label.end() :].strip(" \t.,;:") if label else line
        if not line:
            if label:
                self.problem(label[0], "there is nothing behind the number. Write - for no knots.")
            return
        line, repeats = _without_repeat(line)
        try:
            words = self.read_row(self, line)
        except CannotRead:
            words = ()
        self._add(words, times * repeats, line)

    def _rows_of(self, label: re.Match[str]) -> int:
        """Check the row's number, and return for how many rows it stands."""
        said, row = int(label["first"] or label["number"]), len(self.rows) + 1
        if said != row + self.labels_ahead:
            self.problem(
                label[0],
                f"the line says row {said}, but it is row {row}. Look for a row that is missing"
                " or stands twice; a count is written 3f, without a blank.",
            )
            self.labels_ahead = said - row
        if not label["last"]:
            return 1
        if not said < int(label["last"]) <= MAX_REPEAT_ROWS:
            self.problem(label[0], f"'{shown(label[0])}' is no range of rows. Write rows 1-4.")
            return 1
        return int(label["last"]) - said + 1

    def _repeat_block(self, word: str, times: int) -> None:
        block = self.rows[self.block_start :]
        if not block:
            self.problem(word, f"'{shown(word)}' repeats the rows above it, and there are none.")
        elif times < 1:
            self.problem(word, f"'{shown(word)}' repeats nothing. Count from 1.")
        elif len(self.rows) + len(block) * (times - 1) > MAX_REPEAT_ROWS:
            self.problem(word, f"'{shown(word)}' would make more than {MAX_REPEAT_ROWS} rows.")
        else:
            self.rows.extend(block * (times - 1))
            self.lines.extend([self.line] * (len(self.rows) - len(self.lines)))
        self.block_start = len(self.rows)

    def _add(self, words: tuple[Word, ...], times: int, line: str) -> None:
        if not 1 <= times <= MAX_REPEAT_ROWS - len(self.rows):
            limit = f"more than {MAX_REPEAT_ROWS} rows. Take some out" if times else "no row"
            self.problem(line, f"that makes {limit}.")
            times = min(1, MAX_REPEAT_ROWS - len(self.rows))
        self.rows.extend([words] * times)
        self.lines.extend([self.line] * times)


def _without_repeat(line: str) -> tuple[str, int]:
    """Part "x2" from the end of a row. Behind a bracket it repeats the bracket, and without a
    blank the knot it stands at."""
    found = _TIMES.search(line)
    before = line[: found.start()] if found else ""
    if not found or not before.endswith((" ", "\t", ",", ";")) or before.rstrip()[-1:] == ")":
        return line, 1
    return before.rstrip(" \t,;"), int(found[1])
