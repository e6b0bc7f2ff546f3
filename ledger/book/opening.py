"""Opening a book: for reading without changing it, for writing one transaction at a time.

What is wrong with the file is said before SQLite touches it: a newer format stays unharmed, and a
path with nothing at it never becomes an empty database.
"""

from __future__ import annotations

import contextlib
import os
import sqlite3
import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TypeVar
from urllib.parse import quote

from ledger.book.schema import APPLICATION_ID, FORMAT
from ledger.errors import BookUnusable, Finding, Severity, Where

_MAGIC = b"SQLite format 3\x00"
_HEADER = 100
_WAIT_S = 30.0
_RETRY_S = 0.01
_BUSY = {sqlite3.SQLITE_BUSY, sqlite3.SQLITE_LOCKED, sqlite3.SQLITE_PROTOCOL}
_BROKEN = {sqlite3.SQLITE_CORRUPT, sqlite3.SQLITE_NOTADB}
_RESTORE = "restore your last backup, or save what can be read with: wingledger rescue"

_R = TypeVar("_R")


@dataclass(frozen=True, slots=True, kw_only=True)
class Header:
    """What the first bytes of a database file say."""

    application: int
    format: int
    promised_bytes: int


def unusable(book: Path, code: str, what: str, do: str) -> BookUnusable:
    """The error for a book that cannot be opened, with what to do."""
    return BookUnusable(
        Finding(code=code, severity=Severity.STOP, where=Where(file=str(book)), what=what, do=do)
    )


def look_at_header(book: Path) -> Header:
    """Read what kind of file this is, and refuse what is not a whole book of this format or older.

    Raises
        BookUnusable: absent, a folder, empty, not a book, newer, or cut short.
    """
    if not book.exists():
        raise unusable(
            book, "book-absent", "there is no such file", "check the path, or begin: wingledger start"
        )
    if not book.is_file():
        raise unusable(book, "book-not-a-file", "this is not a file", "name the book's file itself")
    try:
        with book.open("rb") as file:
            first = file.read(_HEADER)
    except OSError as error:
        raise unusable(
            book, "book-not-readable", f"cannot be read: {error.strerror}", "check its permissions"
        ) from error
    size = book.stat().st_size
    if not first:
        raise unusable(book, "book-empty", "the file is empty", _RESTORE)
    if len(first) < _HEADER or not first.startswith(_MAGIC):
        cut = _MAGIC.startswith(first[:16]) or first.startswith(_MAGIC)
        code, what = ("book-truncated", "the file is cut short") if cut else _not_a_book()
        raise unusable(book, code, what, _RESTORE if cut else "name the file that start made")
    header = header_of(first)
    if header.application != APPLICATION_ID:
        raise unusable(book, *_not_a_book(), "name the file that start made")
    _refuse_newer(book, header.format)
    # While another program folds its side file in, the first page may run ahead of the file's length.
    if size < header.promised_bytes and not _side_file(book).exists():
        raise unusable(
            book,
            "book-truncated",
            f"the file is cut short: {size} of {header.promised_bytes} bytes",
            _RESTORE,
        )
    return header


@contextlib.contextmanager
def open_for_reading(book: Path) -> Iterator[sqlite3.Connection]:
    """A connection that cannot write, inside one read transaction: one moment of the book.

    Raises
        BookUnusable: as `look_at_header`, or a page inside is damaged.
    """
    look_at_header(book)
    with _errors_named(book), contextlib.closing(_connect(book)) as connection:
        connection.execute("PRAGMA query_only = ON")
        _insist(lambda: _begin_reading(connection))
        _check_inside(book, connection)
        yield connection


@contextlib.contextmanager
def open_for_writing(book: Path) -> Iterator[sqlite3.Connection]:
    """A connection holding the only write lock: commits when the block ends, undoes all on an error.

    Waits while another program writes. An older format is brought up first, with a copy kept.

    Raises
        BookUnusable: as `look_at_header`, or the lock could not be had in half a minute.
    """
    header = look_at_header(book)
    with _errors_named(book), contextlib.closing(_connect(book)) as connection:
        connection.execute("PRAGMA synchronous = FULL")
        connection.execute("PRAGMA foreign_keys = ON")
        if header.format < FORMAT:
            from ledger.book.migrations import MIGRATIONS, migrate

            migrate(connection, book, MIGRATIONS)
        _insist(lambda: connection.execute("BEGIN IMMEDIATE"))
        with connection:
            _check_inside(book, connection)
            yield connection


def _begin_reading(connection: sqlite3.Connection) -> None:
    if not connection.in_transaction:
        connection.execute("BEGIN")
    connection.execute("SELECT 1 FROM sqlite_master LIMIT 1").fetchone()


def connect_new(path: Path) -> sqlite3.Connection:
    """A connection to a file that is being made, in the mode a book is kept in."""
    connection = sqlite3.connect(path, isolation_level=None)
    connection.execute("PRAGMA journal_mode = WAL")
    connection.execute("PRAGMA synchronous = FULL")
    connection.execute("PRAGMA foreign_keys = ON")
    return connection


def _connect(book: Path) -> sqlite3.Connection:
    # A connection in mode=ro cannot tidy up and leaves side files behind; mode=rw never makes the book.
    connection = sqlite3.connect(_address(book, "mode=rw"), uri=True, timeout=_WAIT_S, isolation_level=None)
    with contextlib.ExitStack() as unless_read:
        unless_read.callback(connection.close)
        try:
            _insist(lambda: connection.execute("SELECT 1 FROM sqlite_master LIMIT 1").fetchone())
        except sqlite3.OperationalError as error:
            if _primary(error) not in {sqlite3.SQLITE_CANTOPEN, sqlite3.SQLITE_READONLY}:
                raise
            if _side_file(book).exists():
                raise
            # A book on a disk that cannot be written: nobody else can write it either.
            return sqlite3.connect(_address(book, "immutable=1"), uri=True, isolation_level=None)
        unless_read.pop_all()
    return connection


def _address(book: Path, how: str) -> str:
    # A name that is not UTF-8 is a name all the same.
    return f"file:{quote(os.fsencode(book.absolute()))}?{how}"


def _side_file(book: Path) -> Path:
    return book.with_name(book.name + "-wal")


def _insist(step: Callable[[], _R]) -> _R:
    # SQLite's own waiting does not cover a book that is just being tidied up by the last to close.
    give_up = time.monotonic() + _WAIT_S
    while True:
        try:
            return step()
        except sqlite3.OperationalError as error:
            if _primary(error) not in _BUSY or time.monotonic() > give_up:
                raise
            time.sleep(_RETRY_S)


def _check_inside(book: Path, connection: sqlite3.Connection) -> None:
    # The side file may hold a newer first page than the one whose bytes were read.
    (format_now,) = connection.execute("PRAGMA user_version").fetchone()
    _refuse_newer(book, format_now)


def _refuse_newer(book: Path, format_now: int) -> None:
    if format_now > FORMAT:
        raise unusable(
            book,
            "book-newer",
            f"this book has format {format_now}, this program knows up to {FORMAT}",
            "open it with the newer program; it was not changed",
        )


@contextlib.contextmanager
def _errors_named(book: Path) -> Iterator[None]:
    try:
        yield
    except UnicodeDecodeError as error:
        # Where a damaged page gives SQLite no text even for its own complaint.
        raise unusable(
            book, "book-damaged", "the file is damaged: it holds what is no text", _RESTORE
        ) from error
    except sqlite3.DatabaseError as error:
        primary = _primary(error)
        if primary in _BROKEN or "no such table" in str(error):
            raise unusable(book, "book-damaged", f"the file is damaged: {error}", _RESTORE) from error
        if primary in _BUSY:
            raise unusable(
                book, "book-busy", "another program has kept the book locked", "close it and enter again"
            ) from error
        if primary in {sqlite3.SQLITE_READONLY, sqlite3.SQLITE_CANTOPEN, sqlite3.SQLITE_FULL}:
            raise unusable(
                book, "book-not-writable", f"nothing could be written: {error}", "free or unlock the disk"
            ) from error
        raise unusable(
            book, "book-refused", f"the book itself refused this: {error}", "run check; nothing was written"
        ) from error


def _primary(error: sqlite3.Error) -> int:
    return getattr(error, "sqlite_errorcode", 0) & 0xFF


def _not_a_book() -> tuple[str, str]:
    return "book-not-a-book", "this file is not a book of this program"


def header_of(first: bytes) -> Header:
    """The first hundred bytes of a database file, read."""

    def whole(start: int) -> int:
        return int.from_bytes(first[start : start + 4], "big")

    page = int.from_bytes(first[16:18], "big")
    page = 65536 if page == 1 else page
    return Header(application=whole(68), format=whole(60), promised_bytes=page * whole(28))
