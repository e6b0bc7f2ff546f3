"""Everything the bench screen shows, frozen: cups, next jobs, today, what is open to choose from."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from ledger.errors import Finding
from ledger.mass.charges import charges
from ledger.mass.report import PieceMass
from ledger.model.entry import Logged
from ledger.model.plan import Plan
from ledger.model.snapshot import PieceState, Snapshot
from ledger.model.things import ThingKind
from ledger.operations.clock_cups import Cup, cups_on_bench
from ledger.operations.judge_reading import band_of, expected_of
from ledger.operations.list_next_jobs import Job, list_next_jobs
from ledger.operations.propose_entry import last_entry, scale_in_use
from ledger.operations.saying import say
from ledger.operations.take_stock import Plate, Stock, take_stock
from ledger.units import show_small_mass

_MOST_JOBS = 200


@dataclass(frozen=True, slots=True, kw_only=True)
class LoggedLine:
    """One entry that counts, in one line."""

    seq: int
    at: datetime
    by: str
    kind: str
    says: str


@dataclass(frozen=True, slots=True, kw_only=True)
class OpenThing:
    """Something a field can be completed with: what is typed, and what it is."""

    text: str
    says: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Place:
    """Where a part is: its CG in the build's axes, x aft and y right."""

    part: str
    title: str
    assembly: str
    x_m: float
    y_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class BenchView:
    """What the bench shows at one moment. `today_kg` is what today's entries put into pieces.

    `bands` say how far from `expected` a reading off the scale in use may lie by chance, in kg.
    """

    plate: Plate
    cups: tuple[Cup, ...]
    jobs: tuple[Job, ...]
    today: tuple[LoggedLine, ...]
    today_kg: float
    last: LoggedLine | None
    findings: tuple[Finding, ...]
    open_things: Mapping[ThingKind, tuple[OpenThing, ...]]
    expected: Mapping[str, PieceMass]
    places: tuple[Place, ...]
    bands: Mapping[str, float]

    def lines_about(self, name: str) -> tuple[tuple[str, str], ...]:
        """What is expected of a piece on the scale, what comes next for it, and what is wrong with it."""
        lines: list[tuple[str, str]] = []
        mass = self.expected.get(name)
        expected = None if mass is None else expected_of(mass)
        if mass is not None and expected is not None:
            band = show_small_mass(self.bands.get(name), self.plate.display)
            figure = show_small_mass(expected, self.plate.display)
            lines.append(("", f"expected {figure}  +-{band}, by {mass.known_by}"))
        job = next((job for job in self.jobs if job.thing == name), None)
        if job is not None:
            lines.append(("", f"next: {job.words}"))
        lines += [
            (finding.severity.value.upper(), finding.what)
            for finding in self.findings
            if finding.where.thing == name and finding.severity.value != "note"
        ][:3]
        return tuple(lines)


def look_at_bench(book: Path | Stock, now: datetime) -> BenchView:
    """Look at the whole bench. Newest entries of today come first."""
    stock = take_stock(book) if isinstance(book, Path) else book
    snapshot, weights = stock.build.snapshot, stock.weights
    todays = [entry for entry in snapshot.logged if _same_day(entry.at, now)]
    seqs = {entry.seq for entry in todays}
    cups = cups_on_bench(snapshot, weights, now)
    last = last_entry(stock)
    expected = {piece.piece: piece for part in weights.parts for piece in part.pieces}
    scale = scale_in_use(stock)
    return BenchView(
        plate=stock.plate,
        cups=cups,
        jobs=list_next_jobs(snapshot, weights)[:_MOST_JOBS],
        today=tuple(_line(entry) for entry in reversed(todays)),
        today_kg=sum(
            charge.mass_kg or 0.0
            for charge in charges(snapshot)
            if charge.seq in seqs and charge.piece in snapshot.pieces
        )
        if todays
        else 0.0,
        last=None if last is None else _line(last),
        findings=stock.findings,
        open_things=open_things(snapshot, tuple(cup.number for cup in cups if not cup.unfit)),
        expected=expected,
        bands={name: band_of(stock, mass, scale) for name, mass in expected.items()},
        places=tuple(
            Place(part=one.part, title=one.title, assembly=one.assembly, x_m=one.cg_m[0], y_m=one.cg_m[1])
            for one in weights.parts
            if one.cg_m is not None
        ),
    )


def open_things(
    snapshot: Snapshot, on_bench: tuple[str, ...] = ()
) -> Mapping[ThingKind, tuple[OpenThing, ...]]:
    """What a field of each kind can be completed with, newest first; scrapped things are left out.

    Cups that stand on the bench come before all others, in the order they stand there.
    """
    pieces = tuple(
        OpenThing(text=piece.name, says=f"tag {piece.number}")
        for piece in reversed(tuple(snapshot.pieces.values()))
        if piece.state is not PieceState.SCRAPPED
    )
    parts = tuple(OpenThing(text=part.name, says=part.title) for part in snapshot.plan.parts)
    return {
        **_in_stock(snapshot, on_bench),
        ThingKind.PIECE: pieces + parts,
        **_named_by_plan(snapshot.plan),
    }


def _in_stock(snapshot: Snapshot, on_bench: tuple[str, ...]) -> dict[ThingKind, tuple[OpenThing, ...]]:
    gone = snapshot.gone

    def standing(numbers: Iterable[str], says: Mapping[str, str]) -> tuple[OpenThing, ...]:
        return tuple(
            OpenThing(text=number, says=says[number])
            for number in reversed(tuple(numbers))
            if number not in gone
        )

    return {
        ThingKind.LOT: standing(
            snapshot.lots, {number: lot.receive.material for number, lot in snapshot.lots.items()}
        ),
        ThingKind.SHEET: standing(
            snapshot.sheets, {number: sheet.sheet.laminate for number, sheet in snapshot.sheets.items()}
        ),
        ThingKind.OFFCUT: standing(
            snapshot.offcuts,
            {
                number: f"{1000 * offcut.length_m:.0f} x {1000 * offcut.width_m:.0f} mm of {offcut.sheet}"
                for number, offcut in snapshot.offcuts.items()
            },
        ),
        ThingKind.BATCH: standing(
            # Turned round below, where the newest comes first.
            [*(number for number in snapshot.batches if number not in on_bench), *reversed(on_bench)],
            {number: f"mixed {batch.at:%d %b %H:%M}" for number, batch in snapshot.batches.items()},
        ),
        ThingKind.INSTRUMENT: standing(
            snapshot.scales, {number: scale.instrument.what for number, scale in snapshot.scales.items()}
        ),
    }


def _named_by_plan(plan: Plan) -> dict[ThingKind, tuple[OpenThing, ...]]:
    assemblies: dict[str, None] = {}
    for part in plan.parts:
        steps = part.assembly.split("/") if part.assembly else []
        for depth in range(1, len(steps) + 1):
            assemblies["/".join(steps[:depth])] = None
    return {
        ThingKind.MATERIAL: tuple(OpenThing(text=one.name, says=one.kind.value) for one in plan.materials),
        ThingKind.LAMINATE: tuple(OpenThing(text=one.name, says="laminate") for one in plan.laminates),
        ThingKind.ASSEMBLY: tuple(OpenThing(text=name, says="assembly") for name in assemblies),
        ThingKind.CELL: tuple(OpenThing(text=cell.name, says="cell") for cell in plan.tanks.cells),
        ThingKind.OPENING: tuple(OpenThing(text=one.name, says="opening") for one in plan.tanks.openings),
    }


def _same_day(at: datetime, now: datetime) -> bool:
    return at.astimezone(now.tzinfo).date() == now.date()


def line_of(entry: Logged) -> str:
    """One entry in words: its number, time, person and what it says."""
    return f"No. {entry.seq} {entry.at:%H:%M} {entry.by} {say(entry.kind, entry.act)}"


def _line(entry: Logged) -> LoggedLine:
    return LoggedLine(
        seq=entry.seq, at=entry.at, by=entry.by, kind=entry.kind, says=say(entry.kind, entry.act)
    )
