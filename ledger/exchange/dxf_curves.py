"""Entities of a DXF drawing as the curves an outline is made of, in the plane X-Y of the drawing.

Entities have their own axes along their `extrusion`. Seen from below (0, 0, -1) an arc runs the
other way and x changes sign; any other tilt is no flat outline.
"""

from __future__ import annotations

import math
from typing import Any

from ledger.geometry.curves import Arc, Curve, EllipseArc, Line, Spline
from ledger.geometry.sectors import Point

DRAWN = frozenset({"LINE", "LWPOLYLINE", "POLYLINE", "ARC", "CIRCLE", "ELLIPSE", "SPLINE"})
_FLAT_WITHIN = 1e-6
_SPLINE_FRAME = 16


class NotFlat(ValueError):
    """The entity leaves the plane of the drawing."""


def curves_of(entity: Any, scale: float) -> tuple[tuple[Curve, ...], bool]:
    """The curves of one entity, in drawing units times `scale`, and whether it says it is closed.

    Raises
        NotFlat: its axes are tilted, or its height varies.
        ValueError: it is broken.
    """
    match entity.dxftype():
        case "LINE":
            return _line(entity, scale), False
        case "ARC" | "CIRCLE":
            return _arc(entity, scale), False
        case "ELLIPSE":
            return _ellipse(entity, scale), False
        case "SPLINE":
            return _spline(entity, scale), False
        case "LWPOLYLINE":
            side = _side(entity)
            corners = [
                (side * float(x), float(y), side * float(bulge)) for x, y, bulge in entity.get_points("xyb")
            ]
            return _bulged(corners, scale, bool(entity.closed))
        case _:
            return _polyline(entity, scale)


def _side(entity: Any) -> float:
    x, y, z = entity.dxf.get("extrusion", (0.0, 0.0, 1.0))
    if math.hypot(x, y) > _FLAT_WITHIN * abs(z):
        raise NotFlat("its axes are tilted")
    return math.copysign(1.0, z)


def _check_heights(points: list[Any]) -> None:
    heights = [point[2] for point in points]
    size = max(1e-9, *(abs(value) for point in points for value in point))
    if max(heights) - min(heights) > _FLAT_WITHIN * size:
        raise NotFlat(f"its height goes from {min(heights):g} to {max(heights):g}")


def _line(entity: Any, scale: float) -> tuple[Curve, ...]:
    start, end = entity.dxf.start, entity.dxf.end
    _check_heights([start, end])
    a, b = (start[0] * scale, start[1] * scale), (end[0] * scale, end[1] * scale)
    return (Line(start=a, end=b),) if a != b else ()


def _arc(entity: Any, scale: float) -> tuple[Curve, ...]:
    side = _side(entity)
    x, y, _ = entity.dxf.center
    centre = (side * x * scale, y * scale)
    radius = entity.dxf.radius * scale
    if entity.dxftype() == "CIRCLE":
        return (Arc.ccw(centre, radius, 0.0, 0.0),)
    arc = Arc.ccw(centre, radius, math.radians(entity.dxf.start_angle), math.radians(entity.dxf.end_angle))
    if side > 0:
        return (arc,)
    return (
        Arc(
            centre=centre,
            radius=radius,
            start_angle_rad=math.pi - arc.start_angle_rad,
            end_angle_rad=math.pi - arc.end_angle_rad,
        ),
    )


def _ellipse(entity: Any, scale: float) -> tuple[Curve, ...]:
    side = _side(entity)
    centre, major = entity.dxf.center, entity.dxf.major_axis
    if abs(major[2]) > _FLAT_WITHIN * math.hypot(major[0], major[1]):
        raise NotFlat("its axes are tilted")
    arc = EllipseArc.ccw(
        (centre[0] * scale, centre[1] * scale),
        (major[0] * scale, major[1] * scale),
        abs(entity.dxf.ratio),
        entity.dxf.start_param,
        entity.dxf.end_param,
    )
    if side > 0:
        return (arc,)
    # Centre and axis stand in the drawing's own axes; only the sense of the parameter turns round.
    return (
        EllipseArc(
            centre=arc.centre,
            major_axis=arc.major_axis,
            ratio=arc.ratio,
            start_param=-arc.start_param,
            end_param=-arc.end_param,
        ),
    )


def _spline(entity: Any, scale: float) -> tuple[Curve, ...]:
    if not entity.control_point_count() and entity.closed and len(entity.fit_points):
        first, last = entity.fit_points[0], entity.fit_points[-1]
        if any(abs(a - b) > 1e-12 for a, b in zip(first, last, strict=True)):
            entity.fit_points = [*entity.fit_points, first]
    tool = entity.construction_tool()
    points = list(tool.control_points)
    _check_heights(points)
    weights = tuple(float(weight) for weight in tool.weights())
    return (
        Spline(
            degree=tool.degree,
            knots=tuple(float(knot) for knot in tool.knots()),
            control_points=tuple((point[0] * scale, point[1] * scale) for point in points),
            weights=weights or None,
        ),
    )


def _polyline(entity: Any, scale: float) -> tuple[tuple[Curve, ...], bool]:
    if entity.is_2d_polyline:
        side = _side(entity)
        corners = [
            (side * vertex.dxf.location[0], vertex.dxf.location[1], side * vertex.dxf.get("bulge", 0.0))
            for vertex in entity.vertices
            if not vertex.dxf.flags & _SPLINE_FRAME
        ]
    elif entity.is_3d_polyline:
        places = [vertex.dxf.location for vertex in entity.vertices]
        if places:
            _check_heights(places)
        corners = [(place[0], place[1], 0.0) for place in places]
    else:
        raise ValueError("a mesh is no outline")
    return _bulged(corners, scale, bool(entity.is_closed))


def _bulged(
    corners: list[tuple[float, float, float]], scale: float, closed: bool
) -> tuple[tuple[Curve, ...], bool]:
    points: list[tuple[Point, float]] = [((x * scale, y * scale), bulge) for x, y, bulge in corners]
    returns = len(points) > 2 and points[0][0] == points[-1][0]
    if returns:
        points.pop()
    ends = points[1:] + (points[:1] if closed or returns else [])
    curves = [
        Arc.bulged(start, end, bulge)
        for (start, bulge), (end, _) in zip(points, ends, strict=False)
        if start != end
    ]
    return tuple(curves), closed or returns
