import io
import random
import zipfile
from contextlib import suppress

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns, patterns
from test_pattern_file import names

from patterns.pattern_file import MAX_FILE_BYTES, write_pattern
from patterns.pattern_zip import MAX_FILES, ZipError, file_stem, packed, read_upload
from tests.factories import grid_text, pattern_text

GOOD = pattern_text("Quay")


def zipped(*files, compress=zipfile.ZIP_DEFLATED):
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", compress) as archive:
        for name, data in files:
            archive.writestr(name, data)
    return target.getvalue()


def test_one_file():
    (found,) = read_upload("quay.toml", GOOD.encode())
    assert (found.name, found.text, found.problem) == ("quay.toml", GOOD, "")


def test_zip_of_both_techniques_in_folders():
    data = zipped(("mine/", ""), ("mine/quay.toml", GOOD), ("mine/old/heart.TOML", grid_text()))
    found = read_upload("patterns.zip", data)
    assert [(file.name, file.problem) for file in found] == [("quay.toml", ""), ("heart.TOML", "")]
    assert [file.text for file in found] == [GOOD, grid_text()]


def test_what_is_no_pattern_is_named():
    data = zipped(
        ("read me.txt", "hello"),
        ("bad.toml", GOOD.replace("f f f", "f x f")),
        ("binary.toml", b"\xff\xfe\0"),
        ("long.toml", "#" * (MAX_FILE_BYTES + 1)),
        ("../../etc/quay.toml", GOOD),
        ("C:\\docs\\quay.toml", GOOD),
    )
    found = read_upload("patterns.zip", data)
    assert [file.name for file in found] == [
        "read me.txt", "bad.toml", "binary.toml", "long.toml", "quay.toml", "quay.toml",
    ]  # fmt: skip
    problems = [file.problem for file in found]
    assert problems[0].startswith("This is not a pattern file")
    assert problems[1].startswith("Row 1, knot 2: 'x' is not a knot")
    assert "UTF-8" in problems[2]
    assert "larger than 64 KB" in problems[3]
    assert problems[4:] == ["", ""]


def test_bomb_is_not_unpacked():
    data = zipped(("bomb.toml", b"\0" * 200_000_000))
    assert len(data) < 1_000_000
    (found,) = read_upload("bomb.zip", data)
    assert "larger than 64 KB" in found.problem


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"PK\x03\x04 and nothing", "damaged"),
        (b"PK" + b"\0" * 100, "damaged"),
        (b"PK" + b"\0" * 6_000_000, "larger than 5 MB"),
    ],
)
def test_zip_that_cannot_be_read_is_told(data, message):
    with pytest.raises(ZipError, match=message):
        read_upload("x.zip", data)


def test_too_many_patterns_are_told():
    data = zipped(*((f"{number}.toml", GOOD) for number in range(MAX_FILES + 1)))
    with pytest.raises(ZipError, match=f"holds {MAX_FILES + 1} patterns; {MAX_FILES} is the most"):
        read_upload("x.zip", data)


def test_locked_zip_is_told():
    data = bytearray(zipped(("quay.toml", GOOD)))
    for mark in (b"PK\x03\x04", b"PK\x01\x02"):
        at = data.index(mark) + (6 if mark[2] == 3 else 8)
        data[at] |= 1  # the flag that a password is needed (PKWARE APPNOTE 4.4.4, from memory)
    with pytest.raises(ZipError, match="password"):
        read_upload("x.zip", bytes(data))


def test_truncated_and_damaged_zips_are_told_or_read():
    chance = random.Random(7)
    whole = zipped(*((f"{number}.toml", GOOD * 3) for number in range(5)))
    for _ in range(300):
        data = bytearray(whole[: chance.randrange(8, len(whole) + 1)])
        for _ in range(chance.randrange(4)):
            data[chance.randrange(2, len(data))] = chance.randrange(256)
        with suppress(ZipError):
            found = read_upload("x.zip", bytes(data))
            assert all(file.text == GOOD * 3 or file.problem for file in found)


@given(st.lists(st.one_of(patterns(names=names()), grid_patterns(names=names())), max_size=6))
def test_packed_and_read_again_is_the_same(made):
    texts = [(pattern.name, write_pattern(pattern)) for pattern in made]
    found = read_upload("x.zip", packed(texts))
    assert [file.text for file in found] == [text for _, text in texts]
    assert not any(file.problem for file in found)
    assert len({file.name.casefold() for file in found}) == len(found)
    assert packed(texts) == packed(texts)


@pytest.mark.parametrize(
    ("name", "stem"),
    [
        ("Gull wings", "gull-wings"),
        ("../../etc/passwd", "etc-passwd"),
        ("Café № 1", "café-1"),
        ("...", "pattern"),
        ("موج", "موج"),
        ("x" * 80, "x" * 60),
    ],
)
def test_file_names_are_harmless(name, stem):
    assert file_stem(name) == stem
