"""`manage.py test`: what it runs, where, and which status it ends with."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from planner.management.commands.test import combined, find_chromium, sort_arguments

ROOT = Path(__file__).parents[3]


@pytest.mark.parametrize(
    ("arguments", "expected"),
    [
        ([], ([], ["tests/unit", "tests/integration"], ["tests/browser"])),
        (["tests/"], ([], ["tests/unit", "tests/integration"], ["tests/browser"])),
        (
            ["-k", "fold", "-x"],
            (["-k", "fold", "-x"], ["tests/unit", "tests/integration"], ["tests/browser"]),
        ),
        (["tests/unit/planner", "-q"], (["-q"], ["tests/unit/planner"], [])),
        (
            ["tests/browser/test_signing_in.py::test_x", "tests/unit"],
            ([], ["tests/unit"], ["tests/browser/test_signing_in.py::test_x"]),
        ),
    ],
)
def test_arguments_go_to_the_right_run(arguments, expected):
    assert sort_arguments(arguments) == expected


@pytest.mark.parametrize(
    ("outcomes", "status"),
    [
        ([0, 0], 0),
        ([0, 5], 0),
        ([5, 0], 0),
        ([5, 5], 5),
        ([], 5),
        ([0, 1], 1),
        ([2, 1], 2),
        ([5, 1], 1),
    ],
)
def test_status_is_the_first_failure(outcomes, status):
    assert combined(outcomes) == status


def test_chromium_named_in_the_environment_is_taken(monkeypatch, tmp_path):
    mine = tmp_path / "my-chromium"
    mine.touch()
    monkeypatch.setenv("FLOSSWRIGHT_CHROMIUM", str(mine))
    assert find_chromium() == str(mine)
    monkeypatch.setenv("FLOSSWRIGHT_CHROMIUM", str(tmp_path / "gone"))
    assert find_chromium() is None


def run_without_chromium(tmp_path: Path, *words: str, **environment: str):
    kept = {key: value for key, value in os.environ.items() if key not in ("CI", "PYTEST_ADDOPTS")}
    return subprocess.run(
        [sys.executable, "manage.py", "test", *words],
        check=False,
        cwd=ROOT,
        env={**kept, "PATH": str(tmp_path), **environment},
        capture_output=True,
        text=True,
    )


def test_missing_chromium_is_said_and_fails_only_in_ci(tmp_path):
    # The test named here is any quick one.
    quick = "tests/unit/planner/test_test_command.py::test_status_is_the_first_failure"
    words = [quick, "tests/browser/test_signing_in.py", "-n0", "-p", "no:cacheprovider"]
    at_home = run_without_chromium(tmp_path, *words)
    assert at_home.returncode == 0, at_home.stdout + at_home.stderr
    assert "no Chromium was found" in at_home.stderr
    assert "They were not run." in at_home.stderr
    assert "8 passed" in at_home.stdout
    in_ci = run_without_chromium(tmp_path, *words, CI="true")
    assert in_ci.returncode == 1
    assert "This run must have it." in in_ci.stderr


def test_failing_test_fails_the_command(tmp_path):
    failing = tmp_path / "test_failing.py"
    failing.write_text("def test_failing():\n    assert False\n")
    result = run_without_chromium(tmp_path, str(failing), "-n0", "-p", "no:cacheprovider")
    assert result.returncode == 1
    assert "1 failed" in result.stdout
