"""Everything the Weights screen shows, frozen: the headline, the tree row by row, causes, readings."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime
from pathlib import Path

from ledger.errors import Finding, Severity
from ledger.mass.report import AssemblyMass, CauseMass, PartMass, PieceMass, TotalMass
from ledger.model.acts import Weigh
from ledger.model.snapshot import Snapshot
from ledger.operations.take_stock import Stock, take_stock
from ledger.units import Display

# As in the rule for mass off plan: about one in twenty passes two standard uncertainties by chance.
_CHANCE = 2.0
_GRAVE = {Severity.STOP: "STOP", Severity.LOOK: "LOOK"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One weighing as it was read: the mean of its readings, before any tare or correction."""

    seq: int
    at: datetime
    by: str
    reading_kg: float
    scale: str | None
    state: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class WeightRow:
    """One row of the tree. `end` is the place after the last row inside it.

    `key` is its own in the tree, `thing` the name a slip knows it by: of a piece not begun its part's.
    `kind` is assembly, part or piece. `flag` is its own STOP or LOOK, `inside` the gravest below it.
    """

    key: str
    name: str
    title: str
    kind: str
    depth: int
    end: int
    begun: int
    planned: int
    state: str
    estimated_kg: float | None
    best_kg: float | None
    best_u_kg: float | None
    known_by: str
    off_plan: tuple[CauseMass, ...]
    flag: str = ""
    inside: str = ""
    thing: str = ""

    @property
    def off_kg(self) -> float | None:
        """Now less estimated; None where nothing says what it weighs."""
        return None if self.best_kg is None else sum(cause.mass_kg for cause in self.off_plan)


@dataclass(frozen=True, slots=True, kw_only=True)
class WeightsView:
    """The tree depth first. `findings` and `readings` are by the thing's name."""

    display: Display
    total: TotalMass
    off_kg: float
    by_chance: bool
    off_plan: tuple[CauseMass, ...]
    rows: tuple[WeightRow, ...]
    widest_off_kg: float
    findings: Mapping[str, tuple[Finding, ...]]
    readings: Mapping[str, tuple[Reading, ...]]


def look_at_weights(book: Path | Stock) -> WeightsView:
    """Look at what the wing weighs and why."""
    stock = take_stock(book, with_fuel=False) if isinstance(book, Path) else book
    report, snapshot = stock.weights, stock.build.snapshot
    about = _by_thing(stock.findings)
    titles = {part.name: part.title for part in snapshot.plan.parts}
    rows = _Growing(parts={part.part: part for part in report.parts}, about=about, titles=titles)
    rows.grow(report.assemblies)
    total = report.total
    off = total.best_kg - total.estimated_kg
    return WeightsView(
        display=snapshot.plan.display,
        total=total,
        off_kg=off,
        by_chance=abs(off) <= _CHANCE * total.best_u_kg,
        off_plan=report.off_plan,
        rows=tuple(rows.done),
        widest_off_kg=max((abs(row.off_kg or 0.0) for row in rows.done), default=0.0),
        findings=about,
        readings=_readings(snapshot),
    )


@dataclass(slots=True, kw_only=True)
class _Growing:
    """Rows put one after another; each learns where it ends once what is inside it stands."""

    parts: Mapping[str, PartMass]
    about: Mapping[str, tuple[Finding, ...]]
    titles: Mapping[str, str]
    done: list[WeightRow] = field(default_factory=list)

    def grow(self, assemblies: Sequence[AssemblyMass]) -> None:
        """Put every assembly, each before what is inside it; the whole itself is the headline."""
        below: dict[str, list[AssemblyMass]] = {}
        for one in assemblies:
            if one.path:
                below.setdefault(one.path.rpartition("/")[0], []).append(one)
        for one in below.get("", ()):
            self._assembly(one, below)
        for whole in assemblies[:1]:
            if not whole.path:
                self._parts_of(whole, 0)

    def _assembly(self, one: AssemblyMass, below: Mapping[str, list[AssemblyMass]]) -> None:
        place, depth = len(self.done), one.depth - 1
        self.done.append(
            WeightRow(
                key=one.path,
                name=one.path.rpartition("/")[2],
                title=one.path,
                kind="assembly",
                depth=depth,
                end=0,
                begun=one.pieces_begun,
                planned=one.pieces_planned,
                state="",
                estimated_kg=one.estimated_kg,
                best_kg=one.best_kg,
                best_u_kg=one.best_u_kg,
                known_by=one.known_by,
                off_plan=one.off_plan,
                flag=_gravest(self.about.get(one.path, ())),
            )
        )
        for inner in below.get(one.path, ()):
            self._assembly(inner, below)
        self._parts_of(one, depth + 1)
        self._close(place)

    def _parts_of(self, one: AssemblyMass, depth: int) -> None:
        for name in one.parts:
            # What coats a cell counts in an assembly and is no part of the plan.
            if name in self.parts:
                self._part(self.parts[name], depth)

    def _part(self, part: PartMass, depth: int) -> None:
        place = len(self.done)
        counted = [piece for piece in part.pieces if piece.state not in ("scrapped", "spare")]
        self.done.append(
            WeightRow(
                key=part.part,
                name=part.part,
                title=self.titles.get(part.part, part.title),
                kind="part",
                depth=depth,
                end=0,
                begun=sum(piece.state != "planned" for piece in counted),
                planned=part.quantity,
                state=part.state,
                estimated_kg=part.estimated_kg,
                best_kg=part.best_kg,
                best_u_kg=part.best_u_kg,
                known_by="".join(sorted({piece.known_by for piece in counted})),
                off_plan=part.off_plan,
                flag=_gravest(self.about.get(part.part, ())),
            )
        )
        for number, piece in enumerate(part.pieces, start=1):
            self._piece(piece, depth + 1, f"{part.part} {number}")
        self._close(place)

    def _piece(self, piece: PieceMass, depth: int, place: str) -> None:
        counts = piece.state not in ("scrapped", "spare")
        self.done.append(
            WeightRow(
                key=piece.piece if piece.number else place,
                name=piece.piece if piece.number else "not begun",
                title=f"tag {piece.number}" if piece.number else piece.piece,
                thing=piece.piece,
                kind="piece",
                depth=depth,
                end=len(self.done) + 1,
                begun=int(counts and piece.state != "planned"),
                planned=int(counts),
                state=piece.state,
                estimated_kg=piece.estimated_kg,
                best_kg=piece.best_kg,
                best_u_kg=piece.best_u_kg,
                known_by=piece.known_by,
                off_plan=piece.off_plan,
                flag=_gravest(self.about.get(piece.piece, ())) if piece.number else "",
            )
        )

    def _close(self, place: int) -> None:
        row, end = self.done[place], len(self.done)
        inside = _worse(*(word for one in self.done[place + 1 : end] for word in (one.flag, one.inside)))
        self.done[place] = replace(row, end=end, inside=inside)


def _by_thing(findings: Sequence[Finding]) -> dict[str, tuple[Finding, ...]]:
    about: dict[str, tuple[Finding, ...]] = {}
    for finding in findings:
        if finding.where.thing is not None:
            about[finding.where.thing] = (*about.get(finding.where.thing, ()), finding)
    return about


def _gravest(findings: Sequence[Finding]) -> str:
    return _worse(*(_GRAVE.get(finding.severity, "") for finding in findings))


def _worse(*words: str) -> str:
    return "STOP" if "STOP" in words else "LOOK" if "LOOK" in words else ""


def _readings(snapshot: Snapshot) -> dict[str, tuple[Reading, ...]]:
    """Every weighing that counts, by what was weighed, oldest first; a part has those of its pieces."""
    found: dict[str, list[Reading]] = {}
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Weigh) or not act.reading_kg:
            continue
        reading = Reading(
            seq=logged.seq,
            at=logged.at,
            by=logged.by,
            reading_kg=sum(act.reading_kg) / len(act.reading_kg),
            scale=act.scale,
            state=act.state,
        )
        piece = snapshot.pieces.get(act.what)
        for name in (act.what,) if piece is None else (act.what, piece.part):
            found.setdefault(name, []).append(reading)
    return {name: tuple(readings) for name, readings in found.items()}
