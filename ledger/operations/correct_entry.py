"""An entry put right: withdrawn and entered again with some fields changed, in one transaction."""

from __future__ import annotations

import sqlite3
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, datetime
from pathlib import Path

from ledger.book.opening import open_for_writing
from ledger.book.reading import NOT_READABLE, entry_at, logged_of
from ledger.errors import Finding, Refused, Severity, Where, WrongUse
from ledger.model.declare import KINDS, Field, Takes
from ledger.model.entry import Logged
from ledger.model.things import KeptOffcut, Measure, Share
from ledger.operations.adopt_plan import right_now, who
from ledger.operations.arising import arisen_since, notice, would_arise
from ledger.operations.log_entry import LoggedEntry, OnlyLooked, Writing, Written
from ledger.operations.open_build import open_build
from ledger.units import SI_UNIT

_NOT_CORRECTED = ("adopt", "withdraw")


@dataclass(frozen=True, slots=True, kw_only=True)
class Corrected:
    """The two entries a correction is made of; the findings that arose are on `entered`."""

    withdrawn: LoggedEntry
    entered: LoggedEntry


def correct_entry(
    book: Path,
    seq: int,
    fields: Mapping[str, object],
    *,
    by: str | None = None,
    now: datetime | None = None,
    preview: bool = False,
) -> Corrected:
    """Enter an entry again with these fields in place of its own; an empty value takes a field away.

    It keeps its time, its place in the order, its numbers and, where the same pieces are meant, their
    tags, so that what depends on it still does.

    Raises
        Refused: no such entry, withdrawn already, or a value cannot be read; nothing was written.
        WrongUse: a field its kind does not have, or a kind that cannot be corrected.
        BookUnusable: the book cannot be opened.
    """
    moment = now if now is not None else right_now()
    build = open_build(book, now=moment)
    before = notice(build.snapshot)
    try:
        with open_for_writing(book) as connection:
            withdrawn, entered = _replace(
                connection, Writing(connection, build, now=moment, by=by), seq, fields, who(by)
            )
            if preview:
                raise OnlyLooked
    except OnlyLooked:
        arising = would_arise(build, (withdrawn.logged, entered.logged), moment)
        return Corrected(withdrawn=withdrawn.told(), entered=entered.told(arising, build.warnings))
    arisen = arisen_since(book, before, moment)
    return Corrected(withdrawn=withdrawn.told(), entered=entered.told(arisen, build.warnings))


def fields_of(entry: Logged) -> dict[str, str]:
    """The fields of an entry as text that reads back to the same act: what a slip shows to be put right."""
    declared = KINDS[entry.kind].fields
    typed = dict(entry.act.typed)
    texts = {
        field.word: _text(field, getattr(entry.act, field.key), typed.get(field.word))
        for field in declared
        if getattr(entry.act, field.key) not in (None, ())
    }
    texts["at"] = entry.at.isoformat()
    texts["by"] = entry.by
    if entry.act.with_others:
        texts["with"] = "; ".join(entry.act.with_others)
    if entry.act.remark is not None:
        texts["remark"] = entry.act.remark
    return texts


def _replace(
    connection: sqlite3.Connection,
    writing: Writing,
    seq: int,
    fields: Mapping[str, object],
    by: str,
) -> tuple[Written, Written]:
    original = _original(connection, seq)
    if original.kind in _NOT_CORRECTED:
        raise WrongUse(
            Finding(
                code="not-corrected",
                severity=Severity.STOP,
                where=Where(entry=seq),
                what=f"an entry of kind {original.kind} is not corrected",
                do="withdraw it, or adopt a further plan" if original.kind == "adopt" else "enter it anew",
            )
        )
    merged = _merged(original, fields)
    if "by" not in fields:
        merged["by"] = by
    withdrawn = writing.enter(
        "withdraw", {"seq": str(seq), "why": "corrected", "by": by}, where=Where(entry=seq), rebuild_now=False
    )
    # The look-up tables must lack the original while the new names are looked up.
    writing.rebuild()
    entered = writing.enter(
        original.kind, merged, where=Where(entry=seq), kept=original.act.minted, corrects=seq
    )
    writing.keep_geometry()
    return withdrawn, entered


def _original(connection: sqlite3.Connection, seq: int) -> Logged:
    row = entry_at(connection, seq) if seq > 0 else None
    if row is not None:
        try:
            return logged_of(row)
        except NOT_READABLE:
            pass
    so, do = (
        ("cannot be read", "run check") if row is not None else ("does not exist", "look it up in the log")
    )
    raise Refused(
        Finding(
            code="no-such-entry",
            severity=Severity.STOP,
            where=Where(entry=seq),
            what=f"this entry {so}",
            do=do,
        )
    )


def _merged(original: Logged, fields: Mapping[str, object]) -> dict[str, object]:
    merged: dict[str, object] = dict(fields_of(original))
    given = {_word(head): value for head, value in fields.items()}
    # Another choice within a group of alternatives takes the place of the one made before.
    for group in KINDS[original.kind].one_of:
        if any(word in given for word in group):
            for word in group:
                merged.pop(word, None)
    for word in given:
        merged.pop(word, None)
    merged.update({head: value for head, value in fields.items() if value not in ("", None)})
    return merged


def _word(head: str) -> str:
    return head.split("[", maxsplit=1)[0].strip()


def _text(field: Field, value: object, typed: str | None) -> str:
    if typed is not None and field.takes not in (Takes.NAME, Takes.SHARE):
        return typed
    if isinstance(value, tuple):
        return "; ".join(_item(field, item) for item in value)
    return _item(field, value)


def _item(field: Field, value: object) -> str:
    match value:
        case Share():
            return value.what if value.mass_kg is None else f"{value.what} {_exact(value.mass_kg)} kg"
        case Measure():
            return f"{_exact(value.value)} {value.unit}"
        case KeptOffcut():
            if value.length_m is None or value.width_m is None:
                return value.fate or ""
            return f"{_exact(value.length_m)} m x {_exact(value.width_m)} m"
        case bool():
            return "yes" if value else "no"
        case date():
            return value.isoformat()
        case float() if field.takes is Takes.RATIO:
            return f"1:{_exact(value)}"
        case float():
            return f"{_exact(value)} {SI_UNIT[field.dimensions[0]]}" if field.dimensions else _exact(value)
        case _:
            return str(value)


def _exact(number: float) -> str:
    return format(number, ".17g") if float(format(number, ".15g")) != number else format(number, ".15g")
