"""Area, centroid and second moments of an open surface mesh, the shape of a skin."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ledger.errors import MeshRefused
from ledger.geometry.moments import Moments, matrix
from ledger.geometry.named_place import named_place
from ledger.geometry.proof import checked_arrays
from ledger.geometry.standing import Floats, Indices
from ledger.geometry.vectors import vector


def moments_of_surface(vertices_m: ArrayLike, faces: ArrayLike, offset_m: float = 0.0) -> Moments:
    """Moments of a thin shell of even thickness.

    vertices_m : (n, 3) float
        Corners in metres.
    faces : (m, 3) int
        Triangles; those without area add nothing. Only the offset looks at their sense.
    offset_m : float
        How far the middle of the shell lies from the mesh along its normals (anticlockwise side
        positive): half the thickness for a skin laid on a mould. Each corner is moved along the mean
        of its triangles' normals by area, so a smooth surface is right to first order in offset over
        radius of curvature and a flat one exactly; at a sharp edge the shell is a mitre that runs
        short by about the offset.
    Returns
        measure in m2, centroid in m, second in m4 about the centroid.
    Raises MeshRefused
        mesh-empty (no triangles or no area), mesh-not-finite, mesh-index; surface-doubled where two
        triangles have the same three corners, which would count that skin twice.
    """
    vertices, triangles = checked_arrays(vertices_m, faces)
    if not np.isfinite(offset_m):
        raise ValueError("offset_m must be finite")
    places, same = np.unique(vertices, axis=0, return_inverse=True)
    merged = same.reshape(-1)[triangles]
    _refuse_doubled(places, merged)
    if offset_m != 0.0:
        places = places + offset_m * _corner_normals(places, merged)
    return _moments(places, merged)


def _refuse_doubled(vertices: Floats, faces: Indices) -> None:
    a, b, c = faces.T
    solid = faces[(a != b) & (b != c) & (c != a)]
    ranked = np.sort(solid, axis=1)
    distinct, counts = np.unique(ranked, axis=0, return_counts=True)
    if (counts > 1).any():
        corner = vertices[distinct[counts > 1][0]].mean(axis=0)
        raise MeshRefused(
            "surface-doubled",
            f"{int((counts > 1).sum())} triangles of the surface are there twice, the first near"
            f" {named_place(corner)}",
            "remove the copies and export again",
        )


def _corner_normals(vertices: Floats, faces: Indices) -> Floats:
    p, q, r = (vertices[faces[:, corner]] for corner in range(3))
    normal = np.cross(q - p, r - p)
    summed = np.zeros_like(vertices)
    for corner in range(3):
        np.add.at(summed, faces[:, corner], normal)
    length = np.linalg.norm(summed, axis=1, keepdims=True)
    return np.asarray(summed / np.where(length > 0.0, length, 1.0))


def _moments(vertices: Floats, faces: Indices) -> Moments:
    middle = 0.5 * (vertices.min(axis=0) + vertices.max(axis=0))
    p, q, r = (vertices[faces[:, corner]] - middle for corner in range(3))
    areas = 0.5 * np.linalg.norm(np.cross(q - p, r - p), axis=1)
    area = float(areas.sum())
    if area == 0.0:
        raise MeshRefused("mesh-empty", "the surface has no area", "export the surface again")
    total = p + q + r
    centroid = areas @ total / (3.0 * area)
    second = sum((areas[:, None] * side).T @ side for side in (p, q, r, total)) / 12.0
    second = second - area * np.outer(centroid, centroid)
    return Moments(measure=area, centroid=vector(centroid + middle), second=matrix(second))
