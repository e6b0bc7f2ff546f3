"""What comes out of the loft: one right wing as panels, skins, solids, bonds, cells and openings.

Metres, build axes. Part numbers are without their side, as `RIB.F1`; who writes the plan adds it and
makes the mirrored ones.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ledger.loft.layout import Edge, Item, LayoutFeed, TankBays
from ledger.model.plan import PartClass, Placement
from ledger.model.tanks import Outside, Rim

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Mesh:
    """vertices_m : (n, 3) float, metres, build axes; faces : (m, 3) int, anticlockwise from outside."""

    vertices_m: Floats
    faces: Indices


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PanelEdge:
    """A stretch of a panel's edge in its mid-plane and what it meets. points_m : (k, 3) float."""

    meets: Edge
    points_m: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RoundHole:
    """A hole in a panel's own axes: centre X, Y and diameter, metres."""

    x_m: float
    y_m: float
    diameter_m: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Panel:
    """A flat panel to be cut. outline_m : (n, 2) float, anticlockwise, in its own X and Y, mid-plane."""

    part: str
    title: str
    part_class: PartClass
    laminate: str
    thickness_m: float
    placement: Placement
    outline_m: Floats
    holes: tuple[RoundHole, ...]
    edges: tuple[PanelEdge, ...]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LoftedSkin:
    """A skin's outer surface, open, normals outward; a finish is a part of its own on the same surface."""

    part: str
    title: str
    laminate: str
    surface: Mesh
    finish: str | None
    finish_part: str | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solid:
    """A closed solid of one material: cap, core, closeout or block."""

    part: str
    title: str
    part_class: PartClass
    material: str
    mesh: Mesh


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BondRun:
    """A bond: its lines, each (k, 3), and the cross-section of paste in it with the fillets of both faces."""

    part: str
    title: str
    paste: str
    section_m2: float
    lines_m: tuple[Floats, ...]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Strip:
    """A cap let into a skin: one line, (k, 3), in the middle of the skin's thickness."""

    part: str
    title: str
    material: str
    line_m: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LoftedCell:
    """A cell net of structure. `number` counts from the root; fillets and blocks take up `displaced_m3`."""

    number: int
    bay: str
    tank: TankBays
    mesh: Mesh
    displaced_m3: float


@dataclass(frozen=True, slots=True, kw_only=True)
class LoftedOpening:
    """A hole between two cells, or a port of one; cells by number. `name` is without cells and side."""

    name: str
    cells: tuple[int, ...]
    outside: Outside | None
    rim: Rim
    depth_m: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Account:
    """Volumes in m3 of everything inside the lofted box; `apart_m3` is box less the sum, and `shared_m3`
    what two of them claim at once: both are proved to be next to nothing."""

    box_m3: float
    skins_m3: float
    panels_m3: float
    paste_m3: float
    solids_m3: float
    cells_m3: float
    dry_m3: float
    apart_m3: float
    shared_m3: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Lofted:
    """The whole right wing."""

    panels: tuple[Panel, ...]
    skins: tuple[LoftedSkin, ...]
    solids: tuple[Solid, ...]
    bonds: tuple[BondRun, ...]
    strips: tuple[Strip, ...]
    cells: tuple[LoftedCell, ...]
    openings: tuple[LoftedOpening, ...]
    items: tuple[Item, ...]
    feeds: tuple[LayoutFeed, ...]
    account: Account
