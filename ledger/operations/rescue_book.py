"""What can still be read of a damaged book, saved into a new one."""

from __future__ import annotations

import contextlib
import hashlib
import os
import shutil
import sqlite3
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ledger.book.chain import digest_of_entry, short_code
from ledger.book.checking import plan_files_lost
from ledger.book.copies import give_name, in_the_way, settle
from ledger.book.opening import connect_new, header_of
from ledger.book.project import rebuild
from ledger.book.reading import NOT_READABLE, logged_of, read_logged
from ledger.errors import BookUnusable, Finding, Refused, Severity, Where, WrongUse
from ledger.model.entry import FIRST_PREVIOUS, Entry
from ledger.model.progress import Progress, unwatched

_COLUMNS = "seq, id, at, logged_at, by, kind, body, previous, digest"


@dataclass(frozen=True, slots=True, kw_only=True)
class Rescued:
    """How many entries were saved, the digest of the last, and which were read but could not follow."""

    file: Path
    entries: int
    last_digest: str
    short_code: str
    left_out: tuple[int, ...]
    findings: tuple[Finding, ...]


def rescue_book(damaged: Path, new: Path, *, progress: Progress = unwatched) -> Rescued:
    """Save the entries from the first on, as far as each follows from the one before, with all plan files.

    An entry past a break cannot be proved to be what was written, so it is named and left out. The
    damaged file stays as it is.

    Raises
        Refused: something is at the new path.
        WrongUse: there is no folder for the new one.
        BookUnusable: there is no damaged file, or not one entry of it can be read.
        Stopped: `progress` was told to end the work; nothing is left of the new one.
    """
    there = in_the_way(new)
    if there is not None:
        raise Refused(
            _stop("target-exists", there, "something stands at this path already", "choose another")
        )
    if not damaged.is_file():
        raise BookUnusable(_stop("book-absent", damaged, "there is no such file", "check the path"))
    if not new.parent.is_dir():
        raise WrongUse(_stop("folder-absent", new.parent, "there is no such folder", "make it first"))
    making = new.with_name(f".{new.name}.making-{os.getpid()}")
    try:
        rescued = _rescue(damaged, making, new, progress)
        settle(making)
        give_name(making, new)
    except FileExistsError:
        raise Refused(
            _stop("target-exists", new, "something stands at this path already", "choose another")
        ) from None
    finally:
        for ending in ("", "-wal", "-shm"):
            making.with_name(making.name + ending).unlink(missing_ok=True)
    return rescued


def _rescue(damaged: Path, making: Path, new: Path, progress: Progress) -> Rescued:
    from ledger.book.migrations import MIGRATIONS, run_steps

    with _open_copy(damaged) as source, contextlib.closing(connect_new(making)) as target:
        whole, left_out = _those_that_follow(tuple(_readable_entries(source)), progress)
        if not whole:
            raise BookUnusable(
                _stop("nothing-readable", damaged, "no entry can be read", "restore your last backup")
            )
        run_steps(target, MIGRATIONS)
        target.execute("BEGIN IMMEDIATE")
        target.executemany(
            f"INSERT INTO entry ({_COLUMNS}) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)",  # noqa: S608
            ((e.seq, e.id, e.at, e.logged_at, e.by, e.kind, e.body, e.previous, e.digest) for e in whole),
        )
        _save(source, target, "content")
        _save(source, target, "meta")
        logged = tuple(read_logged(target))
        rebuild(target, logged)
        lost = tuple(plan_files_lost(target, logged))
        if lost:
            # Kept geometry cannot be proved; where its files are whole it is computed again instead.
            _save(source, target, "geometry")
        target.execute("COMMIT")
    return Rescued(
        file=new,
        entries=len(whole),
        last_digest=whole[-1].digest,
        short_code=short_code(whole[-1].digest),
        left_out=left_out,
        findings=(*(_left_out(seq) for seq in left_out), *lost),
    )


def _save(source: sqlite3.Connection, target: sqlite3.Connection, table: str) -> None:
    """What can be read of a table that is not entries; of plan files, those that are what was stored."""
    for row in _readable_rows(source, table):
        if len(row) != 2 or (table == "content" and not _is_content(*row)):
            continue
        with contextlib.suppress(sqlite3.IntegrityError, UnicodeEncodeError):
            target.execute(f"INSERT INTO {table} VALUES (?, ?)", row)  # noqa: S608


def _is_content(sha256: object, content: object) -> bool:
    return isinstance(content, bytes) and hashlib.sha256(content).hexdigest() == sha256


@contextlib.contextmanager
def _open_copy(damaged: Path) -> Iterator[sqlite3.Connection]:
    # Opening folds a side file in, which would change what is to stay as it is.
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / "damaged"
        shutil.copyfile(damaged, copy)
        side = damaged.with_name(damaged.name + "-wal")
        if side.is_file():
            shutil.copyfile(side, copy.with_name("damaged-wal"))
        _fill_up(copy)
        with contextlib.closing(sqlite3.connect(copy)) as connection:
            connection.text_factory = lambda stored: stored.decode("utf-8", "surrogateescape")
            yield connection


def _fill_up(copy: Path) -> None:
    # SQLite reads not one page of a file shorter than its header says; with empty pages it reads the rest.
    with copy.open("r+b") as file:
        first = file.read(100)
        if len(first) == 100:
            promised = header_of(first).promised_bytes
            if copy.stat().st_size < promised < 2**40:
                file.truncate(promised)


def _readable_entries(source: sqlite3.Connection) -> Iterator[Entry]:
    for row in _readable_rows(source, "entry", order="seq"):
        try:
            seq, id_text, at, logged_at, by, kind, body, previous, digest = row
        except ValueError:
            continue
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


def _readable_rows(
    source: sqlite3.Connection, table: str, *, order: str = "rowid"
) -> Iterator[tuple[Any, ...]]:
    """Rows from the front until a damaged page, then from the back until the same."""
    seen: set[object] = set()
    front: list[tuple[Any, ...]] = []
    back: list[tuple[Any, ...]] = []
    for rows, way in ((front, "ASC"), (back, "DESC")):
        try:
            for row in source.execute(f"SELECT * FROM {table} ORDER BY {order} {way}"):  # noqa: S608
                if row[0] in seen:
                    break
                seen.add(row[0])
                rows.append(row)
        # A damaged page may leave SQLite no text even for its own complaint.
        except (sqlite3.DatabaseError, UnicodeDecodeError):
            continue
    yield from front
    yield from reversed(back)


def _those_that_follow(entries: tuple[Entry, ...], progress: Progress) -> tuple[list[Entry], tuple[int, ...]]:
    whole: list[Entry] = []
    left_out: list[int] = []
    previous = FIRST_PREVIOUS
    for done, entry in enumerate(entries):
        progress("entries", done, len(entries))
        if not left_out and entry.seq == len(whole) + 1 and _fits(entry, previous):
            whole.append(entry)
            previous = entry.digest
        else:
            left_out.append(entry.seq)
    return whole, tuple(left_out)


def _fits(entry: Entry, previous: str) -> bool:
    try:
        logged_of(entry)
        return entry.previous == previous and digest_of_entry(entry, previous) == entry.digest
    except (*NOT_READABLE, TypeError):
        return False


def _left_out(seq: int) -> Finding:
    return Finding(
        code="entry-left-out",
        severity=Severity.LOOK,
        where=Where(entry=seq),
        what="this entry was read, but what came before it is lost, so it cannot follow",
        do="enter it again from your own notes",
    )


def _stop(code: str, path: Path, what: str, do: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(file=str(path)), what=what, do=do)
