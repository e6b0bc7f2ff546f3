"""Whether a book is still what was written: its guards, its chain, its look-up tables, its file."""

from __future__ import annotations

import contextlib
import hashlib
import json
import sqlite3
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from ledger.book.chain import NotText, canonical, digest_of_entry, short_code
from ledger.book.project import replay, stored_tables
from ledger.book.reading import NOT_READABLE, last_of, logged_of, read_entries
from ledger.book.schema import GUARDS, SchemaObject, expected_objects, objects_of
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Adopt
from ledger.model.entry import FIRST_PREVIOUS, Entry, Logged
from ledger.model.progress import Progress, unwatched

_RESTORE = "compare with a backup, and restore it if the backup is whole"


@dataclass(frozen=True, slots=True, kw_only=True)
class BookState:
    """What a look through the whole book found. `logged` holds what could be read."""

    entries: int
    last_digest: str
    chain_ok: bool
    replay_ok: bool
    logged: tuple[Logged, ...]
    findings: tuple[Finding, ...]


def look_through(connection: sqlite3.Connection, progress: Progress = unwatched) -> BookState:
    """Recompute every digest, replay every entry, and let SQLite check its file."""
    schema = tuple(_schema_findings(connection))
    missing = {finding.where.thing for finding in schema if finding.code == "table-missing"}
    if "entry" in missing:
        return BookState(
            entries=0,
            last_digest=FIRST_PREVIOUS,
            chain_ok=False,
            replay_ok=False,
            logged=(),
            findings=schema,
        )
    walk = _Walk()
    many, _ = last_of(connection)
    for entry in read_entries(connection):
        progress("entries", min(walk.count, many), many)
        walk.take(entry)
    replayed = tuple(_replay_findings(connection, walk, missing))
    contents = () if "content" in missing else tuple(plan_files_lost(connection, walk.logged))
    file = tuple(_file_findings(connection))
    seq, last_digest = last_of(connection)
    return BookState(
        entries=walk.count,
        last_digest=last_digest if seq else FIRST_PREVIOUS,
        chain_ok=not walk.findings,
        replay_ok=not replayed,
        logged=tuple(walk.logged),
        findings=(*schema, *walk.findings, *contents, *replayed, *file),
    )


def find_code(connection: sqlite3.Connection, code: str) -> int | None:
    """The seq of the entry whose digest is, or is shortened to, this code."""
    for seq, digest in connection.execute("SELECT seq, digest FROM entry ORDER BY seq DESC"):
        if code in (digest, short_code(digest)):
            return int(seq)
    return None


class _Walk:
    """One pass over the rows in order. Only the first that does not fit is named: the rest follow from it."""

    def __init__(self) -> None:
        self.count = 0
        self.logged: list[Logged] = []
        self.findings: list[Finding] = []
        self.unreadable: list[int] = []
        self._seq = 0
        self._previous = FIRST_PREVIOUS

    def take(self, entry: Entry) -> None:
        self.count += 1
        if not self.findings:
            problem = self._problem(entry)
            if problem is not None:
                self.findings.append(_broken(entry.seq, *problem))
        self._seq, self._previous = entry.seq, entry.digest
        try:
            self.logged.append(logged_of(entry))
        except NOT_READABLE:
            self.unreadable.append(entry.seq)

    def _problem(self, entry: Entry) -> tuple[str, str] | None:
        if entry.seq != self._seq + 1:
            gap = f"entry {self._seq + 1} is missing" if entry.seq > self._seq else "it stands out of order"
            return "entry-missing", f"{gap} before this one"
        if entry.previous != self._previous:
            return "chain-broken", "it does not follow the entry before it"
        try:
            body = canonical(json.loads(entry.body))
        except (ValueError, NotText, RecursionError):
            return "body-unreadable", "its body is not JSON"
        try:
            fits = digest_of_entry(entry, entry.previous) == entry.digest
        except UnicodeError:
            fits = False
        if body != entry.body:
            return "body-not-canonical", "its body is not in the one form that bodies have"
        return None if fits else ("digest-wrong", "it was changed after it was written")


def _broken(seq: int, code: str, what: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(entry=seq), what=what, do=_RESTORE)


def _schema_findings(connection: sqlite3.Connection) -> Iterator[Finding]:
    there = {found.name: found for found in objects_of(connection)}
    wanted = {found.name: found for found in expected_objects()}
    for name, expected in wanted.items():
        if name not in there:
            yield _schema_finding(expected, "missing", "is missing: it was dropped")
        elif there[name] != expected:
            yield _schema_finding(expected, "changed", "is not as it was made")
    for name, found in there.items():
        if name not in wanted:
            yield _schema_finding(found, "foreign", "does not belong to a book")


def _schema_finding(found: SchemaObject, what: str, words: str) -> Finding:
    word = "guard" if found.name in GUARDS else {"trigger": "guard"}.get(found.kind, found.kind)
    return Finding(
        code=f"{word}-{what}",
        severity=Severity.STOP,
        where=Where(thing=found.name),
        what=f"{word} {found.name} {words}",
        do=_RESTORE if what != "foreign" else "find out which program made it, and why",
    )


def _replay_findings(
    connection: sqlite3.Connection, walk: _Walk, missing: set[str | None]
) -> Iterator[Finding]:
    for seq in walk.unreadable:
        yield _broken(seq, "entry-unreadable", "it cannot be read as an entry of its kind")
    replayed = replay(walk.logged)
    if missing & set(replayed.rows):
        return
    for table, stored in stored_tables(connection).items():
        wanted = set(replayed.rows[table].values())
        if stored != wanted:
            lost, extra = len(wanted - stored), len(stored - wanted)
            yield Finding(
                code="replay-differs",
                severity=Severity.STOP,
                where=Where(thing=table),
                what=f"table {table} is not what the entries say: rows lacking {lost}, too many {extra}",
                do="withdraw or enter nothing yet; " + _RESTORE,
            )


def plan_files_lost(connection: sqlite3.Connection, logged: Iterable[Logged]) -> Iterator[Finding]:
    """A finding for each file of an adopted plan that is not in the store as it was put there."""
    for entry in logged:
        if not isinstance(entry.act, Adopt):
            continue
        for file in entry.act.files:
            row = None
            # A changed entry may name what is no text at all.
            with contextlib.suppress(UnicodeEncodeError):
                row = connection.execute(
                    "SELECT bytes FROM content WHERE sha256 = ?", (file.sha256,)
                ).fetchone()
            whole = row is not None and isinstance(row[0], bytes)
            if row is None or not whole or hashlib.sha256(row[0]).hexdigest() != file.sha256:
                so = "is missing" if row is None else "is not what was stored"
                yield Finding(
                    code="plan-file-lost",
                    severity=Severity.STOP,
                    where=Where(entry=entry.seq, thing=file.path),
                    what=f"this file of plan {entry.act.plan} {so}",
                    do=_RESTORE,
                )


def _file_findings(connection: sqlite3.Connection) -> Iterator[Finding]:
    try:
        verdicts = [str(row[0]) for row in connection.execute("PRAGMA integrity_check")]
    except sqlite3.DatabaseError as error:
        verdicts = [str(error)]
    for verdict in verdicts:
        if verdict != "ok":
            yield Finding(
                code="file-damaged",
                severity=Severity.STOP,
                where=Where(),
                what=f"SQLite says: {verdict}",
                do=_RESTORE,
            )
