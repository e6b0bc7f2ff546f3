"""A book opened for looking at: everything it says at one moment, with its plan's files and geometry."""

from __future__ import annotations

import sqlite3
import threading
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from ledger.book.opening import open_for_reading
from ledger.book.project import needs_rebuild
from ledger.book.reading import StoredFiles, StoredGeometry, last_of, read_on
from ledger.book.schema import GUARDS, objects_of
from ledger.errors import BookUnusable, Finding, Severity, Where
from ledger.model.acts import Adopt, Coat
from ledger.model.entry import FIRST_PREVIOUS, Logged
from ledger.model.gather import Gathering, gathering_of
from ledger.model.plan import Plan
from ledger.model.snapshot import Snapshot
from ledger.model.vectors import Vector
from ledger.operations.stored_plan import UNREADABLE, plan_key, stored_plan

if TYPE_CHECKING:
    from ledger.geometry.closed_cell import ClosedCell

_MOST_KEPT = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class Build:
    """A book at one moment. `files` are the current plan's; `warnings` say what is wrong with the book."""

    book: Path
    snapshot: Snapshot
    logged: tuple[Logged, ...]
    files: Mapping[str, bytes]
    cache: StoredGeometry
    warnings: tuple[Finding, ...]

    def cells(self) -> Mapping[str, ClosedCell]:
        """The proved cells of the current plan, by name; read when first asked for."""
        from ledger.exchange.plan_cells import read_cells

        return _once(self, "cells", lambda cache: read_cells(self.snapshot.plan, self.files, cache))

    def displaced(self) -> Mapping[str, ClosedCell]:
        """The proved solids that take up room in a cell, by the cell's name."""
        from ledger.exchange.plan_cells import read_displaced

        return _once(self, "displaced", lambda cache: read_displaced(self.snapshot.plan, self.files, cache))

    def cell_places(self) -> Mapping[str, Vector]:
        """Where the middle of each cell is that something was coated in; metres, build axes."""
        coated = {entry.act.cell for entry in self.snapshot.logged if isinstance(entry.act, Coat)} - {None}
        if not coated:
            return {}
        from ledger.exchange.plan_cells import read_cell_places

        return read_cell_places(self.snapshot.plan, self.files, self.cache, frozenset(map(str, coated)))

    def under(self, snapshot: Snapshot, files: Mapping[str, bytes] | None = None) -> Build:
        """The same book under another current plan: the last one of `snapshot`.

        Its files are those its entry stored, unless `files` gives those of a plan not in the book.
        """
        stored = StoredFiles(self.book, _adoption(snapshot)) if files is None else files
        return replace(self, snapshot=snapshot, files=stored)


@dataclass(slots=True)
class _Kept:
    """What this process read of a book before, so that the next look only reads what is new."""

    last_seq: int
    last_digest: str
    everything: list[Logged]
    gathering: Gathering
    trouble: Finding | None


_lock = threading.Lock()
_cells_lock = threading.Lock()
_kept: dict[Path, _Kept] = {}
_cells: dict[tuple[Path, str, str], Mapping[str, ClosedCell]] = {}


def open_build(book: Path, *, now: datetime | None = None) -> Build:
    """Read the book as it stands, without changing it.

    Raises
        BookUnusable: absent, empty, not a book, cut short, newer, or without a plan.
    """
    moment = now if now is not None else datetime.now().astimezone()
    with _lock, open_for_reading(book) as connection:
        geometry = StoredGeometry(book)

        def plan_of(entry: Logged) -> Plan:
            return stored_plan(connection, _adopt(entry), geometry)

        state = _bring_up(book, connection, plan_of)
        if not state.gathering.iterations:
            raise _no_plan(book)
        snapshot = state.gathering.snapshot(
            last_seq=state.last_seq, last_digest=state.last_digest, now=moment
        )
        missing = guards_missing(connection)
        everything = tuple(state.everything)
    trouble = () if state.trouble is None else (state.trouble,)
    return Build(
        book=book,
        snapshot=snapshot,
        logged=everything,
        files=StoredFiles(book, _adoption(snapshot)),
        cache=geometry,
        warnings=(*trouble, *missing),
    )


def guards_missing(connection: sqlite3.Connection) -> tuple[Finding, ...]:
    """A finding for each guard that should keep entries as they are and does not stand."""
    return tuple(
        Finding(
            code="guard-missing",
            severity=Severity.STOP,
            where=Where(thing=name),
            what=f"guard {name} of the book is missing: it was dropped",
            do="run check, then compare with a backup",
        )
        for name in sorted(set(GUARDS) - {found.name for found in objects_of(connection)})
    )


def forget(book: Path) -> None:
    """Read everything again next time: what stands before the last entry may have been changed."""
    with _lock:
        _kept.pop(book.absolute(), None)


def newest_entry(book: Path) -> tuple[int, str]:
    """Seq and digest of the last entry, quickly: what an open screen asks every second."""
    with open_for_reading(book) as connection:
        return last_of(connection)


def _bring_up(book: Path, connection: sqlite3.Connection, plan_of: Callable[[Logged], Plan]) -> _Kept:
    kept = _kept.get(book.absolute())
    seq, digest = last_of(connection)
    if kept is None or not _is_still_there(connection, kept):
        kept = _Kept(
            last_seq=0,
            last_digest=FIRST_PREVIOUS,
            everything=[],
            gathering=Gathering(tags={}, plan_of=plan_of),
            trouble=None,
        )
    # What fails half way must not be taken for what was read before.
    _kept.pop(book.absolute(), None)
    new, trouble = read_on(connection, after=kept.last_seq, digest=kept.last_digest)
    kept.gathering.plan_of = plan_of
    kept.everything.extend(new)
    if any(needs_rebuild(entry) for entry in new):
        kept.gathering = gathering_of(tuple(kept.everything), plan_of)
    else:
        for entry in new:
            kept.gathering.add(entry)
    kept.last_seq, kept.last_digest, kept.trouble = seq, digest, kept.trouble or trouble
    _remember(book.absolute(), kept)
    return kept


def _is_still_there(connection: sqlite3.Connection, kept: _Kept) -> bool:
    row = connection.execute("SELECT digest FROM entry WHERE seq = ?", (kept.last_seq,)).fetchone()
    return row is not None and row[0] == kept.last_digest


def _remember(path: Path, kept: _Kept) -> None:
    _kept[path] = kept
    while len(_kept) > _MOST_KEPT:
        _kept.pop(next(iter(_kept)))


def _once(
    build: Build, what: str, read: Callable[[StoredGeometry | None], Mapping[str, ClosedCell]]
) -> Mapping[str, ClosedCell]:
    key = (build.book.absolute(), what, plan_key(_adoption(build.snapshot)))
    with _cells_lock:
        if key not in _cells:
            if len(_cells) >= 2 * _MOST_KEPT:
                _cells.clear()
            try:
                _cells[key] = read(build.cache)
            except UNREADABLE:
                _cells[key] = read(None)
        return _cells[key]


def _adoption(snapshot: Snapshot) -> Adopt:
    """The entry's act that took in the current plan, which need not be the last one adopted."""
    seq = snapshot.iterations[-1].seq
    return _adopt(next(entry for entry in reversed(snapshot.logged) if entry.seq == seq))


def _adopt(entry: Logged) -> Adopt:
    if not isinstance(entry.act, Adopt):
        raise TypeError(f"entry {entry.seq} adopts no plan")
    return entry.act


def _no_plan(book: Path) -> BookUnusable:
    return BookUnusable(
        Finding(
            code="book-without-plan",
            severity=Severity.STOP,
            where=Where(file=str(book)),
            what="no entry that can be read adopts a plan",
            do="run check, then restore your last backup",
        )
    )
