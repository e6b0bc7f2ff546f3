"""What a layer, a laminate and their constituents weigh, per unit of area, volume or length.

The constituent equations are those of ASTM D3171 method II with zero voids assumed; a laminate with
voids is thicker and less dense than these say.
"""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.plan import Laminate, Material, MaterialKind, Step

# Lots of these come wet from a cup or a cartridge: what is logged takes the place of what was planned.
WET_KINDS = frozenset(
    {
        MaterialKind.PASTE,
        MaterialKind.SEALANT,
        MaterialKind.FINISH,
        MaterialKind.FILM,
        MaterialKind.RESIN,
        MaterialKind.HARDENER,
    }
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """One layer, per unit of the piece's measure: kg/m2 of a panel or skin, kg/m3 of a solid, kg/m of a run.

    `dry` is what comes from a lot, `resin` what comes from a cup; both before `coverage`.
    """

    number: int
    material: str
    kind: MaterialKind
    dry: float
    resin: float
    coverage: float = 1.0
    orientation_deg: float | None = None
    resin_fraction: float | None = None

    @property
    def whole(self) -> float:
        """Dry and resin over the share covered."""
        return (self.dry + self.resin) * self.coverage


@dataclass(frozen=True, slots=True, kw_only=True)
class Constituents:
    """A cured ply from what it is made of. Zero voids assumed."""

    fibre_volume_fraction: float
    areal_mass_kg_m2: float
    thickness_m: float
    density_kg_m3: float


def ply_areal_mass(fabric_kg_m2: float, resin_fraction: float) -> float:
    """A wetted ply's areal mass: the fabric's over its own share by mass."""
    return fabric_kg_m2 / (1.0 - resin_fraction)


def constituents(
    fabric_kg_m2: float, resin_fraction: float, fibre_kg_m3: float, resin_kg_m3: float
) -> Constituents:
    """Fibre volume fraction, areal mass, cured thickness and density of one ply.

    References
        ASTM D3171 method II, with the void content taken as zero.
    """
    fibre_share = 1.0 - resin_fraction
    fibre_volume = fibre_share / fibre_kg_m3
    volume = fibre_volume + resin_fraction / resin_kg_m3
    volume_fraction = fibre_volume / volume
    return Constituents(
        fibre_volume_fraction=volume_fraction,
        areal_mass_kg_m2=ply_areal_mass(fabric_kg_m2, resin_fraction),
        thickness_m=fabric_kg_m2 / (fibre_kg_m3 * volume_fraction),
        density_kg_m3=1.0 / volume,
    )


def dry_areal_mass(
    material: Material, *, areal_mass_kg_m2: float | None = None, density_kg_m3: float | None = None
) -> float | None:
    """What a square metre of the material weighs before it is wetted; a lot's own figures stand first."""
    if material.kind is MaterialKind.PROCESS:
        return 0.0
    if areal_mass_kg_m2 is not None:
        return areal_mass_kg_m2
    by_thickness = _by_thickness(material, density_kg_m3)
    if density_kg_m3 is not None and by_thickness is not None:
        return by_thickness
    if material.kind is MaterialKind.CORE and by_thickness is not None:
        return by_thickness
    return material.areal_mass_kg_m2 if material.areal_mass_kg_m2 is not None else by_thickness


def _by_thickness(material: Material, density_kg_m3: float | None) -> float | None:
    density = material.density_kg_m3 if density_kg_m3 is None else density_kg_m3
    if density is None or material.thickness_m is None:
        return None
    return density * material.thickness_m


def resin_taken(material: Material, dry_kg_m2: float, resin_fraction: float | None) -> float | None:
    """The resin that a square metre takes from the cup; None where the plan does not say.

    A prepreg brings its resin with it, so it takes none. A core takes its uptake on both faces.
    """
    if material.kind is MaterialKind.FABRIC:
        if resin_fraction is None:
            return None
        return ply_areal_mass(dry_kg_m2, resin_fraction) - dry_kg_m2
    if material.kind is MaterialKind.CORE:
        return 2.0 * (material.resin_uptake_kg_m2 or 0.0)
    return 0.0


def layer_of(
    step: Step,
    material: Material,
    *,
    areal_mass_kg_m2: float | None = None,
    density_kg_m3: float | None = None,
) -> Layer | None:
    """A step of a laminate with its material, nominal or as a lot measured it; None where a figure lacks.

    A prepreg with a resin share has the areal mass of its fibre; without one, its areal mass is whole.
    """
    dry = dry_areal_mass(material, areal_mass_kg_m2=areal_mass_kg_m2, density_kg_m3=density_kg_m3)
    if dry is None:
        return None
    resin = resin_taken(material, dry, step.resin_fraction)
    if resin is None:
        return None
    if material.kind is MaterialKind.PREPREG and step.resin_fraction is not None:
        dry = ply_areal_mass(dry, step.resin_fraction)
    return Layer(
        number=step.number,
        material=material.name,
        kind=material.kind,
        dry=dry,
        resin=resin,
        coverage=step.coverage,
        orientation_deg=step.orientation_deg,
        resin_fraction=step.resin_fraction,
    )


def laminate_layers(laminate: Laminate, materials: dict[str, Material]) -> tuple[Layer, ...] | None:
    """Every step with its nominal mass; a plain laminate is one layer. None where a figure lacks."""
    if not laminate.steps:
        if laminate.areal_mass_kg_m2 is None:
            return None
        plain = Layer(
            number=1,
            material=laminate.name,
            kind=MaterialKind.SOLID,
            dry=laminate.areal_mass_kg_m2,
            resin=0.0,
        )
        return (plain,)
    layers = []
    for step in laminate.steps:
        material = materials.get(step.material)
        layer = None if material is None else layer_of(step, material)
        if layer is None:
            return None
        layers.append(layer)
    return tuple(layers)


def laminate_areal_mass(laminate: Laminate, materials: dict[str, Material]) -> float | None:
    """What a square metre of the finished laminate weighs, from nominal materials."""
    layers = laminate_layers(laminate, materials)
    return None if layers is None else sum(layer.whole for layer in layers)


def laminate_thickness(
    laminate: Laminate, materials: dict[str, Material], resin_kg_m3: float | None
) -> float | None:
    """Cured thickness over the steps that cover the whole area; None where a density or thickness lacks."""
    total = 0.0
    for step in laminate.steps:
        material = materials.get(step.material)
        if material is None:
            return None
        if material.kind is MaterialKind.PROCESS or step.coverage < 1.0:
            continue
        thickness = _step_thickness(step, material, resin_kg_m3)
        if thickness is None:
            return None
        total += thickness
    return total if laminate.steps else None


def laminate_density(
    laminate: Laminate, materials: dict[str, Material], resin_kg_m3: float | None
) -> float | None:
    """Areal mass over cured thickness, for a laminate that covers its area in every step."""
    mass = laminate_areal_mass(laminate, materials)
    thickness = laminate_thickness(laminate, materials, resin_kg_m3)
    if mass is None or not thickness or any(step.coverage < 1.0 for step in laminate.steps):
        return None
    return mass / thickness


def _step_thickness(step: Step, material: Material, resin_kg_m3: float | None) -> float | None:
    fibrous = material.kind in (MaterialKind.FABRIC, MaterialKind.PREPREG)
    if not fibrous or step.resin_fraction is None:
        return material.thickness_m
    if material.areal_mass_kg_m2 is None or material.fibre_density_kg_m3 is None or resin_kg_m3 is None:
        return material.thickness_m
    return constituents(
        material.areal_mass_kg_m2, step.resin_fraction, material.fibre_density_kg_m3, resin_kg_m3
    ).thickness_m
