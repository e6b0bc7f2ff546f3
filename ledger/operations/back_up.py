"""A copy of the book, taken while others may be writing, read back before it is called one."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from ledger.book.chain import short_code
from ledger.book.copies import CopyDiffers, copy_book, in_the_way
from ledger.book.opening import open_for_reading
from ledger.book.reading import read_on
from ledger.errors import Finding, Refused, Severity, Where, WrongUse
from ledger.model.entry import FIRST_PREVIOUS
from ledger.model.progress import Progress, unwatched
from ledger.operations.open_build import guards_missing


@dataclass(frozen=True, slots=True, kw_only=True)
class BackedUp:
    """Where the copy is and where it ends. `findings` say what is wrong in the book, and so in the copy."""

    file: Path
    entries: int
    last_digest: str
    short_code: str
    findings: tuple[Finding, ...]


def back_up(book: Path, file: Path, *, progress: Progress = unwatched) -> BackedUp:
    """Copy the book to a file that must not exist yet.

    Raises
        Refused: the file exists, or the copy does not read back.
        WrongUse: there is no folder to put it in.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work; no copy is left.
    """
    there = in_the_way(file)
    if there is not None:
        raise Refused(
            _stop("target-exists", there, "something stands at this path already", "choose another")
        )
    if not file.parent.is_dir():
        raise WrongUse(_stop("folder-absent", file.parent, "there is no such folder", "make it first"))
    try:
        with open_for_reading(book) as connection:
            entries, digest = copy_book(connection, file, progress=progress)
            _, trouble = read_on(connection, after=0, digest=FIRST_PREVIOUS)
            findings = (*(() if trouble is None else (trouble,)), *guards_missing(connection))
    except FileExistsError:
        raise Refused(
            _stop("target-exists", file, "something stands at this path already", "choose another")
        ) from None
    except CopyDiffers as error:
        raise Refused(
            _stop("copy-differs", file, str(error), "run check on the book, and copy again")
        ) from None
    return BackedUp(
        file=file, entries=entries, last_digest=digest, short_code=short_code(digest), findings=findings
    )


def _stop(code: str, path: Path, what: str, do: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(file=str(path)), what=what, do=do)
