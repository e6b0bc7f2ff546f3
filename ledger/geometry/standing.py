"""A closed mesh standing along one up direction: what every question about levels starts from.

Height z is measured along up from the lowest corner, so that the integrals of a nearly empty cell
are as exact as those of a full one; x and y lie across it, from the middle of the mesh, so that a
mesh far from the datum loses nothing to cancellation.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

# Heights closer to a level than this share of the mesh's size are taken to lie on it.
HEIGHT_SHARE = 16.0 * float(np.finfo(np.float64).eps)


@dataclass(frozen=True, slots=True, kw_only=True)
class Standing:
    """Corners in the frame of one up direction.

    axes : (3, 3) float
        Rows are the unit x, y and z (up) of the frame in build axes.
    middle_m : (3,) float
        Origin of x and y, build axes.
    lowest_m : float
        Height of the lowest corner along up from the datum's origin: z = 0 of the frame.
    x, y, z : (n,) float
        Corners in the frame, metres.
    faces : (m, 3) int
        Corner numbers of each triangle, anticlockwise from outside.
    tolerance_m : float
        Heights nearer than this to a level count as on it.
    """

    axes: Floats
    middle_m: Floats
    lowest_m: float
    x: Floats
    y: Floats
    z: Floats
    faces: Indices
    tolerance_m: float

    @property
    def corners(self) -> Indices:
        """First, second and third corners of the triangles, (3, m)."""
        return self.faces.T

    def in_build_axes(self, local_m: Floats) -> Floats:
        """Points (n, 3) of the frame, in build axes."""
        height = local_m[:, 2] + (self.lowest_m - float(self.axes[2] @ self.middle_m))
        across = local_m[:, :2] @ self.axes[:2]
        return np.asarray(self.middle_m + across + height[:, None] * self.axes[2], dtype=np.float64)


def unit_up(up: ArrayLike) -> Floats:
    """A direction (3,) made one long. Raises ValueError where it is zero, not finite or not three numbers."""
    direction = np.asarray(up, dtype=np.float64)
    if direction.shape != (3,) or not np.isfinite(direction).all():
        raise ValueError("up must be three finite numbers")
    largest = float(np.abs(direction).max())
    if largest == 0.0:
        raise ValueError("up must not be zero")
    direction = direction / largest
    return np.asarray(direction / np.linalg.norm(direction), dtype=np.float64)


def frame_of(up: ArrayLike) -> Floats:
    """Rows x, y, z of a right-handed frame whose z is the unit of `up`; for (0, 0, 1) the build axes."""
    z = unit_up(up)
    first = np.zeros(3)
    first[int(np.argmin(np.abs(z)))] = 1.0
    x = first - (first @ z) * z
    x /= np.linalg.norm(x)
    return np.array([x, np.cross(z, x), z])


def stand(vertices_m: ArrayLike, faces: ArrayLike, up: ArrayLike) -> Standing:
    """Turn a mesh into the frame of `up`.

    vertices_m : (n, 3) float
        Corners in metres, build axes (x aft, y right, z up).
    faces : (m, 3) int
        Rows of corner numbers, seen anticlockwise from outside.
    up : (3,) float
        Away from the pull felt; any length.
    Raises ValueError for wrong shapes, an index out of range, or an up that is zero or not finite.
    """
    vertices, triangles = _checked(vertices_m, faces)
    axes = frame_of(up)
    # Rows of one coordinate each: a reduction along the columns of (n, 3) costs twenty times as much.
    local = np.array(vertices.T, order="C")
    low, high = local.min(axis=1), local.max(axis=1)
    if not np.isfinite(high - low).all():
        raise ValueError("a corner is not finite")
    middle = 0.5 * (low + high)
    local -= middle[:, None]
    local = axes @ local
    base = float(local[2].min())
    local[2] -= base
    return Standing(
        axes=axes,
        middle_m=middle,
        lowest_m=base + float(axes[2] @ middle),
        x=local[0],
        y=local[1],
        z=local[2],
        faces=triangles,
        tolerance_m=HEIGHT_SHARE * float(np.linalg.norm(high - low) + np.abs(middle).max()),
    )


def _checked(vertices_m: ArrayLike, faces: ArrayLike) -> tuple[Floats, Indices]:
    """Both arrays in the shapes and types a mesh has, or ValueError."""
    vertices = np.asarray(vertices_m, dtype=np.float64)
    triangles = np.asarray(faces)
    if vertices.ndim != 2 or vertices.shape[1] != 3 or len(vertices) == 0:
        raise ValueError("vertices_m must be n rows of three coordinates")
    if triangles.ndim != 2 or triangles.shape[1] != 3 or len(triangles) == 0:
        raise ValueError("faces must be rows of three corner numbers")
    if triangles.dtype.kind not in "iu":
        raise ValueError("faces must be whole numbers")
    if triangles.min() < 0 or triangles.max() >= len(vertices):
        raise ValueError("a face names a corner that does not exist")
    return vertices, triangles.astype(np.intp, copy=False)
