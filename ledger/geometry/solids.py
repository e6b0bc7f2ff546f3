"""Volume, centroid and second moments of a closed cell."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ledger.geometry.moments import Moments, matrix
from ledger.geometry.standing import Floats, Indices
from ledger.geometry.vectors import vector

if TYPE_CHECKING:
    from ledger.geometry.closed_cell import ClosedCell


def volume_integrals(vertices_m: Floats, faces: Indices) -> tuple[float, Floats, Floats]:
    """Signed volume, first and second moments of the tetrahedra from the middle of the mesh.

    vertices_m : (n, 3) float, metres; faces : (m, 3) int, anticlockwise seen from outside.
    Returns
        volume in m3, first moment (3,) about the datum in m4, second moment (3, 3) about the
        centroid in m5 (about the middle of the mesh where the volume is 0).
    """
    middle = 0.5 * (vertices_m.min(axis=0) + vertices_m.max(axis=0))
    p, q, r = (vertices_m[faces[:, corner]] - middle for corner in range(3))
    sixfold = np.einsum("ij,ij->i", p, np.cross(q, r))
    total = p + q + r
    volume = float(sixfold.sum()) / 6.0
    first = sixfold @ total / 24.0
    second = sum((sixfold[:, None] * side).T @ side for side in (p, q, r, total)) / 120.0
    if volume != 0.0:
        second = second - np.outer(first, first) / volume
    return volume, first + volume * middle, second


def mass_moments_of_solid(cell: ClosedCell) -> Moments:
    """Volume in m3, centroid in m and second moments in m5 about the centroid of a proved cell."""
    volume, first, second = volume_integrals(cell.vertices_m, cell.faces)
    return Moments(measure=volume, centroid=vector(first / volume), second=matrix(second))
