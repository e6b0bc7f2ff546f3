"""Whether the book is still what was written, and what the rules say about the build in it."""

from __future__ import annotations

import sqlite3
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from ledger.book.chain import read_code, short_code
from ledger.book.checking import BookState, find_code, look_through
from ledger.book.opening import open_for_reading
from ledger.errors import BookUnusable, Finding, FindingsError, Refused, Severity, Where
from ledger.model.acts import Adopt
from ledger.model.gather import what_counts
from ledger.model.progress import Progress, unwatched
from ledger.operations.list_findings import list_findings
from ledger.operations.open_build import forget, open_build
from ledger.operations.recompute_geometry import recompute_geometry


@dataclass(frozen=True, slots=True, kw_only=True)
class Checked:
    """What a check found. The code is the last digest, short enough for paper."""

    entries: int
    last_digest: str
    short_code: str
    chain_ok: bool
    replay_ok: bool
    findings: tuple[Finding, ...]


def check_book(
    book: Path, last: str | None = None, *, now: datetime | None = None, progress: Progress = unwatched
) -> Checked:
    """Check guards, chain, look-up tables, stored plans, the file itself and every rule.

    `last` is a last digest or its short code, kept elsewhere: the only way to see that a whole book was
    rewritten or its end cut off.

    Raises
        Refused: `last` is mistyped.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work.
    """
    code = None if last is None else _code(last)
    with open_for_reading(book) as connection:
        connection.text_factory = _any_text
        state = look_through(connection, progress)
        compared = () if code is None or state.entries == 0 else _compare(connection, code, state)
        geometry = _recompute(connection, state, progress)
    rules = _rules(book, state, now, progress)
    return Checked(
        entries=state.entries,
        last_digest=state.last_digest,
        short_code=short_code(state.last_digest),
        chain_ok=state.chain_ok,
        replay_ok=state.replay_ok and not geometry,
        findings=(*state.findings, *geometry, *compared, *rules),
    )


def _recompute(connection: sqlite3.Connection, state: BookState, progress: Progress) -> tuple[Finding, ...]:
    current = next((e.act for e in reversed(what_counts(state.logged)) if isinstance(e.act, Adopt)), None)
    lost = {finding.code for finding in state.findings} & {"plan-file-lost", "table-missing"}
    return () if current is None or lost else recompute_geometry(connection, current, progress)


def _any_text(stored: bytes) -> str:
    # Bytes that are not text must be named as a changed entry, not end the check.
    return stored.decode("utf-8", "surrogateescape")


def _code(last: str) -> str:
    code = read_code(last)
    if code is None:
        raise Refused(
            Finding(
                code="code-mistyped",
                severity=Severity.STOP,
                where=Where(column="last"),
                what=f"{last!r} is neither a digest nor a short code",
                do="read it again: 64 digits and letters a to f, or 13 characters in groups of four",
            )
        )
    return code


def _compare(connection: sqlite3.Connection, code: str, state: BookState) -> tuple[Finding, ...]:
    seq = find_code(connection, code)
    if seq == state.entries:
        return ()
    if seq is not None:
        since = state.entries - seq
        return (
            Finding(
                code="entries-since",
                severity=Severity.NOTE,
                where=Where(entry=seq),
                what=f"the code is that of this entry; {since} more followed",
                do="write down the new code",
            ),
        )
    return (
        Finding(
            code="last-not-in-book",
            severity=Severity.STOP,
            where=Where(column="last"),
            what=f"no entry of this book has the code {code}: rewritten, cut short or another book",
            do="compare with a backup",
        ),
    )


def _rules(book: Path, state: BookState, now: datetime | None, progress: Progress) -> tuple[Finding, ...]:
    if not state.logged:
        return ()
    try:
        forget(book)
        return list_findings(open_build(book, now=now), progress=progress)
    except BookUnusable as error:
        return error.findings
    except FindingsError as error:
        return error.findings
    except (ValueError, KeyError, IndexError) as error:
        if state.chain_ok and state.replay_ok:
            raise
        # Figures from a broken book may fail anywhere; that it is broken is said already.
        return (
            Finding(
                code="rules-not-checked",
                severity=Severity.LOOK,
                where=Where(),
                what=f"the rules could not be checked on a broken book: {error}",
                do="restore a backup and check that",
            ),
        )
