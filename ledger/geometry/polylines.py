"""Length, centroid and second moments of a line made of straight pieces."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.moments import Moments, matrix
from ledger.geometry.vectors import vector


def moments_of_polyline(points_m: ArrayLike) -> Moments:
    """Moments of a thin run along a polyline.

    points_m : (n, 3) float, n >= 2
        Corners in metres, in order. Repeated points add nothing.
    Returns
        measure in m, centroid in m, second in m3 about the centroid.
    Raises ValueError for fewer than two points, another shape, a point that is not finite, or no length.
    """
    points = np.asarray(points_m, dtype=np.float64)
    if points.ndim != 2 or points.shape[1] != 3 or len(points) < 2:
        raise ValueError("a polyline needs at least two points of three coordinates")
    if not np.isfinite(points).all():
        raise ValueError("a point of the polyline is not finite")
    origin = points[0]
    local = points - origin
    start, step = local[:-1], np.diff(local, axis=0)
    lengths = np.linalg.norm(step, axis=1)
    length = float(lengths.sum())
    if length == 0.0:
        raise ValueError("the polyline has no length")
    middles = start + 0.5 * step
    centroid = lengths @ middles / length
    arms = middles - centroid
    second = (arms * lengths[:, None]).T @ arms + (step * (lengths / 12.0)[:, None]).T @ step
    return Moments(measure=length, centroid=vector(centroid + origin), second=matrix(second))
