"""One entry logged: read, its names looked up, its numbers given out, and written, in one transaction."""

from __future__ import annotations

import dataclasses
import sqlite3
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime, timedelta
from pathlib import Path

from ledger.book.appending import append_entry
from ledger.book.chain import NotText
from ledger.book.names import Known
from ledger.book.opening import open_for_writing
from ledger.book.possible import impossible
from ledger.book.project import rebuild
from ledger.book.reading import StoredGeometry, entry_at, logged_of, read_logged
from ledger.book.resolving import resolve
from ledger.checks.run import facts_to_accept
from ledger.errors import Finding, Refused, Severity, Where, WrongUse
from ledger.model.acts import Accept, Act, Adopt
from ledger.model.entry import Entry, Logged
from ledger.model.gather import gather
from ledger.model.plan import Plan
from ledger.model.things import Minted
from ledger.operations.adopt_plan import right_now, who
from ledger.operations.arising import arisen_since, notice, would_arise
from ledger.operations.open_build import Build, open_build
from ledger.operations.saying import say
from ledger.operations.stored_plan import stored_plan

_AHEAD = timedelta(minutes=5)
_WRONG_USE = {"unknown-kind", "unknown-field"}


@dataclass(frozen=True, slots=True, kw_only=True)
class LoggedEntry:
    """An entry as written (as it would be, in a preview), with the numbers it gave out and what arose.

    `warnings` say what was wrong with the book itself before it.
    """

    seq: int
    digest: str
    kind: str
    at: datetime
    by: str
    minted: tuple[Minted, ...]
    findings: tuple[Finding, ...]
    says: str
    warnings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Written:
    """A row that was put into the open transaction, with its act."""

    entry: Entry
    logged: Logged

    def told(self, findings: tuple[Finding, ...] = (), warnings: tuple[Finding, ...] = ()) -> LoggedEntry:
        """The row as an operation returns it."""
        return LoggedEntry(
            seq=self.entry.seq,
            digest=self.entry.digest,
            kind=self.entry.kind,
            at=self.logged.at,
            by=self.entry.by,
            minted=self.logged.act.minted,
            findings=findings,
            says=say(self.entry.kind, self.logged.act),
            warnings=warnings,
        )


class OnlyLooked(Exception):
    """Undoes the transaction of a preview."""


def log_entry(
    book: Path,
    kind: str,
    fields: Mapping[str, object],
    *,
    by: str | None = None,
    now: datetime | None = None,
    preview: bool = False,
) -> LoggedEntry:
    """Log one entry. A broken shop rule is among the findings returned, never a refusal.

    Raises
        Refused: a value cannot be read, or a name stands for nothing; nothing was written.
        WrongUse: there is no such kind or field.
        BookUnusable: the book cannot be opened.
    """
    moment = now if now is not None else right_now()
    build = open_build(book, now=moment)
    before = notice(build.snapshot)
    try:
        with open_for_writing(book) as connection:
            writing = Writing(connection, build, now=moment, by=by)
            written = writing.enter(kind, fields)
            writing.keep_geometry()
            if preview:
                raise OnlyLooked
    except OnlyLooked:
        return written.told(would_arise(build, (written.logged,), moment), build.warnings)
    return written.told(arisen_since(book, before, moment), build.warnings)


class Writing:
    """Entries read and written one after another in one open transaction."""

    def __init__(
        self, connection: sqlite3.Connection, build: Build, *, now: datetime, by: str | None
    ) -> None:
        self.connection = connection
        self.now = now
        self._build = build
        self._by = by
        self._geometry: StoredGeometry = build.cache
        self._known: Known | None = None
        self._written: list[Logged] = []

    @property
    def known(self) -> Known:
        """What names stand for now."""
        if self._known is None:
            self._known = Known(self.connection, self._plan())
        return self._known

    def keep_geometry(self) -> None:
        """Write what geometry was computed on the way, for the next to read."""
        if self._geometry.has_new:
            self._geometry.write(self.connection)

    def enter(
        self,
        kind: str,
        fields: Mapping[str, object],
        *,
        where: Where | None = None,
        kept: tuple[Minted, ...] = (),
        corrects: int | None = None,
        rebuild_now: bool = True,
    ) -> Written:
        """Read one entry's fields and write it.

        Raises
            Refused, WrongUse: as `log_entry`; the transaction is as it was.
        """
        from ledger.exchange.fields import read_act

        place = where if where is not None else Where()
        if kind == "adopt":
            raise WrongUse(_adopt_has_its_command(place))
        read = read_act(kind, fields, now=self.now, where=place)
        if read.act is None or read.findings:
            raise (WrongUse if any(f.code in _WRONG_USE for f in read.findings) else Refused)(*read.findings)
        at = read.at if read.at is not None else self.now
        late = _ahead(at, self.now, place)
        resolved = resolve(kind, read.act, self.known, where=place, kept=kept)
        findings = (*late, *resolved.findings)
        # What cannot be is only worth saying of names that were found.
        findings = findings or impossible(kind, resolved.act, self.known, where=place)
        if findings:
            raise Refused(*findings)
        act = dataclasses.replace(resolved.act, corrects=corrects)
        if isinstance(act, Accept):
            act = self._accepting(act, place)
        return self.write(kind, act, by=who(read.by or self._by), at=at, place=place, rebuild_now=rebuild_now)

    def rebuild(self) -> None:
        """Write the look-up tables anew from the entries so far."""
        rebuild(self.connection, read_logged(self.connection))
        self._known = None

    def write(
        self, kind: str, act: Act, *, by: str, at: datetime, place: Where, rebuild_now: bool = True
    ) -> Written:
        """Write an act whose names are resolved."""
        try:
            entry = append_entry(
                self.connection, kind, act, by=by, at=at, logged_at=self.now, rebuild_now=rebuild_now
            )
        except NotText as error:
            raise Refused(
                Finding(
                    code="not-text",
                    severity=Severity.STOP,
                    where=place,
                    what=f"a field holds what is not text: {error}",
                    do="type it again with plain characters",
                )
            ) from None
        if kind == "withdraw":
            self._known = None
        logged = Logged(seq=entry.seq, at=at, logged_at=self.now, by=by, kind=kind, act=act)
        self._written.append(logged)
        return Written(entry=entry, logged=logged)

    def _build_so_far(self) -> Build:
        if not self._written:
            return self._build
        plans = {iteration.seq: iteration.plan for iteration in self._build.snapshot.iterations}
        logged = (*self._build.logged, *self._written)
        snapshot = gather(logged, lambda adopted: plans[adopted.seq], now=self.now)
        return dataclasses.replace(self._build, snapshot=snapshot, logged=logged)

    def _plan(self) -> Plan | None:
        row = self.connection.execute("SELECT max(seq) FROM iteration").fetchone()
        last = self._build.snapshot.iterations[-1]
        if row[0] == last.seq:
            return last.plan
        entry = None if row[0] is None else entry_at(self.connection, row[0])
        act = None if entry is None else logged_of(entry).act
        return stored_plan(self.connection, act, self._geometry) if isinstance(act, Adopt) else None

    def _accepting(self, act: Accept, place: Where) -> Accept:
        from ledger.operations.list_findings import list_findings

        build = self._build_so_far()
        open_now = list_findings(build)
        facts = facts_to_accept(build.snapshot, open_now, act.finding, act.what)
        if facts is None:
            same = sorted({str(finding.where) for finding in open_now if finding.code == act.finding})
            codes = sorted({finding.code for finding in open_now})
            do = (
                f"it is open for {', '.join(same[:5])}" if same else f"open now: {', '.join(codes) or 'none'}"
            )
            raise Refused(
                Finding(
                    code="finding-not-open",
                    severity=Severity.STOP,
                    where=dataclasses.replace(place, column="what" if same else "finding"),
                    what=f"no finding {act.finding} is open for {act.what}",
                    do=do,
                )
            )
        return dataclasses.replace(act, facts=facts)


def _ahead(at: datetime, now: datetime, place: Where) -> tuple[Finding, ...]:
    if at <= now + _AHEAD:
        return ()
    return (
        Finding(
            code="at-ahead",
            severity=Severity.STOP,
            where=dataclasses.replace(place, column="at"),
            what=f"{at.isoformat()} has not come yet: it is {now.isoformat()}",
            do="write when it was done, or leave it out for now",
        ),
    )


def _adopt_has_its_command(place: Where) -> Finding:
    return Finding(
        code="unknown-kind",
        severity=Severity.STOP,
        where=place,
        what="a plan is not adopted by an entry typed in",
        do="use the command: adopt BOOK PLAN",
    )
