"""A plan: one whole design, as records. Shapes are figures here; meshes and curves stay in geometry."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from ledger.model.attitude import Attitude
from ledger.model.tanks import Tanks
from ledger.model.vectors import Matrix, Vector
from ledger.units import Display


class MaterialKind(StrEnum):
    """What a material is to the build. `process` materials never enter a finished mass."""

    FABRIC = "fabric"
    PREPREG = "prepreg"
    RESIN = "resin"
    HARDENER = "hardener"
    CORE = "core"
    FILM = "film"
    PASTE = "paste"
    SEALANT = "sealant"
    FINISH = "finish"
    SOLID = "solid"
    PROCESS = "process"


class PartClass(StrEnum):
    """The trade's classes of part; shares growth allowance and tolerance within one."""

    RIB = "rib"
    WEB = "web"
    SKIN = "skin"
    CAP = "cap"
    CLOSEOUT = "closeout"
    JOINT = "joint"
    FITTING = "fitting"
    FINISH = "finish"


class Form(StrEnum):
    """How a part's mass follows from its geometry."""

    PANEL = "panel"
    SKIN = "skin"
    SOLID = "solid"
    RUN = "run"
    ITEM = "item"


class Side(StrEnum):
    """Left, right or centre."""

    LEFT = "L"
    RIGHT = "R"
    CENTRE = "C"


class Face(StrEnum):
    """Where an outline lies in the thickness of its panel."""

    MID = "mid"
    PLUS = "+normal"
    MINUS = "-normal"


@dataclass(frozen=True, slots=True, kw_only=True)
class Material:
    """A material with its nominal figures. `ratio` is hardener per resin by mass."""

    name: str
    kind: MaterialKind
    areal_mass_kg_m2: float | None = None
    density_kg_m3: float | None = None
    thickness_m: float | None = None
    linear_mass_kg_m: float | None = None
    resin_uptake_kg_m2: float | None = None
    fibre_density_kg_m3: float | None = None
    ratio: float | None = None
    ratio_tolerance: float | None = None
    pot_life_s: float | None = None
    lot_spread: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Step:
    """One layer of a laminate. `coverage` 1 is the whole area; shares are of 1, not percent."""

    number: int
    material: str
    orientation_deg: float | None = None
    coverage: float = 1.0
    resin_fraction: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Laminate:
    """Either a plain areal mass (`steps` empty) or steps laid in order along the normal."""

    name: str
    areal_mass_kg_m2: float | None = None
    steps: tuple[Step, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Placement:
    """Where local geometry sits: local X along `across`, local Y along `up_axis`. Unit vectors."""

    origin_m: Vector
    across: Vector
    up_axis: Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """A part number: what it is, what it is made of and where it is. `assembly` is a path with `/`."""

    name: str
    title: str
    part_class: PartClass
    side: Side
    assembly: str
    form: Form
    made_of: str | None = None
    geometry: str | None = None
    geometry_unit: str | None = None
    placement: Placement | None = None
    face: Face = Face.MID
    quantity: int = 1
    planned_mass_kg: float | None = None
    mirror_of: str | None = None
    row: int | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Shape:
    """What a piece's geometry gives the mass layer, in build axes. Computed once per content hash.

    `measure` is an area (panel, skin), a volume (solid) or a length (run), and 1 for an item.
    `centroid_m` is that of the mid-thickness; `second_m2` is the integral of r r^T over the measure
    about the centroid, divided by the measure. `digest` names the geometry it came from.
    """

    measure: float
    centroid_m: Vector
    second_m2: Matrix
    digest: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelGrade:
    """The fuel of the plan: its grade, its density at 15 C, and the engine's full flow where declared."""

    grade: str
    density_15c_kg_m3: float | None
    feed_flow_m3_s: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """A whole design. `shapes` is in the order of `parts`; `cell_digests` in the order of `tanks.cells`."""

    name: str
    title: str
    display: Display
    materials: tuple[Material, ...]
    laminates: tuple[Laminate, ...]
    parts: tuple[Part, ...]
    shapes: tuple[Shape, ...]
    tanks: Tanks = Tanks()
    cell_digests: tuple[str, ...] = ()
    attitudes: tuple[Attitude, ...] = ()
    fuel: FuelGrade | None = None
    tolerances: tuple[tuple[PartClass, float], ...] = ()
    growths: tuple[tuple[PartClass, float], ...] = ()

    def part(self, name: str) -> Part | None:
        """The part of that number."""
        return next((part for part in self.parts if part.name == name), None)

    def material(self, name: str) -> Material | None:
        """The material of that name."""
        return next((material for material in self.materials if material.name == name), None)

    def laminate(self, name: str) -> Laminate | None:
        """The laminate of that name."""
        return next((laminate for laminate in self.laminates if laminate.name == name), None)
