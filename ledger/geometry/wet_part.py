"""Second moments of the part of a cell below a level, and of its free surface.

These are asked once for a quantity of fuel, not hundreds of times, so the wet part of each triangle
is made and integrated as it stands.
"""

from __future__ import annotations

import numpy as np

from ledger.geometry.moments import Moments, matrix
from ledger.geometry.standing import Floats, Standing
from ledger.geometry.vectors import vector


def wet_triangles(standing: Standing, level: float) -> Floats:
    """Triangles (k, 3, 3) of the walls below a level of the frame, in the frame.

    A triangle that lies in the level is left out: the free surface there is the one just below.
    """
    points = np.stack((standing.x, standing.y, standing.z), axis=1)
    corners = points[standing.faces]
    under = corners[:, :, 2] < level
    count = under.sum(axis=1)
    pieces = [corners[(count == 3)]]
    for wet, lone_under in ((1, True), (2, False)):
        chosen = np.flatnonzero(count == wet)
        lone = np.argmax(under[chosen] == lone_under, axis=1)
        a, b, c = (corners[chosen, (lone + turn) % 3] for turn in range(3))
        ab, ac = _at_level(a, b, level), _at_level(a, c, level)
        if lone_under:
            pieces.append(np.stack((a, ab, ac), axis=1))
        else:
            pieces.extend((np.stack((ab, b, c), axis=1), np.stack((ab, c, ac), axis=1)))
    return np.concatenate(pieces)


def _at_level(start: Floats, end: Floats, level: float) -> Floats:
    share = (level - start[:, 2]) / (end[:, 2] - start[:, 2])
    point = start + share[:, None] * (end - start)
    point[:, 2] = level
    return np.asarray(point)


def _projected(triangles: Floats) -> Floats:
    p, q, r = triangles[:, 0], triangles[:, 1], triangles[:, 2]
    return np.asarray(
        0.5 * ((q[:, 0] - p[:, 0]) * (r[:, 1] - p[:, 1]) - (r[:, 0] - p[:, 0]) * (q[:, 1] - p[:, 1]))
    )


def _mean_of_three(f: Floats, g: Floats, h: Floats) -> Floats:
    """Mean over a triangle of the product of three linear functions given at its corners (k, 3)."""
    sum_f, sum_g, sum_h = f.sum(axis=1), g.sum(axis=1), h.sum(axis=1)
    pairs = (f * g).sum(axis=1) * sum_h + (f * h).sum(axis=1) * sum_g + (g * h).sum(axis=1) * sum_f
    return np.asarray((sum_f * sum_g * sum_h + pairs + 2.0 * (f * g * h).sum(axis=1)) / 60.0)


def _mean_of_two(f: Floats, g: Floats) -> Floats:
    return np.asarray((f.sum(axis=1) * g.sum(axis=1) + (f * g).sum(axis=1)) / 12.0)


def wet_moments(standing: Standing, level: float) -> Moments:
    """Volume (m3), centroid and second moments (m5) of the part below a level of the frame, build axes."""
    triangles = wet_triangles(standing, level)
    area = _projected(triangles)
    x, y = triangles[:, :, 0], triangles[:, :, 1]
    z = triangles[:, :, 2] - level
    volume = float(area @ z.mean(axis=1))
    first = np.array([area @ _mean_of_two(x, z), area @ _mean_of_two(y, z), area @ _mean_of_two(z, z) / 2.0])
    xz, yz = area @ _mean_of_three(x, z, z) / 2.0, area @ _mean_of_three(y, z, z) / 2.0
    xy = area @ _mean_of_three(x, y, z)
    second = np.array(
        [
            [area @ _mean_of_three(x, x, z), xy, xz],
            [xy, area @ _mean_of_three(y, y, z), yz],
            [xz, yz, area @ _mean_of_three(z, z, z) / 3.0],
        ]
    )
    return _in_build_axes(standing, level, volume, first, second)


def free_surface_moments(standing: Standing, level: float) -> Moments:
    """Area (m2), centroid and second moments (m4) of the free surface at a level of the frame, build axes."""
    triangles = wet_triangles(standing, level)
    area = -_projected(triangles)
    x, y = triangles[:, :, 0], triangles[:, :, 1]
    first = np.array([area @ x.mean(axis=1), area @ y.mean(axis=1), 0.0])
    xy = area @ _mean_of_two(x, y)
    second = np.array([[area @ _mean_of_two(x, x), xy, 0.0], [xy, area @ _mean_of_two(y, y), 0.0], [0.0] * 3])
    return _in_build_axes(standing, level, float(area.sum()), first, second)


def _in_build_axes(
    standing: Standing, level: float, measure: float, first: Floats, second: Floats
) -> Moments:
    local = first / measure
    about = second - np.outer(first, first) / measure
    local[2] += level
    return Moments(
        measure=measure,
        centroid=vector(standing.in_build_axes(local[None, :])[0]),
        second=matrix(standing.axes.T @ about @ standing.axes),
    )
