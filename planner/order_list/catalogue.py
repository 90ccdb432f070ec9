"""What an order can ask for, and how its names are found in what people type."""

import difflib
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass

_LONGEST_GUESS = 80
_MOST_GUESSES = 300
_CLOSE = 0.6


@dataclass(frozen=True)
class Choice:
    """Something with a name: a colourway or an ending."""

    key: int
    name: str


@dataclass(frozen=True)
class PatternChoice:
    """A pattern with its colourways; a default key takes the place of a blank colourway.

    An archived one is known by name, so that a list that asks for it can be told, but not ordered;
    one that is not suggested can be ordered, but only by those who know it.
    """

    key: int
    name: str
    colourways: tuple[Choice, ...]
    default_colourway_key: int | None = None
    is_archived: bool = False
    is_suggested: bool = True

    def __post_init__(self) -> None:
        _check_keys(f"colourways of {self.name}", self.colourways)
        keys = {colourway.key for colourway in self.colourways}
        if self.default_colourway_key is not None and self.default_colourway_key not in keys:
            raise ValueError(f"the default colourway of {self.name} is none of its colourways")


@dataclass(frozen=True)
class SizeChoice:
    """A size with the wrists it fits: from the lower bound on, to just under the upper one."""

    key: int
    name: str
    wrist_min_mm: int
    wrist_max_mm: int

    def __post_init__(self) -> None:
        if not 0 <= self.wrist_min_mm <= self.wrist_max_mm:
            raise ValueError(f"the wrist range of size {self.name} runs backwards")


@dataclass(frozen=True)
class Catalogue:
    """Everything that can be ordered; a default ending takes the place of a blank one."""

    patterns: tuple[PatternChoice, ...]
    sizes: tuple[SizeChoice, ...]
    endings: tuple[Choice, ...]
    default_ending_key: int | None = None

    def __post_init__(self) -> None:
        _check_keys("patterns", self.patterns)
        _check_keys("sizes", self.sizes)
        _check_keys("endings", self.endings)
        keys = {ending.key for ending in self.endings}
        if self.default_ending_key is not None and self.default_ending_key not in keys:
            raise ValueError("the default ending is none of the endings")


def _check_keys(what: str, choices: Iterable[Choice | PatternChoice | SizeChoice]) -> None:
    keys = [choice.key for choice in choices]
    if len(set(keys)) < len(keys):
        raise ValueError(f"two {what} have the same key")


def folded(name: str) -> str:
    """Reduce a name to what must agree for two names to be taken for the same.

    Parameters
    ----------
    name
        A name as typed.

    Returns
    -------
    str
        The name without case, accents and invisible characters, in compatibility form (NFKD), with
        single spaces.
    """
    decomposed = unicodedata.normalize("NFKD", unicodedata.normalize("NFKD", name).casefold())
    kept = (c for c in decomposed if unicodedata.category(c) not in {"Mn", "Cf"})
    return " ".join("".join(kept).split())


class Names:
    """The names of one kind, to look up what people type.

    Parameters
    ----------
    choices
        Things with a key and a name.
    """

    def __init__(self, choices: Iterable[Choice | PatternChoice | SizeChoice]) -> None:
        self._by_name: dict[str, list[int]] = {}
        self._by_folded: dict[str, list[tuple[int, str]]] = {}
        for choice in choices:
            self._by_name.setdefault(choice.name, []).append(choice.key)
            same = self._by_folded.setdefault(folded(choice.name), [])
            same.append((choice.key, choice.name))
        self._guesses: dict[str, str | None] = {}

    def find(self, text: str) -> tuple[tuple[int, str], ...]:
        """Find what is called so.

        Parameters
        ----------
        text
            A name as typed.

        Returns
        -------
        tuple of (int, str)
            Key and name of the one thing with exactly this name; else of all that agree with it
            when case, accents and spaces are left aside.
        """
        exact = self._by_name.get(text, [])
        if len(exact) == 1:
            return ((exact[0], text),)
        return tuple(self._by_folded.get(folded(text), ()))

    def nearest(self, text: str) -> str | None:
        """Guess what a name that is not found was meant to be.

        Parameters
        ----------
        text
            A name as typed.

        Returns
        -------
        str or None
            The most similar name, or the only one that begins with the text; `None` when nothing
            is close, and for all but the first 300 different texts, since guessing is slow.
        """
        wanted = folded(text)
        if wanted not in self._guesses and len(self._guesses) < _MOST_GUESSES:
            self._guesses[wanted] = self._guess(wanted)
        return self._guesses.get(wanted)

    def _guess(self, wanted: str) -> str | None:
        if not wanted or len(wanted) > _LONGEST_GUESS:
            return None
        close = difflib.get_close_matches(wanted, self._by_folded, n=1, cutoff=_CLOSE)
        close = close or [name for name in self._by_folded if name.startswith(wanted)]
        return self._by_folded[close[0]][0][1] if len(close) == 1 else None
