"""Files by the many: the standard library's zipfile packs and unpacks what is compared with."""

import io
import random
import struct
import zipfile

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import grid_patterns, patterns

from patterns.pattern_file import read_pattern, write_pattern
from patterns.pattern_zip import (
    MAX_FILES,
    PatternZipError,
    file_names,
    read_files,
    shown_name,
    write_zip,
)

TEXT = 'name = "Quay"\n'


def packed(*files, method=zipfile.ZIP_DEFLATED):
    archive_bytes = io.BytesIO()
    with zipfile.ZipFile(archive_bytes, "w", method) as archive:
        for name, content in files:
            archive.writestr(name, content)
    return archive_bytes.getvalue()


def refusal(*uploads):
    with pytest.raises(PatternZipError) as caught:
        read_files(uploads)
    return str(caught.value)


def test_files_alone_and_in_a_zip_in_folders():
    uploads = [
        ("quay.toml", TEXT.encode()),
        ("all.zip", packed(("mine/old/pier.toml", "pier"), ("mine/", ""), ("WAVE.TOML", "wave"))),
    ]
    found = read_files(uploads)
    assert [(file.name, file.text) for file in found.files] == [
        ("quay.toml", TEXT),
        ("mine/old/pier.toml", "pier"),
        ("WAVE.TOML", "wave"),
    ]
    assert found.left_out == ()


def test_zip_is_known_by_what_is_in_it():
    assert read_files([("patterns", packed(("a.toml", "a")))]).files[0].name == "a.toml"


def test_line_ends_and_mark_at_the_start_are_no_part_of_the_text():
    (file,) = read_files([("a.toml", b"\xef\xbb\xbfa = 1\r\nb = 2\rc")]).files
    assert file.text == "a = 1\nb = 2\nc"


def test_what_is_no_pattern_file_is_named():
    content = packed(("a.toml", "a"), ("notes.txt", "n"), ("__MACOSX/._a.toml", "x"))
    found = read_files([("photo.png", b"png"), ("all.zip", content)])
    assert [file.name for file in found.files] == ["a.toml"]
    assert found.left_out == (
        "photo.png is left out: its name does not end in .toml.",
        "notes.txt is left out: its name does not end in .toml.",
        "__MACOSX/._a.toml is left out: its name does not end in .toml.",
    )


def test_files_of_one_name_are_both_found():
    with pytest.warns(UserWarning, match="Duplicate name"):
        content = packed(("a.toml", "one"), ("a.toml", "two"))
    assert [file.text for file in read_files([("all.zip", content)]).files] == ["one", "two"]


@pytest.mark.parametrize(
    ("name", "shown"),
    [
        ("../../etc/passwd.toml", "etc/passwd.toml"),
        ("/root/a.toml", "root/a.toml"),
        ("C:\\patterns\\a.toml", "C:/patterns/a.toml"),
        ("a\u202elmot.toml", "a\N{REPLACEMENT CHARACTER}lmot.toml"),
        ("a\nb\0.toml", "a\N{REPLACEMENT CHARACTER}b\N{REPLACEMENT CHARACTER}.toml"),
        ("", "a file without a name"),
        ("../..", "a file without a name"),
    ],
)
def test_names_are_fit_to_be_shown(name, shown):
    assert shown_name(name) == shown


def test_long_name_keeps_its_end():
    shown = shown_name("x" * 500 + "/quay.toml")
    assert len(shown) == 120
    assert shown.endswith("x/quay.toml")


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"", "It is empty."),
        (b" \n\n", "It is empty."),
        (b"a\n\xff\xfe", "Line 2 is not text in UTF-8."),
        (b"a\nb\0", "Line 2 holds a hidden character."),
        (b"#" * 65_537, "larger than 64 KB"),
    ],
)
def test_file_that_is_no_text_is_told_and_keeps_the_others_going(content, words):
    for uploads in (
        [("a.toml", content), ("b.toml", b"b")],
        [("all.zip", packed(("a.toml", content), ("b.toml", "b")))],
    ):
        bad, good = read_files(uploads).files
        assert words in bad.problem
        assert bad.text.strip() == ""
        assert (good.text, good.problem) == ("b", "")


def test_zip_that_says_less_than_it_holds_is_damaged():
    """Ten megabytes of noughts, said to be five bytes: neither is believed."""
    content = bytearray(packed(("a.toml", "0" * 10**7), ("b.toml", "b")))
    for mark, offset in ((b"PK\x03\x04", 22), (b"PK\x01\x02", 24)):
        place = content.index(mark) + offset
        assert struct.unpack("<I", content[place : place + 4]) == (10**7,)
        content[place : place + 4] = struct.pack("<I", 5)
    bad, good = read_files([("all.zip", bytes(content))]).files
    assert "damaged" in bad.problem
    assert good.text == "b"


def test_zip_that_unpacks_to_too_much_is_told():
    (file,) = read_files([("all.zip", packed(("a.toml", "0" * 10**7)))]).files
    assert "larger than 64 KB" in file.problem


def test_many_files_that_are_large_together_are_refused():
    files = [(f"{number}.toml", "0" * 65_000) for number in range(140)]
    assert "more than 8 MB" in refusal(("all.zip", packed(*files)))
    assert "more than 8 MB" in refusal(*((name, text.encode()) for name, text in files))


@pytest.mark.parametrize("method", [zipfile.ZIP_BZIP2, zipfile.ZIP_LZMA])
def test_packing_that_could_swell_without_a_limit_is_not_unpacked(method):
    (file,) = read_files([("all.zip", packed(("a.toml", "a" * 60_000), method=method))]).files
    assert "packed in an unusual way" in file.problem


def test_locked_zip_is_told():
    content = bytearray(packed(("a.toml", "a")))
    for mark, offset in ((b"PK\x03\x04", 6), (b"PK\x01\x02", 8)):
        content[content.index(mark) + offset] |= 1
    assert "all.zip is locked with a password." in refusal(("all.zip", bytes(content)))


def test_too_many_files_are_refused():
    files = [(f"{number}.toml", "a") for number in range(MAX_FILES + 1)]
    assert "holds 501 pattern files; 500 at once" in refusal(("all.zip", packed(*files)))
    assert "More than 500" in refusal(*((name, b"a") for name, _ in files))
    assert len(read_files([("all.zip", packed(*files[1:]))]).files) == MAX_FILES


def test_too_many_entries_are_refused_before_they_are_read():
    files = [(f"{number}.txt", "") for number in range(2_001)]
    assert "more than 2000 files and folders" in refusal(("all.zip", packed(*files)))


def test_too_large_a_zip_is_refused():
    assert "larger than 5 MB" in refusal(("all.zip", b"PK\x03\x04" + b"x" * (5 * 2**20)))


def test_many_files_that_are_none_are_counted():
    files = [(f"{number}.txt", "") for number in range(30)]
    found = read_files([("all.zip", packed(("a.toml", "a"), *files))])
    assert len(found.left_out) == 21
    assert found.left_out[-1] == "And 10 more files that are no pattern files."


@pytest.mark.parametrize(
    ("uploads", "words"),
    [
        ([], "There is no pattern file in it."),
        ([("all.zip", packed())], "There is no pattern file in it."),
        ([("all.zip", b"")], "all.zip is no ZIP that can be opened."),
        ([("all.zip", b"PK\x03\x04" + b"\0" * 40)], "all.zip is no ZIP that can be opened."),
        ([("photo.png", b"x")], "photo.png is no pattern file."),
    ],
)
def test_nothing_to_read_is_told(uploads, words):
    assert words in refusal(*uploads)


def test_damaged_zips_are_told_or_read():
    """A thousand ZIPs cut short, or with bytes changed: never another error than ours."""
    whole = packed(*((f"f/{n}.toml", f'name = "{n}"\n' * 30) for n in range(8)))
    chance = random.Random(7)
    refused = read = 0
    for number in range(1_000):
        content = bytearray(whole[: chance.randrange(len(whole))] if number % 4 == 0 else whole)
        for _ in range(chance.randrange(8)):
            if content:
                content[chance.randrange(len(content))] = chance.randrange(256)
        try:
            found = read_files([("all.zip", bytes(content))])
        except PatternZipError:
            refused += 1
        else:
            assert all(file.text or file.problem for file in found.files)
            read += 1
    assert min(refused, read) > 200


# --- packing ---------------------------------------------------------------------------------


def test_packed_the_same_each_time_and_readable_by_others():
    content = write_zip([("Quay", "one"), ("Pier", "two")])
    assert content == write_zip([("Quay", "one"), ("Pier", "two")])
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        assert archive.testzip() is None
        assert {name: archive.read(name) for name in archive.namelist()} == {
            "Quay.toml": b"one",
            "Pier.toml": b"two",
        }


@pytest.mark.parametrize(
    ("names", "files"),
    [
        (["Two harbours"], ["Two-harbours.toml"]),
        (["Wave", "WAVE", "wave"], ["Wave.toml", "WAVE-2.toml", "wave-3.toml"]),
        (["Wave 2", "Wave", "wave"], ["Wave-2.toml", "Wave.toml", "wave-3.toml"]),
        (["con", "LPT1"], ["con-pattern.toml", "LPT1-pattern.toml"]),
        (["../../etc", "a/b\\c:d*?"], ["etc.toml", "a-b-c-d.toml"]),
        (["!!!", "???"], ["pattern.toml", "pattern-2.toml"]),
        (["Größe", "Μπλε", "波"], ["Größe.toml", "Μπλε.toml", "波.toml"]),
        ([".hidden", "-rf"], ["hidden.toml", "rf.toml"]),
    ],
)
def test_file_names_that_every_system_takes(names, files):
    assert file_names(names) == files


@given(st.lists(st.text(max_size=100), max_size=40))
def test_file_names_are_safe_and_each_only_once(names):
    found = file_names(names)
    assert len({name.casefold() for name in found}) == len(found) == len(names)
    for name in found:
        assert name.endswith(".toml")
        assert not set(name) & set('/\\:*?"<>|\0\n')
        assert not name.startswith((".", "-"))
        assert len(name) <= 100


@given(st.lists(st.one_of(patterns(), grid_patterns()), min_size=1, max_size=5))
def test_patterns_come_back_as_they_were(sent):
    texts = [write_pattern(pattern) for pattern in sent]
    content = write_zip((pattern.name, text) for pattern, text in zip(sent, texts, strict=True))
    found = read_files([("all.zip", content)])
    assert [file.text for file in found.files] == texts
    assert [read_pattern(file.text) for file in found.files] == sent
