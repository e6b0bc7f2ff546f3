"""What a thing was made from and what it went into, as far as the record goes both ways."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, field

from ledger.errors import Finding, Refused, Severity, Where
from ledger.mass.charges import Charge, charges
from ledger.mass.cups import batch_accounts, share_out_cups
from ledger.mass.mix_ratio import measured
from ledger.mass.plan_index import Indexes
from ledger.mass.read_entries import read_deposits
from ledger.mass.report import BatchAccount
from ledger.model.acts import Fit, Instrument, Mix, Receive, Sheet, Weigh
from ledger.model.entry import Logged
from ledger.model.references import names_used
from ledger.model.snapshot import Piece, PieceState, Snapshot
from ledger.model.things import ThingKind


@dataclass(frozen=True, slots=True, kw_only=True)
class TraceLink:
    """One thing another was made from, or went into. `mass_kg` is None where it cannot be known.

    `how` says by what work; `state` is the thing's own state today.
    """

    what: str
    kind: str
    mass_kg: float | None
    how: str
    state: str
    made_from: tuple[TraceLink, ...] = ()
    went_into: tuple[TraceLink, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Trace:
    """One thing, good or bad, with all it came from and all it is in. `entries` are those that name it."""

    what: str
    kind: str
    state: str
    made_from: tuple[TraceLink, ...]
    went_into: tuple[TraceLink, ...]
    entries: tuple[int, ...]


def trace(snapshot: Snapshot, what: str) -> Trace:
    """Follow a number or name both ways.

    Raises
        Refused: nothing of that name or number is in the book or its plan.
    """
    ways = _Ways(snapshot=snapshot)
    name = known_name(snapshot, what)
    if name is None:
        raise Refused(
            Finding(
                code="unknown-number",
                severity=Severity.STOP,
                where=Where(thing=what),
                what="nothing in the book has this number or name",
                do="scan the tag again, or look the number up on the Trace screen",
            )
        )
    return Trace(
        what=name,
        kind=ways.kind_of(name),
        state=ways.state_of(name),
        made_from=ways.back_from(name, frozenset()),
        went_into=ways.on_from(name, frozenset()),
        entries=_entries_about(snapshot, name),
    )


def known_name(snapshot: Snapshot, what: str) -> str | None:
    """The number or name as the book writes it: case does not matter, a tag number names its piece.

    A part names its only live piece, and an assembly may be named by the end of its path.
    """
    wanted = what.strip().casefold()
    for piece in snapshot.pieces.values():
        if wanted in (piece.number.casefold(), piece.name.casefold()):
            return piece.name
    live = [
        piece.name
        for piece in snapshot.pieces.values()
        if piece.part.casefold() == wanted and piece.state is not PieceState.SCRAPPED
    ]
    if len(live) == 1:
        return live[0]
    if len(live) > 1:
        return next(piece.part for piece in snapshot.pieces.values() if piece.name == live[0])
    exact = next((name for name in _other_names(snapshot) if name.casefold() == wanted), None)
    if exact is not None:
        return exact
    tails = [path for path in _assemblies(snapshot) if path.casefold().endswith(f"/{wanted}")]
    return tails[0] if len(tails) == 1 else None


def _other_names(snapshot: Snapshot) -> tuple[str, ...]:
    plan = snapshot.plan
    stock = (snapshot.lots, snapshot.sheets, snapshot.offcuts, snapshot.batches, snapshot.scales)
    return (
        *(number for numbers in stock for number in numbers),
        *(part.name for part in plan.parts),
        *_assemblies(snapshot),
        *(cell.name for cell in plan.tanks.cells),
        *(material.name for material in plan.materials),
    )


def _assemblies(snapshot: Snapshot) -> dict[str, None]:
    """Every assembly of the plan and every place something was fitted, with those above them."""
    paths: dict[str, None] = {}
    places = [part.assembly for part in snapshot.plan.parts]
    places += [
        logged.act.into for logged in snapshot.logged if isinstance(logged.act, Fit) and logged.act.into
    ]
    for place in places:
        if place in snapshot.pieces or not place:
            continue
        segments = place.split("/")
        for depth in range(len(segments), 0, -1):
            paths["/".join(segments[:depth])] = None
    return paths


@dataclass(frozen=True, slots=True, kw_only=True)
class _Way:
    """One step of the material: from a source into a destination, by one kind of work."""

    source: str
    into: str
    how: str
    mass_kg: float | None


@dataclass(slots=True, kw_only=True)
class _Ways:
    """Every step of the material in a build, to be followed either way."""

    snapshot: Snapshot
    onward: dict[str, list[_Way]] = field(default_factory=lambda: defaultdict(list))
    backward: dict[str, list[_Way]] = field(default_factory=lambda: defaultdict(list))
    assemblies: dict[str, None] = field(default_factory=dict)
    ends: dict[str, tuple[TraceLink, ...]] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.assemblies = _assemblies(self.snapshot)
        for way in (*_supplied(self.snapshot), *_charged(charges(self.snapshot)), *_joined(self.snapshot)):
            self._add(way)
        self.ends = {account.batch: self._ends_of(account) for account in _accounts(self.snapshot)}
        for path in self.assemblies:
            if "/" in path:
                self._add(_Way(source=path, into=path.rpartition("/")[0], how="part of", mass_kg=None))

    def _ends_of(self, account: BatchAccount) -> tuple[TraceLink, ...]:
        known = all(way.mass_kg is not None for way in self.onward.get(account.batch, ()))
        return _ends(account, may_be_left=known and account.batch not in self.snapshot.gone)

    def _add(self, way: _Way) -> None:
        self.onward[way.source].append(way)
        self.backward[way.into].append(way)

    def back_from(self, name: str, seen: frozenset[str]) -> tuple[TraceLink, ...]:
        """What `name` was made from; `seen` stops a piece that was fitted into itself by way of others."""
        seen |= {name}
        return tuple(
            self._link(way.source, way, made_from=self.back_from(way.source, seen))
            for way in self.backward.get(name, ())
            if way.source not in seen
        )

    def on_from(self, name: str, seen: frozenset[str]) -> tuple[TraceLink, ...]:
        """What `name` went into, a batch's losses and what nobody can account for at the end."""
        seen |= {name}
        links = tuple(
            self._link(way.into, way, went_into=self.on_from(way.into, seen))
            for way in self.onward.get(name, ())
            if way.into not in seen
        )
        return links + self.ends.get(name, ())

    def _link(
        self,
        what: str,
        way: _Way,
        *,
        made_from: tuple[TraceLink, ...] = (),
        went_into: tuple[TraceLink, ...] = (),
    ) -> TraceLink:
        return TraceLink(
            what=what,
            kind=self.kind_of(what),
            mass_kg=way.mass_kg,
            how=way.how,
            state=self.state_of(what),
            made_from=made_from,
            went_into=went_into,
        )

    def kind_of(self, name: str) -> str:
        """What the name stands for."""
        snapshot = self.snapshot
        homes = (
            (ThingKind.PIECE, snapshot.pieces),
            (ThingKind.LOT, snapshot.lots),
            (ThingKind.SHEET, snapshot.sheets),
            (ThingKind.OFFCUT, snapshot.offcuts),
            (ThingKind.BATCH, snapshot.batches),
            (ThingKind.INSTRUMENT, snapshot.scales),
            (ThingKind.ASSEMBLY, self.assemblies),
            (ThingKind.PART, {part.name for part in snapshot.plan.parts}),
            (ThingKind.CELL, {cell.name for cell in snapshot.plan.tanks.cells}),
        )
        return next((kind.value for kind, home in homes if name in home), ThingKind.MATERIAL.value)

    def state_of(self, name: str) -> str:
        """Where the thing stands today: held and scrapped come before everything else."""
        snapshot = self.snapshot
        if name in snapshot.held:
            return "on hold"
        if name in snapshot.gone:
            return "scrapped"
        piece = snapshot.pieces.get(name)
        if piece is not None:
            return _piece_state(piece)
        if name in snapshot.lots:
            expiry = snapshot.lots[name].receive.expiry
            return "expired" if expiry is not None and expiry < snapshot.now.date() else "in stock"
        stock = (snapshot.sheets, snapshot.offcuts)
        if any(name in numbers for numbers in stock):
            return "cut" if self.onward.get(name) else "in stock"
        if name in snapshot.batches:
            return "used" if self.onward.get(name) else "not used"
        return "in use" if name in snapshot.scales else "in the plan"


def _piece_state(piece: Piece) -> str:
    if piece.state is PieceState.SCRAPPED:
        return "scrapped"
    if piece.fitted_into is not None:
        return "fitted"
    return piece.state.value


def _supplied(snapshot: Snapshot) -> list[_Way]:
    """Material into its lots, lots into batches and sheets, scales into the batches they weighed."""
    ways = [
        _Way(
            source=lot.receive.material,
            into=lot.number,
            how="received",
            mass_kg=lot.receive.quantity.value if lot.receive.quantity.unit == "kg" else None,
        )
        for lot in snapshot.lots.values()
    ]
    for sheet in snapshot.sheets.values():
        ways += [_Way(source=lot, into=sheet.number, how="made of", mass_kg=None) for lot in sheet.sheet.lots]
    for batch in snapshot.batches.values():
        mix, cup = batch.mix, measured(batch.mix, None)
        ways.append(_Way(source=mix.resin_lot, into=batch.number, how="resin", mass_kg=cup.resin_kg))
        ways.append(_Way(source=mix.hardener_lot, into=batch.number, how="hardener", mass_kg=cup.hardener_kg))
        if mix.scale is not None:
            ways.append(_Way(source=mix.scale, into=batch.number, how="weighed out on", mass_kg=None))
    for offcut in snapshot.offcuts.values():
        ways.append(_Way(source=offcut.source, into=offcut.number, how="left of", mass_kg=None))
    return ways


def _accounts(snapshot: Snapshot) -> tuple[BatchAccount, ...]:
    if not snapshot.iterations:
        return ()
    indexes = Indexes(snapshot)
    deposits = read_deposits(snapshot, indexes)
    share_out_cups(snapshot, deposits)
    return batch_accounts(snapshot, indexes, deposits)


def _charged(charged: tuple[Charge, ...]) -> list[_Way]:
    """What each entry put from a lot, sheet or batch into a piece or cell."""
    return [
        _Way(
            source=charge.source,
            into=charge.piece,
            how=charge.what if charge.step is None else f"ply {charge.step}",
            mass_kg=charge.mass_kg,
        )
        for charge in charged
    ]


def _joined(snapshot: Snapshot) -> list[_Way]:
    """Pieces where they are fitted, and what each scale weighed."""
    ways = [
        _Way(source=piece.name, into=piece.fitted_into, how="fitted", mass_kg=None)
        for piece in snapshot.pieces.values()
        if piece.fitted_into is not None
    ]
    weighed: dict[tuple[str, str], None] = {}
    for logged in snapshot.logged:
        act = logged.act
        if isinstance(act, Weigh) and act.scale is not None:
            weighed[(act.scale, act.what)] = None
    ways += [_Way(source=scale, into=what, how="weighed on", mass_kg=None) for scale, what in weighed]
    return ways


def _ends(account: BatchAccount, *, may_be_left: bool) -> tuple[TraceLink, ...]:
    """Where the rest of a batch is: left in the cup, drawn off, or known to nobody.

    Of a cup whose residue nobody has weighed, what was not used `may_be_left` in it; how much of that
    was lost no entry says.
    """
    lost = ("not accounted for", "unaccounted", account.unaccounted_kg)
    unused = account.mixed_kg - account.charged_kg - account.scrapped_kg - (account.bled_kg or 0.0)
    if account.residue_kg is None and may_be_left and unused >= 0.0:
        lost = ("in the cup or lost", "unaccounted", unused)
    rest = (
        ("left in the cup", "residue", account.residue_kg),
        ("bled off", "bled", account.bled_kg),
        lost,
    )
    return tuple(
        TraceLink(what=what, kind=kind, mass_kg=mass_kg, how="by the record", state="")
        for what, kind, mass_kg in rest
        if mass_kg is not None or kind == "unaccounted"
    )


def _entries_about(snapshot: Snapshot, name: str) -> tuple[int, ...]:
    """The entries that name the thing or gave it its number, in order."""
    return tuple(
        sorted(
            logged.seq
            for logged in snapshot.logged
            if name in names_used(logged)
            or any(name in (minted.number, minted.name) for minted in logged.act.minted)
            or name in _own_numbers(logged)
        )
    )


def _own_numbers(logged: Logged) -> tuple[str, ...]:
    """The number an entry gives to a thing that came with one of its own."""
    act = logged.act
    match act:
        case Receive():
            own = act.lot
        case Sheet():
            own = act.sheet
        case Mix():
            own = act.batch
        case Instrument():
            own = act.instrument
        case _:
            own = None
    return () if own is None else (own,)
