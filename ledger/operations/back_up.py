"""A copy of the book, taken while others may be writing, read back before it is called one."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from ledger.book.chain import short_code
from ledger.book.copies import CopyDiffers, copy_book
from ledger.book.opening import open_for_reading
from ledger.errors import Finding, Refused, Severity, Where, WrongUse


@dataclass(frozen=True, slots=True, kw_only=True)
class BackedUp:
    """Where the copy is and where it ends."""

    file: Path
    entries: int
    last_digest: str
    short_code: str


def back_up(book: Path, file: Path) -> BackedUp:
    """Copy the book to a file that must not exist yet.

    Raises
        Refused: the file exists, or the copy does not read back.
        WrongUse: there is no folder to put it in.
        BookUnusable: the book cannot be opened.
    """
    if os.path.lexists(file):
        raise Refused(_stop("target-exists", file, "something stands at this path already", "choose another"))
    if not file.parent.is_dir():
        raise WrongUse(_stop("folder-absent", file.parent, "there is no such folder", "make it first"))
    try:
        with open_for_reading(book) as connection:
            entries, digest = copy_book(connection, file)
    except FileExistsError:
        raise Refused(
            _stop("target-exists", file, "something stands at this path already", "choose another")
        ) from None
    except CopyDiffers as error:
        raise Refused(
            _stop("copy-differs", file, str(error), "run check on the book, and copy again")
        ) from None
    return BackedUp(file=file, entries=entries, last_digest=digest, short_code=short_code(digest))


def _stop(code: str, path: Path, what: str, do: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(file=str(path)), what=what, do=do)
