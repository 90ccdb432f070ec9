"""Rows of knots as a maker types or pastes them: what was understood, and what was not."""

import re
from collections.abc import Iterator

from patterns.knots import MAX_STRANDS, Knot, shown
from patterns.written_lines import CannotRead, LineReader, Written

KnotRow = tuple[Knot, ...]
KnotReader = LineReader[Knot]
MOST_KNOTS_A_ROW = MAX_STRANDS // 2
DEEPEST_BRACKETS = 4
_NO_KNOTS = {"-", "none", "no knots"}
_WORDS = {
    "forward-backward": Knot.FB,
    "backward-forward": Knot.BF,
    "forward": Knot.F,
    "forwards": Knot.F,
    "backward": Knot.B,
    "backwards": Knot.B,
}
_TIMES = re.compile(r"[x×*]\s*([0-9]{1,9})\Z", re.IGNORECASE)
_TOKEN = re.compile(r"[()]|[x×*]\s*[0-9]+|[0-9]+\s*[x×*]?|[^\s,;/|()]+", re.IGNORECASE)
_COUNT = re.compile(r"([0-9]+)\s*([x×*]?)\Z", re.IGNORECASE)
_ATTACHED = re.compile(r"([a-z-]+)[x×*]([0-9]{1,9})\Z", re.IGNORECASE)
_ONE_OR_TWO = re.compile(
    r"(?<![\w-])(forwards?\s+backwards?|backwards?\s+forwards?)(?![\w-])", re.IGNORECASE
)


def read_written_rows(text: str) -> Written[Knot]:
    """Read rows of knots as people write them.

    Parameters
    ----------
    text
        One line a row. Knots are f, b, fb, bf or words (forward, backward, forward-backward,
        backward-forward) in any case, with blanks, commas, semicolons, strokes or bars between
        them. "3f", "3 x f", "fx3" and "3(f b)", "(f b) x3" repeat; "x2" at the end of a row is
        that row twice; "x2" on a line of its own repeats all rows since the last such line. A row
        may begin with its number ("Row 7:", "7.", "7", "R7", "rows 1-2:"), which is checked. "-"
        is a row without knots. What follows # is left aside. At most 64 KB.

    Returns
    -------
    All rows, with what was understood of each, and at most 100 problems. Nothing is guessed:
    knots without a blank between them are read only where there is one way to part them, so
    "ffb" is a problem, and so is "forward backward", which may be one knot or two.
    """
    return KnotReader(_read_row, "knot").read(text)


def _read_row(reader: KnotReader, line: str) -> KnotRow:
    if " ".join(line.split()).casefold() in _NO_KNOTS:
        return ()
    unsure = _ONE_OR_TWO.search(line)
    if unsure:
        words = " ".join(unsure[0].split())
        reader.problem(
            words,
            f"'{words}' may be one knot or two. Write {words.replace(' ', '-')}, or put a comma"
            " between two knots.",
        )
        raise CannotRead
    return tuple(_read_group(reader, _Tokens(line), depth=0))


def _read_group(reader: KnotReader, tokens: "_Tokens", depth: int) -> list[Knot]:
    """Read up to the closing bracket, or at the outside to the end of the row."""
    knots: list[Knot] = []
    while (token := tokens.next()) is not None:
        if token == ")":
            if depth:
                return knots
            reader.problem(token, "there is a closing bracket without an opening one.")
            continue
        item = _read_item(reader, token, tokens, depth)
        knots.extend(item * _times_after(reader, tokens, item))
        if len(knots) > MOST_KNOTS_A_ROW:
            reader.problem(
                token,
                f"a row has at most {MOST_KNOTS_A_ROW} knots. Part it, or look at its counts.",
            )
            raise CannotRead
        if not depth:
            reader.place = len(knots) + 1
    if depth:
        reader.problem("(", "there is an opening bracket without a closing one.")
    return knots


def _read_item(reader: KnotReader, token: str, tokens: "_Tokens", depth: int) -> list[Knot]:
    """Read a knot, a word of knots, a bracket, or any of them with its count before it."""
    count = _COUNT.fullmatch(token)
    if count:
        following = tokens.next()
        if following is None or following == ")" or _COUNT.fullmatch(following):
            reader.problem(token, f"'{shown(token)}' does not say what is tied so often.")
            raise CannotRead
        repeated = _checked(reader, int(count[1][:9]), token)
        return _read_item(reader, following, tokens, depth) * repeated
    if token == "(":
        if depth >= DEEPEST_BRACKETS:
            reader.problem(token, f"brackets go {DEEPEST_BRACKETS} deep at the most.")
            raise CannotRead
        return _read_group(reader, tokens, depth + 1)
    return _read_word(reader, token)


def _read_word(reader: KnotReader, token: str) -> list[Knot]:
    attached = _ATTACHED.fullmatch(token)
    if attached:
        repeated = _checked(reader, int(attached[2]), token)
        return _read_word(reader, attached[1]) * repeated
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
        advice = f"may be {first} or {second}. Put blanks between the knots."
    else:
        advice = "is not a knot. Use f, b, fb or bf."
    reader.problem(token, f"'{shown(token)}' {advice}")
    return []


def _times_after(reader: KnotReader, tokens: "_Tokens", item: list[Knot]) -> int:
    """ "x3" after a knot or a bracket in the middle of a row repeats it."""
    following = tokens.peek()
    times = _TIMES.fullmatch(following) if following else None
    if not times:
        return 1
    tokens.next()
    return _checked(reader, int(times[1]), str(following)) if item else 1


def _checked(reader: KnotReader, count: int, word: str) -> int:
    if 1 <= count <= MOST_KNOTS_A_ROW:
        return count
    reader.problem(word, f"'{shown(word)}': count from 1 to {MOST_KNOTS_A_ROW}.")
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
