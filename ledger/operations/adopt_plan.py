"""A plan taken into the book as its next iteration."""

from __future__ import annotations

import getpass
import hashlib
import os
import sqlite3
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from ledger.book.appending import append_entry
from ledger.book.names import with_article
from ledger.book.opening import open_for_writing
from ledger.book.project import key_of
from ledger.book.reading import StoredGeometry, store_files
from ledger.checks.built_to_earlier_iteration import pieces_that_no_longer_fit
from ledger.errors import Finding, Refused, Severity, Where
from ledger.model.acts import Adopt, PlanFile
from ledger.model.entry import Entry, Logged
from ledger.model.gather import gather
from ledger.model.plan import Plan
from ledger.model.snapshot import Snapshot
from ledger.model.things import ThingKind
from ledger.operations.open_build import open_build
from ledger.operations.stored_plan import keep_plan


@dataclass(frozen=True, slots=True, kw_only=True)
class UnfitPiece:
    """A piece that was built and is not what the new plan wants."""

    piece: str
    number: str
    state: str
    why: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Adopted:
    """The iteration, its entry (as it would be, in a preview), and what no longer fits."""

    iteration: str
    seq: int
    digest: str
    findings: tuple[Finding, ...]
    no_longer_fits: tuple[UnfitPiece, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanToAdopt:
    """A plan that was read without a STOP, with all its files."""

    plan: Plan
    files: Mapping[str, bytes]
    act: Adopt
    findings: tuple[Finding, ...]


def adopt_plan(
    book: Path, plan: Path, *, by: str | None = None, preview: bool = False, now: datetime | None = None
) -> Adopted:
    """Read the plan folder and adopt it; with `preview`, say what that would do and write nothing.

    Raises
        Refused: the plan has errors, or an iteration of its name is in the book.
        WrongUse: there is no such folder.
        BookUnusable: the book cannot be opened.
    """
    moment = now if now is not None else right_now()
    build = open_build(book, now=moment)
    geometry = build.cache
    wanted = read_plan_to_adopt(plan, geometry)
    unfit = _unfit(_with_iteration(build.logged, build.snapshot, wanted, moment))
    try:
        with open_for_writing(book) as connection:
            _refuse_taken_names(connection, wanted.plan)
            entry = write_adoption(connection, wanted, geometry, by=who(by), now=moment)
            if preview:
                raise _OnlyLooked
    except _OnlyLooked:
        pass
    return Adopted(
        iteration=wanted.plan.name,
        seq=entry.seq,
        digest=entry.digest,
        findings=(*build.warnings, *wanted.findings),
        no_longer_fits=unfit,
    )


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


def read_plan_to_adopt(folder: Path, geometry: StoredGeometry) -> PlanToAdopt:
    """Read a plan folder.

    Raises
        Refused: the plan has errors; all of them are in it.
        WrongUse: there is no such folder.
    """
    from ledger.exchange.plan_folder import read_plan

    read = read_plan(folder, geometry)
    if read.plan is None:
        raise Refused(*read.findings)
    files = tuple(
        PlanFile(path=path, sha256=hashlib.sha256(content).hexdigest())
        for path, content in sorted(read.files.items())
    )
    act = Adopt(plan=read.plan.name, title=read.plan.title, files=files)
    keep_plan(act, read.plan, geometry)
    return PlanToAdopt(plan=read.plan, files=read.files, act=act, findings=read.findings)


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


def _with_iteration(
    logged: tuple[Logged, ...], snapshot: Snapshot, wanted: PlanToAdopt, now: datetime
) -> Snapshot:
    plans = {entry.seq: entry.plan for entry in snapshot.iterations}
    seq = snapshot.last_seq + 1
    plans[seq] = wanted.plan
    entry = Logged(seq=seq, at=now, logged_at=now, by="", kind="adopt", act=wanted.act)
    return gather((*logged, entry), lambda adopted: plans[adopted.seq], now=now)


def _unfit(snapshot: Snapshot) -> tuple[UnfitPiece, ...]:
    return tuple(
        UnfitPiece(piece=piece.name, number=piece.number, state=piece.state.value, why=why)
        for piece, why in pieces_that_no_longer_fit(snapshot)
    )
