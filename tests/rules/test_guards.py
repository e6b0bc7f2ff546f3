"""What is written stays, whoever opens the file: every guard, on plain connections, after a migration too."""

from __future__ import annotations

import contextlib
import sqlite3
from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

from ledger.book.appending import append_entry
from ledger.book.migrations import MIGRATIONS, Migration, migrate, run_steps
from ledger.book.opening import connect_new
from ledger.book.schema import GUARDS, objects_of
from ledger.model.acts import Note

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
ROW = "SELECT {seq}, {id}, at, logged_at, by, kind, body, {previous}, {digest} FROM entry WHERE seq = 1"
COLUMNS = "(seq, id, at, logged_at, by, kind, body, previous, digest)"


def _insert(how: str, seq: str, *, id: str = "'x'", previous: str = "digest", digest: str = "'d'") -> str:
    return f"{how} INTO entry {COLUMNS} " + ROW.format(seq=seq, id=id, previous=previous, digest=digest)


LAST = "(SELECT digest FROM entry ORDER BY seq DESC LIMIT 1)"
FORBIDDEN = [
    "UPDATE entry SET by = 'XX' WHERE seq = 1",
    "UPDATE OR REPLACE entry SET seq = 2 WHERE seq = 1",
    "UPDATE OR IGNORE entry SET body = '{}'",
    "DELETE FROM entry WHERE seq = 2",
    "DELETE FROM entry",
    _insert("INSERT OR REPLACE", "1"),
    _insert("REPLACE", "2"),
    _insert("INSERT OR IGNORE", "2"),
    _insert("INSERT", "2") + " ON CONFLICT (seq) DO UPDATE SET by = 'XX'",
    _insert("INSERT", "2") + " ON CONFLICT DO NOTHING",
    _insert("INSERT", "9", previous=LAST),
    _insert("INSERT", "NULL", previous=LAST),
    _insert("INSERT", "0", previous=LAST),
    _insert("INSERT", "-1", previous=LAST),
    _insert("INSERT", "3", previous="'not the last digest'"),
    _insert("INSERT OR REPLACE", "3", id="id", previous=LAST),
    _insert("INSERT OR REPLACE", "3", previous=LAST, digest="digest"),
    "INSERT OR REPLACE INTO content VALUES ('aa', x'00')",
    "INSERT INTO content VALUES ('aa', x'00') ON CONFLICT (sha256) DO UPDATE SET bytes = x'00'",
    "UPDATE content SET bytes = x'00'",
    "DELETE FROM content",
    "INSERT OR REPLACE INTO meta VALUES ('book', 'other')",
    "UPDATE meta SET value = 'other'",
    "DELETE FROM meta",
]


def _add_a_column(database: Any) -> None:
    # Rebuilds the table under another name, which drops its triggers with it.
    database["entry"].transform(types={"seq": int}, defaults={"kind": "note"})
    database["content"].transform(rename={"bytes": "content_bytes"})
    database["content"].transform(rename={"content_bytes": "bytes"})


@pytest.fixture(params=["before a migration", "after a migration"])
def connection(request: pytest.FixtureRequest, tmp_path: Path) -> Iterator[sqlite3.Connection]:
    """A plain connection, with nothing set, to a book of two entries."""
    book = tmp_path / "wing.book"
    with contextlib.closing(connect_new(book)) as making:
        run_steps(making, MIGRATIONS)
        making.execute("BEGIN IMMEDIATE")
        for text in ("one", "two"):
            append_entry(making, "note", Note(text=text), by="JK", at=NOON, logged_at=NOON)
        making.execute("INSERT INTO content VALUES ('aa', x'01')")
        making.execute("INSERT INTO meta VALUES ('book', 'b')")
        making.execute("COMMIT")
        if request.param == "after a migration":
            migrate(making, book, (*MIGRATIONS, Migration(format=2, does=_add_a_column)))
    with contextlib.closing(sqlite3.connect(book)) as plain:
        yield plain


def _everything(connection: sqlite3.Connection) -> list[object]:
    return [
        connection.execute(f"SELECT * FROM {table} ORDER BY 1").fetchall()  # noqa: S608
        for table in ("entry", "content", "meta")
    ]


@pytest.mark.parametrize("statement", FORBIDDEN)
def test_no_plain_connection_can_change_what_is_written(
    connection: sqlite3.Connection, statement: str
) -> None:
    before = _everything(connection)
    with pytest.raises(sqlite3.IntegrityError):
        connection.execute(statement)
    connection.commit()
    assert _everything(connection) == before


@pytest.mark.parametrize("statement", FORBIDDEN)
def test_nor_with_recursive_triggers_and_foreign_keys_set_otherwise(
    connection: sqlite3.Connection, statement: str
) -> None:
    connection.execute("PRAGMA recursive_triggers = ON")
    connection.execute("PRAGMA foreign_keys = OFF")
    with pytest.raises(sqlite3.IntegrityError):
        connection.execute(statement)


def test_all_guards_stand(connection: sqlite3.Connection) -> None:
    assert set(GUARDS) <= {found.name for found in objects_of(connection) if found.kind == "trigger"}


def test_the_next_entry_alone_can_be_inserted(connection: sqlite3.Connection) -> None:
    connection.execute(_insert("INSERT", "3", previous=LAST))
    assert connection.execute("SELECT count(*) FROM entry").fetchone() == (3,)
