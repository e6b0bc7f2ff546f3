"""The tables of the book and the guards that keep what is written."""

from __future__ import annotations

import sqlite3
from dataclasses import dataclass
from functools import lru_cache

APPLICATION_ID = int.from_bytes(b"WgLg", "big")
FORMAT = 1

# Rebuilt from the entries at any time; the key of each row comes first.
PROJECTIONS: dict[str, tuple[str, ...]] = {
    "withdrawn": ("seq", "by_seq"),
    "minted": ("key", "kind", "number", "name", "seq", "running"),
    "thing": ("key", "kind", "number", "name", "seq"),
    "piece": ("name", "number", "part", "running", "seq", "weighed", "fitted_into", "scrapped"),
    "held": ("what", "seq"),
    "gone": ("what", "seq"),
    "iteration": ("seq", "name"),
    "mention": ("seq", "thing"),
}

# REPLACE skips the delete trigger on a plain connection, so all that could replace is refused at insert.
GUARDS: dict[str, str] = {
    "entry_is_next": """
        CREATE TRIGGER entry_is_next BEFORE INSERT ON entry
        WHEN NEW.seq IS NOT (SELECT coalesce(max(seq), 0) + 1 FROM entry)
          OR NEW.previous IS NOT coalesce(
               (SELECT digest FROM entry ORDER BY seq DESC LIMIT 1),
               '0000000000000000000000000000000000000000000000000000000000000000')
          OR EXISTS (SELECT 1 FROM entry WHERE id = NEW.id)
          OR EXISTS (SELECT 1 FROM entry WHERE digest = NEW.digest)
        BEGIN SELECT RAISE(ABORT, 'an entry can only follow the last one'); END""",
    "entry_stays": """
        CREATE TRIGGER entry_stays BEFORE DELETE ON entry
        BEGIN SELECT RAISE(ABORT, 'entries are never deleted; withdraw it with a further entry'); END""",
    "entry_unchanged": """
        CREATE TRIGGER entry_unchanged BEFORE UPDATE ON entry
        BEGIN SELECT RAISE(ABORT, 'entries are never changed; correct it with a further entry'); END""",
    "content_is_new": """
        CREATE TRIGGER content_is_new BEFORE INSERT ON content
        WHEN EXISTS (SELECT 1 FROM content WHERE sha256 = NEW.sha256)
        BEGIN SELECT RAISE(ABORT, 'a stored plan file is never replaced'); END""",
    "content_stays": """
        CREATE TRIGGER content_stays BEFORE DELETE ON content
        BEGIN SELECT RAISE(ABORT, 'a stored plan file is never deleted'); END""",
    "content_unchanged": """
        CREATE TRIGGER content_unchanged BEFORE UPDATE ON content
        BEGIN SELECT RAISE(ABORT, 'a stored plan file is never changed'); END""",
    "meta_is_new": """
        CREATE TRIGGER meta_is_new BEFORE INSERT ON meta
        WHEN EXISTS (SELECT 1 FROM meta WHERE key = NEW.key)
        BEGIN SELECT RAISE(ABORT, 'what the book says of itself is never replaced'); END""",
    "meta_stays": """
        CREATE TRIGGER meta_stays BEFORE DELETE ON meta
        BEGIN SELECT RAISE(ABORT, 'what the book says of itself is never deleted'); END""",
    "meta_unchanged": """
        CREATE TRIGGER meta_unchanged BEFORE UPDATE ON meta
        BEGIN SELECT RAISE(ABORT, 'what the book says of itself is never changed'); END""",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class SchemaObject:
    """A table, index or guard as SQLite lists it."""

    kind: str
    name: str
    sql: str


def put_guards(connection: sqlite3.Connection) -> None:
    """Put every guard that is not there."""
    there = {found.name for found in objects_of(connection)}
    for name, sql in GUARDS.items():
        if name not in there:
            connection.execute(sql)


def objects_of(connection: sqlite3.Connection) -> tuple[SchemaObject, ...]:
    """What stands in a database, less what SQLite keeps for itself."""
    rows = connection.execute(
        "SELECT type, name, sql FROM sqlite_master WHERE name NOT LIKE 'sqlite\\_%' ESCAPE '\\' ORDER BY name"
    )
    return tuple(SchemaObject(kind=kind, name=name, sql=" ".join(sql.split())) for kind, name, sql in rows)


@lru_cache(maxsize=1)
def expected_objects() -> tuple[SchemaObject, ...]:
    """What should stand in a book of this format: the same steps, run in memory."""
    from ledger.book.migrations import MIGRATIONS, run_steps

    connection = sqlite3.connect(":memory:", isolation_level=None)
    try:
        run_steps(connection, MIGRATIONS)
        return objects_of(connection)
    finally:
        connection.close()
