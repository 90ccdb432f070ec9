"""Files that somebody might send as patterns, by mistake or on purpose: over 300 of them."""

import io
import random
import struct
import zipfile
from collections.abc import Iterator

Upload = tuple[str, bytes]
GOOD = (
    'name = "Quay {number}"\ntechnique = "diagonal"\nstrands = "A A B B"\nrows = """\nf b\nf\n"""\n'
)
NAMES = (
    "../../../etc/passwd.toml",
    "/absolute.toml",
    "C:\\windows\\system32\\a.toml",
    "\\\\server\\share\\a.toml",
    "a\0b.toml",
    "a.toml\0.png",
    "line\nend.toml",
    "\u202egnp.toml",
    "x" * 5_000 + ".toml",
    "/" * 500 + "a.toml",
    ".toml",
    "...toml",
    " .toml",
    "con.toml",
    "folder.toml/",
    "folder.toml/a.toml",
    "<script>alert(1)</script>.toml",
    "{{ name }}{% load x %}.toml",
    "'; drop table patterns_pattern; --.toml",
    "\N{PILE OF POO}.toml",
    "\ufdd0\uffff.toml",
)
TEXTS = (
    "",
    "\0" * 50,
    "\ufeff\ufeff",
    "[" * 30_000,
    "a" + ".a" * 20_000 + " = 1",
    "x = '''" + "y" * 60_000,
    'name = "a"\n' * 2_000,
    GOOD.format(number="\\u0000"),
    GOOD.format(number="\\u202e"),
    GOOD.format(number="n" * 200),
    GOOD.format(number="<img src=x onerror=alert(1)>"),
    GOOD.replace("f b", "f " * 30_000),
    GOOD.replace("diagonal", "grid"),
    GOOD.replace("A A B B", "A " * 5_000),
    GOOD.replace("\nf b\nf\n", "\nf b\nf\n" * 6_000),
    'technique = "grid"\nname = "G"\nbackground = "A"\nrows = """\n' + "AB\n" * 15_000 + '"""\n',
    "name = 1979-05-27T07:32:00Z",
    "name = nan\ntechnique = inf",
    "\r" * 1_000,
    "\x85\u2028\u2029",
)


def packed(*files: tuple[str, bytes | str], method: int = zipfile.ZIP_DEFLATED) -> bytes:
    content = io.BytesIO()
    with zipfile.ZipFile(content, "w", method) as archive:
        for name, text in files:
            archive.writestr(zipfile.ZipInfo(name), text, method)
    return content.getvalue()


def hostile_archives() -> Iterator[Upload]:
    """The same ones each time."""
    chance = random.Random(11)
    whole = packed(*((f"f/{n}.toml", GOOD.format(number=n)) for n in range(6)))
    yield from _random_bytes(chance)
    yield from _cut_short(whole)
    yield from _changed(whole, chance)
    yield from _odd_names()
    yield from _odd_texts()
    yield from _bombs(whole)
    yield from _lying(whole)


def _random_bytes(chance: random.Random) -> Iterator[Upload]:
    for number in range(40):
        content = chance.randbytes(chance.choice([0, 1, 21, 22, 100, 4_096, 70_000]))
        yield f"{number}.zip", content
        yield f"{number}.toml", content
        yield f"{number}.zip", b"PK\x03\x04" + content
        yield f"{number}.zip", b"PK\x05\x06" + content


def _cut_short(whole: bytes) -> Iterator[Upload]:
    for length in range(0, len(whole), max(1, len(whole) // 60)):
        yield "short.zip", whole[:length]


def _changed(whole: bytes, chance: random.Random) -> Iterator[Upload]:
    for _ in range(80):
        content = bytearray(whole)
        for _ in range(chance.randint(1, 12)):
            content[chance.randrange(len(content))] = chance.randrange(256)
        yield "changed.zip", bytes(content)


def _odd_names() -> Iterator[Upload]:
    for name in NAMES:
        yield "names.zip", packed((name, GOOD.format(number=1)))
    yield "names.zip", packed(*((name, GOOD.format(number=n)) for n, name in enumerate(NAMES)))
    # The flag that says "UTF-8" over bytes that are none
    content = packed(("\u00e9.toml", GOOD.format(number=2)))
    yield "names.zip", content.replace("\u00e9".encode(), b"\xff\xfe")


def _odd_texts() -> Iterator[Upload]:
    for text in TEXTS:
        content = text.encode()
        yield "text.toml", content
        yield "text.zip", packed(("text.toml", content))
        yield "text.zip", packed(("text.toml", text.encode("utf-16", errors="surrogatepass")))
    yield "text.toml", b"\xed\xa0\x80" + GOOD.encode()


def _bombs(whole: bytes) -> Iterator[Upload]:
    for method in (zipfile.ZIP_DEFLATED, zipfile.ZIP_BZIP2, zipfile.ZIP_LZMA):
        yield "bomb.zip", packed(("a.toml", b"0" * 20_000_000), method=method)
    nested = whole
    for depth in range(6):
        nested = packed((f"{depth}.zip", nested), (f"{depth}.toml", nested))
    yield "nested.zip", nested
    yield "many.zip", packed(*((f"{n}.toml", "x") for n in range(5_000)))
    yield "many.zip", packed(*((f"{n}.toml", "x") for n in range(500)))
    yield "folders.zip", packed(*((f"{n}/", "") for n in range(1_500)))
    yield "deep.zip", packed(("d/" * 15_000 + "a.toml", GOOD.format(number=3)))
    yield "large.zip", b"PK\x03\x04" + b"x" * 6_000_000
    yield "large.toml", b"#" * 3_000_000


def _lying(whole: bytes) -> Iterator[Upload]:
    """Every number of the two headers of a file set to nought, one, and the most it can hold."""
    for mark, offsets in ((b"PK\x03\x04", range(4, 30, 2)), (b"PK\x01\x02", range(4, 46, 2))):
        for offset in offsets:
            for value in (0, 1, 0xFFFF):
                content = bytearray(whole)
                place = content.index(mark) + offset
                content[place : place + 2] = struct.pack("<H", value)
                yield "lying.zip", bytes(content)
    end = whole.rindex(b"PK\x05\x06")
    for offset in range(4, 22, 2):
        content = bytearray(whole)
        content[end + offset : end + offset + 2] = b"\xff\xff"
        yield "lying.zip", bytes(content)
