"""Points and directions as three plain floats: for what is asked of one rim or one axis, not of a mesh."""

from __future__ import annotations

import math
from collections.abc import Iterable

Vector = tuple[float, float, float]


def vector(values: Iterable[float]) -> Vector:
    """Three plain floats of any sequence of three numbers."""
    x, y, z = values
    return (float(x), float(y), float(z))


def dot(a: Vector, b: Vector) -> float:
    """Inner product."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def cross(a: Vector, b: Vector) -> Vector:
    """Outer product: square to both, right-handed."""
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])


def plus(a: Vector, b: Vector) -> Vector:
    """The sum of two vectors."""
    return (a[0] + b[0], a[1] + b[1], a[2] + b[2])


def less(a: Vector, b: Vector) -> Vector:
    """The vector from b to a."""
    return (a[0] - b[0], a[1] - b[1], a[2] - b[2])


def times(a: Vector, factor: float) -> Vector:
    """The vector made longer by a factor."""
    return (a[0] * factor, a[1] * factor, a[2] * factor)


def unit_of(a: Vector) -> Vector:
    """The vector made one long. Raises ValueError for one without a length, or not finite."""
    length = math.hypot(*a)
    if not (math.isfinite(length) and length > 0.0):
        raise ValueError("a direction must have a length")
    return (a[0] / length, a[1] / length, a[2] / length)


def mean_of(points: tuple[Vector, ...]) -> Vector:
    """The mean of some points, at least one."""
    x, y, z = (math.fsum(axis) / len(points) for axis in zip(*points, strict=True))
    return (x, y, z)
