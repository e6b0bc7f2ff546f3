"""Where liquid would gather, and air: the separate lowest and highest places of a cell.

A place counts where the boundary has a local minimum with the inside above it; the tip of something
that hangs into the cell is a minimum of the boundary too, but the inside lies round it. Depths come
from the order in which the parts of the boundary below a rising level join (a join tree over the
edges of the mesh).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.standing import Floats, Indices, stand, unit_up
from ledger.geometry.vectors import Vector, vector

# Depth of a pocket too shallow to hold anything: a micrometre.
IGNORE_DEPTH_M = 1e-6


@dataclass(frozen=True, slots=True, kw_only=True)
class Place:
    """A lowest (or highest) place: where it is, its height along up, and the depth of its pocket.

    depth_m is how far the level rises from it until its pocket joins one that goes lower; infinite
    for the lowest of all. `join_m` is the height where that happens.
    """

    point_m: Vector
    height_m: float
    depth_m: float
    join_m: float


def lowest_places(
    cell: ClosedCell, up: ArrayLike, ignore_depth_m: float = IGNORE_DEPTH_M
) -> tuple[Vector, ...]:
    """Points (m, build axes) of the places where liquid gathers, lowest first.

    A level floor counts once. A pocket shallower than `ignore_depth_m` is part of its neighbour.
    Raises ValueError for an up that is zero or not finite, or a depth below 0.
    """
    return tuple(place.point_m for place in places_by_depth(cell, up, ignore_depth_m))


def highest_places(
    cell: ClosedCell, up: ArrayLike, ignore_depth_m: float = IGNORE_DEPTH_M
) -> tuple[Vector, ...]:
    """Points (m, build axes) of the places where air gathers, highest first."""
    return lowest_places(cell, -unit_up(up), ignore_depth_m)


def places_by_depth(
    cell: ClosedCell, up: ArrayLike, ignore_depth_m: float = IGNORE_DEPTH_M
) -> tuple[Place, ...]:
    """The lowest places with their depths in metres, lowest first; raises as `lowest_places`."""
    if not ignore_depth_m >= 0.0:
        raise ValueError("ignore_depth_m must not be below 0")
    standing = stand(cell.vertices_m, cell.faces, up)
    corners, z = np.ascontiguousarray(standing.faces.T), standing.z
    start, end = corners.ravel(), corners[[1, 2, 0]].ravel()
    once = start < end
    start, end = start[once], end[once]
    basin = _basins(z, start, end)
    # A depth below rounding would tell a turned level floor into as many places as it has corners.
    slack = max(ignore_depth_m, 4.0 * standing.tolerance_m)
    kept, cluster = _joined(z, basin, (start, end), slack)
    inside = _sections_above((standing.x, standing.y, z), corners, cluster[basin], slack) > 0.0
    found = [
        Place(
            point_m=vector(cell.vertices_m[low]),
            height_m=standing.lowest_m + float(z[low]),
            depth_m=join - float(z[low]),
            join_m=standing.lowest_m + join,
        )
        for low, join in kept.items()
        if inside[low]
    ]
    return tuple(sorted(found, key=lambda place: place.height_m))


def _basins(z: Floats, start: Indices, end: Indices) -> Indices:
    """For each corner the local minimum it runs down to; equal heights are ordered by number.

    Any way down serves: all corners of a basin are joined to its minimum below their own height.
    """
    order = np.argsort(z, kind="stable")
    rank = np.empty_like(order)
    rank[order] = np.arange(len(order))
    a, b = rank[start], rank[end]
    lower = np.arange(len(z))
    high, low = np.maximum(a, b), np.minimum(a, b)
    # Of several edges down from one corner the last written wins, and any will do.
    lower[high] = low
    while not np.array_equal(following := lower[lower], lower):
        lower = following
    return np.asarray(order[lower[rank]])


def _joined(
    z: Floats, basin: Indices, edges: tuple[Indices, Indices], slack: float
) -> tuple[dict[int, float], Indices]:
    """Minima that stay apart with the height above them where they join a lower one, and for each
    minimum the one it belongs to within `slack` above it.
    """
    start, end = edges
    one, two = basin[start], basin[end]
    apart = one != two
    one, two = one[apart], two[apart]
    height = np.maximum(z[start[apart]], z[end[apart]])
    order = np.argsort(height, kind="stable")
    parent = {int(low): int(low) for low in np.unique(basin)}
    near: dict[int, int] = {}
    kept = dict.fromkeys(parent, float("inf"))
    for at, a, b in zip(height[order].tolist(), one[order].tolist(), two[order].tolist(), strict=True):
        low, high = _root(parent, a), _root(parent, b)
        if low == high:
            continue
        if (z[high], high) < (z[low], low):
            low, high = high, low
        parent[high] = low
        if at - z[high] < slack:
            del kept[high]
            if at < z[low] + slack:
                near[high] = low
        else:
            kept[high] = at
    cluster = np.arange(len(z))
    # A minimum is hung on an older one only, which is hung later or never: last to first is head to tail.
    for high, low in reversed(near.items()):
        cluster[high] = cluster[low]
    return kept, cluster


def _root(parent: dict[int, int], at: int) -> int:
    while parent[at] != at:
        parent[at] = parent[parent[at]]
        at = parent[at]
    return at


def _sections_above(
    frame: tuple[Floats, Floats, Floats], corners: Indices, place: Indices, slack: float
) -> Floats:
    """For each corner that is a lowest place, the signed area of the section `slack` above it.

    place : (n,) the lowest place each corner belongs to. Above 0 where the inside lies over the place.
    """
    x, y, z = frame
    rank = np.argsort(z.take(corners), axis=0)
    low, middle, high = np.take_along_axis(z.take(corners), rank, axis=0)
    owner = place.take(np.take_along_axis(corners, rank[:1], axis=0)[0])
    level = z.take(owner) + slack
    wet = np.flatnonzero(low < level)
    low, middle, high, level = low[wet], middle[wet], high[wet], level[wet]
    a, b, c = corners[:, wet]
    area = 0.5 * ((x[b] - x[a]) * (y[c] - y[a]) - (x[c] - x[a]) * (y[b] - y[a]))
    with np.errstate(divide="ignore", invalid="ignore"):
        corner = (level - low) ** 2 / ((middle - low) * (high - low))
        dry = (high - level) ** 2 / ((high - low) * (high - middle))
    share = np.where(level <= middle, corner, np.where(level < high, 1.0 - dry, 1.0))
    return np.bincount(owner[wet], weights=-area * share, minlength=len(z)).astype(np.float64)
