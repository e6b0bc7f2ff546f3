"""Exact area, centroid and second moments of a flat outline with holes."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ledger.geometry.curves import Arc, Curve, EllipseArc, Line, Spline
from ledger.geometry.loops import Loop, OutlineRefused, chain, polygon
from ledger.geometry.named_place import named_place
from ledger.geometry.sectors import Point, Sector, add_sectors

if TYPE_CHECKING:
    from shapely import Polygon

__all__ = [
    "Arc",
    "Curve",
    "EllipseArc",
    "Line",
    "Loop",
    "Outline",
    "OutlineRefused",
    "PlaneMoments",
    "Spline",
    "chain",
    "flatten",
    "outline_moments",
    "polygon",
]

# Ends of neighbouring curves this far apart, of the outline's size, still close a loop.
CLOSED_SHARE = 1e-6
# Chords this near to the curves, of the outline's size, stand for them when loops are compared.
FLAT_SHARE = 1e-6
EMPTY_SHARE = 1e-12
# Corners nearer than this, of the size, are one: rounding between two curves may run backward.
DISTINCT_SHARE = 1e-9
# Loops nearer than this, of the greatest size, touch: as near as their chords can tell.
TOUCH_SHARE = 4.0 * FLAT_SHARE

Pair = tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Outline:
    """Loops in one plane, metres. Which are holes is told by nesting, not by drawing direction."""

    loops: tuple[Loop, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class PlaneMoments:
    """Area (m2), centroid (m) and integrals of xx, xy, yy (m4) about the centroid, as a 2 x 2 matrix."""

    area: float
    centroid: Pair
    second: tuple[Pair, Pair]


def outline_moments(outline: Outline) -> PlaneMoments:
    """Area, centroid and second moments from the curves themselves, holes taken off.

    A loop inside an odd number of others is a hole, however it was drawn.
    Raises OutlineRefused
        outline-empty (no loop, or one without area), outline-open (a loop does not come back),
        outline-crosses (a loop crosses or touches itself or another), outline-doubled (a loop
        drawn twice).
    """
    if not outline.loops:
        raise OutlineRefused("outline-empty", "the outline has no closed curve", "draw one or pick its layer")
    for loop in outline.loops:
        _refuse_open(loop)
    polygons = [_polygon_of(loop) for loop in outline.loops]
    depths = _depths(polygons)
    about = _middle_of(polygons)
    parts = []
    for loop, depth in zip(outline.loops, depths, strict=True):
        whole = add_sectors(curve.sector(about) for curve in _closed_curves(loop))
        sign = math.copysign(1.0, whole.area) * (-1.0 if depth % 2 else 1.0)
        parts.append(_times(whole, sign))
    return _about_centroid(add_sectors(parts), about)


def flatten(loop: Loop, tolerance: float) -> tuple[Point, ...]:
    """Corners of a polygon within a tolerance (m) of a loop, the first not repeated. For drawings only."""
    points: list[Point] = []
    for curve in loop.curves:
        points.extend(curve.points(tolerance)[:-1])
    return tuple(points)


def _times(sector: Sector, by: float) -> Sector:
    return Sector(
        area=sector.area * by,
        x=sector.x * by,
        y=sector.y * by,
        xx=sector.xx * by,
        xy=sector.xy * by,
        yy=sector.yy * by,
    )


def _about_centroid(whole: Sector, about: Point) -> PlaneMoments:
    x, y = whole.x / whole.area, whole.y / whole.area
    xy = whole.xy - whole.area * x * y
    return PlaneMoments(
        area=whole.area,
        centroid=(about[0] + x, about[1] + y),
        second=((whole.xx - whole.area * x * x, xy), (xy, whole.yy - whole.area * y * y)),
    )


def _size_of(loop: Loop) -> float:
    ends = [point for curve in loop.curves for point in (curve.start, curve.end, *curve.points(math.inf))]
    xs, ys = [point[0] for point in ends], [point[1] for point in ends]
    return math.hypot(max(xs) - min(xs), max(ys) - min(ys))


def _refuse_open(loop: Loop) -> None:
    near = CLOSED_SHARE * _size_of(loop)
    for curve, following in zip(loop.curves, loop.curves[1:] + loop.curves[:1], strict=True):
        if math.dist(curve.end, following.start) > near:
            raise OutlineRefused(
                "outline-open",
                f"the outline is open from {named_place(curve.end)} to {named_place(following.start)}",
                "join the ends there",
            )


def _closed_curves(loop: Loop) -> list[Curve]:
    """The curves with lines over what rounding left between them, so that the sectors close."""
    whole: list[Curve] = []
    for curve, following in zip(loop.curves, loop.curves[1:] + loop.curves[:1], strict=True):
        whole.append(curve)
        if curve.end != following.start:
            whole.append(Line(start=curve.end, end=following.start))
    return whole


def _polygon_of(loop: Loop) -> Polygon:
    """A fine polygon of one loop, or the refusal of one that crosses itself or encloses nothing."""
    from shapely import Polygon
    from shapely.validation import explain_validity

    size = _size_of(loop)
    corners = _distinct(flatten(loop, FLAT_SHARE * size), DISTINCT_SHARE * size) if size > 0.0 else ()
    flat = Polygon(corners) if len(corners) >= 3 else None
    # A figure of eight has no net area either, so emptiness is asked of the hull.
    if flat is None or flat.convex_hull.area <= EMPTY_SHARE * size * size:
        raise OutlineRefused(
            "outline-empty",
            f"the loop at {named_place(loop.curves[0].start)} encloses no area",
            "remove it or draw it whole",
        )
    if not flat.is_valid:
        raise OutlineRefused(
            "outline-crosses",
            f"the outline crosses or touches itself {_crossing(explain_validity(flat))}",
            "mend the drawing there",
        )
    return flat


def _distinct(corners: tuple[Point, ...], near: float) -> tuple[Point, ...]:
    """The corners without those that repeat the one before, round the loop."""
    kept: list[Point] = []
    for corner in corners:
        if not kept or math.dist(corner, kept[-1]) > near:
            kept.append(corner)
    while len(kept) > 1 and math.dist(kept[0], kept[-1]) <= near:
        kept.pop()
    return tuple(kept)


def _depths(polygons: list[Polygon]) -> list[int]:
    """In how many others each loop lies; refuses loops that meet."""
    from shapely import Point as Spot
    from shapely import STRtree

    depths = [0] * len(polygons)
    touch = TOUCH_SHARE * max(math.hypot(b[2] - b[0], b[3] - b[1]) for b in (p.bounds for p in polygons))
    tree = STRtree(polygons)
    for one, two in zip(*tree.query(polygons, predicate="dwithin", distance=touch), strict=True):
        if one < two:
            _refuse_meeting(polygons[one], polygons[two], touch)
        if one != two and polygons[two].contains(Spot(polygons[one].exterior.coords[0])):
            depths[one] += 1
    return depths


def _crossing(explained: str) -> str:
    # Shapely says for example `Self-intersection[0.5 0.25]`, in the drawing's own metres.
    found = re.search(r"\[(\S+) (\S+)\]", explained)
    return explained if found is None else f"at {named_place(map(float, found.groups()))}"


def _refuse_meeting(one: Polygon, two: Polygon, touch: float) -> None:
    from shapely import shortest_line

    ring, other = one.exterior, two.exterior
    if ring.distance(other) > touch:
        return
    x, y = shortest_line(ring, other).coords[0]
    if ring.hausdorff_distance(other) <= touch:
        raise OutlineRefused(
            "outline-doubled", f"a loop is drawn twice at {named_place((x, y))}", "remove the copy"
        )
    raise OutlineRefused(
        "outline-crosses",
        f"two loops cross or touch at {named_place((x, y))}",
        "mend the drawing there",
    )


def _middle_of(polygons: list[Polygon]) -> Point:
    bounds = [flat.bounds for flat in polygons]
    return (
        0.5 * (min(b[0] for b in bounds) + max(b[2] for b in bounds)),
        0.5 * (min(b[1] for b in bounds) + max(b[3] for b in bounds)),
    )
