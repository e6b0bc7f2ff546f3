"""One piece as logged: what is there, what is still to come, and what moved it off plan.

The causes are found by substitution in a fixed order, each at the values already substituted, so
that they add up whatever their signs.
"""

from __future__ import annotations

from bisect import bisect_left
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import sqrt

from ledger.mass.deposits import Deposit, Deposits
from ledger.mass.laminate import WET_KINDS, Layer
from ledger.mass.magnitudes import (
    BOUND_TO_U,
    BY_THE_AREA,
    CLASS_ALLOWANCE,
    GEOMETRY_TOLERANCE,
    RESIN_HABIT,
)
from ledger.mass.plan_index import Nominal, PlanIndex
from ledger.mass.report import PlyNotice
from ledger.mass.spread import NO_CUP_SAID, Source, Spread, lot_spread
from ledger.model.plan import Form, MaterialKind
from ledger.model.snapshot import Piece, PieceState

# A ply laid in several pieces of cloth adds up to about its area; more than this is a second ply.
_ONE_PLY_UP_TO = 1.25


@dataclass(frozen=True, slots=True, kw_only=True)
class Composition:
    """One piece or cell from its entries. `steps` pairs the rank in time of each deposit with its mass.

    `stages` are the piece's masses as planned and after each substitution up to `trim_repair`; None
    where the plan cannot say what the piece weighs. `built_kg` is what exists now by the entries.
    """

    name: str
    piece: Piece | None
    deposits: tuple[Deposit, ...]
    steps: tuple[tuple[int, float], ...]
    built_kg: float
    pending_kg: float
    pending: tuple[Source, ...]
    estimated_kg: float | None
    stages: tuple[float, ...] | None
    finished: bool
    steps_wrong: tuple[PlyNotice, ...] = ()
    steps_to_come: tuple[int, ...] = ()

    @property
    def calculated_kg(self) -> float | None:
        """What is there by the entries, and the plan for the steps not yet logged."""
        return None if self.stages is None else self.built_kg + self.pending_kg

    @property
    def is_known(self) -> bool:
        """Whether plan or entries say what the piece weighs."""
        return self.stages is not None or self.estimated_kg is not None

    def built_at(self, place: int) -> float:
        """What was there by the entries up to that rank in time."""
        if not self.steps or place >= self.steps[-1][0]:
            return self.built_kg
        return sum(mass for at, mass in self.steps if at <= place)

    def add_between(self, spread: Spread, after: int, upto: int, breaks: Sequence[int], sign: float) -> None:
        """Add how unsure the entries after one rank in time and up to another are.

        What is an entry's own is kept by the stretch between `breaks` it falls in: the same stretch
        counted in two figures is then the same error in both, and cancels where one is taken off the other.
        """
        own: dict[int, float] = {}
        for deposit in self.deposits:
            if after < deposit.place <= upto:
                variance = deposit.add_unsureness(spread, sign)
                if variance:
                    stretch = bisect_left(breaks, deposit.place) if breaks else 0
                    own[stretch] = own.get(stretch, 0.0) + variance
        for stretch, variance in own.items():
            spread["own", self.name, stretch] = sign * sqrt(variance)


def compose(
    piece: Piece, own: Nominal, now: Nominal | None, index: PlanIndex, deposits: Deposits
) -> Composition:
    """A piece from its entries. `own` is its part when it was begun, `now` its part in the current plan."""
    mine = deposits.by_piece.get(piece.name, [])
    finished = piece.state is PieceState.FINISHED or piece.fitted_into is not None
    reading = _Layers(piece, own, mine, finished, deposits)
    for deposit in mine:
        if deposit.sheds_m2 is not None:
            _shed(deposit, reading, deposits, own, piece.name)
    share = reading.pending_share
    pending_kg = share * reading.layers_kg(reading.pending)
    everything = tuple(sorted((*reading.whole, *mine), key=lambda deposit: deposit.place))
    steps = tuple((deposit.place, reading.mass(deposit)) for deposit in everything)
    built_kg = sum(mass for _, mass in steps)
    return Composition(
        name=piece.name,
        piece=piece,
        deposits=everything,
        steps=steps,
        built_kg=built_kg,
        pending_kg=pending_kg,
        pending=tuple(planned_sources(reading.measure * share, reading.pending, index, piece.name)),
        estimated_kg=None if now is None else now.estimated_kg,
        stages=_stages(reading, own, now, built_kg, pending_kg),
        finished=finished,
        steps_wrong=tuple(reading.steps_wrong(piece.name, finished)),
        steps_to_come=tuple(layer.number for layer in reading.pending if _makes_a_ply(layer)),
    )


def compose_cell(cell: str, mine: Sequence[Deposit]) -> Composition:
    """The coats inside a cell, which no part of the plan holds."""
    steps = tuple((deposit.place, deposit.mass_kg) for deposit in mine)
    total = sum(mass for _, mass in steps)
    return Composition(
        name=cell,
        piece=None,
        deposits=tuple(mine),
        steps=steps,
        built_kg=total,
        pending_kg=0.0,
        pending=(),
        estimated_kg=None,
        stages=(0.0,) * 6 + (total, total),
        finished=True,
    )


class _Layers:
    """Which planned layers of a piece are there, by which entry, and which are still to come."""

    def __init__(
        self, piece: Piece, own: Nominal, mine: list[Deposit], finished: bool, deposits: Deposits
    ) -> None:
        self.own = own
        self.mine = mine
        self.lays = [one for one in mine if one.kind == "lay"]
        self.cuts = [one for one in mine if one.kind == "cut"]
        self.joins = [one for one in mine if one.kind in ("bond", "coat")]
        layers, measure = own.layers, own.measure
        planned = own.part.planned_mass_kg
        # With no layer known, the planned mass stands for the whole piece and plies cannot be told apart.
        self.lumped = layers is None or measure is None
        if self.lumped and planned is not None:
            lump = Layer(number=0, material=own.part.name, kind=MaterialKind.SOLID, dry=planned, resin=0.0)
            layers, measure = (lump,), 1.0
        self.known = layers is not None and measure is not None
        self.layers = layers if layers is not None and measure is not None else ()
        self.measure = 0.0 if measure is None else measure
        self.replaced = own.wet and bool(self.joins or self.lays)
        self.coated = self._coated_steps()
        left = self._left()
        self.whole: list[Deposit] = []
        self.pending: list[Layer] = []
        place = self._whole_from(piece, finished, deposits)
        if place is not None and left:
            self.whole = [self._whole_deposit(place, piece, left)]
        elif not (finished and (self.lays or self.cuts)):
            self.pending = left
        self.pending_share = self._share_to_come(finished) if self.replaced else 1.0
        if self.replaced:
            self.pending = list(self.layers) if self.pending_share > 0.0 else []

    def mass(self, deposit: Deposit) -> float:
        """A deposit's mass in this piece; a lump already holds its plies."""
        return 0.0 if self.lumped and deposit.kind == "lay" else deposit.mass_kg

    def layers_kg(self, layers: Sequence[Layer]) -> float:
        return self.measure * sum(layer.whole for layer in layers)

    def steps_wrong(self, piece: str, finished: bool) -> Iterator[PlyNotice]:
        """Steps laid twice, not in the plan, or left out, which shows only once the piece is finished."""
        if self.lumped or self.own.wet or not self.own.flat:
            return
        planned = {layer.number: layer for layer in self.layers}
        laid: dict[int, list[Deposit]] = {}
        for one in self.lays:
            laid.setdefault(one.step or 0, []).append(one)
        covered = self._covered()
        for step, lays in laid.items():
            layer = planned.get(step)
            seqs = tuple(one.seq for one in lays)
            if layer is None:
                yield PlyNotice(piece=piece, step=step, what="not in plan", seqs=seqs)
            elif _makes_a_ply(layer) and (
                step in covered or (len(lays) > 1 and not is_one_ply(lays, self.measure * layer.coverage))
            ):
                yield PlyNotice(piece=piece, step=step, what="twice", seqs=seqs)
        yield from self._skipped(piece, planned)
        if finished and (laid or self.cuts):
            for layer in self._left():
                if _makes_a_ply(layer):
                    yield PlyNotice(piece=piece, step=layer.number, what="missing", seqs=())

    def _skipped(self, piece: str, planned: dict[int, Layer]) -> Iterator[PlyNotice]:
        """Each planned step that was not there when a later one was laid."""
        there = self._covered() | self.coated
        told: set[int] = set()
        for one in self.lays:
            for number, layer in planned.items():
                if number < (one.step or 0) and _makes_a_ply(layer) and number not in there | told:
                    told.add(number)
                    yield PlyNotice(piece=piece, step=number, what="skipped", seqs=(one.seq,))
            there.add(one.step or 0)

    def _covered(self) -> set[int]:
        covered: set[int] = set()
        for cut in self.cuts:
            covered |= {layer.number for layer in self.layers} if cut.covers is None else cut.covers
        return covered

    def _coated_steps(self) -> frozenset[int]:
        """Planned steps of film, paste, sealant or finish that a coat of the same material stands for."""
        laid = {one.step for one in self.lays}
        coated = set()
        for coat in self.joins:
            for layer in self.layers:
                if layer.kind in WET_KINDS and layer.material in coat.material and layer.number not in laid:
                    coated.add(layer.number)
        return frozenset(coated)

    def _left(self) -> list[Layer]:
        if self.replaced:
            return []
        laid = {one.step for one in self.lays}
        covered = self._covered()
        return [
            layer
            for layer in self.layers
            if layer.number not in laid and layer.number not in covered and layer.number not in self.coated
        ]

    def _whole_from(self, piece: Piece, finished: bool, deposits: Deposits) -> int | None:
        """From when a piece whose making was not logged is there as a whole; None where it is not."""
        shown = deposits.first_shown.get(piece.name)
        if shown is None and finished:
            shown = deposits.first_place.get(piece.name)
        if self.lays or self.cuts:
            return None
        if self.own.wet or self.own.flat:
            return shown
        return deposits.first_place.get(piece.name, shown)

    def _whole_deposit(self, place: int, piece: Piece, left: Sequence[Layer]) -> Deposit:
        mass = self.layers_kg(left)
        whole = Deposit(place=place, seq=piece.begun_seq, kind="whole", given_kg=mass)
        allowance = CLASS_ALLOWANCE * BOUND_TO_U * mass
        whole.sources = ((("class", self.own.part.part_class.value), allowance),)
        whole.own_variance = (GEOMETRY_TOLERANCE * mass) ** 2
        return whole

    def _share_to_come(self, finished: bool) -> float:
        """Of planned adhesive partly replaced: the length not yet bonded, where every bond says its own."""
        lengths = [one.area for one in self.joins if one.kind == "bond"]
        run = self.own.part.form is Form.RUN and not self.lumped
        if finished or not run or len(lengths) < len(self.joins) or self.lays:
            return 0.0
        done = 0.0
        for length in lengths:
            if length is None:
                return 0.0
            done += length
        return max(1.0 - done / self.measure, 0.0) if self.measure > 0.0 else 0.0


def _makes_a_ply(layer: Layer) -> bool:
    return layer.kind is not MaterialKind.PROCESS


def planned_sources(measure: float, layers: Sequence[Layer], index: PlanIndex, thing: str) -> list[Source]:
    """How unsure layers still to come are: lots nobody has seen, cups nobody has mixed, the drawing."""
    sources: list[Source] = []
    total = 0.0
    for layer in layers:
        dry = measure * layer.dry * layer.coverage
        total += measure * layer.whole
        sources.append(
            (("material", layer.material), lot_spread(index.materials.get(layer.material), False) * dry)
        )
        if layer.resin:
            sources.append((NO_CUP_SAID, RESIN_HABIT * measure * layer.resin * layer.coverage))
    sources.append((("drawing", thing), GEOMETRY_TOLERANCE * total))
    return sources


def _shed(deposit: Deposit, reading: _Layers, deposits: Deposits, own: Nominal, name: str) -> None:
    """The mass of an area cut away: everything there by then goes with it."""
    area, shed = own.area_m2, deposit.sheds_m2
    if area is None or area <= 0.0 or shed is None or not reading.known:
        deposits.not_known(
            name,
            deposit.seq,
            "what was cut away weighs is not known: the piece has no area to share it over",
            "correct the trim to grams",
        )
        return
    there = sum(
        reading.mass(one)
        for one in (*reading.whole, *reading.mine)
        if one.place < deposit.place and one.kind != "trim"
    )
    if there <= 0.0:
        there = reading.layers_kg(reading.layers)
    deposit.given_kg = -there * shed / area
    deposit.own_variance = (BY_THE_AREA * deposit.given_kg) ** 2


def _stages(
    reading: _Layers, own: Nominal, now: Nominal | None, built_kg: float, pending_kg: float
) -> tuple[float, ...] | None:
    if not reading.known and not reading.cuts:
        return None
    nominal = _nominal_kg(reading, now)
    estimated = None if now is None else now.estimated_kg
    geometry = _at_own_geometry(reading, now, nominal)
    stock = geometry + sum(_stock_change(lays) for lays in _first_plies(reading))
    stock += sum((cut.given_kg or 0.0) - cut.nominal_kg for cut in reading.cuts)
    changed = sum(reading.mass(one) for one in reading.mine if one.kind in ("trim", "build_up"))
    bonded = built_kg - changed + pending_kg
    if own.wet:
        plies = resin = reading.layers_kg(reading.layers)
    else:
        coated = reading.layers_kg([one for one in reading.layers if one.number in reading.coated])
        resin = bonded - sum(reading.mass(one) for one in reading.joins) + coated
        plies = resin
        if not reading.lumped:
            plies -= sum(one.mass_kg - one.stock_kg for one in reading.lays)
    return (
        0.0 if estimated is None else estimated,
        nominal,
        geometry,
        stock,
        plies,
        resin,
        bonded,
        built_kg + pending_kg,
    )


def _nominal_kg(reading: _Layers, now: Nominal | None) -> float:
    if now is not None and now.mass_kg is not None:
        return now.mass_kg
    if reading.known:
        return reading.layers_kg(reading.layers)
    return sum(cut.nominal_kg for cut in reading.cuts)


def _at_own_geometry(reading: _Layers, now: Nominal | None, nominal: float) -> float:
    """The current plan's layers on the piece's own shape, and each ply at the area really laid."""
    if reading.lumped or now is None or now.layers is None:
        return nominal
    per = {layer.number: layer for layer in now.layers}
    total = reading.measure * sum(layer.whole for layer in now.layers)
    for lays in _first_plies(reading):
        layer = per.get(lays[0].step or 0)
        if layer is not None:
            laid = sum(one.area or 0.0 for one in lays)
            total += (laid - reading.measure * layer.coverage) * (layer.dry + layer.resin)
    return total


def _stock_change(lays: Sequence[Deposit]) -> float:
    return sum(one.stock_kg - one.nominal_kg for one in lays)


def _first_plies(reading: _Layers) -> list[list[Deposit]]:
    """For each planned step laid, the entries that make it once; what is laid again is a ply too many."""
    if reading.lumped or reading.own.wet:
        return []
    coverage = {layer.number: layer.coverage for layer in reading.layers}
    found: dict[int, list[Deposit]] = {}
    for one in reading.lays:
        if one.step is not None and one.step in coverage and one.area is not None:
            found.setdefault(one.step, []).append(one)
    return [
        lays if is_one_ply(lays, reading.measure * coverage[step]) else lays[:1]
        for step, lays in found.items()
    ]


def is_one_ply(lays: Sequence[Deposit], planned_m2: float) -> bool:
    """Whether several entries of a step are one ply in several cloths, by their areas."""
    return sum(one.area or 0.0 for one in lays) <= _ONE_PLY_UP_TO * planned_m2
