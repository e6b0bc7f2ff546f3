"""Whether openings lie where the cells they join are, and whether cells share space."""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from itertools import combinations

import numpy as np

from ledger.fuel.report import FarOpening, Overlap
from ledger.fuel.rims import middle_of, rim_points
from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.standing import Floats
from ledger.model.tanks import Opening, Tanks

# How far an opening may lie from a wall beyond its own depth: paste, sealant and drawing tolerance.
ALLOWED_M = 0.005
# A hole drawn in the middle of its wall is as far from both cells as it may be, to the last bits.
_SAME_M = 1e-6
# Cells that run less than this into one another only touch.
_TOUCH_M = 1e-6
_LEAST_OVERLAP_SHARE = 1e-6


def far_openings(tanks: Tanks, cells: Mapping[str, ClosedCell]) -> tuple[FarOpening, ...]:
    """Openings that no part of reaches, within depth and 5 mm, a cell they are said to join."""
    far = []
    for opening in tanks.openings:
        allowed = (opening.depth_m or 0.0) + ALLOWED_M
        for name in opening.cells:
            distance = _distance(opening, cells[name], allowed)
            if distance > allowed + _SAME_M:
                far.append(
                    FarOpening(opening=opening.name, cell=name, distance_m=distance, allowed_m=allowed)
                )
    return tuple(far)


@lru_cache(maxsize=4096)
def _distance(opening: Opening, cell: ClosedCell, enough_m: float) -> float:
    """Distance from an opening to a cell, 0 inside it; no smaller one is sought than `enough_m`."""
    least = np.inf
    for points in ((middle_of(opening.rim),), rim_points(opening.rim)):
        for point in np.array(points):
            distance = _distance_to_walls(point, cell)
            if distance > enough_m and _winds_round(point, cell) > 0.5:
                distance = 0.0
            least = min(least, distance)
            if least <= enough_m:
                return float(least)
    return float(least)


def _distance_to_walls(point: Floats, cell: ClosedCell) -> float:
    """Distance to the nearest triangle, m: to its plane where the foot falls inside, else to its edges."""
    corners = cell.vertices_m[cell.faces] - point
    a, b, c = corners[:, 0], corners[:, 1], corners[:, 2]
    normal = np.cross(b - a, c - a)
    squared = np.einsum("ij,ij->i", normal, normal)
    inside = squared > 0.0
    least = np.inf
    for one, two in ((a, b), (b, c), (c, a)):
        edge = two - one
        length = np.einsum("ij,ij->i", edge, edge)
        along = -np.einsum("ij,ij->i", one, edge)
        share = np.clip(np.divide(along, length, out=np.zeros_like(along), where=length > 0.0), 0.0, 1.0)
        nearest = one + share[:, None] * edge
        least = min(least, float(np.einsum("ij,ij->i", nearest, nearest).min()))
        inside &= np.einsum("ij,ij->i", np.cross(edge, -one), normal) >= 0.0
    if inside.any():
        rise = np.einsum("ij,ij->i", a[inside], normal[inside])
        least = min(least, float((rise * rise / squared[inside]).min()))
    return float(np.sqrt(least))


def _winds_round(point: Floats, cell: ClosedCell) -> float:
    """How many times the cell's walls wind round a point: 1 inside, 0 outside."""
    corners = cell.vertices_m[cell.faces] - point
    a, b, c = corners[:, 0], corners[:, 1], corners[:, 2]
    la, lb, lc = (np.linalg.norm(side, axis=1) for side in (a, b, c))
    top = np.einsum("ij,ij->i", a, np.cross(b, c))
    ab, bc, ca = (np.einsum("ij,ij->i", p, q) for p, q in ((a, b), (b, c), (c, a)))
    return float(np.arctan2(top, la * lb * lc + ab * lc + bc * la + ca * lb).sum() / (2.0 * np.pi))


def overlaps(cells: Mapping[str, ClosedCell]) -> tuple[Overlap, ...]:
    """Pairs of cells that share space."""
    found = []
    for one, two in combinations(cells, 2):
        if _boxes_apart(cells[one], cells[two]):
            continue
        shared = _shared_space(cells[one], cells[two])
        if shared > 0.0:
            found.append(Overlap(one=one, two=two, volume_m3=shared))
    return tuple(found)


def _boxes_apart(one: ClosedCell, two: ClosedCell) -> bool:
    low_one, high_one = _box(one)
    low_two, high_two = _box(two)
    return bool((np.minimum(high_one, high_two) - np.maximum(low_one, low_two) <= _TOUCH_M).any())


@lru_cache(maxsize=1024)
def _box(cell: ClosedCell) -> tuple[Floats, Floats]:
    return cell.vertices_m.min(axis=0), cell.vertices_m.max(axis=0)


@lru_cache(maxsize=4096)
def _shared_space(one: ClosedCell, two: ClosedCell) -> float:
    """Volume of the part two cells have in common, m3; 0 where some wall of one has the other beyond it."""
    if _wall_between(one, two) or _wall_between(two, one):
        return 0.0
    from manifold3d import Manifold, Mesh

    solids = [
        Manifold(Mesh(cell.vertices_m.astype(np.float32), cell.faces.astype(np.uint32)))
        for cell in (one, two)
    ]
    shared = float((solids[0] ^ solids[1]).volume())
    least = _LEAST_OVERLAP_SHARE * min(one.volume_m3, two.volume_m3)
    return shared if shared > least else 0.0


def _wall_between(one: ClosedCell, two: ClosedCell) -> bool:
    """Whether the plane of some triangle of `one` has all of `one` on one side and `two` on the other."""
    p, q, r = (one.vertices_m[one.faces[:, corner]] for corner in range(3))
    normal = np.cross(q - p, r - p)
    length = np.linalg.norm(normal, axis=1)
    kept = length > 0.0
    normal = np.unique(np.round(normal[kept] / length[kept, None], 9), axis=0)
    reach = (one.vertices_m @ normal.T).max(axis=0)
    nearest = (two.vertices_m @ normal.T).min(axis=0)
    return bool((nearest >= reach - _TOUCH_M).any())
