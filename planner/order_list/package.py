"""The zip file round a workbook: unpacked within bounds, before anything reads what is in it."""

import io
import zipfile

from planner.order_list.limits import (
    MAX_PARTS,
    MAX_TAGS,
    MAX_UNPACKED_BYTES,
    MAX_UNPACKED_RATIO,
    OrderListError,
)

_CHUNK_BYTES = 64 * 1024
_RATIO_FREE_BYTES = 1024 * 1024
_DECLARATIONS = ("<!DOCTYPE", "<!ENTITY")
_ENCODINGS = ("ascii", "utf-16-le", "utf-16-be")
_DECLARATION_BYTES = tuple(
    word.encode(encoding) for word in _DECLARATIONS for encoding in _ENCODINGS
)
_SAVE_AS = "Save it as .xlsx or .csv."
_COPY_ORDERS = "Copy only the orders into a new workbook."


def repacked(data: bytes) -> io.BytesIO:
    """Unpack a workbook within bounds, and pack what is needed of it anew.

    Parameters
    ----------
    data
        An XLSX file as it came.

    Returns
    -------
    io.BytesIO
        A zip file of the workbook's XML parts, stored without compression: whatever reads it can
        meet no part larger than its header says, no entity and no macro.

    Raises
    ------
    OrderListError
        When the file is no .xlsx workbook, or unpacks to more than the limits.
    Exception
        Of any class the standard library has for it, when the zip file is damaged.
    """
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        entries = archive.infolist()
        _check_names([entry.filename for entry in entries])
        _check_sizes(entries)
        return _copy_parts(archive, entries)


def _check_names(names: list[str]) -> None:
    if len(names) > MAX_PARTS:
        raise OrderListError(
            f"The workbook has more than {MAX_PARTS:,} parts, the limit. {_COPY_ORDERS}"
        )
    if any(name.casefold().endswith("vbaproject.bin") for name in names):
        raise OrderListError(f"The workbook holds macros, which are not taken. {_SAVE_AS}")
    if "[Content_Types].xml" not in names or not any(name.startswith("xl/") for name in names):
        raise OrderListError(f"This is a zip file, but not an .xlsx workbook. {_SAVE_AS}")


def _check_sizes(entries: list[zipfile.ZipInfo]) -> None:
    if any(entry.flag_bits & 0x1 for entry in entries):
        raise OrderListError(f"The workbook is locked with a password. {_SAVE_AS}")
    unpacked = sum(entry.file_size for entry in entries)
    if unpacked > MAX_UNPACKED_BYTES or any(_is_too_dense(entry) for entry in entries):
        raise OrderListError(
            f"The workbook unpacks to more than {MAX_UNPACKED_BYTES // 1024**2} MB, the limit, "
            f"or is mostly empty rows. {_COPY_ORDERS}"
        )


def _is_too_dense(entry: zipfile.ZipInfo) -> bool:
    if entry.file_size <= _RATIO_FREE_BYTES:
        return False
    return entry.file_size > MAX_UNPACKED_RATIO * entry.compress_size


def _copy_parts(archive: zipfile.ZipFile, entries: list[zipfile.ZipInfo]) -> io.BytesIO:
    target = io.BytesIO()
    tags = 0
    with zipfile.ZipFile(target, "w") as copy:
        for name in dict.fromkeys(entry.filename for entry in entries):
            if not name.casefold().endswith((".xml", ".rels")):
                continue
            part = _read_part(archive, name)
            tags += part.count(b"<")
            _check_part(part, tags)
            copy.writestr(name, part)
    target.seek(0)
    return target


def _read_part(archive: zipfile.ZipFile, name: str) -> bytes:
    # In chunks zipfile stops at the size in the header, and then misses the checksum if that was a
    # lie. A part read at once is unpacked whole first, whatever its header says.
    with archive.open(name) as part:
        return b"".join(iter(lambda: part.read(_CHUNK_BYTES), b""))


def _check_part(part: bytes, tags: int) -> None:
    if any(declaration in part for declaration in _DECLARATION_BYTES):
        raise OrderListError(
            f"The workbook declares XML entities, which no spreadsheet writes. {_SAVE_AS}"
        )
    if tags > MAX_TAGS:
        raise OrderListError(f"The workbook holds too many cells. {_COPY_ORDERS}")
