"""Reading a book: entries one after another, stored plan files, cached geometry."""

from __future__ import annotations

import contextlib
import gc
import hashlib
import json
import sqlite3
from collections.abc import Iterator, Mapping
from datetime import datetime
from pathlib import Path
from typing import Any

from ledger.book.chain import digest_of
from ledger.book.opening import open_for_reading
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Adopt
from ledger.model.body import UnreadableBody, act_from_body
from ledger.model.entry import FIRST_PREVIOUS, Entry, Logged

NOT_READABLE = (UnreadableBody, ValueError, RecursionError)

_decode = json.JSONDecoder().raw_decode
_COLUMNS = "seq, id, at, logged_at, by, kind, body, previous, digest"


def read_entries(connection: sqlite3.Connection, *, after: int = 0) -> Iterator[Entry]:
    """The rows of the table `entry` above a seq, in order, one at a time."""
    rows = connection.execute(f"SELECT {_COLUMNS} FROM entry WHERE seq > ? ORDER BY seq", (after,))  # noqa: S608
    for seq, *texts in rows:
        id_text, at, logged_at, by, kind, body, previous, digest = _all_texts(texts)
        yield Entry(
            seq=seq,
            id=id_text,
            at=at,
            logged_at=logged_at,
            by=by,
            kind=kind,
            body=body,
            previous=previous,
            digest=digest,
        )


def read_logged(connection: sqlite3.Connection, *, after: int = 0) -> Iterator[Logged]:
    """The same with each act read from its body; an entry that cannot be read is left to `check` to name."""
    for entry in read_entries(connection, after=after):
        try:
            yield logged_of(entry)
        except NOT_READABLE:
            continue


def read_on(
    connection: sqlite3.Connection, *, after: int, digest: str
) -> tuple[list[Logged], Finding | None]:
    """The entries after one with this digest, and the first that does not follow from those before it.

    Digests are recomputed from the stored text: a few microseconds an entry, where `check` also proves
    that the text is canonical.
    """
    with _no_collecting():
        return _read_on(connection, after, digest)


def _read_on(connection: sqlite3.Connection, after: int, digest: str) -> tuple[list[Logged], Finding | None]:
    logged: list[Logged] = []
    trouble: Finding | None = None
    seq, previous = after, digest
    moment = datetime.fromisoformat
    rows = connection.execute(f"SELECT {_COLUMNS} FROM entry WHERE seq > ? ORDER BY seq", (after,))  # noqa: S608
    for this, *texts in rows:
        id_text, at, logged_at, by, kind, body, before, own = _all_texts(texts)
        if trouble is None:
            wanted = digest_of(
                previous, seq=this, id=id_text, at=at, logged_at=logged_at, by=by, kind=kind, body=body
            )
            if this != seq + 1 or before != previous or wanted != own:
                trouble = _broken_at(this, "does not follow from the entries before it")
        seq, previous = this, own
        try:
            act = act_from_body(kind, _whole_json(body))
            logged.append(
                Logged(seq=this, at=moment(at), logged_at=moment(logged_at), by=by, kind=kind, act=act)
            )
        except NOT_READABLE:
            trouble = trouble or _broken_at(this, "cannot be read")
    return logged, trouble


def _all_texts(columns: list[Any]) -> list[str]:
    # A damaged page may hold anything in any column; what is no text fits no digest and reads as no entry.
    if all(type(column) is str for column in columns):
        return columns
    return [column if isinstance(column, str) else "" for column in columns]


@contextlib.contextmanager
def _no_collecting() -> Iterator[None]:
    # A hundred thousand records that all stay make the collector walk them again and again for nothing.
    collecting = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if collecting:
            gc.enable()


def _broken_at(seq: int, what: str) -> Finding:
    return Finding(
        code="chain-broken",
        severity=Severity.STOP,
        where=Where(entry=seq),
        what=f"this entry {what}",
        do="run check, then compare with a backup",
    )


def logged_of(entry: Entry) -> Logged:
    """One row with its act read.

    Raises
        UnreadableBody: a body that is not that of its kind.
    """
    return Logged(
        seq=entry.seq,
        at=datetime.fromisoformat(entry.at),
        logged_at=datetime.fromisoformat(entry.logged_at),
        by=entry.by,
        kind=entry.kind,
        act=act_from_body(entry.kind, json.loads(entry.body)),
    )


def _whole_json(text: str) -> Any:
    # A body has no white space around it; the general reader looks for some twice.
    value, end = _decode(text)
    if end != len(text):
        raise ValueError("more than one value")
    return value


def entry_at(connection: sqlite3.Connection, seq: int) -> Entry | None:
    """The row of that seq."""
    return next((entry for entry in read_entries(connection, after=seq - 1) if entry.seq == seq), None)


def last_of(connection: sqlite3.Connection) -> tuple[int, str]:
    """Seq and digest of the last entry; 0 and 64 zeros before the first."""
    row = connection.execute("SELECT seq, digest FROM entry ORDER BY seq DESC LIMIT 1").fetchone()
    return (0, FIRST_PREVIOUS) if row is None else (row[0], *_all_texts([row[1]]))


def files_of(connection: sqlite3.Connection, adopt: Adopt) -> dict[str, bytes]:
    """The files of an adopted plan, from the store."""
    found = {}
    for file in adopt.files:
        row = connection.execute("SELECT bytes FROM content WHERE sha256 = ?", (file.sha256,)).fetchone()
        if row is not None and isinstance(row[0], bytes):
            found[file.path] = row[0]
    return found


def store_files(connection: sqlite3.Connection, files: Mapping[str, bytes]) -> None:
    """Keep every file by its content; what is there already stays."""
    for content in files.values():
        sha256 = hashlib.sha256(content).hexdigest()
        if connection.execute("SELECT 1 FROM content WHERE sha256 = ?", (sha256,)).fetchone() is None:
            connection.execute("INSERT INTO content (sha256, bytes) VALUES (?, ?)", (sha256, content))


class StoredFiles(Mapping[str, bytes]):
    """The files of a stored plan, each read from the book when it is asked for."""

    def __init__(self, book: Path, adopt: Adopt) -> None:
        self._book = book
        self._sha256 = {file.path: file.sha256 for file in adopt.files}

    def __getitem__(self, path: str) -> bytes:
        sha256 = self._sha256[path]
        with open_for_reading(self._book) as connection:
            row = connection.execute("SELECT bytes FROM content WHERE sha256 = ?", (sha256,)).fetchone()
        if row is None or not isinstance(row[0], bytes):
            raise KeyError(path)
        return row[0]

    def __iter__(self) -> Iterator[str]:
        return iter(self._sha256)

    def __len__(self) -> int:
        return len(self._sha256)


class StoredGeometry:
    """Computed geometry under the hash of what it came from, kept in the book.

    What is put while the book cannot be written is only held in memory: a cache may be lost.
    """

    def __init__(self, book: Path | None) -> None:
        self._book = book
        self._held: dict[str, bytes] = {}
        self._new: dict[str, bytes] = {}

    def get(self, key: str) -> bytes | None:
        """What is kept under the key."""
        if key not in self._held and self._book is not None:
            with open_for_reading(self._book) as connection:
                row = connection.execute("SELECT value FROM geometry WHERE key = ?", (key,)).fetchone()
            if row is None:
                return None
            self._held[key] = row[0]
        return self._held.get(key)

    def put(self, key: str, content: bytes) -> None:
        """Keep this under the key; `write` brings it into the book."""
        self._held[key] = content
        self._new[key] = content

    def load(self, connection: sqlite3.Connection, key: str) -> None:
        """Hold what is kept under the key, read through an open connection."""
        row = connection.execute("SELECT value FROM geometry WHERE key = ?", (key,)).fetchone()
        if row is not None:
            self._held[key] = row[0]

    def write(self, connection: sqlite3.Connection) -> None:
        """Write what is new, inside the caller's transaction."""
        connection.executemany(
            "INSERT OR REPLACE INTO geometry (key, value) VALUES (?, ?)", self._new.items()
        )
        self._new.clear()

    @property
    def has_new(self) -> bool:
        """Whether something was put that the book does not have yet."""
        return bool(self._new)
