"""Weights that keep up with a growing book: one more entry costs what it touches, not the whole build."""

from __future__ import annotations

import gc
from collections.abc import Iterator, Mapping
from contextlib import contextmanager

from ledger.mass.composition import Composition, compose, compose_cell
from ledger.mass.cups import batch_account, share_out_cup, share_out_cups
from ledger.mass.pieces import cell_part, part_of_pieces, planned_piece, settled_piece
from ledger.mass.plan_index import Indexes
from ledger.mass.read_entries import read_entry, start_reading
from ledger.mass.report import (
    BatchAccount,
    Disagreement,
    PartMass,
    PlyNotice,
    Unknown,
    WeightReport,
)
from ledger.mass.settle import Settled, disagreements, settle
from ledger.mass.tree import Tree, Within
from ledger.mass.weighings import Weighings, home_of_cell
from ledger.model.acts import (
    Accept,
    Bond,
    BuildUp,
    Coat,
    Cut,
    Fit,
    Hold,
    Lay,
    Mix,
    Note,
    Receive,
    Release,
    Sheet,
    Trim,
    Weigh,
)
from ledger.model.entry import Logged
from ledger.model.fitting import BUILT_TO_EARLIER, Fitting, pieces_meant
from ledger.model.plan import Part, Shape
from ledger.model.snapshot import Piece, PieceState, Snapshot
from ledger.model.vectors import NO_SPREAD, Vector

# More new entries than this at once are read with all the others.
_FEW = 50
# What these do to masses stays with the pieces they name and the cups they use.
_LOCAL = (
    Accept,
    Bond,
    BuildUp,
    Coat,
    Cut,
    Fit,
    Hold,
    Lay,
    Mix,
    Note,
    Receive,
    Release,
    Sheet,
    Trim,
    Weigh,
)


class RunningWeights:
    """A build weighed up, that can take in further entries.

    Not frozen: `report` is what leaves this module. Whatever an entry could change beyond the pieces
    and cups it names, such as a weighed assembly, makes the whole build be weighed up again.
    """

    def __init__(self, snapshot: Snapshot, cell_places: Mapping[str, Vector] | None = None) -> None:
        self._cell_places = dict(cell_places or {})
        with _no_collector():
            self._start(snapshot)

    def take(self, snapshot: Snapshot) -> WeightReport:
        """The weights of a later moment of the same book."""
        with _no_collector():
            if not self._take_on(snapshot):
                self._start(snapshot)
        return self.report

    def _start(self, snapshot: Snapshot) -> None:
        self._indexes = Indexes(snapshot)
        self._fitting = Fitting(snapshot.iterations)
        self._reading = start_reading(snapshot, self._indexes)
        self._deposits = self._reading.deposits
        share_out_cups(snapshot, self._deposits)
        self._weighings = Weighings(self._indexes, self._deposits)
        self._settlement = settle(dict(self._compositions()), self._weighings)
        self._tree = Tree(self._indexes.now, self._settlement.differences)
        self._pieces_of: dict[str, list[str]] = {}
        for piece in snapshot.pieces.values():
            self._pieces_of.setdefault(piece.part, []).append(piece.name)
        self._parts: dict[str, PartMass] = {}
        for part in self._indexes.now.plan.parts:
            self._weigh_part(part)
        self._cells = [self._weigh_cell(cell) for cell in self._deposits.by_cell]
        self._accounts: dict[str, BatchAccount] = {}
        for number in snapshot.batches:
            self._account(number)
        self._plies: dict[str, tuple[PlyNotice, ...]] = {}
        self._apart: dict[str, tuple[Disagreement, ...]] = {}
        for name in self._settlement.things:
            self._notice(name)
        self._snapshot = snapshot
        self.report = self._report()

    def _take_on(self, snapshot: Snapshot) -> bool:
        """Take in the entries at the end of a later snapshot; False where that would not do."""
        known = self._snapshot.logged
        fresh = snapshot.logged[len(known) :]
        if len(fresh) > _FEW or not known or len(snapshot.logged) < len(known):
            return False
        if snapshot.logged[len(known) - 1] != known[-1] or not all(map(self._is_local, fresh)):
            return False
        self._indexes.snapshot = snapshot
        touched: dict[str, None] = {}
        cups: dict[str, None] = {}
        for entry in fresh:
            if not self._read(entry, touched, cups):
                return False
        for number in cups:
            share_out_cup(number, snapshot, self._deposits)
            touched.update((use.draw.piece, None) for use in self._deposits.uses[number])
        held = [holder for name in touched for holder in self._weighings.sitting.holders_of(name)]
        touched.update(dict.fromkeys(held))
        if any(name in self._deposits.by_cell for name in touched):
            return False
        if not self._settle_again(snapshot, touched):
            return False
        for entry in fresh:
            if isinstance(entry.act, Mix) and entry.act.batch is not None:
                cups[entry.act.batch] = None
        for number in cups:
            self._account(number)
        self._snapshot = snapshot
        self.report = self._report()
        return True

    def _is_local(self, entry: Logged) -> bool:
        act = entry.act
        if not isinstance(act, _LOCAL) or act.corrects is not None:
            return False
        if isinstance(act, Coat) and act.piece is None:
            return False
        return entry.at >= self._deposits.entries[-1].at

    def _read(self, entry: Logged, touched: dict[str, None], cups: dict[str, None]) -> bool:
        act, deposits = entry.act, self._deposits
        place = len(deposits.entries)
        drawn = len(deposits.draws)
        deposits.entries.append(entry)
        read_entry(self._reading, place, entry)
        cups.update((draw.source, None) for draw in deposits.draws[drawn:] if draw.source in deposits.uses)
        if isinstance(act, Weigh):
            inside = self._weighings.sitting.inside(act.what)
            if act.what not in self._indexes.snapshot.pieces or inside or act.what in self._weighings.groups:
                return False
            self._weighings.weigh_piece(place, entry, act)
            touched[act.what] = None
        elif isinstance(act, Fit):
            if act.piece not in self._indexes.snapshot.pieces:
                return False
            touched.update(dict.fromkeys(self._weighings.sitting.holders_of(act.piece)))
            self._weighings.sitting.fit(act)
            touched[act.piece] = None
        elif isinstance(act, Cut | Bond):
            touched.update(dict.fromkeys(act.pieces))
        elif isinstance(act, Lay | Trim | BuildUp | Coat) and act.piece is not None:
            touched[act.piece] = None
        elif isinstance(act, Accept) and act.finding == BUILT_TO_EARLIER:
            # Which pieces of a part are spare hangs on which of them fit.
            touched.update(dict.fromkeys(pieces_meant(act.what, self._indexes.snapshot.pieces)))
        elif isinstance(act, Hold | Release) and act.what in self._indexes.snapshot.pieces:
            touched[act.what] = None
        return True

    def _settle_again(self, snapshot: Snapshot, touched: dict[str, None]) -> bool:
        """Settle what was touched; False where that would change what a weighed group says of others."""
        things = self._settlement.things
        parts: dict[str, None] = {}
        for name in touched:
            piece = snapshot.pieces.get(name)
            composition = None if piece is None else self._composition(piece)
            if piece is None or composition is None:
                continue
            alone = self._weighings.alone.get(name)
            fresh = Settled(composition=composition, alone=alone[-1] if alone else None)
            before = things.get(name)
            if before is None:
                self._pieces_of.setdefault(piece.part, []).append(name)
            elif before.in_group and not fresh.follows(before):
                return False
            things[name] = fresh
            self._notice(name)
            parts[piece.part] = None
        for name in parts:
            part = self._indexes.now.parts.get(name)
            if part is not None:
                self._weigh_part(part)
        return True

    def _compositions(self) -> Iterator[tuple[str, Composition]]:
        for name, piece in self._indexes.snapshot.pieces.items():
            composition = self._composition(piece)
            if composition is not None:
                yield name, composition
        for cell, coats in self._deposits.by_cell.items():
            yield cell, compose_cell(cell, coats)

    def _composition(self, piece: Piece) -> Composition | None:
        own = self._indexes.nominal(piece.name)
        if own is None:
            return None
        now = self._indexes.now.nominal(piece.part)
        return compose(piece, own, now, self._indexes.of(piece.name), self._deposits)

    def _weigh_part(self, part: Part) -> None:
        nominal = self._indexes.now.nominal(part.name)
        if nominal is None:
            return
        pieces = [self._indexes.snapshot.pieces[name] for name in self._pieces_of.get(part.name, ())]
        wanted = part.quantity
        figures = []
        for piece in self._fitting.first_to_count(pieces):
            counts = wanted > 0 and self._fitting.may_count(piece)
            wanted -= counts
            held = self._weighings.sitting.inside(piece.name)
            figures.append(settled_piece(piece, self._settlement, held, counts=counts))
        figures.sort(key=lambda one: one.running)
        figures += [planned_piece(nominal, self._indexes.now, number) for number in range(wanted)]
        shape = self._indexes.now.shapes.get(part.name)
        self._parts[part.name] = part_of_pieces(nominal, shape, figures, self._settlement.differences)
        counting = tuple(one for one in figures if one.counts)
        self._tree.put(part.name, part.assembly, Within(shape=shape, figures=counting))

    def _weigh_cell(self, cell: str) -> PartMass:
        home, place = home_of_cell(cell, self._indexes), self._cell_places.get(cell)
        part, figures = cell_part(cell, home, self._settlement, place)
        shape = None
        if place is not None:
            shape = Shape(measure=1.0, centroid_m=place, second_m2=NO_SPREAD, digest="")
        self._tree.put(part.part, home, Within(shape=shape, figures=(figures,), planned=False))
        return part

    def _account(self, number: str) -> None:
        batch = self._indexes.snapshot.batches.get(number)
        if batch is not None:
            self._accounts[number] = batch_account(batch, self._indexes, self._deposits)

    def _notice(self, name: str) -> None:
        """Keep what is to be said of a piece's plies and of its weighings."""
        thing = self._settlement.things[name]
        piece = self._indexes.snapshot.pieces.get(name)
        alone = self._weighings.alone.get(name, [])
        self._apart[name] = disagreements(thing, alone)
        if piece is None or piece.state is PieceState.SCRAPPED:
            self._plies[name] = ()
            return
        composition = thing.composition
        to_come: tuple[int, ...] = ()
        if thing.weighed_itself and any(one.kind == "lay" for one in composition.deposits):
            to_come = composition.steps_to_come
        self._plies[name] = composition.steps_wrong + tuple(
            PlyNotice(piece=name, step=step, what="to come", seqs=()) for step in to_come
        )

    def _report(self) -> WeightReport:
        parts = tuple(self._parts.values())
        return WeightReport(
            iteration=self._indexes.now.plan.name,
            total=self._tree.total(),
            parts=(*parts, *self._cells),
            assemblies=self._tree.assemblies(),
            off_plan=self._tree.off_plan(),
            batches=tuple(self._accounts.values()),
            weighed=self._settlement.weighed,
            disagreements=(
                *self._weighings.apart,
                *(one for apart in self._apart.values() if apart for one in apart),
            ),
            plies=tuple(one for plies in self._plies.values() if plies for one in plies),
            unknowns=(*self._deposits.unknowns.values(), *_unknown_parts(parts)),
        )


@contextmanager
def _no_collector() -> Iterator[None]:
    """Hold the cycle collector: nothing made here is a cycle, and it would walk every entry repeatedly."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


def _unknown_parts(parts: tuple[PartMass, ...]) -> list[Unknown]:
    found = []
    for part in parts:
        if part.best_kg is None:
            what = "nothing says what it weighs, so it is in no total"
            do = "give it a planned mass, or its material the figure that is missing, or weigh it"
        elif part.cg_m is None:
            what = "where it is is not known, so its mass is taken at the CG of the rest"
            do = "give it geometry or an origin"
        else:
            continue
        found.append(Unknown(thing=part.part, seq=None, what=what, do=do))
    return found
