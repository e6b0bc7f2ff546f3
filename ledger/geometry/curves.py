"""The curves an outline is drawn with: lines, arcs of circles and ellipses, splines.

Each knows its ends, its share of an area (`sector`) and points near enough for a drawing; it needs to
know nothing of its neighbours.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

from ledger.geometry.sectors import Point, Sector, arc_sector

# Below this bulge (tangent of a quarter of the sweep) an arc is held by its ends, not its centre.
FLAT_BULGE = 1e-3


def _finite(*values: float) -> None:
    if not all(math.isfinite(value) for value in values):
        raise ValueError("a curve must be finite")


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """A straight piece from `start` to `end`, metres."""

    start: Point
    end: Point

    def __post_init__(self) -> None:
        _finite(*self.start, *self.end)

    def sector(self, about: Point) -> Sector:
        """Integrals between `about` and the line: those of a triangle."""
        x0, y0 = self.start[0] - about[0], self.start[1] - about[1]
        x1, y1 = self.end[0] - about[0], self.end[1] - about[1]
        w = x0 * y1 - x1 * y0
        return Sector(
            area=w / 2.0,
            x=w * (x0 + x1) / 6.0,
            y=w * (y0 + y1) / 6.0,
            xx=w * (x0 * x0 + x0 * x1 + x1 * x1) / 12.0,
            xy=w * (x0 * (2.0 * y0 + y1) + x1 * (y0 + 2.0 * y1)) / 24.0,
            yy=w * (y0 * y0 + y0 * y1 + y1 * y1) / 12.0,
        )

    def reversed(self) -> Line:
        """The same line run the other way."""
        return Line(start=self.end, end=self.start)

    def points(self, tolerance_m: float) -> tuple[Point, ...]:  # noqa: ARG002 - one call for every curve
        """Both ends."""
        return (self.start, self.end)


@dataclass(frozen=True, slots=True, kw_only=True)
class EllipseArc:
    """Part of an ellipse: centre + major cos t + minor sin t for t from `start_param` to `end_param`.

    major_axis : vector from the centre to the end of the major axis, metres.
    ratio : minor over major; the minor axis is the major one turned a quarter anticlockwise.
    start_param, end_param : radians; the sweep is their difference and its sign the direction, never
        taken round. `ccw` makes the arc that runs anticlockwise between two parameters.
    """

    centre: Point
    major_axis: Point
    ratio: float
    start_param: float
    end_param: float

    def __post_init__(self) -> None:
        _finite(*self.centre, *self.major_axis, self.ratio, self.start_param, self.end_param)
        _checked_sweep(self.end_param - self.start_param)
        if self.ratio <= 0.0 or math.hypot(*self.major_axis) == 0.0:
            raise ValueError("an ellipse needs two axes")

    @staticmethod
    def ccw(
        centre: Point, major_axis: Point, ratio: float, start_param: float, end_param: float
    ) -> EllipseArc:
        """The arc anticlockwise from one parameter to the other; equal ones give the whole ellipse."""
        return EllipseArc(
            centre=centre,
            major_axis=major_axis,
            ratio=ratio,
            start_param=start_param,
            end_param=start_param + _turn(start_param, end_param),
        )

    @property
    def minor_axis(self) -> Point:
        """Vector from the centre to the end of the minor axis."""
        return (-self.ratio * self.major_axis[1], self.ratio * self.major_axis[0])

    def at(self, t: float) -> Point:
        """The point at a parameter."""
        (ax, ay), (bx, by) = self.major_axis, self.minor_axis
        cos, sin = math.cos(t), math.sin(t)
        return (self.centre[0] + ax * cos + bx * sin, self.centre[1] + ay * cos + by * sin)

    @property
    def start(self) -> Point:
        return self.at(self.start_param)

    @property
    def end(self) -> Point:
        return self.at(self.end_param)

    def sector(self, about: Point) -> Sector:
        """Integrals between `about` and the arc, in closed form."""
        centre = (self.centre[0] - about[0], self.centre[1] - about[1])
        return arc_sector(centre, self.major_axis, self.minor_axis, (self.start_param, self.end_param))

    def reversed(self) -> EllipseArc:
        """The same arc run the other way."""
        return EllipseArc(
            centre=self.centre,
            major_axis=self.major_axis,
            ratio=self.ratio,
            start_param=self.end_param,
            end_param=self.start_param,
        )

    def points(self, tolerance_m: float) -> tuple[Point, ...]:
        """Points whose chords stay within a tolerance of the arc."""
        radius = math.hypot(*self.major_axis) * max(1.0, self.ratio)
        sweep = self.end_param - self.start_param
        pieces = _pieces(radius, sweep, tolerance_m)
        return tuple(self.at(self.start_param + sweep * i / pieces) for i in range(pieces + 1))


@dataclass(frozen=True, slots=True, kw_only=True)
class Arc:
    """Part of a circle from `start_angle_rad` to `end_angle_rad`.

    The sweep is their difference and its sign the direction (positive anticlockwise), never taken
    round; `ccw` makes the arc that runs anticlockwise between two angles, as drawing files mean it,
    and `bulged` the one of a polyline's bulge.
    """

    centre: Point
    radius: float
    start_angle_rad: float
    end_angle_rad: float

    def __post_init__(self) -> None:
        _finite(*self.centre, self.radius, self.start_angle_rad, self.end_angle_rad)
        _checked_sweep(self.end_angle_rad - self.start_angle_rad)
        if self.radius <= 0.0:
            raise ValueError("an arc needs a radius")

    @staticmethod
    def ccw(centre: Point, radius: float, start_angle_rad: float, end_angle_rad: float) -> Arc:
        """The arc that runs anticlockwise from one angle to the other; equal ones give the whole circle."""
        return Arc(
            centre=centre,
            radius=radius,
            start_angle_rad=start_angle_rad,
            end_angle_rad=start_angle_rad + _turn(start_angle_rad, end_angle_rad),
        )

    @staticmethod
    def bulged(start: Point, end: Point, bulge: float) -> Curve:
        """The piece between two corners of a polyline with a bulge (tangent of a quarter of the sweep).

        A flat one comes as the same circle written as a rational spline, and one without a bulge as a
        line: the centre of a flat arc lies so far off that its coordinates could not hold the ends.
        """
        if bulge == 0.0:
            return Line(start=start, end=end)
        if abs(bulge) < FLAT_BULGE:
            return _flat_arc(start, end, bulge)
        dx, dy = end[0] - start[0], end[1] - start[1]
        offset = (1.0 - bulge * bulge) / (4.0 * bulge)
        centre = (
            0.5 * (start[0] + end[0]) - offset * dy,
            0.5 * (start[1] + end[1]) + offset * dx,
        )
        radius = math.hypot(dx, dy) * (1.0 + bulge * bulge) / (4.0 * abs(bulge))
        first = math.atan2(start[1] - centre[1], start[0] - centre[0])
        return Arc(
            centre=centre, radius=radius, start_angle_rad=first, end_angle_rad=first + 4.0 * math.atan(bulge)
        )

    def at(self, angle_rad: float) -> Point:
        """The point at an angle."""
        return (
            self.centre[0] + self.radius * math.cos(angle_rad),
            self.centre[1] + self.radius * math.sin(angle_rad),
        )

    @property
    def start(self) -> Point:
        return self.at(self.start_angle_rad)

    @property
    def end(self) -> Point:
        return self.at(self.end_angle_rad)

    def sector(self, about: Point) -> Sector:
        """Integrals between `about` and the arc, in closed form."""
        centre = (self.centre[0] - about[0], self.centre[1] - about[1])
        sweep = (self.start_angle_rad, self.end_angle_rad)
        return arc_sector(centre, (self.radius, 0.0), (0.0, self.radius), sweep)

    def reversed(self) -> Arc:
        """The same arc run the other way."""
        return Arc(
            centre=self.centre,
            radius=self.radius,
            start_angle_rad=self.end_angle_rad,
            end_angle_rad=self.start_angle_rad,
        )

    def points(self, tolerance_m: float) -> tuple[Point, ...]:
        """Points whose chords stay within a tolerance of the arc."""
        sweep = self.end_angle_rad - self.start_angle_rad
        pieces = _pieces(self.radius, sweep, tolerance_m)
        return tuple(self.at(self.start_angle_rad + sweep * i / pieces) for i in range(pieces + 1))


def _flat_arc(start: Point, end: Point, bulge: float) -> Spline:
    """An arc of less than half a turn by its ends and the point where their tangents meet."""
    out = bulge / (1.0 - bulge * bulge)
    dx, dy = end[0] - start[0], end[1] - start[1]
    apex = (0.5 * (start[0] + end[0]) + out * dy, 0.5 * (start[1] + end[1]) - out * dx)
    middle = (1.0 - bulge * bulge) / (1.0 + bulge * bulge)
    return Spline(
        degree=2,
        knots=(0.0, 0.0, 0.0, 1.0, 1.0, 1.0),
        control_points=(start, apex, end),
        weights=(1.0, middle, 1.0),
    )


def _checked_sweep(sweep: float) -> None:
    if sweep == 0.0 or abs(sweep) > 2.0 * math.pi * (1.0 + 1e-12):
        raise ValueError("an arc sweeps more than nothing and at most once round")


def _turn(start: float, end: float) -> float:
    """The anticlockwise sweep from one angle to another, in (0, 2 pi]."""
    sweep = math.fmod(end - start, 2.0 * math.pi)
    return sweep if sweep > 0.0 else sweep + 2.0 * math.pi


def _pieces(radius: float, sweep: float, tolerance_m: float) -> int:
    if not tolerance_m > 0.0:
        raise ValueError("a tolerance must be above 0")
    step = 2.0 * math.acos(max(0.5, 1.0 - tolerance_m / radius))
    return max(2, math.ceil(abs(sweep) / max(step, 1e-5)))


GAUSS_POINTS = 16
# A rational piece is no polynomial, so each of its spans is cut in this many for the quadrature.
RATIONAL_PIECES = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class Spline:
    """A B-spline, rational where it has weights.

    degree : at least 1.
    knots : n + degree + 1 numbers that never fall.
    control_points : n points, metres.
    weights : n numbers above 0, or None for all equal.
    Runs from knots[degree] to knots[n].
    """

    degree: int
    knots: tuple[float, ...]
    control_points: tuple[Point, ...]
    weights: tuple[float, ...] | None = None

    def __post_init__(self) -> None:
        count = len(self.control_points)
        _finite(*self.knots, *(value for point in self.control_points for value in point))
        if self.degree < 1 or count <= self.degree or len(self.knots) != count + self.degree + 1:
            raise ValueError("a spline needs as many knots as control points, its degree and one")
        if any(later < earlier for earlier, later in zip(self.knots, self.knots[1:], strict=False)):
            raise ValueError("the knots of a spline never fall")
        if not self.knots[self.degree] < self.knots[count]:
            raise ValueError("a spline needs a span of knots")
        if self.weights is not None:
            _finite(*self.weights)
            if len(self.weights) != count or min(self.weights) <= 0.0:
                raise ValueError("a spline needs one weight above 0 for each control point")

    def at(self, parameters: Iterable[float]) -> tuple[Point, ...]:
        """Points at parameters."""
        from ledger.geometry.splines import evaluate

        points, _ = evaluate(self, tuple(parameters))
        return tuple((float(x), float(y)) for x, y in points)

    @property
    def start(self) -> Point:
        return _spline_ends(self)[0]

    @property
    def end(self) -> Point:
        return _spline_ends(self)[1]

    def sector(self, about: Point) -> Sector:
        """Integrals between `about` and the curve, by Gauss's rule on each span of knots.

        Sixteen points are exact for polynomial pieces up to degree eight.
        """
        from ledger.geometry.splines import sector_of

        return sector_of(self, about, GAUSS_POINTS, RATIONAL_PIECES if self.weights else 1)

    def reversed(self) -> Spline:
        """The same curve run the other way."""
        top = self.knots[0] + self.knots[-1]
        return Spline(
            degree=self.degree,
            knots=tuple(top - knot for knot in reversed(self.knots)),
            control_points=tuple(reversed(self.control_points)),
            weights=None if self.weights is None else tuple(reversed(self.weights)),
        )

    def points(self, tolerance_m: float) -> tuple[Point, ...]:
        """Points whose chords stay within a tolerance of the curve."""
        from ledger.geometry.splines import flat_points

        return flat_points(self, tolerance_m)


@lru_cache(maxsize=256)
def _spline_ends(spline: Spline) -> tuple[Point, Point]:
    first, last = spline.at((spline.knots[spline.degree], spline.knots[len(spline.control_points)]))
    return first, last


Curve = Line | Arc | EllipseArc | Spline
