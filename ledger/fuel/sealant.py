"""What sealant takes: a coat on the wetted walls and a fillet along the inner corners of a cell."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.standing import Floats, Indices
from ledger.model.vectors import Vector

# Walls that meet more bluntly than this turn of their normals are one wall drawn in flats.
_LEAST_TURN_COS = math.cos(math.radians(30.0))


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Corners:
    """Edges where two walls of a cell meet.

    start, end : (k,) intp
        Corner numbers of the cell.
    section : (k,) float
        Area of a fillet of radius 1 in the corner, tangent to both walls: 1 - pi/4 where square.
    """

    start: Indices
    end: Indices
    section: Floats


@lru_cache(maxsize=512)
def corners_of(cell: ClosedCell) -> Corners:
    """The edges of a cell that are sharp and hollow seen from inside."""
    vertices, faces = cell.vertices_m, cell.faces
    p, q, r = (vertices[faces[:, corner]] for corner in range(3))
    normal = np.cross(q - p, r - p)
    length = np.linalg.norm(normal, axis=1, keepdims=True)
    normal = np.divide(normal, length, out=np.zeros_like(normal), where=length > 0.0)
    start, end = faces.ravel(), faces[:, [1, 2, 0]].ravel()
    face = np.repeat(np.arange(len(faces)), 3)
    order = np.lexsort((start > end, np.maximum(start, end), np.minimum(start, end)))
    one, two = order[0::2], order[1::2]
    cos = np.einsum("ij,ij->i", normal[face[one]], normal[face[two]])
    # The other face turns away from this one's outside at an edge that is hollow from inside.
    far = vertices[faces[face[two]]].mean(axis=1) - vertices[start[one]]
    hollow = np.einsum("ij,ij->i", normal[face[one]], far) < 0.0
    kept = np.flatnonzero(hollow & (cos < _LEAST_TURN_COS))
    turn = np.arccos(np.clip(cos[kept], -1.0, 1.0))
    inside = np.maximum(math.pi - turn, 1e-3)
    section = 1.0 / np.tan(0.5 * inside) - 0.5 * turn
    return Corners(start=start[one[kept]], end=end[one[kept]], section=section)


def fillet_below(cell: ClosedCell, radius_m: float, up: Vector, levels_m: Floats) -> Floats:
    """Volume of the fillets below each level, m3."""
    corners = corners_of(cell)
    heights = cell.vertices_m @ np.array(up)
    one, two = heights[corners.start], heights[corners.end]
    low, rise = np.minimum(one, two), np.abs(two - one)
    length = np.linalg.norm(cell.vertices_m[corners.end] - cell.vertices_m[corners.start], axis=1)
    above = levels_m[:, None] - low
    share = np.where(rise > 1e-12, np.clip(above / np.maximum(rise, 1e-12), 0.0, 1.0), above >= 0.0)
    return np.asarray(share @ (length * corners.section) * radius_m**2, dtype=np.float64)


def coat_below(heights: Floats, weights: Floats, levels: Floats) -> Floats:
    """Sum of weight x share below each level, over triangles.

    heights : (3, m) float
        Heights of the corners of each triangle.
    weights : (m,) float
        Area x thickness of the coat.
    levels : (n,) float
        Rising.
    Between its corners a triangle's wet share is a square of the level, so each adds the
    coefficients of two squares where they begin and takes them off where they end.
    """
    low, middle, high = np.sort(heights, axis=0)
    first, second, third = (np.searchsorted(levels, z, side="left") for z in (low, middle, high))
    count = len(levels) + 1
    sums = np.zeros((3, count))

    def add(at: Indices, square: Floats, line: Floats, flat: Floats) -> None:
        for row, values in enumerate((square, line, flat)):
            sums[row] += np.bincount(at, weights=values, minlength=count)

    rising = np.flatnonzero((second > first) & (middle > low))
    k = weights[rising] / ((middle - low)[rising] * (high - low)[rising])
    z = low[rising]
    add(first[rising], k, -2.0 * k * z, k * z * z)
    add(second[rising], -k, 2.0 * k * z, -k * z * z)
    falling = np.flatnonzero((third > second) & (high > middle))
    k = weights[falling] / ((high - low)[falling] * (high - middle)[falling])
    z = high[falling]
    add(second[falling], -k, 2.0 * k * z, weights[falling] - k * z * z)
    add(third[falling], k, -2.0 * k * z, k * z * z - weights[falling])
    add(third, np.zeros_like(low), np.zeros_like(low), weights)
    square, line, flat = np.cumsum(sums, axis=1)[:, :-1]
    return np.asarray(np.clip((square * levels + line) * levels + flat, 0.0, float(weights.sum())))
