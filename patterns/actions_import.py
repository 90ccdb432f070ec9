"""Bringing pattern files into the library: all that was decided, or nothing."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from django.db import transaction

from patterns.actions import LibraryError, add_pattern, change_pattern
from patterns.incoming import Doing, IncomingFile, kept_files, key_of, put_right
from patterns.knots import PatternError, clean_name
from patterns.models import Pattern, PatternImport
from patterns.pattern_file import read_pattern, write_pattern
from patterns.pattern_zip import FoundFile

GONE = "These files were added or put away in another window."


@dataclass(frozen=True)
class Decision:
    """What becomes of one file; `name` is its other name, `version` that of yours when it was shown."""

    doing: Doing
    name: str = ""
    version: int | None = None


@dataclass
class Taken:
    """How many files became what; `newest` is the pattern that was added or changed last."""

    added: int = 0
    replaced: int = 0
    left_out: int = 0
    waiting: int = 0
    newest: Pattern | None = None


class ImportRefused(LibraryError):
    """Nothing was taken; `problems` says why, by the number of the file."""

    def __init__(self, problems: Mapping[int, str]) -> None:
        super().__init__("Nothing is added yet. Put right what is marked below.")
        self.problems = problems


def keep_import(*, found: Iterable[FoundFile], source_name: str, by: Any) -> PatternImport:
    return PatternImport.objects.create(
        created_by=by, source_name=source_name[:200], files=kept_files(found)
    )


@transaction.atomic
def put_import_right(*, waiting: PatternImport, texts: Mapping[int, str]) -> PatternImport:
    """Read those texts again that were corrected."""
    locked = _locked(waiting)
    locked.files = put_right(locked.files, texts)
    locked.save(update_fields=["files"])
    return locked


def _locked(waiting: PatternImport) -> PatternImport:
    locked = PatternImport.objects.select_for_update().filter(pk=waiting.pk).first()
    if locked is None:
        raise LibraryError(GONE)
    return locked


@transaction.atomic
def take_import(
    *, waiting: PatternImport, decisions: Mapping[int, Decision], by: Any = None
) -> Taken:
    """Do what was decided for each file, in one transaction; what was not decided waits on.

    Raises ImportRefused, and changes nothing, where any of it cannot be done.
    """
    locked = _locked(waiting)
    files = dict(locked.files)
    yours = {name.lower(): pk for pk, name in Pattern.objects.values_list("pk", "name")}
    problems: dict[int, str] = {}
    taken = Taken()
    for values in locked.files.values():
        file = IncomingFile(**values)
        decision = decisions.get(file.number, Decision("later"))
        try:
            _take(file, decision, yours.get(file.name.lower()), taken, by)
        except (LibraryError, PatternError) as error:
            problems[file.number] = str(error)
        if decision.doing != "later":
            del files[key_of(file.number)]
    if problems:
        raise ImportRefused(problems)
    _keep_rest(locked, files)
    taken.waiting = len(files)
    return taken


def _take(file: IncomingFile, decision: Decision, yours: int | None, taken: Taken, by: Any) -> None:
    if decision.doing == "later":
        return
    if decision.doing == "leave":
        taken.left_out += 1
        return
    if file.problem:
        raise LibraryError("It holds no pattern that could be added. Put its text right first.")
    if decision.doing == "replace":
        taken.newest = _replace(file, decision, yours, by)
        taken.replaced += 1
    else:
        renamed = decision.doing == "rename"
        text = _renamed(file.text, decision.name) if renamed else file.text
        taken.newest = add_pattern(text=text, by=by)
        taken.added += 1


def _replace(file: IncomingFile, decision: Decision, yours: int | None, by: Any) -> Pattern:
    if yours is None:
        raise LibraryError(f"You have no pattern called {file.name} any more. Add this one.")
    return change_pattern(
        pattern=Pattern.objects.get(pk=yours),
        text=file.text,
        by=by,
        expected_version=decision.version,
    )


def _renamed(text: str, name: str) -> str:
    return write_pattern(replace(read_pattern(text), name=clean_name(name)))


def _keep_rest(waiting: PatternImport, files: dict[str, Any]) -> None:
    if files:
        waiting.files = files
        waiting.save(update_fields=["files"])
    else:
        waiting.delete()
