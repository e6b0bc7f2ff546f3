"""From names as written to names as stored: every number looked up, every new one given out.

Runs inside the transaction that will write the entry, so no other program can give the same number.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from ledger.book.mint import check_character_fits, kind_by_look, next_number
from ledger.book.names import KIND_WORD, Known, NameRefused, PieceRow, choices, with_article
from ledger.book.project import key_of
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Act, Cut, Instrument
from ledger.model.declare import KINDS, Field, Takes
from ledger.model.gather import BEGINNING, split_piece_name
from ledger.model.things import TYPE_LETTER, Minted, Share, ThingKind

_MAKING = ("cut", "lay")
_NOT_IN_NUMBERS = set(";,/=\"'")


@dataclass(frozen=True, slots=True, kw_only=True)
class Resolved:
    """The act as it will be stored, or what is wrong with it."""

    act: Act
    findings: tuple[Finding, ...]


def resolve(kind: str, act: Act, known: Known, *, where: Where, kept: tuple[Minted, ...] = ()) -> Resolved:
    """Put canonical names and numbers into an act. `kept` are numbers a correction takes over."""
    resolving = _Resolving(kind=kind, known=known, where=where, kept={minted.name: minted for minted in kept})
    changed: dict[str, Any] = {}
    for declared in KINDS[kind].fields:
        value = getattr(act, declared.key)
        if declared.takes in (Takes.NAME, Takes.SHARE):
            changed[declared.key] = resolving.field(declared, value)
    if isinstance(act, Instrument):
        changed["instrument"] = resolving.instrument(act.instrument)
    if isinstance(act, Cut) and act.offcut is not None and act.offcut.length_m is not None:
        resolving.mint(ThingKind.OFFCUT)
    changed["minted"] = tuple(resolving.minted)
    changed["typed"] = tuple(sorted(act.typed))
    return Resolved(act=dataclasses.replace(act, **changed), findings=tuple(resolving.findings))


class _Resolving:
    def __init__(self, *, kind: str, known: Known, where: Where, kept: dict[str, Minted]) -> None:
        self.kind = kind
        self.known = known
        self.where = where
        self.kept = kept
        self.minted: list[Minted] = []
        self.findings: list[Finding] = []
        self._begun: dict[str, list[PieceRow]] = {}

    def field(self, declared: Field, value: Any) -> Any:
        """The value with every name in it looked up; what cannot be is left and noted."""
        if declared.takes is Takes.SHARE:
            shares: tuple[Share, ...] = value
            names = self._each(declared, tuple(share.what for share in shares))
            return tuple(
                dataclasses.replace(share, what=name) for share, name in zip(shares, names, strict=True)
            )
        if declared.mints is not None:
            mints = declared.mints
            return self._try(declared, value, lambda text: self._number_given(mints, text))
        if isinstance(value, tuple):
            return self._each(declared, value)
        return None if value is None else self._try(declared, value, lambda text: self._name(declared, text))

    def instrument(self, text: str) -> str:
        """Its name; entered again, for a new calibration, it is the same instrument."""
        found = self.known.numbered(text)
        if found is not None and found.kind is ThingKind.INSTRUMENT:
            self.minted.append(Minted(kind=found.kind, number=found.name, name=found.name))
            return found.name
        declared = KINDS["instrument"].fields[0]
        return str(self._try(declared, text, lambda given: self._own(ThingKind.INSTRUMENT, given)))

    def mint(self, kind: ThingKind) -> str:
        """Give out the next number of a kind, or the one that a correction takes over."""
        for minted in self.kept.values():
            if minted.kind is kind and minted not in self.minted and kind is not ThingKind.PIECE:
                self.minted.append(minted)
                return minted.number
        number = self._next(kind)
        self.minted.append(Minted(kind=kind, number=number, name=number))
        return number

    def _each(self, declared: Field, texts: tuple[str, ...]) -> tuple[str, ...]:
        names = tuple(
            str(self._try(declared, text, lambda given: self._name(declared, given))) for text in texts
        )
        twice = sorted({name for name in names if names.count(name) > 1})
        if twice and declared.things:
            self._note(declared, "named-twice", f"{choices(twice)} is named twice", "name each once")
        return names

    def _try(self, declared: Field, value: Any, look_up: Callable[[Any], str]) -> Any:
        try:
            return look_up(value)
        except NameRefused as refused:
            self._note(declared, refused.code, refused.what, refused.do)
            return value

    def _note(self, declared: Field, code: str, what: str, do: str) -> None:
        where = dataclasses.replace(self.where, column=declared.word)
        self.findings.append(Finding(code=code, severity=Severity.STOP, where=where, what=what, do=do))

    def _name(self, declared: Field, text: str) -> str:
        things = declared.things
        if not things or things == (ThingKind.PERSON,):
            return text
        if self.kind == "note":
            found = self.known.anything(text)
            return text if found is None else found.name
        if ThingKind.PIECE in things:
            begins = declared.key in BEGINNING.get(self.kind, ())
            name = self._piece(text, begins=begins)
            if name is not None:
                self._take_over(name)
                return name
        return self.known.find(text, things).name

    def _take_over(self, name: str) -> None:
        # A later entry may have kept the piece in being; the correction still lists what the first gave out.
        kept = self.kept.get(name)
        if kept is not None and kept not in self.minted:
            self.minted.append(kept)

    def _piece(self, text: str, *, begins: bool) -> str | None:
        found = self.known.numbered(text)
        if found is not None:
            return found.name if found.kind is ThingKind.PIECE else None
        split = split_piece_name(text.strip())
        if split is not None:
            part = self.known.part_with_pieces(split[0])
            return None if part is None else self._piece_by_running(part, split[1], begins=begins)
        part = self.known.part_with_pieces(text)
        return None if part is None else self._piece_of_part(part, begins=begins)

    def _piece_by_running(self, part: str, running: int, *, begins: bool) -> str:
        name = f"{part}/{running}"
        pieces = self._pieces_of(part)
        if any(piece.name == name for piece in pieces):
            return name
        next_running = 1 + max((piece.running for piece in pieces), default=0)
        if begins and (name in self.kept or (running == next_running and self.known.part(part) is not None)):
            return self._begin(part, running)
        there = [piece.name for piece in pieces] + ([f"{part}/{next_running}"] if begins else [])
        raise NameRefused(
            "name-unknown",
            f"there is no piece {name!r}",
            f"write {choices(there)}" if there else f"no piece of {part} has begun",
        )

    def _piece_of_part(self, part: str, *, begins: bool) -> str:
        pieces = self._pieces_of(part)
        live = [piece for piece in pieces if not piece.scrapped]
        planned = self.known.part(part)
        quantity = 0 if planned is None else planned.quantity
        # What was scrapped is made again by cutting or laying; on a scale it is more likely the scrap itself.
        again = not pieces or self.kind in _MAKING
        fresh = begins and planned is not None
        fresh = fresh and ((not live and again) or (self.kind == "cut" and len(live) < quantity))
        if fresh:
            return self._begin(part, 1 + max((piece.running for piece in pieces), default=0))
        if not live:
            raise NameRefused(
                "piece-not-begun",
                f"no piece of {part} has begun" if not pieces else f"every piece of {part} is scrapped",
                "log how it was made first, for example cut or lay"
                if not begins or planned is None
                else f"write {part}/{1 + pieces[-1].running} if this is a new one",
            )
        if len(live) == 1 and not (self.kind == "cut" and quantity > 1):
            return live[0].name
        raise NameRefused(
            "piece-ambiguous",
            f"{part} has {len(live)} live piece{'s' if len(live) > 1 else ''}",
            f"write {choices(piece.name for piece in live)}, or scan its tag",
        )

    def _pieces_of(self, part: str) -> list[PieceRow]:
        return [*self.known.pieces_of(part), *self._begun.get(part, ())]

    def _begin(self, part: str, running: int) -> str:
        name = f"{part}/{running}"
        kept = self.kept.get(name)
        number = self._next(ThingKind.PIECE) if kept is None else kept.number
        self.minted.append(Minted(kind=ThingKind.PIECE, number=number, name=name))
        self._begun.setdefault(part, []).append(
            PieceRow(name=name, number=number, part=part, running=running, fitted_into=None, scrapped=False)
        )
        return name

    def _number_given(self, kind: ThingKind, text: str | None) -> str:
        return self.mint(kind) if text is None or not text.strip() else self._own(kind, text)

    def _own(self, kind: ThingKind, text: str) -> str:
        number = text.strip()
        wrong = sorted({character for character in number if character in _NOT_IN_NUMBERS})
        # The name on an instrument is never one of several in a row, so it may be of several words.
        if kind is not ThingKind.INSTRUMENT and (wrong or number.split() != [number]):
            raise NameRefused(
                "number-unreadable",
                f"{number!r} has {' '.join(wrong) if wrong else 'a space'} in it",
                f"write it with a hyphen, for example {'-'.join(number.split())}"
                if not wrong
                else "use letters, digits, hyphens and points",
            )
        look = kind_by_look(key_of(number))
        if look is not None:
            number = key_of(number)
            self._refuse_wrong_look(kind, look, number)
        found = self.known.anything(number)
        if found is not None:
            raise NameRefused(
                "number-taken",
                f"{number!r} already stands for {with_article(found.kind)}",
                "write another number, or leave it out and one is given",
            )
        self.minted.append(Minted(kind=kind, number=number, name=number))
        return number

    def _refuse_wrong_look(self, kind: ThingKind, look: ThingKind, number: str) -> None:
        if not check_character_fits(number):
            raise NameRefused(
                "number-mistyped",
                f"{number!r} looks like a number given by the book, but its last character does not fit",
                "read it again, or use another number of your own",
            )
        if look is not kind and kind in TYPE_LETTER:
            raise NameRefused(
                "number-of-another-kind",
                f"{number!r} looks like {with_article(look)}'s number",
                f"a {KIND_WORD[kind]}'s number begins with {TYPE_LETTER[kind]}",
            )

    def _next(self, kind: ThingKind) -> str:
        (running,) = self.known.connection.execute(
            "SELECT coalesce(max(running), 0) FROM minted WHERE kind = ?", (kind.value,)
        ).fetchone()
        given = {minted.number for minted in self.minted}
        while True:
            number, running = next_number(kind, running)
            if number not in given and not self._taken(number):
                return number

    def _taken(self, number: str) -> bool:
        # A number given once and withdrawn since stands for nothing now, but may be on a tag.
        given = self.known.connection.execute("SELECT 1 FROM minted WHERE key = ?", (number,)).fetchone()
        return given is not None or self.known.anything(number) is not None
