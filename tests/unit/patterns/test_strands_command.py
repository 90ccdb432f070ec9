import json
from io import StringIO

import pytest
from django.core.management import CommandError, call_command

from patterns.management.commands.strands import Command

STRIPES = '''name = "Stripes"
technique = "diagonal"
strands = "A B C D E F"
rows = """
f f f
f f
"""
'''


@pytest.fixture
def stripes(tmp_path):
    path = tmp_path / "stripes.toml"
    path.write_text(STRIPES, encoding="utf-8")
    return path


def strands(path, *arguments):
    output = StringIO()
    call_command("strands", str(path), *arguments, stdout=output)
    return output.getvalue()


def strands_json(path, *arguments):
    return json.loads(strands(path, *arguments, "--json"))


def fail_from_shell(capsys, *arguments):
    """Run as the shell does; exit status, and what stood on standard error."""
    with pytest.raises(SystemExit) as caught:
        Command().run_from_argv(["manage.py", "strands", *map(str, arguments)])
    captured = capsys.readouterr()
    assert captured.out == ""
    return caught.value.code, captured.err


def test_strands_json(stripes):
    # By hand in test_geometry: strand 1 ties 50, is base in 49, idle in 19 of 118 rows; 626.5 mm.
    answer = strands_json(stripes, "--length", "150mm")
    assert answer["rows"] == 118
    assert answer["strands"][0] == {
        "strand": 1,
        "slot": "A",
        "tied": 50,
        "base": 49,
        "idle": 19,
        "knotted_mm": 626.5,
    }
    assert [strand["slot"] for strand in answer["strands"]] == list("ABCDEF")


@pytest.mark.parametrize(
    ("arguments", "rows", "first_mm"),
    # 50 x (2 + 2 pi c) d + 49 x 2 d + 19 x idle run x d, at 118 rows.
    [
        (["--idle-run", "0"], 118, 602.3),
        (["--idle-run", "0", "--loop-ratio", "2"], 118, 743.7),
        (["--length", "15 cm"], 118, 626.5),
        (["--length", "150"], 118, 626.5),
        (["--thread", "0,9 mm"], 118, 626.5),
    ],
)
def test_strands_options(stripes, arguments, rows, first_mm):
    answer = strands_json(stripes, "--length", "150mm", *arguments)
    assert (answer["rows"], answer["strands"][0]["knotted_mm"]) == (rows, first_mm)


@pytest.mark.parametrize(
    ("finish", "rows"), [("exact", 107), ("nearest", 108), ("at_least", 108), ("at_most", 106)]
)
def test_strands_finish(stripes, finish, rows):
    # 151 mm at 1 mm is 106.8 rows, so 107; repeats of two rows.
    arguments = ("--length", "151mm", "--thread", "1mm", "--finish", finish)
    assert strands_json(stripes, *arguments)["rows"] == rows


def test_strands_table(stripes):
    lines = strands(stripes, "--length", "150mm").splitlines()
    assert lines[0] == "118 rows"
    assert lines[1].split() == ["strand", "slot", "tied", "base", "idle", "knotted", "mm"]
    assert lines[2].split() == ["1", "A", "50", "49", "19", "626.5"]
    assert len(lines) == 8


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ([], "--length"),
        (["--length"], "--length"),
        (["--length", "abc"], "--length: “abc” is not a length"),
        (["--length", "0"], "has to be from 1 mm"),
        (["--length=-5mm"], "cannot be negative"),
        (["--length", "1e9"], "--length"),
        (["--length", "99 m"], "has to be from 1 mm to 5000 mm"),
        (["--length", "9" * 10_000], "--length"),
        (["--length", "nan"], "--length"),
        (["--length", "150mm", "--thread", "0"], "thread diameter has to be from 0.1"),
        (["--length", "150mm", "--thread", "nan"], "--thread"),
        (["--length", "150mm", "--thread", "1e9"], "--thread"),
        (["--length", "150mm", "--thread", "100m"], "thread diameter has to be from 0.1"),
        (["--length", "5000mm", "--thread", "0.1mm"], "20000 is the most"),
        (["--length", "150mm", "--loop-ratio", "0"], "loop ratio has to be from 0.5"),
        (["--length", "150mm", "--loop-ratio", "inf"], "--loop-ratio: "),
        (["--length", "150mm", "--idle-run=-1"], "--idle-run: The idle run"),
        (["--length", "150mm", "--idle-run", "\x00"], "--idle-run: "),
        (["--length", "150mm", "--finish", "never"], "--finish"),
        (["--length", "150mm", "--colour", "red"], "--colour"),
        (["--length", "150mm", "more.toml"], "more.toml"),
    ],
)
def test_strands_bad_arguments(stripes, capsys, arguments, message):
    status, error = fail_from_shell(capsys, stripes, *arguments)
    assert status == 2
    assert message in error
    assert len(error.splitlines()) == 1
    assert error.startswith("Error: ")


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"", "has no 'technique'"),
        (b"\x89PNG\r\n\xff\xfe", "not a text file in UTF-8"),
        (b"\x00\x01\x02", "not valid TOML"),
        (b"# " + b"x" * 5_000_000, "larger than 64 KB"),
        (b"a = " + b"[" * 50_000, "not valid TOML"),
        (b"name = 7", "has no 'technique'"),
        (STRIPES.replace("f f f", "f f x").encode(), "Row 1, knot 3: 'x' is not a knot"),
        (STRIPES.replace('"Stripes"', "7").encode(), "'name' has to be text"),
        (STRIPES.replace("diagonal", "grid").encode(), "A grid pattern has no 'strands'"),
        (STRIPES.encode("utf-16"), "not a text file in UTF-8"),
    ],
    ids=range(10),
)
def test_strands_bad_file(tmp_path, capsys, content, message):
    path = tmp_path / "bad.toml"
    path.write_bytes(content)
    status, error = fail_from_shell(capsys, path, "--length", "150mm")
    assert status == 2
    assert message in error
    assert len(error.splitlines()) == 1


@pytest.mark.parametrize(
    ("name", "message"),
    [
        ("missing.toml", "There is no file"),
        ("", "is not a file"),
        ("a\nb.toml", "There is no file"),
        ("x" * 10_000, "cannot be read"),
        ("a\x00b", ""),
        ("\udcff", "There is no file"),
    ],
    ids=range(6),
)
def test_strands_no_such_file(tmp_path, capsys, name, message):
    status, error = fail_from_shell(capsys, f"{tmp_path}/{name}", "--length", "150mm")
    assert status == 2
    assert message in error
    assert len(error.splitlines()) == 1


def test_strands_error_from_code_keeps_its_status(tmp_path):
    with pytest.raises(CommandError) as caught:
        call_command("strands", str(tmp_path / "missing.toml"), length="150mm")
    assert caught.value.returncode == 2


GRID = '''name = "Bars"
technique = "grid"
background = "A"
rows = """
A B A
B A B
"""
'''


def test_strands_of_a_grid(tmp_path):
    # By hand in test_grid_lengths, at d = 1 mm: the run takes 3 x 11.4248 + 7 = 41.3 mm.
    path = tmp_path / "bars.toml"
    path.write_text(GRID, encoding="utf-8")
    options = ("--length", "4mm", "--thread", "1mm")
    answer = strands_json(path, *options)
    assert [strand["role"] for strand in answer["strands"]] == ["base"] * 3 + ["leading", "run"]
    assert answer["strands"][4] == {
        "strand": 5,
        "slot": "B",
        "tied": 3,
        "base": 0,
        "idle": 0,
        "knotted_mm": 41.3,
        "role": "run",
        "passed": 2,
        "turned": 1,
        "first_row": 1,
        "last_row": 2,
    }
    assert "run 1 of B" in strands(path, *options)
    # With tails of 1 mm a join takes less than going down a row (4.5 mm): two runs.
    assert len(strands_json(path, *options, "--join-tail", "1mm")["strands"]) == 3 + 1 + 3
