"""The next ply of a piece as the person laying it wants it: which, at what angle, how much from which cup."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from ledger.checks.ply_wrong_way import is_mirrored
from ledger.mass.plan_index import Nominal, PlanIndex
from ledger.model.acts import Lay
from ledger.model.gather import split_piece_name
from ledger.model.plan import Form, MaterialKind, Side, Step
from ledger.model.snapshot import PieceState, Snapshot
from ledger.operations.clock_cups import Cup, cups_on_bench
from ledger.operations.list_next_jobs import steps_laid
from ledger.operations.take_stock import Stock

SIDE_WORD = {Side.LEFT: "LEFT", Side.RIGHT: "RIGHT", Side.CENTRE: "CENTRE"}


@dataclass(frozen=True, slots=True, kw_only=True)
class PlyOfStack:
    """One step of the piece's laminate. `angle_deg` is as the plan has it, by the piece's own 0."""

    number: int
    material: str
    angle_deg: float | None
    coverage: float
    laid: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class PlyInHand:
    """The ply to lay now. `step` is None where every step is laid. Resin figures are in kg.

    `needs_kg` is what the step takes from the cups, nominally; None where the plan does not say.
    """

    piece: str
    part: str
    side: str
    running: int
    title: str
    step: int | None
    steps: int
    material: str | None
    angle_deg: float | None
    area_m2: float | None
    needs_kg: float | None
    lot: str | None
    lot_note: str
    cups: tuple[Cup, ...]
    resin_laid_kg: float
    resin_planned_kg: float | None
    calculated_kg: float | None
    estimated_kg: float | None
    stack: tuple[PlyOfStack, ...]
    assembly: str
    mirrored: bool

    def seen(self, angle_deg: float | None) -> float | None:
        """An angle as it lies before the person: a mirrored piece turns it the other way."""
        if angle_deg is None or not self.mirrored or angle_deg % 90.0 == 0.0:
            return angle_deg
        return -angle_deg

    @property
    def seen_deg(self) -> float | None:
        """The angle of the step in hand as it lies before the person."""
        return self.seen(self.angle_deg)


def look_at_ply(stock: Stock, piece: str, now: datetime, step: int | None = None) -> PlyInHand | None:
    """The step asked for, else the lowest one not laid yet. None where the piece is not laid up in steps."""
    snapshot = stock.build.snapshot
    index = PlanIndex(snapshot.plan)
    name, running = split_piece_name(piece) or (piece, _running_of(snapshot, piece))
    part = index.parts.get(name)
    laminate = None if part is None else index.laminates.get(part.made_of or "")
    if part is None or laminate is None or not laminate.steps:
        return None
    known_as = f"{name}/{running}"
    done = steps_laid(snapshot).get(known_as, set())
    number = step if step is not None else _lowest(laminate.steps, done)
    chosen = next((one for one in laminate.steps if one.number == number), None)
    nominal = index.nominal(name)
    area = None if nominal is None else nominal.area_m2
    needs = _needs_of(nominal)
    lot, lot_note = (None, "") if chosen is None else _lot_for(snapshot, chosen)
    return PlyInHand(
        piece=known_as,
        part=name,
        side=SIDE_WORD[part.side],
        running=running,
        title=part.title,
        step=None if chosen is None else chosen.number,
        steps=len(laminate.steps),
        material=None if chosen is None else chosen.material,
        angle_deg=None if chosen is None else chosen.orientation_deg,
        area_m2=None if area is None or chosen is None else area * chosen.coverage,
        needs_kg=None if chosen is None else needs.get(chosen.number),
        lot=lot,
        lot_note=lot_note,
        cups=_cups_for(stock, index, chosen, now),
        resin_laid_kg=sum(needs.get(laid, 0.0) for laid in done),
        resin_planned_kg=sum(needs.values()) if needs else None,
        calculated_kg=_calculated_kg(stock, known_as, name),
        estimated_kg=None if nominal is None else nominal.estimated_kg,
        stack=tuple(_ply(one, done) for one in laminate.steps),
        assembly=part.assembly,
        mirrored=is_mirrored(part, snapshot.plan),
    )


def _needs_of(nominal: Nominal | None) -> dict[int, float]:
    """The resin each step takes, in kg; empty where the plan does not say."""
    if nominal is None or nominal.layers is None or nominal.area_m2 is None:
        return {}
    return {layer.number: layer.resin * layer.coverage * nominal.area_m2 for layer in nominal.layers}


def _calculated_kg(stock: Stock, *names: str) -> float | None:
    pieces = (piece for part in stock.weights.parts for piece in part.pieces)
    return next((piece.calculated_kg for piece in pieces if piece.piece in names), None)


def is_laid_up(stock: Stock, piece: str) -> bool:
    """Whether this piece or part is a skin laid up step by step, not cut from a sheet."""
    split = split_piece_name(piece)
    part = stock.build.snapshot.plan.part(split[0] if split is not None else piece)
    if part is None or part.form is not Form.SKIN:
        return False
    laminate = stock.build.snapshot.plan.laminate(part.made_of or "")
    return laminate is not None and bool(laminate.steps)


def _running_of(snapshot: Snapshot, part: str) -> int:
    pieces = [piece for piece in snapshot.pieces.values() if piece.part == part]
    live = [piece.running for piece in pieces if piece.state is not PieceState.SCRAPPED]
    return live[0] if live else 1 + max((piece.running for piece in pieces), default=0)


def _lowest(steps: tuple[Step, ...], done: set[int]) -> int | None:
    return next((step.number for step in steps if step.number not in done), None)


def _ply(step: Step, done: set[int]) -> PlyOfStack:
    return PlyOfStack(
        number=step.number,
        material=step.material,
        angle_deg=step.orientation_deg,
        coverage=step.coverage,
        laid=step.number in done,
    )


def _lot_for(snapshot: Snapshot, step: Step) -> tuple[str | None, str]:
    for entry in reversed(snapshot.logged):
        if not isinstance(entry.act, Lay):
            continue
        for share in entry.act.lots:
            lot = snapshot.lots.get(share.what)
            if lot is not None and lot.receive.material == step.material and lot.number not in snapshot.gone:
                return lot.number, f"as ply {entry.act.step}, {step.material}"
    standing = [
        lot.number
        for lot in snapshot.lots.values()
        if lot.receive.material == step.material and lot.number not in snapshot.gone
    ]
    if len(standing) == 1:
        return standing[0], f"the only lot, {step.material}"
    return None, f"{step.material}: {' '.join(standing) or 'no lot received'}"


def _cups_for(stock: Stock, index: PlanIndex, step: Step | None, now: datetime) -> tuple[Cup, ...]:
    if step is None:
        return ()
    cups = cups_on_bench(stock.build.snapshot, stock.weights, now)

    def wets(cup: Cup) -> bool:
        material = index.materials.get(cup.resin_material or "")
        return material is not None and material.kind is MaterialKind.RESIN

    return tuple(cup for cup in cups if wets(cup))
