"""How thick each laminate of a layout is: as the layout says, or from its constituents."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.exchange.materials_table import Named
from ledger.exchange.toml_text import TomlTable
from ledger.mass.laminate import laminate_thickness
from ledger.model.plan import Laminate, Material, MaterialKind, Step

# Voids and a press of more or less make a laminate this much thicker or thinner than reckoned.
_NEAR = 0.15


class Thicknesses:
    """Stated thicknesses first; each laminate that has none is told of once."""

    def __init__(
        self, materials: Named[Material], stated_m: Mapping[str, float], said: frozenset[str]
    ) -> None:
        self._materials = dict(materials.records)
        self._stated_m = stated_m
        self._said = said
        self._told: set[str] = set()
        resins = [
            material.density_kg_m3
            for material in self._materials.values()
            if material.kind is MaterialKind.RESIN and material.density_kg_m3 is not None
        ]
        self._resins = resins

    def of(self, table: TomlTable, key: str, laminate: Laminate) -> float | None:
        """The thickness in metres; None with a finding at the key that names the laminate."""
        stated = self._stated_m.get(laminate.name)
        if stated is not None:
            return stated
        computed = self.computed_m(laminate)
        # Where a stated thickness, or a row that it would follow from, cannot be read, that is told there.
        told = self._told | self._said
        if computed is None and laminate.name not in told and self._is_readable(laminate):
            self._told.add(laminate.name)
            table.stop(
                "thickness-unknown",
                key,
                f"how thick {laminate.name!r} is cannot be told: {self._why(laminate)}",
                f'write its thickness under [thickness], as "{laminate.name}" = ...',
            )
        return computed

    def computed_m(self, laminate: Laminate) -> float | None:
        """From constituents, where each step covers the whole area and every figure is there."""
        if any(self._counts(step) and step.coverage < 1.0 for step in laminate.steps):
            return None
        resin = self._resins[0] if len(self._resins) == 1 else None
        if resin is None and any(self._wants_resin(step) for step in laminate.steps):
            return None
        return laminate_thickness(laminate, self._materials, resin) or None

    def compare(self, table: TomlTable, laminate: Laminate) -> None:
        """Look at a stated thickness that is far from the reckoned one."""
        stated, computed = self._stated_m.get(laminate.name), self.computed_m(laminate)
        if stated is None or computed is None or abs(stated - computed) <= _NEAR * computed:
            return
        table.problems.look(
            "thickness-differs",
            table.where(laminate.name),
            f"{laminate.name!r} is said to be {stated * 1000:.3g} mm thick, and its steps come to"
            f" {computed * 1000:.3g} mm",
            "correct the thickness, or a step of the laminate",
        )

    def _is_readable(self, laminate: Laminate) -> bool:
        known = all(step.material in self._materials for step in laminate.steps)
        return known and (bool(laminate.steps) or laminate.areal_mass_kg_m2 is not None)

    def _counts(self, step: Step) -> bool:
        material = self._materials.get(step.material)
        return material is not None and material.kind is not MaterialKind.PROCESS

    def _wants_resin(self, step: Step) -> bool:
        material = self._materials.get(step.material)
        return (
            material is not None
            and material.kind in (MaterialKind.FABRIC, MaterialKind.PREPREG)
            and step.resin_fraction is not None
            and material.thickness_m is None
        )

    def _why(self, laminate: Laminate) -> str:
        if not laminate.steps:
            return "it has an areal mass and no steps"
        for step in laminate.steps:
            if self._counts(step) and step.coverage < 1.0:
                return f"step {step.number} covers {step.coverage * 100:g} % of it"
        if len(self._resins) != 1 and any(self._wants_resin(step) for step in laminate.steps):
            count = "no resin has" if not self._resins else f"{len(self._resins)} resins have"
            return f"{count} a density in the materials"
        for step in laminate.steps:
            lacking = self._lacking(step)
            if lacking is not None:
                return lacking
        return "a figure of its materials is missing"

    def _lacking(self, step: Step) -> str | None:
        material = self._materials.get(step.material)
        if material is None or not self._counts(step) or material.thickness_m is not None:
            return None
        if material.kind not in (MaterialKind.FABRIC, MaterialKind.PREPREG):
            return f"{material.name!r} has no thickness"
        if step.resin_fraction is None:
            return f"step {step.number} has no resin fraction"
        return f"{material.name!r} has no fibre density" if material.fibre_density_kg_m3 is None else None
