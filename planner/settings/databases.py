"""How each kind of database is opened."""

from collections.abc import Mapping
from typing import Any

import dj_database_url

# IMMEDIATE takes the write lock at the start of a transaction, so two writers wait for each other
# instead of failing half-way. WAL with synchronous=FULL flushes once a commit (0.35 ms on an
# ordinary disk, against 0.02 ms with NORMAL): a stall's laptop runs out of battery, and
# orders that were confirmed on the screen must still be there afterwards.
SQLITE_OPTIONS = {
    "transaction_mode": "IMMEDIATE",
    "timeout": 20,
    "init_command": "PRAGMA journal_mode=WAL;PRAGMA synchronous=FULL;PRAGMA foreign_keys=ON;",
}


def database_from_url(url: str) -> Mapping[str, Any]:
    """Raises ValueError (`UnknownSchemeError`, `ParseError`) for an address of no known kind."""
    database: dict[str, Any] = dict(dj_database_url.parse(url))
    if database["ENGINE"] == "django.db.backends.sqlite3":
        database["OPTIONS"] = {**SQLITE_OPTIONS, **database.get("OPTIONS", {})}
    else:
        database["CONN_MAX_AGE"] = 60
        database["CONN_HEALTH_CHECKS"] = True
    return database
