"""Writing one entry after the last, with everything that follows from it, in the open transaction."""

from __future__ import annotations

import sqlite3
import uuid
from datetime import datetime

from ledger.book.chain import canonical, digest_of
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
    last_seq, previous = last_of(connection)
    seq = last_seq + 1
    body = canonical(body_of(act))
    canonical(by)
    id_text, at_text, logged_text = str(uuid.uuid4()), _text_of(at), _text_of(logged_at)
    digest = digest_of(
        previous, seq=seq, id=id_text, at=at_text, logged_at=logged_text, by=by, kind=kind, body=body
    )
    entry = Entry(
        seq=seq,
        id=id_text,
        at=at_text,
        logged_at=logged_text,
        by=by,
        kind=kind,
        body=body,
        previous=previous,
        digest=digest,
    )
    connection.execute(_INSERT, (seq, id_text, at_text, logged_text, by, kind, body, previous, digest))
    logged = Logged(seq=seq, at=at, logged_at=logged_at, by=by, kind=kind, act=act)
    if not needs_rebuild(logged):
        project(logged, TablesInBook(connection))
    elif rebuild_now:
        rebuild(connection, read_logged(connection))
    return entry


def _text_of(moment: datetime) -> str:
    return moment.isoformat()
