"""Rows as a maker types or pastes them: what was understood, and what was not, row by row."""

import re
from collections.abc import Iterator
from dataclasses import dataclass, field

from patterns.knots import MAX_REPEAT_ROWS, MAX_STRANDS, Knot, shown

MAX_TEXT_BYTES = 64 * 1024
MOST_KNOTS_A_ROW = MAX_STRANDS // 2
MOST_PROBLEMS = 100
DEEPEST_BRACKETS = 4
_NO_KNOTS = {"-", "–", "—", "none", "no knots"}
_WORDS = {
    "forward-backward": Knot.FB,
    "backward-forward": Knot.BF,
    "forward": Knot.F,
    "forwards": Knot.F,
    "backward": Knot.B,
    "backwards": Knot.B,
}
_LABEL = re.compile(
    r"(?:(?:rows?|r)\s*(?P<first>[0-9]{1,6})(?:\s*(?:-|–|to|and|&)\s*(?P<last>[0-9]{1,6}))?\s*[:.)]?"
    r"|(?P<number>[0-9]{1,6})\s*[:.)])(?=\s|\Z|[a-z(])",
    re.IGNORECASE,
)
_TIMES = re.compile(r"[x×*]\s*([0-9]{1,9})\Z", re.IGNORECASE)
_TOKEN = re.compile(r"[()]|[x×*]\s*[0-9]+|[0-9]+\s*[x×*]?|[^\s,;/|()]+", re.IGNORECASE)
_COUNT = re.compile(r"([0-9]+)\s*[x×*]?\Z", re.IGNORECASE)
_ATTACHED = re.compile(r"([a-z-]+)[x×*]([0-9]{1,9})\Z", re.IGNORECASE)


@dataclass(frozen=True)
class WrittenProblem:
    """Something that was not understood; `line` counts from 1, so do `row` and `place`."""

    line: int
    row: int
    place: int
    word: str
    message: str


@dataclass(frozen=True)
class WrittenRows:
    """The rows as far as they were understood, and what was not."""

    rows: tuple[tuple[Knot, ...], ...]
    problems: tuple[WrittenProblem, ...]


def read_written_rows(text: str) -> WrittenRows:
    """Read rows of knots as people write them.

    Parameters
    ----------
    text
        One line a row. Knots are f, b, fb, bf or words (forward, backward, forward-backward,
        backward-forward) in any case, with blanks, commas, semicolons, strokes or bars between
        them. "3f", "3 x f", "fx3" and "3(f b)", "(f b) x3" repeat; "x2" at the end of a row is
        that row twice; "x2" on a line of its own repeats all rows since the last such line. A row
        may begin with its number ("Row 7:", "7.", "R7", "rows 1-2:"), which is checked. "-" is a row
        without knots. What follows # is left aside. At most 64 KB.

    Returns
    -------
    All rows, with what was understood of each, and at most 100 problems. Knots without a blank
    between them are read only where there is one way to part them; "ffb" is not guessed.
    """
    reader = _Reader()
    if len(text.encode("utf-8", errors="replace")) > MAX_TEXT_BYTES:
        reader.problem("", f"This is more than {MAX_TEXT_BYTES // 1024} KB; no pattern is.")
        return reader.result()
    for number, line in enumerate(text.replace("\r\n", "\n").replace("\r", "\n").split("\n"), 1):
        reader.line = number
        reader.read_line(line.partition("#")[0].strip())
        if reader.is_full:
            break
    return reader.result()


class _CannotRead(ValueError):
    """A row that cannot be read on."""


@dataclass
class _Reader:
    line: int = 0
    place: int = 1
    rows: list[tuple[Knot, ...]] = field(default_factory=list)
    problems: list[WrittenProblem] = field(default_factory=list)
    block_start: int = 0

    @property
    def is_full(self) -> bool:
        return len(self.problems) >= MOST_PROBLEMS or len(self.rows) >= MAX_REPEAT_ROWS + 1

    def result(self) -> WrittenRows:
        return WrittenRows(tuple(self.rows[:MAX_REPEAT_ROWS]), tuple(self.problems))

    def problem(self, word: str, sentence: str) -> None:
        if len(self.problems) >= MOST_PROBLEMS:
            return
        row = len(self.rows) + 1
        message = f"Row {row}, knot {self.place}: {sentence}"
        self.problems.append(WrittenProblem(self.line, row, self.place, shown(word), message))

    def read_line(self, line: str) -> None:
        self.place = 1
        if not line:
            return
        alone = _TIMES.fullmatch(line)
        if alone:
            self._repeat_block(line, int(alone[1]))
            return
        label = _LABEL.match(line)
        if label:
            self._check_label(label)
            line = line[label.end() :].strip(" \t.,;:")
        times = 1
        repeated = _TIMES.search(line)
        before = line[: repeated.start()] if repeated else ""
        # Behind a bracket it repeats the bracket, and without a blank the knot it stands at.
        if repeated and before.endswith((" ", "\t", ",", ";")) and before.rstrip()[-1:] != ")":
            times, line = int(repeated[1]), before.rstrip(" \t,;")
        if label and label["last"]:
            times *= int(label["last"]) - int(label["first"]) + 1
        self._add(self._read_row(line), times, line)

    def _check_label(self, label: re.Match[str]) -> None:
        said = int(label["first"] or label["number"])
        row = len(self.rows) + 1
        if said != row:
            self.problem(
                label[0], f"the line says row {said}, but it is row {row}. Look for a missing row."
            )
        elif label["last"] and not said < int(label["last"]) <= MAX_REPEAT_ROWS:
            self.problem(label[0], f"'{shown(label[0])}' is no range of rows. Write rows 1-4.")

    def _repeat_block(self, word: str, times: int) -> None:
        block = self.rows[self.block_start :]
        if not block:
            self.problem(word, f"'{shown(word)}' repeats the rows above it, and there are none.")
        elif times < 1 or len(self.rows) + len(block) * (times - 1) > MAX_REPEAT_ROWS:
            self.problem(word, f"'{shown(word)}' would make more than {MAX_REPEAT_ROWS} rows.")
        else:
            self.rows.extend(block * (times - 1))
        self.block_start = len(self.rows)

    def _add(self, knots: tuple[Knot, ...], times: int, line: str) -> None:
        if times < 1 or len(self.rows) + times > MAX_REPEAT_ROWS:
            self.problem(line, f"that makes more than {MAX_REPEAT_ROWS} rows. Take some out.")
            times = 1
        self.rows.extend([knots] * times)

    def _read_row(self, line: str) -> tuple[Knot, ...]:
        if " ".join(line.split()).casefold() in _NO_KNOTS:
            return ()
        tokens = _Tokens(line)
        try:
            knots = self._read_group(tokens, depth=0)
        except _CannotRead:
            return ()
        return tuple(knots)

    def _read_group(self, tokens: "_Tokens", depth: int) -> list[Knot]:
        """Read up to the closing bracket, or at the outside to the end of the row."""
        knots: list[Knot] = []
        while (token := tokens.next()) is not None:
            if token == ")":
                if depth:
                    return knots
                self.problem(token, "there is a closing bracket without an opening one.")
                continue
            item = self._read_item(token, tokens, depth)
            knots.extend(item * self._times_after(tokens, item))
            if len(knots) > MOST_KNOTS_A_ROW:
                self.problem(
                    token,
                    f"a row has at most {MOST_KNOTS_A_ROW} knots. Part it, or look at its counts.",
                )
                raise _CannotRead
            if not depth:
                self.place = len(knots) + 1
        if depth:
            self.problem("(", "there is an opening bracket without a closing one.")
        return knots

    def _read_item(self, token: str, tokens: "_Tokens", depth: int) -> list[Knot]:
        """Read a knot, a word of knots, a bracket, or any of them with its count before it."""
        count = _COUNT.fullmatch(token)
        if count:
            following = tokens.next()
            if following is None or following == ")":
                self.problem(token, f"'{shown(token)}' does not say what is tied so often.")
                return []
            return self._read_item(following, tokens, depth) * self._checked(
                int(count[1][:9]), token
            )
        if token == "(":
            if depth >= DEEPEST_BRACKETS:
                self.problem(token, f"brackets go {DEEPEST_BRACKETS} deep at the most.")
                raise _CannotRead
            return self._read_group(tokens, depth + 1)
        return self._read_word(token)

    def _read_word(self, token: str) -> list[Knot]:
        attached = _ATTACHED.fullmatch(token)
        if attached:
            return self._read_word(attached[1]) * self._checked(int(attached[2]), token)
        word = token.casefold().strip(".:!")
        if word in _WORDS:
            return [_WORDS[word]]
        if word in set(Knot):
            return [Knot(word)]
        ways = _ways_to_part(word)
        if len(ways) == 1:
            return ways[0]
        if ways:
            first, second = (" ".join(way) for way in ways[:2])
            self.problem(
                token, f"'{shown(token)}' may be {first} or {second}. Put blanks between the knots."
            )
        else:
            self.problem(token, f"'{shown(token)}' is not a knot. Use f, b, fb or bf.")
        return []

    def _times_after(self, tokens: "_Tokens", item: list[Knot]) -> int:
        """ "x3" after a knot or a bracket in the middle of a row repeats it."""
        following = tokens.peek()
        times = _TIMES.fullmatch(following) if following else None
        if not times:
            return 1
        tokens.next()
        return self._checked(int(times[1]), str(following)) if item else 1

    def _checked(self, count: int, word: str) -> int:
        if 1 <= count <= MOST_KNOTS_A_ROW:
            return count
        self.problem(word, f"'{shown(word)}': count from 1 to {MOST_KNOTS_A_ROW}.")
        return 1


class _Tokens:
    """The words of a row, with a look at the next one."""

    def __init__(self, line: str) -> None:
        self._found: Iterator[re.Match[str]] = _TOKEN.finditer(line)
        self._waiting: list[str] = []

    def next(self) -> str | None:
        if self._waiting:
            return self._waiting.pop()
        match = next(self._found, None)
        return match[0] if match else None

    def peek(self) -> str | None:
        token = self.next()
        if token is not None:
            self._waiting.append(token)
        return token


def _ways_to_part(word: str) -> list[list[Knot]]:
    """Return the ways to part a word into knots: none, the one, or two of several."""
    if not re.fullmatch(f"[fb]{{2,{MOST_KNOTS_A_ROW}}}", word):
        return []
    if "fb" not in word and "bf" not in word:
        return [[Knot(letter) for letter in word]]
    parted = [Knot(letter) for letter in word]
    place = min(word.find(pair) for pair in ("fb", "bf") if pair in word)
    joined = [*parted[:place], Knot(word[place : place + 2]), *parted[place + 2 :]]
    return [parted, joined]
