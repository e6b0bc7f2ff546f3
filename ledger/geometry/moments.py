"""Zeroth, first and second moments of a length, an area or a volume, in plain floats.

`second` is the matrix of the integrals of r r^T about the centroid, whose diagonal holds the
integrals of x^2, y^2 and z^2. It adds, moves and mirrors with fewer signs to get wrong than the
inertia tensor, which `inertia_of` makes of it at the end.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from ledger.geometry.vectors import Vector, vector

Matrix = tuple[Vector, Vector, Vector]


@dataclass(frozen=True, slots=True, kw_only=True)
class Moments:
    """What a body of unit density has: how much, where, and how spread.

    measure : float
        Metres of a line, square metres of a surface or cubic metres of a solid; not negative.
    centroid : (3,) tuple
        Metres.
    second : 3 x 3 tuple
        Integral of r r^T about the centroid, measure times square metres; symmetric.
    Raises ValueError for a value that is not finite or a negative measure.
    """

    measure: float
    centroid: Vector
    second: Matrix

    def __post_init__(self) -> None:
        numbers = (self.measure, *self.centroid, *(value for row in self.second for value in row))
        if not all(math.isfinite(number) for number in numbers):
            raise ValueError("moments must be finite")
        if self.measure < 0.0:
            raise ValueError("a measure cannot be negative")


def matrix(rows: Iterable[Iterable[float]]) -> Matrix:
    """Plain floats of any three rows of three numbers, made exactly symmetric."""
    full = [[float(value) for value in row] for row in rows]
    xy, xz, yz = (0.5 * (full[i][j] + full[j][i]) for i, j in ((0, 1), (0, 2), (1, 2)))
    return ((full[0][0], xy, xz), (xy, full[1][1], yz), (xz, yz, full[2][2]))


def moved(moments: Moments, by_m: Sequence[float]) -> Moments:
    """The same body shifted by a vector in metres."""
    x, y, z = (at + by for at, by in zip(moments.centroid, vector(by_m), strict=True))
    return Moments(measure=moments.measure, centroid=(x, y, z), second=moments.second)


def mirrored(moments: Moments) -> Moments:
    """The body seen in the plane y = 0: the integrals of xy and yz change sign."""
    x, y, z = moments.centroid
    (xx, xy, xz), (_, yy, yz), (_, _, zz) = moments.second
    second = ((xx, -xy, xz), (-xy, yy, -yz), (xz, -yz, zz))
    return Moments(measure=moments.measure, centroid=(x, -y, z), second=second)


def turned(moments: Moments, axes: Sequence[Sequence[float]]) -> Moments:
    """The body whose own axes are laid along three unit vectors.

    axes : 3 rows
        Where the body's X, Y and Z point afterwards; orthonormal (not checked here).
    """
    rows = [vector(row) for row in axes]
    x, y, z = moments.centroid
    centroid = vector([x * rows[0][i] + y * rows[1][i] + z * rows[2][i] for i in range(3)])
    s = moments.second
    half = [[sum(s[a][b] * rows[b][j] for b in range(3)) for j in range(3)] for a in range(3)]
    second = [[sum(rows[a][i] * half[a][j] for a in range(3)) for j in range(3)] for i in range(3)]
    return Moments(measure=moments.measure, centroid=centroid, second=matrix(second))


def placed(
    moments: Moments, origin_m: Sequence[float], across: Sequence[float], up_axis: Sequence[float]
) -> Moments:
    """The body laid with its X along `across`, its Y along `up_axis` and its origin at `origin_m`.

    The two axes are normalised and squared to one another; the third is across x up_axis.
    Raises ValueError where they are not square within 0.1 degree (see `placement.axes_square`).
    """
    from ledger.geometry.placement import axes_of

    return moved(turned(moments, axes_of(across, up_axis)), origin_m)


def add(*parts: Moments) -> Moments:
    """One body of several, by the parallel-axis theorem.

    Where nothing has any measure the centroid is that of the first. Raises ValueError for no parts.
    """
    if not parts:
        raise ValueError("nothing to add")
    total = math.fsum(part.measure for part in parts)
    if total == 0.0:
        centroid = parts[0].centroid
    else:
        centroid = vector([math.fsum(p.measure * p.centroid[i] for p in parts) / total for i in range(3)])
    second = [[0.0] * 3 for _ in range(3)]
    for i in range(3):
        for j in range(3):
            second[i][j] = math.fsum(
                value
                for p in parts
                for value in (
                    p.second[i][j],
                    p.measure * (p.centroid[i] - centroid[i]) * (p.centroid[j] - centroid[j]),
                )
            )
    return Moments(measure=total, centroid=centroid, second=matrix(second))


def scaled(moments: Moments, times: float) -> Moments:
    """The same shape with its measure and second moments multiplied, as by a density or a thickness."""
    second = matrix([[value * times for value in row] for row in moments.second])
    return Moments(measure=moments.measure * times, centroid=moments.centroid, second=second)


def inertia_of(second: Sequence[Sequence[float]], mass_per_measure: float) -> Matrix:
    """Inertia tensor of a body: trace times unity less the second moments, times its density.

    Off the diagonal it holds minus the integrals of xy, xz and yz over the mass. kg m2, about the
    point the second moments are about.
    """
    (xx, xy, xz), (_, yy, yz), (_, _, zz) = matrix(second)
    k = mass_per_measure
    return (
        (k * (yy + zz), -k * xy, -k * xz),
        (-k * xy, k * (xx + zz), -k * yz),
        (-k * xz, -k * yz, k * (xx + yy)),
    )
