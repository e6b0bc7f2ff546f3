"""A plan taken into the book as its next iteration."""

from __future__ import annotations

import getpass
import os
import sqlite3
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from ledger.book.appending import append_entry
from ledger.book.names import with_article
from ledger.book.opening import open_for_reading, open_for_writing
from ledger.book.project import key_of
from ledger.book.reading import StoredGeometry, store_files
from ledger.errors import Finding, Refused, Severity, Where
from ledger.mass.weigh_up import weigh_up
from ledger.model.comparison import Comparison, UnfitPiece
from ledger.model.entry import Entry
from ledger.model.plan import Plan
from ledger.model.progress import Progress, unwatched
from ledger.model.things import ThingKind
from ledger.operations.compare_iterations import Side, compare_sides, side_of_folder, unfit_pieces
from ledger.operations.open_build import Build, open_build
from ledger.operations.plan_to_adopt import PlanToAdopt, read_plan_to_adopt


@dataclass(frozen=True, slots=True, kw_only=True)
class Adopted:
    """The iteration, its entry (as it would be, in a preview), and what no longer fits.

    `before` is the iteration it follows, None in a new book. `comparison` with that one is made for a
    preview only.
    """

    iteration: str
    seq: int
    digest: str
    findings: tuple[Finding, ...]
    no_longer_fits: tuple[UnfitPiece, ...]
    before: str | None = None
    comparison: Comparison | None = None


def adopt_plan(
    book: Path,
    plan: Path,
    *,
    by: str | None = None,
    preview: bool = False,
    now: datetime | None = None,
    progress: Progress = unwatched,
) -> Adopted:
    """Read the plan folder and adopt it; with `preview`, say what that would do and write nothing.

    Raises
        Refused: the plan has errors, or an iteration of its name is in the book.
        WrongUse: there is no such folder.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work; nothing was written.
    """
    moment = now if now is not None else right_now()
    build = open_build(book, now=moment)
    wanted = read_plan_to_adopt(plan, build.cache, progress=progress)
    # Looked at before the long work, and once more inside the transaction that writes.
    with open_for_reading(book) as connection:
        _refuse_taken_names(connection, wanted.plan)
    comparison, unfit = _what_it_does(build, wanted, preview=preview, progress=progress)
    entry = _written(build, wanted, preview=preview, by=who(by), now=moment)
    return Adopted(
        iteration=wanted.plan.name,
        seq=entry.seq,
        digest=entry.digest,
        findings=(*build.warnings, *wanted.findings),
        no_longer_fits=unfit,
        before=build.snapshot.plan.name,
        comparison=comparison,
    )


def _written(build: Build, wanted: PlanToAdopt, *, preview: bool, by: str, now: datetime) -> Entry:
    """The entry, written, or of a preview as it would have been."""
    try:
        with open_for_writing(build.book) as connection:
            _refuse_taken_names(connection, wanted.plan)
            entry = write_adoption(connection, wanted, build.cache, by=by, now=now)
            if preview:
                raise _OnlyLooked
    except _OnlyLooked:
        pass
    return entry


def _what_it_does(
    build: Build, wanted: PlanToAdopt, *, preview: bool, progress: Progress
) -> tuple[Comparison | None, tuple[UnfitPiece, ...]]:
    """What the plan does to the record; all its figures only for a preview, which reckons fuel."""
    new = side_of_folder(build, wanted, wanted.plan.name)
    if preview:
        current = Side(build=build, name=build.snapshot.plan.name, adopted=True)
        comparison = compare_sides(current, new, progress=progress)
        return comparison, comparison.no_longer_fits
    snapshot = new.build.snapshot
    progress(f"weighing, {new.name}", 0, 1)
    weights = weigh_up(snapshot, new.build.cell_places())
    return None, unfit_pieces(snapshot, weights, fitting_before=build.snapshot)


class _OnlyLooked(Exception):
    """Undoes the transaction of a preview."""


def who(by: str | None) -> str:
    """Whose entry it is: as given, else from the environment, else the login name."""
    given = (by or os.environ.get("WINGLEDGER_BY") or "").strip()
    if given:
        return given
    try:
        return getpass.getuser()
    except (KeyError, OSError):
        finding = Finding(
            code="by-missing",
            severity=Severity.STOP,
            where=Where(column="by"),
            what="whose entry this is was not said",
            do="add by=INITIALS, or set WINGLEDGER_BY",
        )
        raise Refused(finding) from None


def right_now() -> datetime:
    """This moment to the second, with the offset of this computer."""
    return datetime.now().astimezone().replace(microsecond=0)


def write_adoption(
    connection: sqlite3.Connection, wanted: PlanToAdopt, geometry: StoredGeometry, *, by: str, now: datetime
) -> Entry:
    """Store the files and the geometry computed from them, and write the entry."""
    store_files(connection, wanted.files)
    geometry.write(connection)
    return append_entry(connection, "adopt", wanted.act, by=by, at=now, logged_at=now)


def _refuse_taken_names(connection: sqlite3.Connection, plan: Plan) -> None:
    found = [*_iteration_taken(connection, plan.name), *_numbers_taken(connection, plan)]
    if found:
        raise Refused(*found)


def _iteration_taken(connection: sqlite3.Connection, name: str) -> Iterator[Finding]:
    row = connection.execute("SELECT seq FROM iteration WHERE upper(name) = ?", (name.upper(),)).fetchone()
    if row is not None:
        yield Finding(
            code="iteration-taken",
            severity=Severity.STOP,
            where=Where(file="plan.toml", column="name"),
            what=f"iteration {name!r} is in the book already, entry {row[0]}",
            do="give this plan another name",
        )


def _numbers_taken(connection: sqlite3.Connection, plan: Plan) -> Iterator[Finding]:
    """A part whose number is on the tag of something else: scanned, it would be taken for that."""
    for part in plan.parts:
        row = connection.execute("SELECT kind FROM thing WHERE key = ?", (key_of(part.name),)).fetchone()
        if row is not None:
            yield Finding(
                code="number-taken",
                severity=Severity.STOP,
                where=Where(file="parts.csv", thing=part.name, column="part"),
                what=f"{part.name!r} already stands for {with_article(ThingKind(row[0]))} in the book",
                do="give the part another number",
            )
