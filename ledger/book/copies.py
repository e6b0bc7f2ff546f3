"""Copies of a book: taken while others may write, read back before they are trusted."""

from __future__ import annotations

import contextlib
import os
import sqlite3
from pathlib import Path

from ledger.book.chain import digest_of_entry
from ledger.book.reading import last_of, read_entries
from ledger.errors import LedgerError
from ledger.model.entry import FIRST_PREVIOUS
from ledger.model.progress import Progress, unwatched

# Enough at a time that a copy of an ordinary book is made in a few steps.
_PAGES = 1024


class CopyDiffers(LedgerError):
    """A copy that does not read back as what was copied; it has been taken away again."""


def copy_book(
    connection: sqlite3.Connection, target: Path, *, progress: Progress = unwatched
) -> tuple[int, str]:
    """Copy an open book to a new file and verify it; seq and digest of its last entry.

    The copy is made beside the target and given its name only when it has been read back, so no
    half-made copy ever stands there and nothing that stands there is ever replaced.

    Raises
        FileExistsError: the target exists.
        CopyDiffers: the copy does not read back.
        Stopped: `progress` was told to end the work; nothing is left of the copy.
    """
    making = target.with_name(f".{target.name}.making-{os.getpid()}")
    try:
        with contextlib.closing(sqlite3.connect(making, isolation_level=None)) as copy:
            connection.backup(
                copy,
                pages=_PAGES,
                progress=lambda _, left, of: progress("pages copied", of - left, of),
            )
            # A copy is one file: a side file left on the way would be lost with the next folder it moves to.
            copy.execute("PRAGMA journal_mode = DELETE")
            last = _read_back(copy, progress)
            _compare(connection, last)
            copy.execute("PRAGMA journal_mode = WAL")
        settle(making)
        give_name(making, target)
    finally:
        for leftover in (making, *(making.with_name(making.name + end) for end in ("-wal", "-shm"))):
            leftover.unlink(missing_ok=True)
    return last


def in_the_way(target: Path) -> Path | None:
    """What stands where a new book is to be, or beside it as if it were a part of it."""
    # A side file left of an earlier book would be folded into the new one when that is first opened.
    beside = (target.with_name(target.name + ending) for ending in ("-wal", "-shm", "-journal"))
    return next((path for path in (target, *beside) if os.path.lexists(path)), None)


def settle(path: Path) -> None:
    """Wait until the file is on the disk."""
    descriptor = os.open(path, os.O_RDONLY)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)


def give_name(made: Path, target: Path) -> None:
    """Give a finished file its name, which must be free.

    Raises
        FileExistsError: the name is taken.
    """
    # A plain rename would silently replace what another program put there a moment ago.
    try:
        os.link(made, target)
    except FileExistsError:
        raise
    except OSError:
        if target.exists():
            raise FileExistsError(str(target)) from None
        made.rename(target)
    if os.name == "posix":
        settle(target.parent)


def _compare(connection: sqlite3.Connection, last: tuple[int, str]) -> None:
    # Others may have written on since; what was copied must be what the book has up to there.
    row = connection.execute("SELECT digest FROM entry WHERE seq = ?", (last[0],)).fetchone()
    if last[0] != 0 and (row is None or row[0] != last[1]):
        raise CopyDiffers("the copy does not end with an entry of the book")


def _read_back(copy: sqlite3.Connection, progress: Progress) -> tuple[int, str]:
    (verdict,) = copy.execute("PRAGMA integrity_check").fetchone()
    if verdict != "ok":
        raise CopyDiffers(f"SQLite finds the copy damaged: {verdict}")
    previous = FIRST_PREVIOUS
    many, _ = last_of(copy)
    for done, entry in enumerate(read_entries(copy)):
        progress("entries read back", min(done, many), many)
        if digest_of_entry(entry, previous) != entry.digest:
            # A book whose own digests no longer fit is copied as it is: the copy must not hide that.
            break
        previous = entry.digest
    return last_of(copy)
