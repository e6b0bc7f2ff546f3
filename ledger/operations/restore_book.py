"""A backup put where a book should be."""

from __future__ import annotations

from pathlib import Path

from ledger.model.progress import Progress, unwatched
from ledger.operations.back_up import BackedUp, back_up


def restore_book(file: Path, book: Path, *, progress: Progress = unwatched) -> BackedUp:
    """Copy a backup to a path where nothing is, and read the copy back. The backup stays as it is.

    Raises
        Refused: something is at the path, or the copy does not read back.
        WrongUse: there is no folder to put it in.
        BookUnusable: the backup cannot be opened.
        Stopped: `progress` was told to end the work; no copy is left.
    """
    return back_up(file, book, progress=progress)
