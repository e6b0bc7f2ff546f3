"""A section through a tank, frozen: the walls that are cut and the fuel between them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ledger.model.vectors import Vector

if TYPE_CHECKING:
    from ledger.geometry.closed_cell import ClosedCell

X, Y, Z = 0, 1, 2


@dataclass(frozen=True, slots=True, kw_only=True)
class CutCell:
    """One cell in the section. Segments are (u, w, u, w) in metres: u along the cut, w the water line."""

    cell: str
    segments: tuple[tuple[float, float, float, float], ...]
    level_m: float
    kept_level_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Cut:
    """A section through the tank at BL (`axis` 1) or FS (`axis` 0). Levels are along `up`."""

    axis: int
    at_m: float
    up: Vector
    cells: tuple[CutCell, ...]


def cut_tank(
    solids: Mapping[str, ClosedCell],
    axis: int,
    at_m: float,
    up: Vector,
    *,
    levels: Mapping[str, float],
    kept_levels: Mapping[str, float],
) -> Cut:
    """Cut the cells that reach to the plane; `levels` is where the fuel stands in each now."""
    from ledger.geometry.sections_cut import segments_by_plane

    other = X if axis == Y else Y
    normal = tuple(float(one == axis) for one in (X, Y, Z))
    point = tuple(at_m if one == axis else 0.0 for one in (X, Y, Z))
    cells = []
    for name, solid in solids.items():
        segments = segments_by_plane(solid.vertices_m, solid.faces, point, normal)
        rows = segments[:, :, [other, Z]].reshape(-1, 4).tolist()
        cells.append(
            CutCell(
                cell=name,
                segments=tuple((row[0], row[1], row[2], row[3]) for row in rows),
                level_m=levels[name],
                kept_level_m=kept_levels[name],
            )
        )
    return Cut(axis=axis, at_m=at_m, up=up, cells=tuple(cells))
