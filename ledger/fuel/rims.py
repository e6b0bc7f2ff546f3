"""How high the rim of an opening stands along the up direction: what fuel must rise above, and air below."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from itertools import pairwise

from ledger.geometry.vectors import cross, dot, less, mean_of, plus, times, unit_of
from ledger.model.tanks import Circle, Opening, Outside, Pipe, Polygon, Rim
from ledger.model.vectors import Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Crests:
    """Heights of an opening along `up` from the datum's origin, in metres.

    low_m : fuel must rise above it to pass.
    high_m : fuel must stay below it for air to pass; of an outlet, where it begins to draw air.
    """

    low_m: float
    high_m: float


def crests_of(opening: Opening, up: Vector) -> Crests:
    """Where the opening lets fuel and air pass.

    up : unit vector, build axes, away from the pull felt.
    A wall with a thickness has two rims, half the depth either side: fuel must clear the higher one
    and air the lower one. An outlet is covered only when both of its rims are.
    """
    rim = opening.rim
    if isinstance(rim, Pipe):
        bottoms, tops = _edges_of_pipe(rim, up)
    else:
        bottoms, tops = _edges_of_hole(rim, opening.depth_m, up)
    low = max(bottoms) + opening.dam_m + opening.opens_at_m
    high = max(tops) if opening.outside is Outside.OUTLET else min(tops)
    return Crests(low_m=low, high_m=high)


def widened(opening: Opening, factor: float) -> Opening:
    """The same opening with its rim scaled about its middle."""
    return replace(opening, rim=_scaled(opening.rim, factor))


def middle_of(rim: Rim) -> Vector:
    """The middle of a rim: centre, mean of the corners, or the first point of a pipe."""
    if isinstance(rim, Circle):
        return rim.centre_m
    if isinstance(rim, Pipe):
        return rim.points_m[0]
    return mean_of(rim.points_m)


def normal_of(rim: Circle | Polygon) -> Vector:
    """The unit normal of a hole; of a polygon the direction of its area vector.

    Raises ValueError where there is none: a normal of zero, or corners on one line.
    """
    if isinstance(rim, Circle):
        return unit_of(rim.normal)
    around = (*rim.points_m[1:], rim.points_m[0])
    area = (0.0, 0.0, 0.0)
    for here, there in zip(rim.points_m, around, strict=True):
        area = plus(area, cross(less(here, rim.points_m[0]), less(there, rim.points_m[0])))
    return unit_of(area)


def rim_points(rim: Rim, count: int = 8) -> tuple[Vector, ...]:
    """Points on the rim: corners, points round a circle, or the points of a pipe's axis."""
    if not isinstance(rim, Circle):
        return rim.points_m
    normal = unit_of(rim.normal)
    first = unit_of(cross(normal, _least_axis(normal)))
    second = cross(normal, first)
    points = []
    for step in range(count):
        angle = 2.0 * math.pi * step / count
        c, s = 0.5 * rim.diameter_m * math.cos(angle), 0.5 * rim.diameter_m * math.sin(angle)
        points.append(plus(rim.centre_m, plus(times(first, c), times(second, s))))
    return tuple(points)


def _edges_of_hole(
    rim: Circle | Polygon, depth_m: float | None, up: Vector
) -> tuple[list[float], list[float]]:
    if isinstance(rim, Circle):
        lean = dot(unit_of(rim.normal), up)
        reach = 0.5 * rim.diameter_m * math.sqrt(max(0.0, 1.0 - lean * lean))
        middle = dot(rim.centre_m, up)
        low, high = middle - reach, middle + reach
    else:
        heights = [dot(point, up) for point in rim.points_m]
        low, high = min(heights), max(heights)
    if not depth_m:
        return [low], [high]
    half = 0.5 * depth_m * dot(normal_of(rim), up)
    return [low - half, low + half], [high - half, high + half]


def _edges_of_pipe(pipe: Pipe, up: Vector) -> tuple[list[float], list[float]]:
    """Lower and upper surface of the bore at each point of the axis; between points both run straight."""
    points = [pipe.points_m[0]]
    points += [there for here, there in pairwise(pipe.points_m) if there != here]
    tangents = [unit_of(less(there, here)) for here, there in pairwise(points)] or [up]
    radius = 0.5 * pipe.bore_m
    reaches = [
        radius * _reach_of_bend(before, after, up)
        for before, after in zip([tangents[0], *tangents], [*tangents, tangents[-1]], strict=True)
    ]
    heights = [dot(point, up) for point in points]
    bottoms = [height - reach for height, reach in zip(heights, reaches, strict=False)]
    tops = [height + reach for height, reach in zip(heights, reaches, strict=False)]
    return bottoms, tops


def _reach_of_bend(before: Vector, after: Vector, up: Vector) -> float:
    """How far the bore's section at a bend reaches up and down, in radii.

    The section lies in the mitre plane. A real bend is round, so it never reaches farther than the
    bore itself would lying level.
    """
    both = plus(before, after)
    if dot(both, both) < 1e-12:
        return 1.0
    mitre = unit_of(both)
    lifted = less(up, times(mitre, dot(before, up) / dot(before, mitre)))
    return min(1.0, math.sqrt(dot(lifted, lifted)))


def _scaled(rim: Rim, factor: float) -> Rim:
    if isinstance(rim, Circle):
        return replace(rim, diameter_m=rim.diameter_m * factor)
    if isinstance(rim, Pipe):
        return replace(rim, bore_m=rim.bore_m * factor)
    middle = mean_of(rim.points_m)
    points = tuple(plus(middle, times(less(point, middle), factor)) for point in rim.points_m)
    return replace(rim, points_m=points)


def _least_axis(normal: Vector) -> Vector:
    axis = min(range(3), key=lambda i: abs(normal[i]))
    return (float(axis == 0), float(axis == 1), float(axis == 2))
