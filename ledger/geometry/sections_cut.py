"""A cell cut by a plane, and its footprint: lines for drawings."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.standing import Floats, unit_up
from ledger.geometry.vectors import Vector, vector

if TYPE_CHECKING:
    from ledger.geometry.sectors import Point

Segment = tuple[Vector, Vector]


def cut_by_plane(
    vertices_m: ArrayLike, faces: ArrayLike, point_m: ArrayLike, normal: ArrayLike
) -> tuple[Segment, ...]:
    """Segments in which a plane cuts the triangles of a mesh, metres, build axes.

    A corner on the plane counts as just before it, so that a closed mesh gives closed outlines and a
    face that lies in the plane gives its edge once or not at all. Empty where the plane misses.
    Raises ValueError for a normal that is zero or not finite.
    """
    segments = segments_by_plane(vertices_m, faces, point_m, normal)
    return tuple((vector(a), vector(b)) for a, b in segments)


def segments_by_plane(
    vertices_m: ArrayLike, faces: ArrayLike, point_m: ArrayLike, normal: ArrayLike
) -> Floats:
    """The same as an array (k, 2, 3) in metres, for a screen that draws it at each key."""
    vertices = np.asarray(vertices_m, dtype=np.float64)
    corners = np.asarray(faces, dtype=np.intp)
    height = (vertices - np.asarray(point_m, dtype=np.float64)) @ unit_up(normal)
    beyond = (height > 0.0)[corners]
    count = beyond.sum(axis=1)
    cut = np.flatnonzero((count == 1) | (count == 2))
    beyond = beyond[cut]
    # The corner that is alone on its side, from which both cut edges leave.
    lone = np.argmax(beyond == (count[cut] == 1)[:, None], axis=1)
    a, b, c = (corners[cut, (lone + turn) % 3] for turn in range(3))
    ends = []
    for other in (b, c):
        share = (height[a] / (height[a] - height[other]))[:, None]
        ends.append(vertices[a] + share * (vertices[other] - vertices[a]))
    return np.stack(ends, axis=1)


def plan_outline(
    vertices_m: ArrayLike, faces: ArrayLike, across: tuple[int, int] = (0, 1)
) -> tuple[Point, ...]:
    """Corners of the silhouette of a cell seen along one build axis; seen from above unless said.

    vertices_m : (n, 3) float, metres; faces : (m, 3) int, anticlockwise seen from outside.
    across : the two build axes kept (0 x aft, 1 y right, 2 z up).
    The union of the triangles' shadows, its largest ring without holes, the first corner not repeated.
    Empty where nothing casts a shadow. Takes tens of milliseconds a cell: compute it once and keep it.
    """
    from shapely import MultiPolygon, Polygon, polygons, union_all

    flat = np.asarray(vertices_m, dtype=np.float64)[:, list(across)]
    triangles = flat[np.asarray(faces, dtype=np.intp)]
    side_a, side_b = triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0]
    area = side_a[:, 0] * side_b[:, 1] - side_a[:, 1] * side_b[:, 0]
    # Faces that look one way cast the whole shadow; those on edge cast none.
    shadows = polygons(triangles[area > 0.0])
    whole = union_all(shadows, grid_size=1e-9 * max(float(np.ptp(flat, axis=0).max()), 1e-300))
    parts = whole.geoms if isinstance(whole, MultiPolygon) else [whole]
    largest = max(
        (part for part in parts if isinstance(part, Polygon)), key=lambda part: part.area, default=None
    )
    if largest is None:
        return ()
    return tuple((float(x), float(y)) for x, y in largest.exterior.coords[:-1])
