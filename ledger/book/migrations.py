"""From one format of the book to the next. Format 1 is made from nothing by the first step.

Only making and migrating a book loads sqlite_utils; entries are read and written without it.
"""

from __future__ import annotations

import sqlite3
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ledger.book.schema import APPLICATION_ID, PROJECTIONS, put_guards

_WHOLE_COLUMNS = {"seq", "by_seq", "running", "weighed", "scrapped"}
_MAY_BE_EMPTY = {"weighed", "scrapped", "fitted_into"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Migration:
    """One step, to `format`. `does` gets a sqlite_utils database inside an open transaction."""

    format: int
    does: Callable[[Any], None]


def make_format_1(database: Any) -> None:
    """Entries, stored plan files, cached geometry, what the book says of itself, and the projections."""
    database["entry"].create(
        {
            "seq": int,
            **dict.fromkeys(("id", "at", "logged_at", "by", "kind", "body", "previous", "digest"), str),
        },
        pk="seq",
        not_null={"id", "at", "logged_at", "by", "kind", "body", "previous", "digest"},
        strict=True,
    )
    database["entry"].create_index(["id"], unique=True)
    database["entry"].create_index(["digest"], unique=True)
    database["content"].create(
        {"sha256": str, "bytes": bytes}, pk="sha256", not_null={"sha256", "bytes"}, strict=True
    )
    database["geometry"].create(
        {"key": str, "value": bytes}, pk="key", not_null={"key", "value"}, strict=True
    )
    database["meta"].create({"key": str, "value": str}, pk="key", not_null={"key", "value"}, strict=True)
    for table, columns in PROJECTIONS.items():
        database[table].create(
            {column: int if column in _WHOLE_COLUMNS else str for column in columns},
            pk=("seq", "thing") if table == "mention" else columns[0],
            not_null=set(columns) - _MAY_BE_EMPTY,
            strict=True,
        )
    database["piece"].create_index(["part"])
    database["mention"].create_index(["thing"])
    database["minted"].create_index(["kind", "running"])
    database["minted"].create_index(["name"])


MIGRATIONS: tuple[Migration, ...] = (Migration(format=1, does=make_format_1),)


def run_steps(connection: sqlite3.Connection, migrations: Sequence[Migration]) -> None:
    """Run every step above the format of the database in one transaction, and put the guards back.

    A step that rebuilds a table drops its triggers with it; the guards stand again before the commit.
    """
    import sqlite_utils

    connection.execute("BEGIN IMMEDIATE")
    with connection:
        (now,) = connection.execute("PRAGMA user_version").fetchone()
        for migration in migrations:
            if migration.format > now:
                migration.does(sqlite_utils.Database(connection, recursive_triggers=False))
        put_guards(connection)
        connection.execute(f"PRAGMA application_id = {APPLICATION_ID}")
        connection.execute(f"PRAGMA user_version = {migrations[-1].format}")


def migrate(connection: sqlite3.Connection, book: Path, migrations: Sequence[Migration]) -> Path | None:
    """Bring an open book up to the last of `migrations`; the verified copy taken before it is returned.

    Nothing is done, and None returned, where the book is there already.
    """
    from ledger.book.copies import copy_book

    (now,) = connection.execute("PRAGMA user_version").fetchone()
    if now >= migrations[-1].format:
        return None
    kept = _free_name(book, now)
    copy_book(connection, kept)
    run_steps(connection, migrations)
    return kept


def _free_name(book: Path, format_now: int) -> Path:
    stem = f"{book.stem}.format-{format_now}"
    candidate = book.with_name(f"{stem}{book.suffix}")
    running = 1
    while candidate.exists():
        running += 1
        candidate = book.with_name(f"{stem}.{running}{book.suffix}")
    return candidate
