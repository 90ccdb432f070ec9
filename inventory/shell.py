"""What all commands for scripts share: errors in one line, and files read within a limit."""

from pathlib import Path
from typing import Any, NoReturn

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.db import DatabaseError


class Error(CommandError):
    """Django prints the class name before the message, so this is its first word."""

    def __init__(self, message: str) -> None:
        super().__init__(" ".join(message.split()), returncode=2)


class OneLineCommand(BaseCommand):
    """Whatever is wrong, arguments included, is one line on standard error and status 2."""

    requires_system_checks: list[str] = []

    def create_parser(self, prog_name: str, subcommand: str, **kwargs: Any) -> CommandParser:
        parser = super().create_parser(prog_name, subcommand, **kwargs)
        parser.error = _refuse_arguments  # type: ignore[method-assign]
        return parser

    def run_from_argv(self, argv: list[str]) -> None:
        try:
            super().run_from_argv(argv)
        except Error as error:  # from the parser, before Django listens
            self.stderr.write(f"Error: {error}")
            raise SystemExit(error.returncode) from None

    def execute(self, *args: Any, **options: Any) -> str | None:
        try:
            return super().execute(*args, **options)
        except DatabaseError:
            raise Error(
                "The workshop's database cannot be read. Open the workshop once with start, "
                "or name its folder with --data."
            ) from None


def _refuse_arguments(message: str) -> NoReturn:
    raise Error(f"{message[:300]}. See --help.")


def read_file(path: Path, most_bytes: int) -> bytes:
    """Read a file, one byte beyond the limit at most, so that a reader can refuse what is longer.

    Raises
    ------
    Error
        When there is no such file, or it cannot be read.
    """
    shown = repr(str(path)[:200])
    try:
        if not path.exists():
            raise Error(f"There is no file {shown}.")
        if not path.is_file():
            raise Error(f"{shown} is not a file.")
        with path.open("rb") as file:
            return file.read(most_bytes + 1)
    except (OSError, ValueError) as error:
        raise Error(f"{shown} cannot be read.") from error
