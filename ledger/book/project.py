"""What the entries say, as tables to look things up in. Never the truth itself: a replay gives the same.

One fold writes both: into the book, entry by entry, in the entry's own transaction; and into plain
dictionaries, for a rebuild of the whole and for the comparison that `check` makes.
"""

from __future__ import annotations

import sqlite3
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Any, Protocol

from ledger.book.mint import running_of
from ledger.book.schema import PROJECTIONS
from ledger.model.acts import Act, Adopt, Fit, Hold, Release, Scrap, Weigh, Withdraw
from ledger.model.declare import KINDS, Takes
from ledger.model.entry import Logged
from ledger.model.gather import pieces_begun_by, split_piece_name, what_counts
from ledger.model.things import Minted, ThingKind

_Row = tuple[Any, ...]
_Key = Any
_PIECE = PROJECTIONS["piece"]


class Tables(Protocol):
    """Rows by table and key, wherever they are kept."""

    def put(self, table: str, row: _Row) -> None:
        """Write a row over any with the same key."""

    def drop(self, table: str, key: _Key) -> None:
        """Take a row away, if it is there."""

    def get(self, table: str, key: _Key) -> _Row | None:
        """The row with this key."""

    def tag_of(self, piece: str) -> str | None:
        """The last number given to a piece of this name."""


@dataclass(slots=True)
class TablesInMemory:
    """The tables as dictionaries by key."""

    rows: dict[str, dict[_Key, _Row]] = field(default_factory=lambda: {name: {} for name in PROJECTIONS})
    tags: dict[str, str] = field(default_factory=dict)

    def put(self, table: str, row: _Row) -> None:
        """Write a row over any with the same key."""
        self.rows[table][row[:2] if table == "mention" else row[0]] = row
        if table == "minted" and row[1] == ThingKind.PIECE.value:
            self.tags[row[3]] = row[2]

    def drop(self, table: str, key: _Key) -> None:
        """Take a row away, if it is there."""
        self.rows[table].pop(key, None)

    def get(self, table: str, key: _Key) -> _Row | None:
        """The row with this key."""
        return self.rows[table].get(key)

    def tag_of(self, piece: str) -> str | None:
        """The last number given to a piece of this name."""
        return self.tags.get(piece)


@dataclass(slots=True)
class TablesInBook:
    """The tables in an open transaction of a book."""

    connection: sqlite3.Connection

    def put(self, table: str, row: _Row) -> None:
        """Write a row over any with the same key."""
        self.connection.execute(_INSERT[table], row)

    def drop(self, table: str, key: _Key) -> None:
        """Take a row away, if it is there."""
        self.connection.execute(f"DELETE FROM {table} WHERE {_key_of(table)} = ?", (key,))  # noqa: S608

    def get(self, table: str, key: _Key) -> _Row | None:
        """The row with this key."""
        query = f"SELECT * FROM {table} WHERE {_key_of(table)} = ?"  # noqa: S608
        row: _Row | None = self.connection.execute(query, (key,)).fetchone()
        return row

    def tag_of(self, piece: str) -> str | None:
        """The last number given to a piece of this name."""
        row = self.connection.execute(
            "SELECT number FROM minted WHERE name = ? AND kind = ? ORDER BY seq DESC LIMIT 1",
            (piece, ThingKind.PIECE.value),
        ).fetchone()
        return None if row is None else row[0]


def key_of(text: str) -> str:
    """What a number or name is found by: its text in upper case."""
    return text.strip().upper()


def project(entry: Logged, tables: Tables) -> None:
    """Write what one further entry says. A withdrawal or correction needs `rebuild` instead."""
    _register(entry, tables)
    _count(entry, tables)


def needs_rebuild(entry: Logged) -> bool:
    """Whether the entry changes what earlier ones said."""
    return isinstance(entry.act, Withdraw) or entry.act.corrects is not None


def replay(logged: Iterable[Logged]) -> TablesInMemory:
    """The tables as all these entries make them, in the order they were logged."""
    tables = TablesInMemory()
    everything = tuple(logged)
    for entry in everything:
        _register(entry, tables)
    for entry in what_counts(everything):
        _count(entry, tables)
    return tables


def rebuild(connection: sqlite3.Connection, logged: Iterable[Logged]) -> None:
    """Write all tables anew, inside the open transaction."""
    tables = replay(logged)
    for table in PROJECTIONS:
        connection.execute(f"DELETE FROM {table}")  # noqa: S608
        connection.executemany(_INSERT[table], tables.rows[table].values())


def stored_tables(connection: sqlite3.Connection) -> dict[str, set[_Row]]:
    """The tables as they stand in the book."""
    return {table: set(connection.execute(f"SELECT * FROM {table}")) for table in PROJECTIONS}  # noqa: S608


def names_in(kind: str, act: Act) -> tuple[str, ...]:
    """Every number and name that stands in the fields of an act, once each."""
    found: dict[str, None] = {}
    for declared in KINDS[kind].fields:
        if declared.takes not in (Takes.NAME, Takes.SHARE):
            continue
        value = getattr(act, declared.key)
        for item in value if isinstance(value, tuple) else (value,):
            if isinstance(item, str):
                found[item] = None
            elif item is not None:
                found[item.what] = None
    return tuple(found)


def _register(entry: Logged, tables: Tables) -> None:
    if isinstance(entry.act, Withdraw):
        tables.put("withdrawn", (entry.act.seq, entry.seq))
    for minted in entry.act.minted:
        running = running_of(minted.number) or 0
        tables.put("minted", (*_thing_row(minted, entry.seq), running))


def _count(entry: Logged, tables: Tables) -> None:
    act = entry.act
    for minted in act.minted:
        tables.put("thing", _thing_row(minted, entry.seq))
    for name in pieces_begun_by(entry.kind, act):
        _begin(name, entry, tables)
    for name in names_in(entry.kind, act):
        tables.put("mention", (entry.seq, name))
    match act:
        case Weigh() if act.state == "finished":
            _set_piece(act.what, tables, weighed=1)
        case Fit():
            _set_piece(act.piece, tables, fitted_into=act.into)
        case Scrap():
            tables.put("gone", (act.what, entry.seq))
            _set_piece(act.what, tables, scrapped=1)
        case Hold():
            tables.put("held", (act.what, entry.seq))
        case Release():
            tables.drop("held", act.what)
        case Adopt():
            tables.put("iteration", (entry.seq, act.plan))
        case _:
            pass


def _thing_row(minted: Minted, seq: int) -> _Row:
    return (key_of(minted.number), minted.kind.value, minted.number, minted.name, seq)


def _begin(name: str, entry: Logged, tables: Tables) -> None:
    if tables.get("piece", name) is not None:
        return
    number = tables.tag_of(name)
    split = split_piece_name(name)
    if number is None or split is None:
        return
    tables.put("piece", (name, number, split[0], split[1], entry.seq, None, None, None))
    tables.put("thing", (key_of(number), ThingKind.PIECE.value, number, name, entry.seq))


def _set_piece(name: str, tables: Tables, **changed: object) -> None:
    row = tables.get("piece", name)
    if row is not None:
        kept = dict(zip(_PIECE, row, strict=True))
        tables.put("piece", tuple({**kept, **changed}.values()))


def _key_of(table: str) -> str:
    return PROJECTIONS[table][0]


_INSERT = {
    table: f"INSERT OR REPLACE INTO {table} ({', '.join(columns)}) VALUES ({', '.join('?' * len(columns))})"  # noqa: S608
    for table, columns in PROJECTIONS.items()
}
