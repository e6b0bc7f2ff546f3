"""A plan by name, with what each part nominally weighs: built once, so that nothing is searched for."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from ledger.mass.laminate import WET_KINDS, Layer, dry_areal_mass, laminate_layers
from ledger.model.plan import (
    Form,
    Laminate,
    Material,
    MaterialKind,
    Part,
    PartClass,
    Plan,
    Shape,
)
from ledger.model.snapshot import Snapshot

_FLAT = (Form.PANEL, Form.SKIN)


@dataclass(frozen=True, slots=True, kw_only=True)
class Nominal:
    """One piece of a part as planned. `layers` is None where a figure lacks, `measure` without a shape.

    A wet part is planned adhesive, sealant or finish: what is logged takes the place of what was planned.
    """

    part: Part
    layers: tuple[Layer, ...] | None
    measure: float | None
    wet: bool

    @property
    def flat(self) -> bool:
        """Has an area that can be coated or cut away."""
        return self.part.form in _FLAT

    @property
    def area_m2(self) -> float | None:
        """The outline's or surface's area; None for what has none."""
        return self.measure if self.flat else None

    @property
    def mass_kg(self) -> float | None:
        """From geometry and nominal materials; an item has none of its own but the planned one."""
        if self.layers is None or self.measure is None:
            return None
        return self.measure * sum(layer.whole for layer in self.layers)

    @property
    def estimated_kg(self) -> float | None:
        """The planned mass where there is one, else what geometry and nominal materials give."""
        planned = self.part.planned_mass_kg
        return self.mass_kg if planned is None else planned


class PlanIndex:
    """One plan's parts, materials and laminates by name."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.parts: dict[str, Part] = {part.name: part for part in plan.parts}
        self.shapes: dict[str, Shape] = {
            part.name: shape for part, shape in zip(plan.parts, plan.shapes, strict=False)
        }
        self.materials: dict[str, Material] = {material.name: material for material in plan.materials}
        self.laminates: dict[str, Laminate] = {laminate.name: laminate for laminate in plan.laminates}
        self._layers: dict[str, tuple[Layer, ...] | None] = {}
        self._nominals: dict[str, Nominal] = {}

    def nominal(self, part: str) -> Nominal | None:
        """One piece of the part as planned; None where the plan has no such part."""
        found = self._nominals.get(part)
        if found is None and part in self.parts:
            found = self._nominals[part] = self._nominal(self.parts[part])
        return found

    def layers_of(self, laminate: str) -> tuple[Layer, ...] | None:
        """A laminate's layers from nominal materials."""
        if laminate not in self._layers:
            known = self.laminates.get(laminate)
            self._layers[laminate] = None if known is None else laminate_layers(known, self.materials)
        return self._layers[laminate]

    @cached_property
    def assemblies(self) -> tuple[str, ...]:
        """Every assembly path and the paths above it, in the order of the parts."""
        paths: dict[str, None] = {}
        for part in self.plan.parts:
            steps = part.assembly.split("/") if part.assembly else []
            for depth in range(1, len(steps) + 1):
                paths["/".join(steps[:depth])] = None
        return tuple(paths)

    def _nominal(self, part: Part) -> Nominal:
        shape = self.shapes.get(part.name)
        measure = 1.0 if part.form is Form.ITEM else None if shape is None else shape.measure
        return Nominal(part=part, layers=self._part_layers(part), measure=measure, wet=self._is_wet(part))

    def _part_layers(self, part: Part) -> tuple[Layer, ...] | None:
        if part.form is Form.ITEM:
            planned = part.planned_mass_kg
            return None if planned is None else (_single(part.name, MaterialKind.SOLID, planned),)
        if part.made_of is None:
            return None
        if part.form in _FLAT and part.made_of in self.laminates:
            return self.layers_of(part.made_of)
        material = self.materials.get(part.made_of)
        if material is None:
            return None
        if part.form in _FLAT:
            per = dry_areal_mass(material)
        else:
            per = material.density_kg_m3 if part.form is Form.SOLID else material.linear_mass_kg_m
        return None if per is None else (_single(material.name, material.kind, per),)

    def _is_wet(self, part: Part) -> bool:
        material = self.materials.get(part.made_of) if part.made_of is not None else None
        if part.form in _FLAT and part.made_of in self.laminates:
            return False
        if material is not None:
            return material.kind in WET_KINDS
        return part.form is Form.RUN and part.part_class in (PartClass.JOINT, PartClass.FINISH)


def _single(name: str, kind: MaterialKind, per_measure: float) -> Layer:
    return Layer(number=1, material=name, kind=kind, dry=per_measure, resin=0.0)


class Indexes:
    """The plan a piece was begun under, by piece; the current plan where that iteration was withdrawn."""

    def __init__(self, snapshot: Snapshot) -> None:
        self.snapshot = snapshot
        self._nominals: dict[str, Nominal] = {}
        self._materials: dict[str, Material | None] = {}
        self._by_name = {iteration.name: PlanIndex(iteration.plan) for iteration in snapshot.iterations[:-1]}
        last = snapshot.iterations[-1]
        self.now = self._by_name[last.name] = PlanIndex(last.plan)

    def of(self, piece: str) -> PlanIndex:
        """The plan whose steps the entries of a piece speak of."""
        known = self.snapshot.pieces.get(piece)
        if known is None:
            return self.now
        then = self._by_name.get(known.iteration, self.now)
        return then if known.part in then.parts else self.now

    def nominal(self, piece: str) -> Nominal | None:
        """A piece as planned when it was begun."""
        found = self._nominals.get(piece)
        if found is None:
            known = self.snapshot.pieces.get(piece)
            found = None if known is None else self.of(piece).nominal(known.part)
            if found is not None:
                self._nominals[piece] = found
        return found

    def material(self, name: str) -> Material | None:
        """A material by name, of the newest plan that has it."""
        if name not in self._materials:
            newest_first = (self.now, *reversed(self._by_name.values()))
            self._materials[name] = next(
                (index.materials[name] for index in newest_first if name in index.materials), None
            )
        return self._materials[name]
