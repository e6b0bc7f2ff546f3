"""What a written or scanned name stands for, against the book's tables and the current plan."""

from __future__ import annotations

import difflib
import sqlite3
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

from ledger.book.mint import check_character_fits, kind_by_look
from ledger.book.project import key_of
from ledger.errors import Unplaced
from ledger.model.gather import split_piece_name
from ledger.model.plan import Part, Plan
from ledger.model.things import ThingKind

KIND_WORD: dict[ThingKind, str] = {
    ThingKind.MATERIAL: "material",
    ThingKind.LAMINATE: "laminate",
    ThingKind.PART: "part",
    ThingKind.PIECE: "piece",
    ThingKind.ASSEMBLY: "assembly",
    ThingKind.LOT: "lot",
    ThingKind.SHEET: "sheet",
    ThingKind.OFFCUT: "offcut",
    ThingKind.BATCH: "cup",
    ThingKind.INSTRUMENT: "instrument",
    ThingKind.CELL: "cell",
    ThingKind.OPENING: "opening",
    ThingKind.ITERATION: "iteration",
    ThingKind.PERSON: "person",
}
_NUMBERED = (
    ThingKind.LOT,
    ThingKind.SHEET,
    ThingKind.OFFCUT,
    ThingKind.BATCH,
    ThingKind.INSTRUMENT,
    ThingKind.PIECE,
)
_NAMED_BY_PLAN = (
    ThingKind.MATERIAL,
    ThingKind.LAMINATE,
    ThingKind.ASSEMBLY,
    ThingKind.CELL,
    ThingKind.OPENING,
)
_MOST_COMPARED = 5000


class NameRefused(Unplaced):
    """A name that stands for nothing, for the wrong kind of thing, or for several."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Meant:
    """What a name stands for. `name` is how bodies write it; `number` is on its tag, if it has one."""

    kind: ThingKind
    name: str
    number: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class PieceRow:
    """A piece as the tables have it."""

    name: str
    number: str
    part: str
    running: int
    fitted_into: str | None
    scrapped: bool


class Known:
    """Look-ups inside one transaction. `plan` is the one that counts at that moment, if any."""

    def __init__(self, connection: sqlite3.Connection, plan: Plan | None) -> None:
        self.connection = connection
        self.plan = plan

    @cached_property
    def _parts(self) -> dict[str, Part]:
        return {} if self.plan is None else {key_of(part.name): part for part in self.plan.parts}

    @cached_property
    def _planned(self) -> dict[ThingKind, dict[str, str]]:
        if self.plan is None:
            return {kind: {} for kind in _NAMED_BY_PLAN}
        names: dict[ThingKind, Iterable[str]] = {
            ThingKind.MATERIAL: (material.name for material in self.plan.materials),
            ThingKind.LAMINATE: (laminate.name for laminate in self.plan.laminates),
            ThingKind.ASSEMBLY: assemblies_of(self.plan),
            ThingKind.CELL: (cell.name for cell in self.plan.tanks.cells),
            ThingKind.OPENING: (opening.name for opening in self.plan.tanks.openings),
        }
        return {kind: {key_of(name): name for name in found} for kind, found in names.items()}

    def part(self, text: str) -> Part | None:
        """The part of the plan with this number."""
        return self._parts.get(key_of(text))

    def pieces_of(self, part: str) -> tuple[PieceRow, ...]:
        """Every piece of a part that was begun, scrapped ones included."""
        rows = self.connection.execute(
            "SELECT name, number, part, running, fitted_into, scrapped FROM piece WHERE part = ? "
            "ORDER BY running",
            (part,),
        )
        return tuple(_piece_row(row) for row in rows)

    def piece(self, name: str) -> PieceRow | None:
        """The piece of that name."""
        row = self.connection.execute(
            "SELECT name, number, part, running, fitted_into, scrapped FROM piece WHERE name = ?", (name,)
        ).fetchone()
        return None if row is None else _piece_row(row)

    def part_with_pieces(self, text: str) -> str | None:
        """The part of that number, in the plan or, if an earlier iteration had it, in the book."""
        part = self.part(text)
        if part is not None:
            return part.name
        row = self.connection.execute(
            "SELECT part FROM piece WHERE part = ? OR upper(part) = ? LIMIT 1", (text.strip(), key_of(text))
        ).fetchone()
        return None if row is None else row[0]

    def numbered(self, text: str) -> Meant | None:
        """The thing with this number on its tag, or a piece by its name."""
        row = self.connection.execute(
            "SELECT kind, number, name FROM thing WHERE key = ?", (key_of(text),)
        ).fetchone()
        if row is not None:
            kind, number, name = row
            return Meant(kind=ThingKind(kind), number=number, name=name)
        split = split_piece_name(text.strip())
        if split is None:
            return None
        part = self.part_with_pieces(split[0])
        found = None if part is None else self.piece(f"{part}/{split[1]}")
        return None if found is None else Meant(kind=ThingKind.PIECE, number=found.number, name=found.name)

    def planned(self, text: str, kind: ThingKind) -> Meant | None:
        """The thing of the plan of this kind and name; an assembly also by its last segments.

        Raises
            NameRefused: the last segments fit several assemblies.
        """
        name = self._planned[kind].get(key_of(text))
        if name is None and kind is ThingKind.ASSEMBLY:
            ending = "/" + key_of(text).strip("/")
            fitting = [path for key, path in self._planned[kind].items() if key.endswith(ending)]
            if len(fitting) > 1:
                raise NameRefused(
                    "name-ambiguous",
                    f"{text.strip()!r} fits {len(fitting)} assemblies",
                    f"write {choices(fitting)}",
                )
            name = fitting[0] if fitting else None
        return None if name is None else Meant(kind=kind, name=name)

    def iteration(self, text: str) -> Meant | None:
        """The iteration of that name."""
        row = self.connection.execute(
            "SELECT name FROM iteration WHERE upper(name) = ? ORDER BY seq DESC", (key_of(text),)
        ).fetchone()
        return None if row is None else Meant(kind=ThingKind.ITERATION, name=row[0])

    def anything(self, text: str) -> Meant | None:
        """Whatever this text stands for, of any kind."""
        found = self.numbered(text)
        if found is not None:
            return found
        part = self.part_with_pieces(text)
        if part is not None:
            return Meant(kind=ThingKind.PART, name=part)
        for kind in _NAMED_BY_PLAN:
            try:
                found = self.planned(text, kind)
            except NameRefused:
                continue
            if found is not None:
                return found
        return self.iteration(text)

    def find(self, text: str, kinds: tuple[ThingKind, ...]) -> Meant:
        """The thing of one of these kinds that the text stands for. Pieces begin elsewhere.

        Raises
            NameRefused: nothing, or a thing of another kind, has this name.
        """
        found = self.numbered(text)
        if found is not None and found.kind in kinds:
            return found
        for kind in kinds:
            if kind in _NAMED_BY_PLAN:
                planned = self.planned(text, kind)
                if planned is not None:
                    return planned
        if ThingKind.PART in kinds and self.part(text) is not None:
            return Meant(kind=ThingKind.PART, name=self._parts[key_of(text)].name)
        if ThingKind.ITERATION in kinds:
            iteration = self.iteration(text)
            if iteration is not None:
                return iteration
        raise self._refusal(text, kinds)

    def _refusal(self, text: str, kinds: tuple[ThingKind, ...]) -> NameRefused:
        wanted = wanted_words(kinds)
        other = self.anything(text)
        shown = text.strip()
        if other is not None:
            return NameRefused(
                "name-of-another-kind",
                f"{shown!r} is {with_article(other.kind)}, not {wanted}",
                f"scan or write {wanted}",
            )
        look = kind_by_look(key_of(shown))
        near = self.nearest(shown, kinds)
        hint = f"did you mean {choices(near)}?" if near else self._how_to_begin(kinds)
        if look is not None and not check_character_fits(key_of(shown)):
            return NameRefused(
                "number-mistyped", f"{shown!r} is mistyped: its last character does not fit", hint
            )
        withdrawn = self.connection.execute(
            "SELECT minted.seq FROM minted JOIN withdrawn ON withdrawn.seq = minted.seq WHERE key = ?",
            (key_of(shown),),
        ).fetchone()
        if withdrawn is not None:
            return NameRefused(
                "name-withdrawn", f"{shown!r} was withdrawn with entry {withdrawn[0]}", "enter it again first"
            )
        return NameRefused("name-unknown", f"there is no {wanted_words(kinds, bare=True)} {shown!r}", hint)

    def nearest(self, text: str, kinds: tuple[ThingKind, ...]) -> tuple[str, ...]:
        """Up to three known names of these kinds that look like the text."""
        known: dict[str, str] = {}
        for kind in kinds:
            if kind in _NUMBERED:
                rows = self.connection.execute(
                    "SELECT number, name FROM thing WHERE kind = ? ORDER BY seq DESC LIMIT ?",
                    (kind.value, _MOST_COMPARED),
                )
                for number, name in rows:
                    known[key_of(number)] = number
                    known[key_of(name)] = name
            if kind in _NAMED_BY_PLAN:
                known.update(self._planned[kind])
            if kind in (ThingKind.PIECE, ThingKind.PART):
                known.update({key: part.name for key, part in self._parts.items()})
        close = difflib.get_close_matches(key_of(text), list(known), n=3, cutoff=0.6)
        return tuple(known[key] for key in close)

    def _how_to_begin(self, kinds: tuple[ThingKind, ...]) -> str:
        hints = {
            ThingKind.LOT: "enter it first with: receive",
            ThingKind.SHEET: "enter it first with: sheet",
            ThingKind.BATCH: "enter it first with: mix",
            ThingKind.INSTRUMENT: "enter it first with: instrument",
        }
        if self.plan is not None and kinds and kinds[0] in _NAMED_BY_PLAN:
            names = sorted(self._planned[kinds[0]].values())
            if names:
                return f"the plan has {choices(names)}"
        begin = next((hints[kind] for kind in kinds if kind in hints), None)
        latest = self._latest(kinds)
        if latest:
            return f"the latest {'is' if len(latest) == 1 else 'are'} {' and '.join(latest)}" + (
                f"; or {begin}" if begin else ""
            )
        return begin or "check it against the plan and the tags"

    def _latest(self, kinds: tuple[ThingKind, ...]) -> list[str]:
        marks = ", ".join("?" * len(kinds))
        rows = self.connection.execute(
            f"SELECT name FROM thing WHERE kind IN ({marks}) ORDER BY seq DESC LIMIT 3",  # noqa: S608
            tuple(kind.value for kind in kinds),
        )
        return [row[0] for row in rows]


def assemblies_of(plan: Plan) -> tuple[str, ...]:
    """Every node of the assembly tree, by its full path."""
    paths: dict[str, None] = {}
    for part in plan.parts:
        segments = [segment for segment in part.assembly.split("/") if segment]
        for count in range(1, len(segments) + 1):
            paths["/".join(segments[:count])] = None
    return tuple(paths)


def choices(names: Iterable[str], *, most: int = 5) -> str:
    """`a, b or c`, cut short where there are many."""
    listed = list(names)
    if len(listed) > most:
        return f"{', '.join(listed[:most])} or {len(listed) - most} more"
    return listed[0] if len(listed) == 1 else f"{', '.join(listed[:-1])} or {listed[-1]}"


def with_article(kind: ThingKind) -> str:
    """`a cup`, `an offcut`."""
    word = KIND_WORD[kind]
    return f"{'an' if word[0] in 'aeiou' else 'a'} {word}"


def wanted_words(kinds: tuple[ThingKind, ...], *, bare: bool = False) -> str:
    """`a sheet or an offcut`, or bare `sheet or offcut`."""
    return choices([KIND_WORD[kind] if bare else with_article(kind) for kind in kinds], most=9)


def _piece_row(row: tuple[str, str, str, int, str | None, int | None]) -> PieceRow:
    name, number, part, running, fitted_into, scrapped = row
    return PieceRow(
        name=name,
        number=number,
        part=part,
        running=running,
        fitted_into=fitted_into,
        scrapped=bool(scrapped),
    )
