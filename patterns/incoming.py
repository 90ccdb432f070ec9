"""Pattern files that wait for the maker's word: how they are kept, and how they stand to the library."""

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import asdict, dataclass, replace
from itertools import count
from typing import Any, Literal

from patterns.knots import MAX_NAME_LENGTH, PatternError
from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from patterns.pattern_zip import FoundFile
from patterns.version_words import NOTHING_CHANGED, change_words

Standing = Literal["new", "same", "changes", "twice", "unreadable"]
Doing = Literal["add", "rename", "replace", "leave", "later"]
DOINGS: dict[Standing, tuple[Doing, ...]] = {
    "new": ("add", "rename", "leave", "later"),
    "same": ("leave", "rename", "later"),
    "changes": ("later", "replace", "rename", "leave"),
    "twice": ("later", "rename", "leave"),
    "unreadable": ("later", "leave"),
}


@dataclass(frozen=True)
class IncomingFile:
    """A file that was sent, read once; `problem` says why it holds no pattern."""

    number: int
    file: str
    text: str
    problem: str
    name: str = ""
    technique: str = ""
    strands: int = 0
    rows: int = 0


def key_of(number: int) -> str:
    """Names, not places: a list of numbers would close up when files leave it."""
    return f"f{number}"


def kept_files(found: Iterable[FoundFile]) -> dict[str, dict[str, Any]]:
    """Read every file once; what is kept can be shown without reading it again."""
    return {
        key_of(number): asdict(_read(IncomingFile(number, file.name, file.text, file.problem)))
        for number, file in enumerate(found, start=1)
    }


def _read(file: IncomingFile) -> IncomingFile:
    if file.problem and not file.text:
        return file
    try:
        pattern = read_pattern(file.text)
    except PatternError as error:
        return replace(file, problem=str(error))
    return replace(
        file,
        problem="",
        name=pattern.name,
        technique=pattern.technique,
        strands=pattern.strands,
        rows=len(pattern.rows),
    )


def put_right(files: Mapping[str, dict[str, Any]], texts: Mapping[int, str]) -> dict[str, Any]:
    """Return the files with those texts that were corrected, read again."""
    kept = dict(files)
    for number, text in texts.items():
        file = kept.get(key_of(number))
        if file is not None and file["problem"] and text.strip() and text != file["text"]:
            kept[key_of(number)] = asdict(_read(IncomingFile(number, file["file"], text, "")))
    return kept


@dataclass(frozen=True)
class Waiting:
    """A file beside the library: what it would do there, and what can be done with it.

    `changes` says what would be different in the pattern of its name, `free_name` is one that nobody
    has.
    """

    file: IncomingFile
    standing: Standing
    yours: Pattern | None
    changes: str
    free_name: str

    @property
    def doings(self) -> tuple[Doing, ...]:
        return DOINGS[self.standing]


def beside_library(files: Iterable[IncomingFile]) -> Iterator[Waiting]:
    """Few queries, however many files: names are compared without case."""
    files = list(files)
    names = list(Pattern.objects.values_list("pk", "name"))
    taken = {name.lower() for _, name in names}
    wanted = {file.name.lower() for file in files if not file.problem}
    found = Pattern.objects.in_bulk([pk for pk, name in names if name.lower() in wanted])
    library = {pattern.name.lower(): pattern for pattern in found.values()}
    taken |= wanted
    seen: set[str] = set()
    for file in files:
        yours = library.get(file.name.lower())
        standing, changes = _standing(file, yours, seen)
        free = ""
        if standing != "unreadable":
            free = _free_name(file.name, taken)
            taken.add(free.lower())
        yield Waiting(file, standing, yours, changes, free)


def _standing(file: IncomingFile, yours: Pattern | None, seen: set[str]) -> tuple[Standing, str]:
    if file.problem:
        return "unreadable", ""
    if file.name.lower() in seen:
        return "twice", ""
    seen.add(file.name.lower())
    if yours is None:
        return "new", ""
    words = _changes(yours.text, file.text)
    return ("same", "") if words == NOTHING_CHANGED else ("changes", words)


def _changes(before: str, after: str) -> str:
    if before == after:
        return NOTHING_CHANGED
    try:
        return change_words(read_pattern(before), read_pattern(after))
    except PatternError:
        return "yours cannot be read"


def _free_name(name: str, taken: set[str]) -> str:
    tries = (f"{name[: MAX_NAME_LENGTH - 6]} {number}" for number in count(2))
    return next(free for free in tries if free.lower() not in taken)
