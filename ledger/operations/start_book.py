"""A new book, begun with its first plan."""

from __future__ import annotations

import contextlib
import os
import uuid
from datetime import datetime
from pathlib import Path

from ledger.book.copies import give_name, in_the_way, settle
from ledger.book.opening import connect_new
from ledger.book.reading import StoredGeometry
from ledger.errors import Finding, Refused, Severity, Where, WrongUse
from ledger.model.progress import Progress, unwatched
from ledger.operations.adopt_plan import Adopted, right_now, who, write_adoption
from ledger.operations.plan_to_adopt import PlanToAdopt, read_plan_to_adopt


def start_book(
    book: Path,
    plan: Path,
    *,
    by: str | None = None,
    now: datetime | None = None,
    progress: Progress = unwatched,
) -> Adopted:
    """Make a book at a path where nothing is, and adopt the plan into it.

    Raises
        Refused: something is at the path, or the plan has errors.
        WrongUse: there is no such plan folder, or no folder to make the book in.
        Stopped: `progress` was told to end the work; nothing was written.
    """
    moment = now if now is not None else right_now()
    there = in_the_way(book)
    if there is not None:
        raise Refused(_taken(there))
    if not book.parent.is_dir():
        raise WrongUse(_no_folder(book))
    geometry = StoredGeometry(None)
    wanted = read_plan_to_adopt(plan, geometry, progress=progress)
    # Made beside its place and named when whole, so that a kill half way leaves no half a book.
    making = book.with_name(f".{book.name}.making-{os.getpid()}")
    try:
        seq, digest = _make(making, wanted, geometry, by=who(by), now=moment)
        settle(making)
        give_name(making, book)
    except FileExistsError:
        raise Refused(_taken(book)) from None
    finally:
        for ending in ("", "-wal", "-shm"):
            making.with_name(making.name + ending).unlink(missing_ok=True)
    return Adopted(
        iteration=wanted.plan.name, seq=seq, digest=digest, findings=wanted.findings, no_longer_fits=()
    )


def _make(
    making: Path, wanted: PlanToAdopt, geometry: StoredGeometry, *, by: str, now: datetime
) -> tuple[int, str]:
    from ledger.book.migrations import MIGRATIONS, run_steps

    with contextlib.closing(connect_new(making)) as connection:
        run_steps(connection, MIGRATIONS)
        connection.execute("BEGIN IMMEDIATE")
        connection.executemany(
            "INSERT INTO meta (key, value) VALUES (?, ?)",
            (("book", str(uuid.uuid4())), ("made_at", now.isoformat())),
        )
        entry = write_adoption(connection, wanted, geometry, by=by, now=now)
        connection.execute("COMMIT")
    return entry.seq, entry.digest


def _taken(book: Path) -> Finding:
    return Finding(
        code="target-exists",
        severity=Severity.STOP,
        where=Where(file=str(book)),
        what="something stands at this path already",
        do="choose another path; nothing is ever overwritten",
    )


def _no_folder(book: Path) -> Finding:
    return Finding(
        code="folder-absent",
        severity=Severity.STOP,
        where=Where(file=str(book.parent)),
        what="there is no such folder to make the book in",
        do="make the folder first, or choose another",
    )
