"""Many entries from one file: all of them or none, in one transaction."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from datetime import datetime
from pathlib import Path

from ledger.book.opening import open_for_writing
from ledger.book.project import key_of
from ledger.errors import Finding, Refused, Where, WrongUse
from ledger.model.declare import KINDS
from ledger.model.progress import Progress, unwatched
from ledger.operations.adopt_plan import right_now
from ledger.operations.arising import arisen_since, notice
from ledger.operations.log_entry import LoggedEntry, Writing, Written
from ledger.operations.open_build import open_build


def log_file(
    book: Path,
    file: Path,
    *,
    by: str | None = None,
    now: datetime | None = None,
    progress: Progress = unwatched,
) -> tuple[LoggedEntry, ...]:
    """Log every row of a CSV or JSON Lines file in order; later rows may use the numbers of earlier ones.

    The findings that arose from the whole file, and the warnings, are on its last entry.

    Raises
        Refused: every problem of every row, by row and column; nothing was written.
        WrongUse: there is no such file.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work, between two rows; nothing was written.
    """
    from ledger.exchange.rows import read_rows

    moment = now if now is not None else right_now()
    rows, problems = read_rows(file)
    if problems and not rows:
        raise Refused(*problems)
    build = open_build(book, now=moment)
    before = notice(build.snapshot)
    with open_for_writing(book) as connection:
        writing = Writing(connection, build, now=moment, by=by)
        written, refused = _log_rows(writing, rows, progress)
        if problems or refused:
            raise Refused(*sorted((*problems, *refused), key=lambda finding: finding.where.row or 0))
        writing.keep_geometry()
    if not written:
        return ()
    arisen = arisen_since(book, before, moment)
    told = [one.told() for one in written]
    return (*told[:-1], dataclasses.replace(told[-1], findings=arisen, warnings=build.warnings))


def _log_rows(
    writing: Writing,
    rows: tuple[tuple[Where, str, Mapping[str, object]], ...],
    progress: Progress,
) -> tuple[list[Written], list[Finding]]:
    written: list[Written] = []
    refused: list[Finding] = []
    lost: set[str] = set()
    for done, (where, kind, fields) in enumerate(rows):
        progress("rows", done, len(rows))
        try:
            written.append(writing.enter(kind, fields, where=where))
        except (Refused, WrongUse) as trouble:
            refused.extend(finding for finding in trouble.findings if not _follows_from(finding, lost))
            lost.update(_numbers_lost(kind, fields))
    progress("rows", len(rows), len(rows))
    return written, refused


def _numbers_lost(kind: str, fields: Mapping[str, object]) -> set[str]:
    # A row that is refused gives out no number: what only lacks that number is no problem of its own.
    declared = KINDS.get(kind)
    if declared is None:
        return set()
    words = [field.word for field in declared.fields if field.mints is not None or field.word == kind]
    return {key_of(str(fields[word])) for word in words if fields.get(word)}


def _follows_from(finding: Finding, lost: set[str]) -> bool:
    return finding.code == "name-unknown" and any(f"'{name}'" in finding.what.upper() for name in lost)
