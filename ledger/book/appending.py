"""Writing one entry after the last, with everything that follows from it, in the open transaction."""

from __future__ import annotations

import dataclasses
import sqlite3
import uuid
from datetime import datetime

from ledger.book.chain import canonical, digest_of_entry
from ledger.book.project import TablesInBook, needs_rebuild, project, rebuild
from ledger.book.reading import last_of, read_logged
from ledger.model.acts import Act
from ledger.model.body import body_of
from ledger.model.entry import Entry, Logged

_INSERT = (
    "INSERT INTO entry (seq, id, at, logged_at, by, kind, body, previous, digest) "
    "VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)"
)


def append_entry(
    connection: sqlite3.Connection,
    kind: str,
    act: Act,
    *,
    by: str,
    at: datetime,
    logged_at: datetime,
    rebuild_now: bool = True,
) -> Entry:
    """Write the act as the next entry and bring the look-up tables along.

    `rebuild_now=False` leaves a rebuild that the entry needs to a further entry of the same
    transaction, as the two halves of a correction do.

    Raises
        NotText: a text or number that canonical JSON cannot hold.
    """
    entry = _next_entry(
        connection, kind=kind, body=canonical(body_of(act)), by=by, at=at, logged_at=logged_at
    )
    connection.execute(_INSERT, dataclasses.astuple(entry))
    logged = Logged(seq=entry.seq, at=at, logged_at=logged_at, by=by, kind=kind, act=act)
    if not needs_rebuild(logged):
        project(logged, TablesInBook(connection))
    elif rebuild_now:
        rebuild(connection, read_logged(connection))
    return entry


def _next_entry(
    connection: sqlite3.Connection, *, kind: str, body: str, by: str, at: datetime, logged_at: datetime
) -> Entry:
    canonical(by)
    last_seq, previous = last_of(connection)
    entry = Entry(
        seq=last_seq + 1,
        id=str(uuid.uuid4()),
        at=at.isoformat(),
        logged_at=logged_at.isoformat(),
        by=by,
        kind=kind,
        body=body,
        previous=previous,
        digest="",
    )
    return dataclasses.replace(entry, digest=digest_of_entry(entry, previous))
