"""The folder in which a workshop on one machine keeps its database, its key and its links."""

import os
import secrets
from pathlib import Path
from typing import TYPE_CHECKING

from planner.bootstrap import CannotRun, locked

if TYPE_CHECKING:
    from django.contrib.auth.models import User

OWNER = "owner"
OWNERS_GROUP = "owner"
SHORTEST_KEY = 50


def secret_key(folder: Path) -> str:
    """The key that signs cookies and links; made when it is first asked for."""
    make_folder(folder)
    path = folder / "secret-key"
    try:
        with open(path, "x", encoding="ascii", opener=_only_for_me) as file:
            file.write(secrets.token_urlsafe(64))
    except FileExistsError:
        pass
    except OSError as error:
        raise _cannot_write(folder, error) from error
    try:
        key = path.read_text(encoding="ascii").strip()
    except (OSError, UnicodeDecodeError):
        key = ""
    if len(key) < SHORTEST_KEY:
        raise CannotRun(
            f"The key in {path} cannot be read: delete that file, then start again; "
            "everyone has to sign in anew, nothing else is lost."
        )
    return key


def _only_for_me(path: str, flags: int) -> int:
    return os.open(path, flags, 0o600)


def make_folder(folder: Path) -> None:
    try:
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
    except (FileExistsError, NotADirectoryError) as error:
        raise CannotRun(f"{folder} is not a folder: choose another one with --data DIR.") from error
    except OSError as error:
        raise _cannot_write(folder, error) from error


def _cannot_write(folder: Path, error: OSError) -> CannotRun:
    return CannotRun(
        f"Flosswright cannot write in {folder} ({error.strerror}): "
        "choose a folder of your own with --data DIR."
    )


def prepare(folder: Path) -> "User":
    """Folder, key and database, ready to be used; gives back the owner."""
    from planner.workshop_database import prepare_database

    secret_key(folder)
    try:
        with locked(folder / "start.lock", "another start is preparing this workshop; waiting"):
            prepare_database()
            return _owner()
    except OSError as error:
        raise _cannot_write(folder, error) from error


def _owner() -> "User":
    from django.contrib.auth.models import Group, User

    owner, is_new = User.objects.get_or_create(username=OWNER)
    if is_new:
        owner.set_unusable_password()
        owner.save()
    group, _ = Group.objects.get_or_create(name=OWNERS_GROUP)
    owner.groups.add(group)
    return owner
