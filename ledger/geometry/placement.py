"""A flat outline laid in the build: where its X and Y run, and where the panel lies about it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.moments import Moments, moved, turned
from ledger.geometry.outlines import PlaneMoments
from ledger.geometry.standing import Floats
from ledger.geometry.vectors import Vector, cross, dot, unit_of, vector

SQUARE_WITHIN_DEG = 0.1
FACES = ("mid", "+normal", "-normal")


@dataclass(frozen=True, slots=True, kw_only=True)
class Placement:
    """Where an outline's origin lies (m, build axes) and where its X, Y and normal point (unit, square)."""

    origin_m: Vector
    across: Vector
    up_axis: Vector
    normal: Vector


def angle_error_deg(across: Sequence[float], up_axis: Sequence[float]) -> float:
    """How far two axes are from a right angle, in degrees, 0 to 90.

    Raises ValueError for an axis that has no length or is not finite.
    """
    a, b = unit_of(vector(across)), unit_of(vector(up_axis))
    # The arc sine of the dot product keeps its precision near square, where the arc cosine has none.
    return abs(math.degrees(math.asin(max(-1.0, min(1.0, dot(a, b))))))


def axes_square(across: Sequence[float], up_axis: Sequence[float]) -> bool:
    """Whether two axes are square within 0.1 degree. Raises ValueError for an axis without direction."""
    return angle_error_deg(across, up_axis) <= SQUARE_WITHIN_DEG


def axes_of(across: Sequence[float], up_axis: Sequence[float]) -> tuple[Vector, Vector, Vector]:
    """Unit across, up_axis squared to it, and their normal, across x up_axis.

    Raises ValueError where they are not square within 0.1 degree or have no direction.
    """
    error = angle_error_deg(across, up_axis)
    if error > SQUARE_WITHIN_DEG:
        raise ValueError(f"across and up_axis are {error:.3f} degrees from square")
    x, rough = unit_of(vector(across)), unit_of(vector(up_axis))
    z = unit_of(cross(x, rough))
    return x, cross(z, x), z


def placement_of(origin_m: Sequence[float], across: Sequence[float], up_axis: Sequence[float]) -> Placement:
    """The placement of an outline from the three vectors of a plan. Raises ValueError as `axes_of` does."""
    origin = vector(origin_m)
    if not all(math.isfinite(value) for value in origin):
        raise ValueError("the origin must be finite")
    x, y, z = axes_of(across, up_axis)
    return Placement(origin_m=origin, across=x, up_axis=y, normal=z)


def place(
    points_m: ArrayLike, origin_m: Sequence[float], across: Sequence[float], up_axis: Sequence[float]
) -> Floats:
    """Points (n, 2) of an outline or (n, 3) of a mesh with its own axes, in build axes (n, 3), metres."""
    points = np.asarray(points_m, dtype=np.float64)
    if points.ndim != 2 or points.shape[1] not in {2, 3}:
        raise ValueError("points_m must be rows of two or three coordinates")
    axes = np.array(axes_of(across, up_axis))
    return np.asarray(vector(origin_m) + points @ axes[: points.shape[1]])


def panel_moments(
    plane: PlaneMoments, placement: Placement, thickness_m: float, face: str = "mid"
) -> Moments:
    """Moments of a flat plate cut to an outline.

    plane : area (m2), centroid (m) and second moments (m4) of the outline in its own X and Y.
    thickness_m : float, not negative.
    face : 'mid', '+normal' or '-normal'
        Where the outline lies in the thickness. On the '+normal' face the panel lies behind it, so
        its middle is half a thickness against the normal.
    Returns
        measure: the outline's area in m2; second in m4 about the centroid, the spread through the
        thickness (area t^2 / 12) included. Times an areal mass they are kg and kg m2.
    """
    if face not in FACES:
        raise ValueError(f"face must be one of {', '.join(FACES)}")
    if not (math.isfinite(thickness_m) and thickness_m >= 0.0):
        raise ValueError("thickness_m must be finite and not negative")
    shift = {"mid": 0.0, "+normal": -0.5, "-normal": 0.5}[face] * thickness_m
    (xx, xy), (_, yy) = plane.second
    through = plane.area * thickness_m**2 / 12.0
    flat = Moments(
        measure=plane.area,
        centroid=(plane.centroid[0], plane.centroid[1], shift),
        second=((xx, xy, 0.0), (xy, yy, 0.0), (0.0, 0.0, through)),
    )
    return moved(turned(flat, (placement.across, placement.up_axis, placement.normal)), placement.origin_m)
