"""Entries in, one frozen snapshot out: the only place that says what an entry does to the things it names."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field, replace
from datetime import datetime

from ledger.model.acts import (
    Accept,
    Act,
    Adopt,
    Cut,
    Fit,
    Hold,
    Instrument,
    Mix,
    Receive,
    Release,
    Scrap,
    Sheet,
    Weigh,
    Withdraw,
)
from ledger.model.entry import FIRST_PREVIOUS, Logged
from ledger.model.fitting import BUILT_TO_EARLIER, pieces_meant
from ledger.model.plan import Plan
from ledger.model.snapshot import (
    Batch,
    Iteration,
    Lot,
    Offcut,
    Piece,
    PieceState,
    Scale,
    SheetInStock,
    Snapshot,
)
from ledger.model.things import ThingKind

# Fields whose piece exists from then on, if it did not before.
BEGINNING: dict[str, tuple[str, ...]] = {
    "cut": ("pieces",),
    "lay": ("piece",),
    "cure": ("pieces",),
    "bond": ("pieces",),
    "coat": ("piece",),
    "trim": ("piece",),
    "build_up": ("piece",),
    "weigh": ("what",),
    "weigh_points": ("what",),
    "fit": ("piece",),
}

_PIECE_NAME = re.compile(r"(.+)/([1-9][0-9]*)")


def split_piece_name(name: str) -> tuple[str, int] | None:
    """`RIB.03-L/1` as part and running number."""
    match = _PIECE_NAME.fullmatch(name)
    return None if match is None else (match.group(1), int(match.group(2)))


def pieces_begun_by(kind: str, act: Act) -> tuple[str, ...]:
    """The names in those fields of the act that begin a piece; for `weigh` it may be an assembly."""
    names: list[str] = []
    for key in BEGINNING.get(kind, ()):
        value = getattr(act, key, None)
        if isinstance(value, str):
            names.append(value)
        elif isinstance(value, tuple):
            names.extend(value)
    return tuple(names)


def what_counts(logged: Iterable[Logged]) -> tuple[Logged, ...]:
    """The entries that are not withdrawn, each correction in the place of what it corrects."""
    everything = tuple(logged)
    gone = {entry.act.seq for entry in everything if isinstance(entry.act, Withdraw)}
    corrected = {entry.seq: entry.act.corrects for entry in everything if entry.act.corrects is not None}
    counting = [entry for entry in everything if entry.seq not in gone]
    if corrected:
        counting.sort(key=lambda entry: (_place(entry.seq, corrected), entry.seq))
    return tuple(counting)


def _place(seq: int, corrected: Mapping[int, int]) -> int:
    while seq in corrected:
        seq = corrected[seq]
    return seq


@dataclass(frozen=True, slots=True, kw_only=True)
class WithdrawnPlan:
    """An iteration that was in force from one entry to another, and no longer counts."""

    name: str
    adopted_seq: int
    withdrawn_seq: int


@dataclass(slots=True)
class Gathering:
    """The build as it grows entry by entry. Not frozen: `snapshot` is what leaves this module."""

    tags: dict[str, str]
    plan_of: Callable[[Logged], Plan]
    withdrawn: tuple[WithdrawnPlan, ...] = ()
    logged: list[Logged] = field(default_factory=list)
    iterations: list[Iteration] = field(default_factory=list)
    pieces: dict[str, Piece] = field(default_factory=dict)
    lots: dict[str, Lot] = field(default_factory=dict)
    sheets: dict[str, SheetInStock] = field(default_factory=dict)
    offcuts: dict[str, Offcut] = field(default_factory=dict)
    batches: dict[str, Batch] = field(default_factory=dict)
    scales: dict[str, Scale] = field(default_factory=dict)
    held: dict[str, int] = field(default_factory=dict)
    gone: dict[str, int] = field(default_factory=dict)
    weighed_finished: set[str] = field(default_factory=set)

    def add(self, entry: Logged) -> None:
        """Let one further entry count."""
        self.logged.append(entry)
        for minted in entry.act.minted:
            if minted.kind is ThingKind.PIECE:
                self.tags[minted.name] = minted.number
        for name in pieces_begun_by(entry.kind, entry.act):
            if name in self.tags and name not in self.pieces:
                self._begin(name, entry)
        self._take(entry)

    def snapshot(self, *, last_seq: int, last_digest: str, now: datetime) -> Snapshot:
        """Everything so far, frozen."""
        return Snapshot(
            iterations=tuple(self.iterations),
            logged=tuple(self.logged),
            pieces=dict(self.pieces),
            lots=dict(self.lots),
            sheets=dict(self.sheets),
            offcuts=dict(self.offcuts),
            batches=dict(self.batches),
            scales=dict(self.scales),
            held=dict(self.held),
            gone=dict(self.gone),
            last_seq=last_seq,
            last_digest=last_digest,
            now=now,
        )

    def _begin(self, name: str, entry: Logged) -> None:
        split = split_piece_name(name)
        part, running = split if split is not None else (name, 1)
        self.pieces[name] = Piece(
            number=self.tags[name],
            name=name,
            part=part,
            running=running,
            begun_seq=entry.seq,
            iteration=self._begun_under(entry),
            state=PieceState.OPEN,
            fitted_into=None,
        )

    def _begun_under(self, entry: Logged) -> str:
        """The iteration in force then; one withdrawn since is told apart from a later one of its name."""
        now = self.iterations[-1].seq if self.iterations else 0
        for plan in reversed(self.withdrawn):
            if now < plan.adopted_seq < entry.seq < plan.withdrawn_seq:
                return f"{plan.name} (withdrawn)"
        return self._iteration

    def _take(self, entry: Logged) -> None:
        act = entry.act
        match act:
            case Receive() if act.lot is not None:
                self.lots[act.lot] = Lot(number=act.lot, seq=entry.seq, at=entry.at, receive=act)
            case Sheet() if act.sheet is not None:
                self.sheets[act.sheet] = SheetInStock(number=act.sheet, seq=entry.seq, sheet=act)
            case Mix() if act.batch is not None:
                self.batches[act.batch] = Batch(number=act.batch, seq=entry.seq, at=entry.at, mix=act)
            case Instrument():
                self.scales[act.instrument] = Scale(number=act.instrument, seq=entry.seq, instrument=act)
            case Cut():
                self._keep_offcut(entry, act)
            case Weigh() if act.state == "finished":
                self.weighed_finished.add(act.what)
                self._set_state(act.what, PieceState.FINISHED)
            case Fit():
                self._fit(act)
            case Scrap():
                self.gone[act.what] = entry.seq
                self._set_state(act.what, PieceState.SCRAPPED)
            case Hold():
                self.held[act.what] = entry.seq
                self._hold(act.what, self._iteration)
            case Release():
                self.held.pop(act.what, None)
                self._hold(act.what, None)
            case Accept() if act.finding == BUILT_TO_EARLIER and act.facts is not None:
                self._accept(act)
            case Adopt():
                plan = self.plan_of(entry)
                self.iterations.append(Iteration(name=act.plan, seq=entry.seq, at=entry.at, plan=plan))
            case _:
                pass

    def _keep_offcut(self, entry: Logged, act: Cut) -> None:
        if act.offcut is None or act.offcut.length_m is None or act.offcut.width_m is None:
            return
        whole = self.offcuts[act.sheet].sheet if act.sheet in self.offcuts else act.sheet
        for minted in act.minted:
            if minted.kind is ThingKind.OFFCUT:
                self.offcuts[minted.number] = Offcut(
                    number=minted.number,
                    seq=entry.seq,
                    source=act.sheet,
                    sheet=whole,
                    length_m=act.offcut.length_m,
                    width_m=act.offcut.width_m,
                )

    def _accept(self, act: Accept) -> None:
        for name in pieces_meant(act.what, self.pieces):
            piece = self.pieces[name]
            self.pieces[name] = replace(piece, accepted_under=(*piece.accepted_under, self._iteration))

    def _hold(self, name: str, under: str | None) -> None:
        piece = self.pieces.get(name)
        if piece is not None:
            self.pieces[name] = replace(piece, held_under=under)

    @property
    def _iteration(self) -> str:
        return self.iterations[-1].name if self.iterations else ""

    def _set_state(self, name: str, state: PieceState) -> None:
        piece = self.pieces.get(name)
        if piece is not None and piece.state is not PieceState.SCRAPPED:
            self.pieces[name] = replace(piece, state=state)

    def _fit(self, act: Fit) -> None:
        piece = self.pieces.get(act.piece)
        if piece is None:
            return
        state = piece.state
        if state is not PieceState.SCRAPPED:
            finished = act.into is not None or act.piece in self.weighed_finished
            state = PieceState.FINISHED if finished else PieceState.OPEN
        self.pieces[act.piece] = replace(piece, fitted_into=act.into, state=state)


def tags_of(logged: Iterable[Logged]) -> dict[str, str]:
    """The tag of every piece ever begun, also by an entry since withdrawn: the tag is still on it."""
    return {
        minted.name: minted.number
        for entry in logged
        for minted in entry.act.minted
        if minted.kind is ThingKind.PIECE
    }


def withdrawn_plans(logged: Iterable[Logged]) -> tuple[WithdrawnPlan, ...]:
    """The iterations withdrawn since, in the order they were adopted."""
    names: dict[int, str] = {}
    found = []
    for entry in logged:
        if isinstance(entry.act, Adopt):
            names[entry.seq] = entry.act.plan
        elif isinstance(entry.act, Withdraw) and entry.act.seq in names:
            seq = entry.act.seq
            found.append(WithdrawnPlan(name=names[seq], adopted_seq=seq, withdrawn_seq=entry.seq))
    return tuple(sorted(found, key=lambda plan: plan.adopted_seq))


def gathering_of(everything: tuple[Logged, ...], plan_of: Callable[[Logged], Plan]) -> Gathering:
    """All these entries gathered, withdrawn ones among them; more can be added."""
    gathering = Gathering(tags=tags_of(everything), plan_of=plan_of, withdrawn=withdrawn_plans(everything))
    for entry in what_counts(everything):
        gathering.add(entry)
    return gathering


def gather(
    logged: Iterable[Logged],
    plan_of: Callable[[Logged], Plan],
    *,
    now: datetime,
    last_digest: str = FIRST_PREVIOUS,
) -> Snapshot:
    """The build after all these entries, in the order they were logged, withdrawn ones included.

    `plan_of` gives the plan that an `adopt` entry took in; it is asked only for those that count.
    """
    everything = tuple(logged)
    return gathering_of(everything, plan_of).snapshot(
        last_seq=everything[-1].seq if everything else 0, last_digest=last_digest, now=now
    )
