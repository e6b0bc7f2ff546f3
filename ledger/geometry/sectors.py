"""Exact shares of an area and its moments, curve by curve.

A curve gives the integrals over the sector between a reference point and itself: with
w = x dy - y dx, the area is half the integral of w, the first moments a third of that of r w and the
second a quarter of that of r r^T w. Summed round a closed loop the sectors make up the inside.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

Point = tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Sector:
    """Signed integrals of 1, x, y, x^2, xy, y^2 over an area, about a stated reference point."""

    area: float
    x: float
    y: float
    xx: float
    xy: float
    yy: float


def add_sectors(sectors: Iterable[Sector]) -> Sector:
    """The sum, without the loss a plain sum has where great sectors cancel."""
    kept = tuple(sectors)
    return Sector(
        area=math.fsum(s.area for s in kept),
        x=math.fsum(s.x for s in kept),
        y=math.fsum(s.y for s in kept),
        xx=math.fsum(s.xx for s in kept),
        xy=math.fsum(s.xy for s in kept),
        yy=math.fsum(s.yy for s in kept),
    )


def arc_sector(centre: Point, major: Point, minor: Point, sweep: tuple[float, float]) -> Sector:
    """Sector of centre + major cos t + minor sin t, in closed form.

    centre : from the reference point, metres.
    major, minor : conjugate half axes, metres; of a circle any two radii at a right angle.
    sweep : t at the start and at the end, radians; run backward the integrals change sign.
    """
    # With the axes turned so that t runs from -h to h, every odd integral vanishes.
    half, middle = 0.5 * (sweep[1] - sweep[0]), 0.5 * (sweep[0] + sweep[1])
    cos, sin = math.cos(middle), math.sin(middle)
    a = (major[0] * cos + minor[0] * sin, major[1] * cos + minor[1] * sin)
    b = (minor[0] * cos - major[0] * sin, minor[1] * cos - major[1] * sin)
    c = centre
    s, k = math.sin(half), math.cos(half)
    # Integrals of 1, cos, cos^2, sin^2, cos^3, cos sin^2 over -h to h.
    t00, t10, t20, t02 = 2.0 * half, 2.0 * s, half + s * k, half - s * k
    t12 = 2.0 * s**3 / 3.0
    t30 = 2.0 * s - t12
    ab, ca, cb = _cross(a, b), _cross(c, a), _cross(c, b)
    one = ab * t00 + cb * t10
    by_a = ab * t10 + cb * t20
    by_b = -ca * t02
    by_aa, by_bb, by_ab = ab * t20 + cb * t30, ab * t02 + cb * t12, -ca * t12

    def second(i: int, j: int) -> float:
        return 0.25 * (
            c[i] * c[j] * one
            + (c[i] * a[j] + a[i] * c[j]) * by_a
            + (c[i] * b[j] + b[i] * c[j]) * by_b
            + a[i] * a[j] * by_aa
            + b[i] * b[j] * by_bb
            + (a[i] * b[j] + b[i] * a[j]) * by_ab
        )

    x, y = ((c[i] * one + a[i] * by_a + b[i] * by_b) / 3.0 for i in range(2))
    return Sector(area=0.5 * one, x=x, y=y, xx=second(0, 0), xy=second(0, 1), yy=second(1, 1))


def _cross(a: Point, b: Point) -> float:
    return a[0] * b[1] - a[1] * b[0]
