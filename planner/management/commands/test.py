"""`manage.py test`: the whole suite, with everything that it needs set up."""

import os
import shutil
import subprocess
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandParser

BROWSER_TESTS = "tests/browser"
OTHER_TESTS = ["tests/unit", "tests/integration"]
CHROMIUM_NAMES = ["chromium", "chromium-browser", "google-chrome", "google-chrome-stable"]
OK, FAILED, NO_TESTS = 0, 1, 5


def find_chromium() -> str | None:
    named = os.environ.get("FLOSSWRIGHT_CHROMIUM")
    if named:
        return named if Path(named).is_file() else None
    return next((path for name in CHROMIUM_NAMES if (path := shutil.which(name))), None)


def must_have_chromium() -> bool:
    return os.environ.get("CI", "").lower() in ("1", "true")


class Command(BaseCommand):
    help = "Run the tests; everything after `test` goes to pytest."
    requires_system_checks: list[str] = []

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("pytest_arguments", nargs="*", help="paths and options for pytest")

    def run_from_argv(self, argv: list[str]) -> None:
        # Django's parser would take pytest's options for its own.
        if "--help" in argv[2:] or "-h" in argv[2:]:
            super().run_from_argv(argv)
        else:
            sys.exit(run_tests(argv[2:]))

    def handle(self, *, pytest_arguments: Sequence[str], **options: Any) -> None:
        sys.exit(run_tests(pytest_arguments))


def run_tests(arguments: Sequence[str]) -> int:
    options, others, browser = sort_arguments(arguments)
    outcomes = []
    if others:
        processes = ["-n", "auto", "--maxprocesses", "8", "--dist", "worksteal"]
        outcomes.append(_pytest([*processes, *others, *options]))
    if browser:
        outcomes.append(_run_browser_tests([*browser, *options]))
    return combined(outcomes)


def sort_arguments(arguments: Sequence[str]) -> tuple[list[str], list[str], list[str]]:
    """Options, paths outside tests/browser, paths inside it; without any path, all tests."""
    paths = [word for word in arguments if _is_path(word)]
    options = [word for word in arguments if word not in paths]
    if not paths:
        present = [path for path in OTHER_TESTS if Path(settings.BASE_DIR, path).exists()]
        return options, present, [BROWSER_TESTS]
    if any(path.rstrip("/") == "tests" for path in paths):
        return options, OTHER_TESTS, [BROWSER_TESTS]
    browser = [path for path in paths if path.removeprefix("./").startswith(BROWSER_TESTS)]
    return options, [path for path in paths if path not in browser], browser


def _is_path(word: str) -> bool:
    path = word.split("::")[0]
    return not word.startswith("-") and Path(settings.BASE_DIR, path).exists()


def _run_browser_tests(arguments: Sequence[str]) -> int:
    if find_chromium() is None:
        print(
            "Browser tests: no Chromium was found (looked for "
            f"{', '.join(CHROMIUM_NAMES)} and in FLOSSWRIGHT_CHROMIUM).",
            "This run must have it." if must_have_chromium() else "They were not run.",
            file=sys.stderr,
        )
        return FAILED if must_have_chromium() else NO_TESTS
    # Playwright keeps an event loop in the test's thread, where Django then refuses queries.
    # Two browsers at a time: more only make each other slow.
    processes = ["-n", "auto", "--maxprocesses", "2"]
    return _pytest([*processes, *arguments], DJANGO_ALLOW_ASYNC_UNSAFE="true")


def _pytest(arguments: Sequence[str], **environment: str) -> int:
    sys.stdout.flush()
    return subprocess.call(
        [sys.executable, "-m", "pytest", *arguments],
        cwd=settings.BASE_DIR,
        env={**os.environ, "DJANGO_SETTINGS_MODULE": "planner.settings.test", **environment},
    )


def combined(outcomes: Sequence[int]) -> int:
    """The first real failure; no tests at all is one only where no run had any."""
    failures = [outcome for outcome in outcomes if outcome not in (OK, NO_TESTS)]
    if failures:
        return failures[0]
    return OK if OK in outcomes else NO_TESTS
