"""Brings a workshop's database to what this version of Flosswright expects."""

from django.core.management import call_command
from django.db import DatabaseError, connection
from django.db.migrations.executor import MigrationExecutor
from django.db.migrations.loader import MigrationLoader

from planner.bootstrap import CannotRun


def prepare_database() -> None:
    try:
        _refuse_damaged()
        executor = MigrationExecutor(connection)
        _refuse_newer(executor.loader)
        # `migrate` takes a third of a second even where there is nothing to do.
        if executor.migration_plan(executor.loader.graph.leaf_nodes()):
            call_command("migrate", verbosity=0, interactive=False)
    except DatabaseError as error:
        raise _refusal(error) from error


def _refuse_damaged() -> None:
    if connection.vendor != "sqlite":
        return
    with connection.cursor() as cursor:
        cursor.execute("PRAGMA quick_check(1)")
        (verdict,) = cursor.fetchone()
    if verdict != "ok":
        raise DatabaseError(verdict)


def _refuse_newer(loader: MigrationLoader) -> None:
    known = set(loader.disk_migrations) | {
        replaced for migration in loader.disk_migrations.values() for replaced in migration.replaces
    }
    applied = {key for key in loader.applied_migrations if key[0] in loader.migrated_apps}
    if applied - known:
        raise CannotRun(
            f"The workshop in {_place()} was last opened by a newer Flosswright: "
            "update this one, or choose another folder with --data DIR."
        )


def _refusal(error: DatabaseError) -> CannotRun:
    reason = " ".join(str(error).split())
    if "locked" in reason:
        return CannotRun(
            f"Another program holds the workshop in {_place()}: close it, then start again."
        )
    if "readonly" in reason or "unable to open" in reason:
        return CannotRun(
            f"Flosswright cannot write the workshop in {_place()} ({reason}): "
            "choose a folder of your own with --data DIR."
        )
    return CannotRun(
        f"The workshop in {_place()} cannot be opened ({reason}): put your last copy of it there, "
        "or choose another folder with --data DIR."
    )


def _place() -> str:
    return str(connection.settings_dict["NAME"])
