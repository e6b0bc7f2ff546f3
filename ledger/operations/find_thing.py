"""What a scanned or typed text names."""

from __future__ import annotations

import sqlite3
from dataclasses import dataclass
from pathlib import Path

from ledger.book.names import KIND_WORD, Known, Meant, NameRefused
from ledger.book.opening import open_for_reading
from ledger.book.reading import NOT_READABLE, entry_at, logged_of
from ledger.model.things import ThingKind
from ledger.operations.open_build import open_build
from ledger.operations.saying import say

# What carries a tag, or is called by its part number.
_SCANNED = (
    ThingKind.PIECE,
    ThingKind.PART,
    ThingKind.LOT,
    ThingKind.SHEET,
    ThingKind.OFFCUT,
    ThingKind.BATCH,
    ThingKind.INSTRUMENT,
)


@dataclass(frozen=True, slots=True, kw_only=True)
class FoundThing:
    """A thing of the book or the plan. `number` is on its tag, if it has one; `says` is one plain line."""

    kind: ThingKind
    number: str | None
    name: str
    says: str


def find_thing(book: Path, text: str) -> FoundThing | None:
    """The thing that this text names, or None. A part number names its only live piece.

    Raises
        BookUnusable: the book cannot be opened.
    """
    plan = open_build(book).snapshot.plan
    with open_for_reading(book) as connection:
        known = Known(connection, plan)
        meant = known.anything(text)
        if meant is None:
            return None
        if meant.kind is ThingKind.PART:
            live = [piece for piece in known.pieces_of(meant.name) if not piece.scrapped]
            if len(live) == 1:
                meant = Meant(kind=ThingKind.PIECE, name=live[0].name, number=live[0].number)
        return FoundThing(
            kind=meant.kind, number=meant.number, name=meant.name, says=_says(connection, known, meant)
        )


def why_unknown(book: Path, text: str) -> str:
    """What is wrong with a text that names nothing: mistyped, withdrawn, or near to something known.

    Raises
        BookUnusable: the book cannot be opened.
    """
    plan = open_build(book).snapshot.plan
    with open_for_reading(book) as connection:
        known = Known(connection, plan)
        try:
            known.find(text, _SCANNED)
        except NameRefused as refused:
            if refused.code != "name-unknown" or refused.do.startswith("did you mean"):
                said = (
                    f"{text.strip()!r} is no number known" if refused.code == "name-unknown" else refused.what
                )
                return f"{said}; {refused.do}"
    return ""


def _says(connection: sqlite3.Connection, known: Known, meant: Meant) -> str:
    word = KIND_WORD[meant.kind]
    if meant.kind is ThingKind.PART:
        part = known.part(meant.name)
        title = "" if part is None else f", {part.title}"
        live = sum(not piece.scrapped for piece in known.pieces_of(meant.name))
        return f"{word} {meant.name}{title}, {live} of {0 if part is None else part.quantity} begun"
    held = connection.execute("SELECT seq FROM held WHERE what = ?", (meant.name,)).fetchone()
    hold = "" if held is None else f", ON HOLD since entry {held[0]}"
    if meant.kind is ThingKind.PIECE:
        return f"{_piece(known, meant)}{hold}"
    row = None
    if meant.number is not None:
        row = connection.execute("SELECT seq FROM thing WHERE number = ?", (meant.number,)).fetchone()
    entry = None if row is None else entry_at(connection, row[0])
    if entry is None:
        return f"{word} {meant.name}{hold}"
    try:
        return f"{word} {meant.name}: {say(entry.kind, logged_of(entry).act)}{hold}"
    except NOT_READABLE:
        return f"{word} {meant.name}{hold}"


def _piece(known: Known, meant: Meant) -> str:
    piece = known.piece(meant.name)
    part = None if piece is None else known.part(piece.part)
    title = "" if part is None else f", {part.title}"
    if piece is None:
        return f"piece {meant.name}"
    state = (
        "scrapped" if piece.scrapped else f"in {piece.fitted_into}" if piece.fitted_into else "not fitted yet"
    )
    return f"piece {meant.name}, tag {piece.number}{title}, {state}"
