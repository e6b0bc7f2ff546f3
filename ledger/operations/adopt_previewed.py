"""A plan folder adopted after it was looked at, as it was looked at."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

from ledger.errors import Finding, Refused, Severity, Where
from ledger.model.plan import Plan
from ledger.model.progress import Progress, unwatched
from ledger.operations.adopt_plan import Adopted, adopt_plan
from ledger.operations.open_build import open_build
from ledger.operations.plan_to_adopt import read_plan_to_adopt


def adopt_previewed(
    book: Path,
    folder: Path,
    seen: Plan,
    *,
    by: str | None = None,
    now: datetime | None = None,
    progress: Progress = unwatched,
) -> Adopted:
    """Adopt the plan in a folder, where it is still the one that was previewed.

    Raises
        Refused: the folder was changed since, the plan has errors, or its name is taken.
        WrongUse: there is no such folder any more.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work; nothing was written.
    """
    if read_plan_to_adopt(folder, open_build(book).cache, progress=progress).plan != seen:
        raise Refused(
            Finding(
                code="plan-changed",
                severity=Severity.STOP,
                where=Where(file=str(folder)),
                what="the plan was changed after it was previewed",
                do="preview it again, then adopt it",
            )
        )
    return adopt_plan(book, folder, by=by, now=now, progress=progress)
