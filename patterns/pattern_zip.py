"""Pattern files by the many: what people send, read within limits, and what they take away."""

import io
import re
import struct
import unicodedata
import zipfile
import zlib
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from patterns.pattern_file import MAX_FILE_BYTES

MAX_ZIP_BYTES = 5 * 2**20
MAX_FILES = 500
MAX_TOGETHER_BYTES = 8 * 2**20
_MAX_ENTRIES = 2_000
_MAX_SHOWN_LEFT_OUT = 20
_LONGEST_NAME = 120
_LONGEST_FILE_NAME = 80
_ENTRY_MARK = b"PK\x01\x02"
_ZIP_MARKS = (b"PK\x03\x04", b"PK\x05\x06")
_READ_METHODS = (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED)
_ENCRYPTED = 0x1
_FIRST_DATE = (1980, 1, 1, 0, 0, 0)  # the earliest that a ZIP can hold
_READABLE_BY_ALL = 0o100644 << 16
_UNIX = 3
_HIDDEN = re.compile(r"[\x00-\x08\x0b-\x1f\x7f-\x9f]")  # control characters but tab and line end
_BROKEN = (
    zipfile.BadZipFile,
    zlib.error,
    struct.error,
    NotImplementedError,
    RuntimeError,
    EOFError,
    OSError,
    ValueError,
    LookupError,
    OverflowError,
    MemoryError,
)
# Names that some systems keep for devices, whatever the ending.
_DEVICES = {
    "con",
    "prn",
    "aux",
    "nul",
    *(f"{name}{n}" for name in ("com", "lpt") for n in range(10)),
}


class PatternZipError(ValueError):
    """Nothing of it can be taken; the text says why and what to do."""


@dataclass(frozen=True)
class FoundFile:
    """One pattern file of those that were sent.

    Parameters
    ----------
    name
        Its name, with the folders before it, fit to be shown.
    text
        What it says, line ends as "\\n"; empty where it cannot be read as text.
    problem
        Why it cannot be read as text, in a sentence; empty where it can.
    """

    name: str
    text: str
    problem: str = ""


@dataclass(frozen=True)
class FoundFiles:
    """What was found in what was sent; `left_out` are sentences about the rest."""

    files: tuple[FoundFile, ...]
    left_out: tuple[str, ...]


def read_files(uploads: Iterable[tuple[str, bytes]]) -> FoundFiles:
    """Read pattern files, alone or in ZIPs.

    Parameters
    ----------
    uploads
        Name and content of each file that was sent.

    Returns
    -------
    The pattern files in the order sent, those of a ZIP in its order; whether they hold patterns is not
    looked at.

    Raises
    ------
    PatternZipError
        When a ZIP is broken, locked or too large, when there are too many files, or none.
    """
    files: list[FoundFile] = []
    others: list[str] = []
    for name, content in uploads:
        if _is_zip(name, content):
            _read_zip(shown_name(name), content, files, others)
        elif _is_pattern_name(name):
            files.append(_read_alone(shown_name(name), content))
        else:
            others.append(shown_name(name))
        if len(files) > MAX_FILES:
            raise PatternZipError(
                f"More than {MAX_FILES} pattern files at once. Send them in parts."
            )
        if sum(len(file.text) for file in files) > MAX_TOGETHER_BYTES:
            raise PatternZipError(
                f"Together the files hold more than {_megabytes(MAX_TOGETHER_BYTES)}. "
                "Send them in parts."
            )
    if not files:
        raise PatternZipError(_nothing(others))
    return FoundFiles(tuple(files), tuple(_left_out(others)))


def _is_zip(name: str, content: bytes) -> bool:
    return content.startswith(_ZIP_MARKS) or name.lower().endswith(".zip")


def _is_pattern_name(name: str) -> bool:
    return name.lower().endswith(".toml")


def _nothing(others: list[str]) -> str:
    if not others:
        return "There is no pattern file in it. Choose files that end in .toml, or a ZIP of them."
    return f"{others[0]} is no pattern file. Choose files that end in .toml, or a ZIP of them."


def _left_out(others: list[str]) -> Iterator[str]:
    for name in others[:_MAX_SHOWN_LEFT_OUT]:
        yield f"{name} is left out: its name does not end in .toml."
    if len(others) > _MAX_SHOWN_LEFT_OUT:
        yield f"And {len(others) - _MAX_SHOWN_LEFT_OUT} more files that are no pattern files."


def shown_name(name: str) -> str:
    """Make a name fit to be shown: no ways up or out, no hidden characters, not too long."""
    kept = "".join(mark if _is_visible(mark) else "\N{REPLACEMENT CHARACTER}" for mark in name)
    parts = [part.strip() for part in re.split(r"[/\\]+", kept)]
    path = "/".join(part for part in parts if part not in ("", ".", ".."))
    if len(path) > _LONGEST_NAME:
        path = f"…{path[1 - _LONGEST_NAME :]}"
    return path or "a file without a name"


def _is_visible(mark: str) -> bool:
    return unicodedata.category(mark) not in {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


def _read_alone(name: str, content: bytes) -> FoundFile:
    return (
        FoundFile(name, "", _too_large())
        if len(content) > MAX_FILE_BYTES
        else _decode(name, content)
    )


def _too_large() -> str:
    return f"It is larger than {MAX_FILE_BYTES // 1024} KB; no pattern is."


def _megabytes(size: int) -> str:
    return f"{size // 2**20} MB"


def _decode(name: str, content: bytes) -> FoundFile:
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        return FoundFile(name, "", f"Line {line} is not text in UTF-8. Save the file so.")
    text = text.replace("\r\n", "\n").replace("\r", "\n")
    hidden = _HIDDEN.search(text)
    if hidden:
        line = text[: hidden.start()].count("\n") + 1
        return FoundFile(name, "", f"Line {line} holds a hidden character. Type the line again.")
    return FoundFile(name, text, "" if text.strip() else "It is empty.")


def _read_zip(name: str, content: bytes, files: list[FoundFile], others: list[str]) -> None:
    if len(content) > MAX_ZIP_BYTES:
        raise PatternZipError(
            f"{name} is larger than {_megabytes(MAX_ZIP_BYTES)}. Send the patterns in parts."
        )
    # Counted before it is opened: a list of a hundred thousand files takes seconds to read.
    if content.count(_ENTRY_MARK) > _MAX_ENTRIES:
        raise PatternZipError(
            f"{name} holds more than {_MAX_ENTRIES} files and folders. Send the patterns in parts."
        )
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            _read_entries(name, archive, files, others)
    except PatternZipError:
        raise
    except _BROKEN:
        raise PatternZipError(
            f"{name} is no ZIP that can be opened. Pack it anew, or send the files themselves."
        ) from None


def _read_entries(
    name: str, archive: zipfile.ZipFile, files: list[FoundFile], others: list[str]
) -> None:
    entries = [entry for entry in archive.infolist() if not entry.filename.endswith(("/", "\\"))]
    wanted = [entry for entry in entries if _is_wanted(entry.filename)]
    others.extend(shown_name(entry.filename) for entry in entries if not _is_wanted(entry.filename))
    if len(files) + len(wanted) > MAX_FILES:
        raise PatternZipError(
            f"{name} holds {len(wanted)} pattern files; {MAX_FILES} at once are the most. "
            "Send them in parts."
        )
    if any(entry.flag_bits & _ENCRYPTED for entry in wanted):
        raise PatternZipError(f"{name} is locked with a password. Pack it without one.")
    together = 0
    for entry in wanted:
        found = _read_entry(archive, entry)
        together += len(found.text)
        if together > MAX_TOGETHER_BYTES:
            raise PatternZipError(
                f"{name} holds more than {_megabytes(MAX_TOGETHER_BYTES)} of text. "
                "Send the patterns in parts."
            )
        files.append(found)


def _is_wanted(file_name: str) -> bool:
    """Some systems pack a hidden twin beside every file; its name begins with a dot."""
    last = re.split(r"[/\\]", file_name)[-1]
    return _is_pattern_name(last) and not last.startswith(".")


def _read_entry(archive: zipfile.ZipFile, entry: zipfile.ZipInfo) -> FoundFile:
    """Neither the size that is written down nor the packed size is trusted."""
    name = shown_name(entry.filename)
    if entry.file_size > MAX_FILE_BYTES:
        return FoundFile(name, "", _too_large())
    if entry.compress_type not in _READ_METHODS:
        return FoundFile(
            name, "", "It is packed in an unusual way. Pack it anew, or send it alone."
        )
    try:
        with archive.open(entry) as file:
            content = file.read(MAX_FILE_BYTES + 1)
    except _BROKEN:
        return FoundFile(name, "", "It is damaged in the ZIP. Pack it anew, or send it alone.")
    return _read_alone(name, content)


def write_zip(patterns: Iterable[tuple[str, str]]) -> bytes:
    """Pack patterns as files.

    Parameters
    ----------
    patterns
        Name and text of each.

    Returns
    -------
    A ZIP, the same bytes for the same patterns in the same order.
    """
    patterns = list(patterns)
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        for file_name, (_, text) in zip(
            file_names(name for name, _ in patterns), patterns, strict=True
        ):
            entry = zipfile.ZipInfo(file_name, _FIRST_DATE)
            entry.compress_type = zipfile.ZIP_DEFLATED
            entry.create_system = _UNIX
            entry.external_attr = _READABLE_BY_ALL
            archive.writestr(entry, text.encode())
    return packed.getvalue()


def file_names(names: Iterable[str]) -> list[str]:
    """Return a file name for each pattern's name, that every system takes, each only once.

    Parameters
    ----------
    names
        Patterns' names; two may differ by case or marks alone.

    Returns
    -------
    Names that end in .toml, in the same order.
    """
    taken: set[str] = set()
    return [_free(_plain(name), taken) for name in names]


def _plain(name: str) -> str:
    letters = unicodedata.normalize("NFC", name)
    words = re.findall(r"[\w]+", letters)
    plain = "-".join(words)[:_LONGEST_FILE_NAME].strip("-_") or "pattern"
    return f"{plain}-pattern" if plain.lower() in _DEVICES else plain


def _free(plain: str, taken: set[str]) -> str:
    """Case and width are left aside: some systems take Wave and WAVE for one file."""
    number, name = 1, plain
    while unicodedata.normalize("NFKC", name).casefold() in taken:
        number += 1
        name = f"{plain}-{number}"
    taken.add(unicodedata.normalize("NFKC", name).casefold())
    return f"{name}.toml"
