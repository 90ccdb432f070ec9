"""`manage.py cut`: what it prints, and what it says about bad files."""

import json
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest

from planner.management.commands.cut import Command

DATA = Path(__file__).parents[2] / "data" / "cutting_problems.json"
PROBLEM = {
    "demand": [{"length_mm": 1200, "count": 10}],
    "stock": [{"length_mm": 2500, "count": 1}],
    "buy": [{"length_mm": 8000, "price": "1.5"}],
}


def run(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    code = 0
    try:
        Command().run_from_argv(["manage.py", "cut", *arguments])
    except SystemExit as stop:
        code = int(stop.code or 0)
    captured = capsys.readouterr()
    return code, captured.out, captured.err


def write(tmp_path: Path, content: object) -> str:
    path = tmp_path / "problem.json"
    path.write_text(json.dumps(content) if not isinstance(content, str) else content)
    return str(path)


def refusal(capsys: pytest.CaptureFixture[str], *arguments: str) -> str:
    code, out, err = run(capsys, *arguments)
    assert code == 2
    assert out == ""
    assert err.count("\n") == 1
    assert "Traceback" not in err
    assert len(err) < 500
    return err


def test_cut_as_json_prints_the_whole_plan(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    code, out, err = run(capsys, write(tmp_path, PROBLEM), "--json")
    assert (code, err) == (0, "")
    answer = json.loads(out)
    assert isinstance(answer.pop("seconds"), float)
    assert answer == {
        "status": "optimal",
        "cost": "3.00",
        "bought": 2,
        "lower_bound": "3.00",
        # Two skeins are needed with the remnant or without; cut from it, 100 mm would be waste.
        "waste_mm": 0,
        "cuts": [
            {"length_mm": 8000, "new": True, "pieces_mm": [1200] * 6, "left_mm": 800},
            {"length_mm": 8000, "new": True, "pieces_mm": [1200] * 4, "left_mm": 3200},
        ],
    }


def test_cut_without_json_prints_a_table(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    code, out, _ = run(capsys, write(tmp_path, PROBLEM))
    assert code == 0
    assert "To buy: 2, cost 3.00, and less is impossible" in out
    assert "new 8000" in out
    assert "6 x 1200" in out


def test_cut_takes_packs_lots_and_short_measure(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    problem = {
        "demand": [{"length_mm": 3900, "count": 3}],
        "stock": [{"length_mm": 3900, "count": 1, "lot": "8a"}],
        "buy": [
            {"length_mm": 8000, "price": "5", "pack_size": 4, "short_measure_share": "0.02"},
        ],
    }
    code, out, _ = run(capsys, write(tmp_path, problem), "--json")
    answer = json.loads(out)
    assert (code, answer["cost"], answer["bought"]) == (0, "5.00", 4)
    assert max(cut["length_mm"] for cut in answer["cuts"]) == 7840


@pytest.mark.parametrize(
    ("part", "key", "value", "words"),
    [
        ("buy", "pack_size", 0, "pack_size of a put-up must be from 1 to 1000"),
        ("buy", "pack_step", "two", "pack_step of a put-up must be a whole number"),
        ("buy", "short_measure_share", "1", "short_measure_share must be"),
        ("buy", "short_measure_share", [], "short_measure_share must be"),
        ("buy", "supplier", 7, '"supplier" must be text'),
        ("stock", "lot", {}, '"lot" must be text'),
        ("stock", "lot", "x" * 201, "at most 200 characters"),
    ],
)
def test_cut_names_what_is_wrong_with_packs_and_lots(
    part: str,
    key: str,
    value: object,
    words: str,
    tmp_path: Path,
    capsys: pytest.CaptureFixture[str],
) -> None:
    problem = json.loads(json.dumps(PROBLEM))
    problem[part][0][key] = value
    said = refusal(capsys, write(tmp_path, problem))
    assert words in said
    assert f'"{part}", item 1' in said


@pytest.mark.parametrize("row", json.loads(DATA.read_text())["problems"], ids=lambda row: row["id"])
def test_cut_reads_published_problem_with_its_extra_keys(
    row: dict[str, Any], tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    code, out, _ = run(capsys, write(tmp_path, row), "--json", "--time-limit", "0.5")
    answer = json.loads(out)
    assert code == 0
    assert Decimal(answer["lower_bound"]) <= Decimal(answer["cost"])
    pieces = [length for cut in answer["cuts"] for length in cut["pieces_mm"]]
    assert len(pieces) == sum(part["count"] for part in row["demand"])


@pytest.mark.parametrize("content", [{"demand": []}, {"demand": [], "stock": [], "buy": []}])
def test_cut_of_nothing_costs_nothing(
    content: dict[str, Any], tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    code, out, _ = run(capsys, write(tmp_path, content), "--json")
    assert code == 0
    assert json.loads(out)["cost"] == "0.00"
    assert json.loads(out)["cuts"] == []


@pytest.mark.parametrize("price", ["1.5", 1.5, "1.50"])
def test_cut_takes_prices_as_text_or_number(
    price: object, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    content = PROBLEM | {"buy": [{"length_mm": 8000, "price": price}]}
    _, out, _ = run(capsys, write(tmp_path, content), "--json")
    assert json.loads(out)["cost"] == "3.00"


def demand(length_mm: object, count: object = 1) -> dict[str, Any]:
    return PROBLEM | {"demand": [{"length_mm": length_mm, "count": count}]}


def bought_at(price: object) -> dict[str, Any]:
    return PROBLEM | {"buy": [{"length_mm": 8000, "price": price}]}


@pytest.mark.parametrize(
    ("content", "said"),
    [
        ("", "not JSON"),
        ("{", "not JSON: see line 1"),
        ("[" * 100_000, "nested too deeply"),
        ("[]", "one object"),
        ("null", "one object"),
        ("{}", 'no "demand"'),
        ({"demand": 5}, '"demand" must be a list'),
        ({"demand": [5]}, '"demand", item 1: must be an object'),
        ({"demand": [{"count": 1}]}, '"length_mm" is missing'),
        (demand(0), "from 1 to"),
        (demand(-5), "from 1 to"),
        (demand(True), "whole number"),
        (demand("1200"), "whole number"),
        (demand(1200.5), "whole number"),
        (demand(None), "whole number"),
        (demand([1]), "whole number"),
        (demand(10**30), "from 1 to"),
        (demand(1200, -1), "from 0 to"),
        (demand(1200, True), "whole number"),
        (demand(1200, 10**30), "from 0 to"),
        (demand(1200, 10**6), "from 0 to 200000"),
        ({"demand": [{"length_mm": 5, "count": 150_000}] * 2}, "Too many pieces"),
        ('{"demand": [{"length_mm": NaN, "count": 1}]}', "NaN, which is not a number"),
        ('{"demand": [{"length_mm": 1e999, "count": 1}]}', "whole number"),
        ('{"demand": [{"length_mm": ' + "9" * 9_000 + ', "count": 1}]}', "too long"),
        ('{"demand": [{"length_mm": 1e' + "9" * 50 + ', "count": 1}]}', "too long"),
        (bought_at(-1), "price must be from 0"),
        (bought_at(True), "decimal number"),
        (bought_at("free"), "decimal number"),
        (bought_at("1e3"), "decimal number"),
        (bought_at("٣"), "decimal number"),
        (bought_at(None), "decimal number"),
        (bought_at(10**30), "decimal number"),
        ('{"demand": [], "buy": [{"length_mm": 5, "price": 1e999}]}', "from 0 to 1000000"),
        (bought_at("1000001"), "from 0 to 1000000"),
        (bought_at("0.00001"), "4 decimal places"),
        (PROBLEM | {"buy": PROBLEM["buy"] * 101}, "Too many put-ups"),
        (PROBLEM | {"stock": [{"length_mm": 9, "count": 200_000}] * 2}, "Too many stock pieces"),
        (demand(9000), "longer than every stock piece"),
        ({"demand": [{"length_mm": 600, "count": 5}], "stock": [], "buy": []}, "longer than every"),
        (
            {"demand": PROBLEM["demand"], "stock": [{"length_mm": 2500, "count": 4}]},
            "too short for the pieces",
        ),
    ],
)
def test_cut_of_bad_file_is_refused_in_one_line(
    content: object, said: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    err = refusal(capsys, write(tmp_path, content), "--json")
    assert said in err


def test_cut_of_file_that_cannot_be_read_is_refused(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert "no file" in refusal(capsys, str(tmp_path / "missing.json"))
    assert "not a file" in refusal(capsys, str(tmp_path))
    assert "cannot be read" in refusal(capsys, "x" * 5_000)
    binary = tmp_path / "binary.json"
    binary.write_bytes(b"\xff\xfe\x00{")
    assert "UTF-8" in refusal(capsys, str(binary))
    large = tmp_path / "large.json"
    large.write_bytes(b" " * 16_000_001)
    assert "too large" in refusal(capsys, str(large))


@pytest.mark.parametrize(
    "arguments",
    [
        ["--time-limit", "nan"],
        ["--time-limit", "-1"],
        ["--time-limit", "1e9"],
        ["--time-limit", "99999"],
        ["--seed", "x"],
        ["--seed", "-1"],
        ["--no-such-option"],
    ],
)
def test_cut_with_bad_option_is_refused_in_one_line(
    arguments: list[str], tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    refusal(capsys, write(tmp_path, PROBLEM), *arguments)


def test_cut_without_a_file_is_refused(capsys: pytest.CaptureFixture[str]) -> None:
    assert "PROBLEM.json" in refusal(capsys)
