"""An entry undone: it stays in the record and no longer counts."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

from ledger.operations.log_entry import LoggedEntry, log_entry


def withdraw_entry(
    book: Path,
    seq: int,
    why: str,
    *,
    by: str | None = None,
    now: datetime | None = None,
    preview: bool = False,
) -> LoggedEntry:
    """Withdraw an entry, also one that others depend on: what they then lack is among the findings.

    The only plan of a book cannot be withdrawn; with a later one adopted, either can.

    Raises
        Refused: there is no such entry, it is withdrawn already, or it is a withdrawal itself.
        BookUnusable: the book cannot be opened.
    """
    return log_entry(book, "withdraw", {"seq": str(seq), "why": why}, by=by, now=now, preview=preview)
