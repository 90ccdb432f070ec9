"""Pattern files, many at once: read from uploads and ZIPs within bounds, packed into a ZIP."""

import io
import re
import zipfile
import zlib
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import PurePosixPath

from patterns.knots import PatternError, shown
from patterns.pattern_file import MAX_FILE_BYTES, read_pattern

MAX_ZIP_BYTES = 5 * 1024 * 1024
MAX_FILES = 500
_MAX_ENTRIES = 5_000
_CHUNK_BYTES = 16 * 1024
_EARLIEST = (1980, 1, 1, 0, 0, 0)  # the first date that a ZIP can hold: equal contents, equal bytes
_NOT_IN_NAMES = re.compile(r"[^\w.-]+")


class ZipError(ValueError):
    """A ZIP that cannot be read at all; the text says why and what to do."""


@dataclass(frozen=True)
class UploadedFile:
    """One file: its name, its text where it is a pattern's, and what is wrong with it."""

    name: str
    text: str
    problem: str = ""


def read_upload(name: str, data: bytes) -> tuple[UploadedFile, ...]:
    """Read one uploaded file, a pattern file or a ZIP of many.

    Parameters
    ----------
    name
        What the file is called.
    data
        Its bytes.

    Returns
    -------
    A file each, in the order of the ZIP; files that are no patterns say so.

    Raises
    ------
    ZipError
        When it is a ZIP that cannot be read: damaged, locked, or more than the limits.
    """
    if not data.startswith(b"PK"):
        return (_read_one(name, data),)
    if len(data) > MAX_ZIP_BYTES:
        raise ZipError(f"The ZIP is larger than {MAX_ZIP_BYTES // 1024**2} MB. Split it.")
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            return _read_archive(archive)
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, ValueError) as error:
        if isinstance(error, ZipError):
            raise
        raise ZipError("The ZIP is damaged. Make it again, or add the files alone.") from None
    except (NotImplementedError, RuntimeError, OverflowError):
        raise ZipError("The ZIP is locked, or packed in a way that cannot be read here.") from None


def _read_archive(archive: zipfile.ZipFile) -> tuple[UploadedFile, ...]:
    entries = archive.infolist()
    if len(entries) > _MAX_ENTRIES:
        raise ZipError(f"The ZIP holds more than {_MAX_ENTRIES:,} files. Take only the patterns.")
    if any(entry.flag_bits & 0x1 for entry in entries):
        raise ZipError("The ZIP is locked with a password. Make one without.")
    wanted = [entry for entry in entries if not entry.is_dir()]
    patterns = [entry for entry in wanted if entry.filename.casefold().endswith(".toml")]
    if len(patterns) > MAX_FILES:
        raise ZipError(f"The ZIP holds {len(patterns)} patterns; {MAX_FILES} is the most at once.")
    return tuple(_read_entry(archive, entry) for entry in wanted[: 2 * MAX_FILES])


def _read_entry(archive: zipfile.ZipFile, entry: zipfile.ZipInfo) -> UploadedFile:
    name = _last_part(entry.filename)
    if not entry.filename.casefold().endswith(".toml"):
        return UploadedFile(name, "", "This is not a pattern file; their names end in .toml.")
    # Whatever its header says: no more is unpacked than a pattern can have.
    with archive.open(entry) as part:
        data = b""
        while len(data) <= MAX_FILE_BYTES and (chunk := part.read(_CHUNK_BYTES)):
            data += chunk
    return _read_one(name, data)


def _last_part(path: str) -> str:
    return shown(PurePosixPath(path.replace("\\", "/")).name or "file", 100)


def _read_one(name: str, data: bytes) -> UploadedFile:
    name = _last_part(name)
    if len(data) > MAX_FILE_BYTES:
        kilobytes = MAX_FILE_BYTES // 1024
        return UploadedFile(name, "", f"The file is larger than {kilobytes} KB; no pattern is.")
    try:
        text = data.decode("utf-8-sig").replace("\r\n", "\n").replace("\r", "\n")
    except UnicodeDecodeError:
        return UploadedFile(name, "", "This is not a text file in UTF-8. Save it so.")
    if "\0" in text:
        return UploadedFile(name, "", "This is not a text file in UTF-8. Save it so.")
    try:
        read_pattern(text)
    except PatternError as error:
        return UploadedFile(name, text, str(error))
    return UploadedFile(name, text)


def packed(patterns: Iterable[tuple[str, str]]) -> bytes:
    """Pack patterns into a ZIP, a file each.

    Parameters
    ----------
    patterns
        Names and texts.

    Returns
    -------
    The ZIP; equal patterns in equal order give equal bytes.
    """
    target = io.BytesIO()
    taken: set[str] = set()
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in patterns:
            entry = zipfile.ZipInfo(_free_name(name, taken), date_time=_EARLIEST)
            entry.compress_type = zipfile.ZIP_DEFLATED
            entry.external_attr = 0o644 << 16
            archive.writestr(entry, text.encode("utf-8"))
    return target.getvalue()


def file_stem(name: str) -> str:
    """Return a name that every system can give a file: letters, digits, - and _."""
    stem = _NOT_IN_NAMES.sub("-", name.casefold()).strip("-.")[:60]
    return stem or "pattern"


def _free_name(name: str, taken: set[str]) -> str:
    stem = file_stem(name)
    free, number = stem, 1
    while free in taken:
        number += 1
        free = f"{stem}-{number}"
    taken.add(free)
    return f"{free}.toml"
