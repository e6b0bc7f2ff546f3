"""The figures of one piece, and of a part from its pieces."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise

from ledger.mass.composition import planned_sources
from ledger.mass.magnitudes import BOUND_TO_U, CLASS_ALLOWANCE, GEOMETRY_TOLERANCE
from ledger.mass.plan_index import Nominal, PlanIndex
from ledger.mass.report import CAUSES, CauseMass, PartMass, PieceMass
from ledger.mass.settle import NOW, Differences, Settled, Settlement
from ledger.mass.spread import Source, Spread, add_sources, add_spread, u_of
from ledger.model.plan import PartClass, Shape, Side
from ledger.model.snapshot import Piece
from ledger.model.vectors import Vector

_STATES = ("planned", "open", "finished")
NO_CAUSES = (0.0,) * len(CAUSES)
_NONE_OFF = tuple(CauseMass(cause=cause, mass_kg=0.0) for cause in CAUSES)


@dataclass(frozen=True, slots=True, kw_only=True)
class PieceFigures:
    """A piece's record with what the sums above it need. Only one that `counts` enters them."""

    mass: PieceMass
    running: int
    counts: bool
    begun: bool
    weighed_kg: float | None
    causes: tuple[float, ...]
    spread: Spread
    in_group: bool = False
    links: dict[int, float] = field(default_factory=dict)


def named_causes(causes: tuple[float, ...]) -> tuple[CauseMass, ...]:
    """The causes with their names."""
    if causes == NO_CAUSES:
        return _NONE_OFF
    return tuple(CauseMass(cause=cause, mass_kg=mass) for cause, mass in zip(CAUSES, causes, strict=True))


def planned_piece(nominal: Nominal, index: PlanIndex, number: int) -> PieceFigures:
    """A piece of which nothing has been logged."""
    estimated = nominal.estimated_kg
    spread: Spread = {}
    if estimated is not None:
        add_sources(spread, _planned_unsureness(nominal, index, estimated, number))
    u_kg = None if estimated is None else u_of(spread)
    return PieceFigures(
        mass=PieceMass(
            piece=nominal.part.name,
            number=None,
            state="planned",
            known_by="E",
            estimated_kg=estimated,
            calculated_kg=None,
            actual_kg=None,
            built_kg=0.0,
            best_kg=estimated,
            best_u_kg=u_kg,
            expected_kg=estimated,
            expected_u_kg=u_kg,
            off_plan=named_causes(NO_CAUSES),
        ),
        running=0,
        counts=True,
        begun=False,
        weighed_kg=None,
        causes=NO_CAUSES,
        spread=spread,
    )


def _planned_unsureness(nominal: Nominal, index: PlanIndex, estimated: float, number: int) -> list[Source]:
    part = nominal.part
    thing = f"{part.name} planned {number}"
    allowance: Source = (("class", part.part_class.value), CLASS_ALLOWANCE * BOUND_TO_U * estimated)
    if part.planned_mass_kg is None and nominal.layers is not None and nominal.measure is not None:
        return [allowance, *planned_sources(nominal.measure, nominal.layers, index, thing)]
    return [allowance, (("drawing", thing), GEOMETRY_TOLERANCE * estimated)]


def settled_piece(
    piece: Piece, settlement: Settlement, held: tuple[str, ...], *, counts: bool
) -> PieceFigures:
    """A piece begun, with its weighings. `held` are the pieces fitted into it."""
    thing = settlement.things[piece.name]
    composition = thing.composition
    best = thing.best_kg
    spread = thing.sources_now()
    links = links_of(thing)
    u_kg = None if best is None else settlement.differences.u_with(spread, links)
    causes = _causes(thing, best)
    state = piece.state.value if counts or piece.state.value == "scrapped" else "spare"
    if state == "open" and composition.finished:
        state = "finished"
    expected, expected_u = _expected(thing, settlement, held, u_kg)
    return PieceFigures(
        mass=PieceMass(
            piece=piece.name,
            number=piece.number,
            state=state,
            known_by=_known_by(thing),
            estimated_kg=composition.estimated_kg,
            calculated_kg=composition.calculated_kg,
            actual_kg=thing.actual_kg,
            built_kg=_built_kg(thing),
            best_kg=best,
            best_u_kg=u_kg,
            expected_kg=expected,
            expected_u_kg=expected_u,
            off_plan=named_causes(causes),
        ),
        running=piece.running,
        counts=counts,
        begun=True,
        weighed_kg=_weighed_kg(thing),
        causes=causes,
        spread=spread,
        in_group=thing.in_group,
        links=links,
    )


def links_of(thing: Settled) -> dict[int, float]:
    """The shares of group differences in a thing's mass."""
    links: dict[int, float] = {}
    for share, number in thing.links:
        links[number] = links.get(number, 0.0) + share
    return links


def _known_by(thing: Settled) -> str:
    if thing.weighed_itself:
        return "A"
    return "E" if thing.composition.calculated_kg is None else "C"


def _built_kg(thing: Settled) -> float:
    if thing.weighed_itself:
        return thing.best_kg or 0.0
    return thing.composition.built_kg + thing.correction_kg


def _weighed_kg(thing: Settled) -> float | None:
    if thing.actual_kg is not None:
        return thing.actual_kg
    return _built_kg(thing) if thing.in_group else None


def _causes(thing: Settled, best: float | None) -> tuple[float, ...]:
    stages = thing.composition.stages
    if stages is None:
        estimated = thing.composition.estimated_kg
        if best is None or estimated is None:
            return (best or 0.0, *NO_CAUSES[1:])
        return (*NO_CAUSES[1:], best - estimated)
    found = [after - before for before, after in pairwise(stages)]
    return (*found, thing.unexplained_kg)


def _expected(
    thing: Settled, settlement: Settlement, held: tuple[str, ...], u_kg: float | None
) -> tuple[float | None, float | None]:
    """What a scale should show today: the piece as it stands with whatever is fitted to it."""
    if thing.best_kg is None:
        return None, None
    if not held and not thing.composition.pending and (thing.composition.deposits or thing.weighed_itself):
        return thing.best_kg, u_kg
    total = 0.0
    spread: Spread = {}
    links: dict[int, float] = {}
    for one in (thing, *(settlement.things[name] for name in held if name in settlement.things)):
        there = one.composition.deposits or one.weighed_itself or one.links
        total += one.kg_at(NOW) if there else one.best_kg or 0.0
        add_spread(spread, one.sources_at(NOW) if there else one.sources_now())
        for number, share in links_of(one).items():
            links[number] = links.get(number, 0.0) + share
    return total, settlement.differences.u_with(spread, links)


def part_of_pieces(
    nominal: Nominal, shape: Shape | None, figures: list[PieceFigures], differences: Differences
) -> PartMass:
    """A part from its pieces: sums over those that count."""
    part = nominal.part
    counting = [one for one in figures if one.counts]
    best = _sum_all([one.mass.best_kg for one in counting])
    calculated = [one.mass.calculated_kg for one in counting if one.begun]
    states = [one.mass.state for one in counting] or ["planned"]
    return PartMass(
        part=part.name,
        title=part.title,
        part_class=part.part_class,
        side=part.side,
        assembly=part.assembly,
        quantity=part.quantity,
        estimated_kg=None if nominal.estimated_kg is None else part.quantity * nominal.estimated_kg,
        calculated_kg=_sum_all(calculated),
        actual_kg=_sum_all([one.mass.actual_kg for one in counting]),
        built_kg=sum(one.mass.built_kg for one in counting),
        best_kg=best,
        best_u_kg=None if best is None else _u_of_all(counting, differences),
        state=min(states, key=_STATES.index),
        cg_m=None if shape is None else shape.centroid_m,
        area_m2=nominal.area_m2,
        pieces=tuple(one.mass for one in figures),
        off_plan=_causes_of_all(counting),
    )


def _u_of_all(figures: list[PieceFigures], differences: Differences) -> float | None:
    if len(figures) == 1:
        return figures[0].mass.best_u_kg
    spread: Spread = {}
    links: dict[int, float] = {}
    for one in figures:
        add_spread(spread, one.spread)
        for number, share in one.links.items():
            links[number] = links.get(number, 0.0) + share
    return differences.u_with(spread, links)


def _sum_all(masses: list[float | None]) -> float | None:
    """The sum, or None where there is nothing to add or one is not known."""
    known = [mass for mass in masses if mass is not None]
    return sum(known) if known and len(known) == len(masses) else None


def _causes_of_all(figures: list[PieceFigures]) -> tuple[CauseMass, ...]:
    if len(figures) == 1:
        return figures[0].mass.off_plan
    return named_causes(tuple(sum(one.causes[place] for one in figures) for place in range(len(CAUSES))))


def cell_part(
    cell: str, home: str, settlement: Settlement, place_m: Vector | None
) -> tuple[PartMass, PieceFigures]:
    """The coats inside a cell, shown beside the parts: the plan has no part that holds them."""
    figures = _cell_figures(cell, settlement)
    mass = figures.mass
    part = PartMass(
        part=f"coats in {cell}",
        title=f"sealant and other coats inside cell {cell}",
        part_class=PartClass.FINISH,
        side=Side.CENTRE,
        assembly=home,
        quantity=1,
        estimated_kg=None,
        calculated_kg=mass.calculated_kg,
        actual_kg=None,
        built_kg=mass.built_kg,
        best_kg=mass.best_kg,
        best_u_kg=mass.best_u_kg,
        state="finished",
        cg_m=place_m,
        area_m2=None,
        pieces=(mass,),
        off_plan=mass.off_plan,
    )
    return part, figures


def _cell_figures(cell: str, settlement: Settlement) -> PieceFigures:
    thing = settlement.things[cell]
    built = thing.kg_at(NOW)
    spread, links = thing.sources_now(), links_of(thing)
    causes = (*NO_CAUSES[:5], thing.composition.built_kg, 0.0, thing.correction_kg)
    return PieceFigures(
        mass=PieceMass(
            piece=cell,
            number=None,
            state="finished",
            known_by="C",
            estimated_kg=None,
            calculated_kg=thing.composition.built_kg,
            actual_kg=None,
            built_kg=built,
            best_kg=built,
            best_u_kg=settlement.differences.u_with(spread, links),
            expected_kg=None,
            expected_u_kg=None,
            off_plan=named_causes(causes),
        ),
        running=1,
        counts=True,
        begun=True,
        weighed_kg=_weighed_kg(thing),
        causes=causes,
        spread=spread,
        in_group=thing.in_group,
        links=links,
    )
