"""Tanks, cells, openings and feeds as the plan describes them. Lengths in metres, build axes."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from ledger.model.vectors import Vector


class Outside(StrEnum):
    """What an opening can join a cell to, other than another cell."""

    OUTLET = "outlet"
    FILLER = "filler"
    VENT = "vent"
    DRAIN = "drain"


@dataclass(frozen=True, slots=True, kw_only=True)
class Circle:
    """A round hole: centre, diameter, and the direction its axis points."""

    centre_m: Vector
    diameter_m: float
    normal: Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Polygon:
    """A hole of any flat outline, by its corners."""

    points_m: tuple[Vector, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Pipe:
    """A pipe along points, with its bore."""

    points_m: tuple[Vector, ...]
    bore_m: float


Rim = Circle | Polygon | Pipe


@dataclass(frozen=True, slots=True, kw_only=True)
class Opening:
    """What joins a cell to another cell, or to the outside.

    `depth_m` is the thickness of the wall, centred on the rim. `dam_m` adds to what fuel must rise
    above. `one_way` names the only cell that fuel and air may pass into; `air_both` lets air pass
    back; `opens_at_m` adds to what fuel must rise above to push a flap open.
    """

    name: str
    cells: tuple[str, ...]
    outside: Outside | None
    rim: Rim
    depth_m: float | None = None
    dam_m: float = 0.0
    one_way: str | None = None
    air_both: bool = False
    opens_at_m: float = 0.0
    fill_here: bool = False
    crossfeed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """One closed bay, net of structure. `mesh` is the path in the plan, with `#object` where given."""

    name: str
    mesh: str
    mesh_unit: str | None = None
    displaced_m3: float | None = None
    displaced_mesh: str | None = None
    sealant_thickness_m: float | None = None
    sealant_fillet_m: float | None = None
    sealant_material: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Tank:
    """Cells that are filled and read as one, and the share of them kept for expansion (0.02 is 2 %)."""

    name: str
    cells: tuple[str, ...]
    expansion: float | None = None


class Join(StrEnum):
    """How several outlets join on their way to the engine."""

    TEE = "tee"
    SELECT = "select"


@dataclass(frozen=True, slots=True, kw_only=True)
class Feed:
    """A set of outlets and how they join."""

    name: str
    outlets: tuple[str, ...]
    join: Join


@dataclass(frozen=True, slots=True, kw_only=True)
class Tanks:
    """All of a plan's tanks with their cells, openings and feeds."""

    tanks: tuple[Tank, ...] = ()
    cells: tuple[Cell, ...] = ()
    openings: tuple[Opening, ...] = ()
    feeds: tuple[Feed, ...] = ()
