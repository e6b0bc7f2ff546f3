"""Areas and moments of outlines: closed forms, and a polygon library at a fine flattening."""

from __future__ import annotations

import math
from contextlib import suppress
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.geometry.outlines import (
    Arc,
    Curve,
    EllipseArc,
    Line,
    Loop,
    Outline,
    OutlineRefused,
    PlaneMoments,
    Spline,
    flatten,
    outline_moments,
    polygon,
)

PI = math.pi
HALF = math.sqrt(0.5)
spots = st.tuples(st.floats(-3, 3), st.floats(-3, 3))
angles = st.floats(-PI, PI)


def moments(*loops: Loop) -> PlaneMoments:
    return outline_moments(Outline(loops=loops))


def circle(centre: tuple[float, float], radius: float) -> Loop:
    return Loop(curves=(Arc(centre=centre, radius=radius, start_angle_rad=0.0, end_angle_rad=2 * PI),))


def spline_circle() -> Spline:
    """The unit circle as four rational quadratic quarters."""
    corners = ((1, 0), (1, 1), (0, 1), (-1, 1), (-1, 0), (-1, -1), (0, -1), (1, -1), (1, 0))
    return Spline(
        degree=2,
        knots=(0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 4),
        control_points=tuple((float(x), float(y)) for x, y in corners),
        weights=(1, HALF, 1, HALF, 1, HALF, 1, HALF, 1),
    )


def by_shapely(*loops: Loop, tolerance: float = 1e-7) -> tuple[float, tuple[float, float]]:
    """Area and centroid of the flattened outline; the first loop is the outside."""
    import shapely

    flat = shapely.Polygon(flatten(loops[0], tolerance), [flatten(loop, tolerance) for loop in loops[1:]])
    return float(flat.area), (float(flat.centroid.x), float(flat.centroid.y))


@settings(max_examples=40, deadline=None)
@given(centre=spots, radius=st.floats(0.01, 5.0), start=angles, clockwise=st.booleans())
def test_a_circle(centre: tuple[float, float], radius: float, start: float, clockwise: bool) -> None:
    sweep = -2 * PI if clockwise else 2 * PI
    arc = Arc(centre=centre, radius=radius, start_angle_rad=start, end_angle_rad=start + sweep)
    found = moments(Loop(curves=(arc,)))
    assert found.area == pytest.approx(PI * radius**2, rel=1e-13)
    assert found.centroid == pytest.approx(centre, abs=1e-13 * (1 + radius))
    own = PI * radius**4 / 4.0
    assert np.array(found.second) == pytest.approx(own * np.eye(2), abs=1e-12 * own)


@settings(max_examples=40, deadline=None)
@given(centre=spots, turn=angles, ratio=st.floats(0.05, 1.5), start=angles, clockwise=st.booleans())
def test_an_ellipse(
    centre: tuple[float, float], turn: float, ratio: float, start: float, clockwise: bool
) -> None:
    major = (2.0 * math.cos(turn), 2.0 * math.sin(turn))
    sweep = -2 * PI if clockwise else 2 * PI
    arc = EllipseArc(centre=centre, major_axis=major, ratio=ratio, start_param=start, end_param=start + sweep)
    found = moments(Loop(curves=(arc,)))
    assert found.area == pytest.approx(4.0 * PI * ratio, rel=1e-13)
    assert found.centroid == pytest.approx(centre, abs=1e-12)
    rotation = np.array([[math.cos(turn), -math.sin(turn)], [math.sin(turn), math.cos(turn)]])
    own = found.area / 4.0 * rotation @ np.diag([4.0, 4.0 * ratio**2]) @ rotation.T
    assert np.array(found.second) == pytest.approx(own, abs=1e-11)


@settings(max_examples=40, deadline=None)
@given(
    radii=st.lists(st.floats(0.3, 1.0), min_size=3, max_size=12),
    bulges=st.lists(st.floats(-0.2, 0.2), min_size=12, max_size=12),
    at=spots,
)
def test_a_polygon_with_bulges_agrees_with_its_flattening(
    radii: list[float], bulges: list[float], at: tuple[float, float]
) -> None:
    turns = np.linspace(0.0, 2.0 * PI, len(radii), endpoint=False)
    corners = [(at[0] + r * math.cos(t), at[1] + r * math.sin(t)) for r, t in zip(radii, turns, strict=True)]
    curves = [
        Arc.bulged(a, b, bulge)
        for a, b, bulge in zip(corners, corners[1:] + corners[:1], bulges, strict=False)
    ]
    loop = Loop(curves=tuple(curves))
    with suppress(OutlineRefused):  # Bulges of neighbours may cross where the corners lie close.
        found = moments(loop)
        agrees_with_its_flattening(loop, found)


def agrees_with_its_flattening(loop: Loop, found: PlaneMoments) -> None:
    area, centroid = by_shapely(loop)
    assert found.area == pytest.approx(area, abs=2e-6)
    assert found.centroid == pytest.approx(centroid, abs=2e-6)
    turned = moments(Loop(curves=tuple(curve.reversed() for curve in reversed(loop.curves))))
    assert turned.area == pytest.approx(found.area, rel=1e-13)


def test_a_slot_of_two_lines_and_two_bulges_in_closed_form() -> None:
    slot = Loop(
        curves=(
            Line(start=(0, 0), end=(3, 0)),
            Arc.bulged((3, 0), (3, 1), 1.0),
            Line(start=(3, 1), end=(0, 1)),
            Arc.bulged((0, 1), (0, 0), 1.0),
        )
    )
    found = moments(slot)
    assert found.area == pytest.approx(3.0 + PI / 4.0, rel=1e-15)
    assert found.centroid == pytest.approx((1.5, 0.5), rel=1e-15)
    # Across the slot: the rectangle and one whole circle about the same axis.
    assert found.second[1][1] == pytest.approx(3.0 / 12.0 + PI * 0.5**4 / 4.0, rel=1e-14)


def test_a_concave_fillet_leaves_0_2146_of_its_square() -> None:
    # checks: concave fillet 0.2146 r^2 (read as common practice; exactly 1 - pi / 4)
    r = 0.006
    fillet = Loop(
        curves=(
            Line(start=(0, 0), end=(r, 0)),
            Arc(centre=(r, r), radius=r, start_angle_rad=-PI / 2, end_angle_rad=-PI),
            Line(start=(0, r), end=(0, 0)),
        )
    )
    assert moments(fillet).area == pytest.approx((1.0 - PI / 4.0) * r * r, rel=1e-12)
    # checks: r 6 mm at 1.15 g/cm3: 8.88 g/m, and 20.7 g/m for the flat 45 degree one (computed)
    assert moments(fillet).area * 1150.0 * 1e3 == pytest.approx(8.88, abs=0.005)
    flat = polygon([(0, 0), (r, 0), (0, r)])
    assert moments(flat).area == pytest.approx(0.5 * r * r, rel=1e-15)
    assert moments(flat).area * 1150.0 * 1e3 == pytest.approx(20.7, abs=0.05)


def test_a_rational_spline_is_the_circle_to_the_last_digits() -> None:
    found = moments(Loop(curves=(spline_circle(),)))
    assert found.area == pytest.approx(PI, rel=4e-16)
    assert found.second[0][0] == pytest.approx(PI / 4.0, rel=1e-14)
    assert found.second[0][1] == pytest.approx(0.0, abs=1e-15)


def test_without_its_weights_the_spline_is_no_circle() -> None:
    circle_of = spline_circle()
    plain = Spline(degree=2, knots=circle_of.knots, control_points=circle_of.control_points)
    # Four parabolas: each quarter is the unit square less a third of it.
    assert moments(Loop(curves=(plain,))).area == pytest.approx(4.0 - 4.0 / 6.0, rel=1e-15)


def test_a_cubic_spline_agrees_with_an_independent_one() -> None:
    from scipy.integrate import quad
    from scipy.interpolate import BSpline

    rng = np.random.default_rng(4)
    turns = np.linspace(0, 2 * PI, 9, endpoint=False)
    points = np.column_stack((np.cos(turns), np.sin(turns))) * rng.uniform(0.7, 1.3, 9)[:, None]
    closed = np.concatenate((points, points[:3]))
    knots = np.arange(len(closed) + 4, dtype=float)
    spline = Spline(degree=3, knots=tuple(knots), control_points=tuple(map(tuple, closed.tolist())))
    found = moments(Loop(curves=(spline,)))
    other = BSpline(knots, closed, 3)
    slope = other.derivative()

    def swept(u: float) -> float:
        (x, y), (dx, dy) = other(u), slope(u)
        return float(0.5 * (x * dy - y * dx))

    area = sum(quad(swept, a, a + 1)[0] for a in range(3, 12))
    assert found.area == pytest.approx(abs(area), rel=1e-12)
    for u in (3.0, 5.25, 12.0):
        assert spline.at((u,))[0] == pytest.approx(other(u), abs=1e-14)


def test_a_straight_spline_is_its_line() -> None:
    straight = Spline(degree=1, knots=(0, 0, 1, 2, 2), control_points=((0, 0), (1, 0), (1, 1)))
    loop = Loop(curves=(straight, Line(start=(1, 1), end=(0, 0))))
    assert moments(loop).area == pytest.approx(0.5, rel=1e-15)


def test_holes_are_told_by_nesting_whatever_way_they_are_drawn() -> None:
    square = polygon([(0, 0), (10, 0), (10, 10), (0, 10)])
    hole = circle((3.0, 4.0), 2.0)
    island = circle((3.0, 4.0), 1.0)
    expected = 100.0 - 4.0 * PI + PI
    for loops in (
        (square, hole, island),
        (island, hole, square),
        (square, Loop(curves=tuple(c.reversed() for c in hole.curves)), island),
        (Loop(curves=tuple(c.reversed() for c in reversed(square.curves))), hole, island),
    ):
        found = moments(*loops)
        assert found.area == pytest.approx(expected, rel=1e-14)
        first = 500.0 - 3.0 * PI * 3.0
        assert found.centroid[0] == pytest.approx(first / expected, rel=1e-14)


def test_two_separate_loops_add() -> None:
    found = moments(circle((0.0, 0.0), 1.0), circle((5.0, 0.0), 1.0))
    assert found.area == pytest.approx(2.0 * PI, rel=1e-14)
    assert found.second[0][0] == pytest.approx(2.0 * (PI / 4.0 + PI * 6.25), rel=1e-14)


@settings(max_examples=30, deadline=None)
@given(at=spots, turn=angles)
def test_moving_and_turning_an_outline_carries_its_moments(at: tuple[float, float], turn: float) -> None:
    cos, sin = math.cos(turn), math.sin(turn)

    def there(x: float, y: float) -> tuple[float, float]:
        return (at[0] + x * cos - y * sin, at[1] + x * sin + y * cos)

    def shape(placed: bool) -> Loop:
        to = there if placed else lambda x, y: (x, y)
        extra = turn if placed else 0.0
        centre = to(2.0, 0.5)
        return Loop(
            curves=(
                Line(start=to(0, 0), end=to(2, 0)),
                Arc(centre=centre, radius=0.5, start_angle_rad=extra - PI / 2, end_angle_rad=extra + PI / 2),
                Line(start=to(2, 1), end=to(0.25, 1)),
                Line(start=to(0.25, 1), end=to(0, 0)),
            )
        )

    plain, moved = moments(shape(False)), moments(shape(True))
    rotation = np.array([[cos, -sin], [sin, cos]])
    assert moved.area == pytest.approx(plain.area, rel=1e-12)
    assert moved.centroid == pytest.approx(there(*plain.centroid), abs=1e-12)
    assert np.array(moved.second) == pytest.approx(rotation @ np.array(plain.second) @ rotation.T, abs=1e-11)


def test_a_flat_bulge_keeps_the_sliver_it_adds() -> None:
    for bulge in (1e-3, 1e-5, 1e-8, 1e-12, 0.0):
        loop = Loop(
            curves=(
                Arc.bulged((0.0, 0.0), (1.0, 0.0), bulge),
                Line(start=(1.0, 0.0), end=(1.0, 1.0)),
                Line(start=(1.0, 1.0), end=(0.0, 0.0)),
            )
        )
        # A segment of sweep 4 arctan b on a chord of 1; in series, b / 3 + b^3 / 15.
        assert moments(loop).area == pytest.approx(0.5 + bulge / 3.0 + bulge**3 / 15.0, abs=1e-13)


REFUSALS: list[tuple[str, tuple[Loop, ...]]] = [
    ("outline-empty", ()),
    ("outline-empty", (polygon([(0, 0), (1, 0), (2, 0)]),)),
    ("outline-empty", (polygon([(0, 0), (0, 0), (0, 0)]),)),
    ("outline-empty", (polygon([(0, 0), (1, 1)]),)),
    ("outline-open", (Loop(curves=(Line(start=(0, 0), end=(1, 0)), Line(start=(1, 0), end=(1, 1)))),)),
    ("outline-crosses", (polygon([(0, 0), (1, 1), (1, 0), (0, 1)]),)),
    ("outline-crosses", (polygon([(0, 0), (4, 0), (4, 4), (2, 0), (0, 4)]),)),
    ("outline-crosses", (circle((0, 0), 1.0), circle((1.5, 0), 1.0))),
    ("outline-crosses", (circle((0, 0), 1.0), circle((2.0, 0), 1.0))),
    ("outline-crosses", (polygon([(0, 0), (4, 0), (4, 4), (0, 4)]), polygon([(0, 1), (2, 1), (2, 2)]))),
    (
        "outline-crosses",
        (polygon([(0, 0), (4, 0), (4, 4), (0, 4)]), polygon([(4, 0), (8, 0), (8, 4), (4, 4)])),
    ),
    ("outline-doubled", (circle((0, 0), 1.0), circle((0, 0), 1.0))),
    (
        "outline-doubled",
        (polygon([(0, 0), (4, 0), (4, 4), (0, 4)]), polygon([(4, 4), (4, 0), (0, 0), (0, 4)])),
    ),
    ("outline-doubled", (circle((0, 0), 1.0), Loop(curves=(spline_circle(),)))),
]


@pytest.mark.parametrize(("code", "loops"), REFUSALS)
def test_an_outline_that_encloses_nothing_sure_is_refused(code: str, loops: tuple[Loop, ...]) -> None:
    with pytest.raises(OutlineRefused) as caught:
        moments(*loops)
    assert caught.value.code == code
    assert caught.value.do


def test_a_thin_ring_is_not_a_doubled_loop() -> None:
    found = moments(circle((0, 0), 1.0), circle((0, 0), 0.999))
    assert found.area == pytest.approx(PI * (1.0 - 0.999**2), rel=1e-11)


def test_the_ends_of_an_open_outline_are_named() -> None:
    with pytest.raises(OutlineRefused, match=r"open from \(1000, 1000\) mm to \(0, 0\) mm"):
        moments(Loop(curves=(Line(start=(0, 0), end=(1, 0)), Line(start=(1, 0), end=(1, 1)))))


@pytest.mark.parametrize("tolerance", [1e-2, 1e-4, 1e-6])
def test_flattening_stays_within_its_tolerance(tolerance: float) -> None:
    for curve in (circle((0, 0), 1.0).curves[0], spline_circle()):
        points = np.array(flatten(Loop(curves=(curve,)), tolerance))
        middles = (points + np.roll(points, -1, axis=0)) / 2.0
        assert np.abs(np.linalg.norm(points, axis=1) - 1.0).max() < 1e-14
        assert 1.0 - np.linalg.norm(middles, axis=1).min() <= tolerance
    with pytest.raises(ValueError, match="tolerance"):
        flatten(circle((0, 0), 1.0), 0.0)


def test_arcs_of_drawing_files_run_anticlockwise_between_their_angles() -> None:
    arc = Arc.ccw((0.0, 0.0), 1.0, math.radians(350.0), math.radians(10.0))
    assert arc.end_angle_rad - arc.start_angle_rad == pytest.approx(math.radians(20.0))
    whole = Arc.ccw((0.0, 0.0), 1.0, 1.0, 1.0)
    assert whole.end_angle_rad - whole.start_angle_rad == pytest.approx(2.0 * PI)
    part = EllipseArc.ccw((0.0, 0.0), (1.0, 0.0), 0.5, 3.0 * PI / 2.0, 0.0)
    assert part.end_param - part.start_param == pytest.approx(PI / 2.0)
    assert part.end == pytest.approx((1.0, 0.0))


@pytest.mark.parametrize(
    "build",
    [
        lambda: Line(start=(0.0, math.nan), end=(1.0, 0.0)),
        lambda: Arc(centre=(0, 0), radius=0.0, start_angle_rad=0.0, end_angle_rad=1.0),
        lambda: Arc(centre=(0, 0), radius=1.0, start_angle_rad=1.0, end_angle_rad=1.0),
        lambda: Arc(centre=(0, 0), radius=1.0, start_angle_rad=0.0, end_angle_rad=7.0),
        lambda: EllipseArc(centre=(0, 0), major_axis=(0, 0), ratio=1.0, start_param=0.0, end_param=1.0),
        lambda: EllipseArc(centre=(0, 0), major_axis=(1, 0), ratio=0.0, start_param=0.0, end_param=1.0),
        lambda: Spline(degree=0, knots=(0, 1), control_points=((0, 0),)),
        lambda: Spline(degree=1, knots=(0, 1, 1), control_points=((0, 0), (1, 1))),
        lambda: Spline(degree=1, knots=(0, 1, 0, 1), control_points=((0, 0), (1, 1))),
        lambda: Spline(degree=1, knots=(0, 0, 0, 0), control_points=((0, 0), (1, 1))),
        lambda: Spline(degree=1, knots=(0, 0, 1, 1), control_points=((0, 0), (1, 1)), weights=(1, 0)),
        lambda: Spline(degree=1, knots=(0, 0, 1, 1), control_points=((0, 0), (1, 1)), weights=(1,)),
        lambda: Loop(curves=()),
    ],
)
def test_a_curve_that_is_none_is_a_mistake_of_the_program(build: Any) -> None:
    with pytest.raises(ValueError, match=r"curve|arc|ellipse|spline"):
        build()


def test_every_curve_runs_backward_over_the_same_points() -> None:
    curves: tuple[Curve, ...] = (
        Line(start=(0, 0), end=(1, 2)),
        Arc(centre=(1, 1), radius=2.0, start_angle_rad=0.3, end_angle_rad=-1.9),
        EllipseArc(centre=(1, 1), major_axis=(2, 1), ratio=0.3, start_param=0.3, end_param=1.9),
        spline_circle(),
    )
    for curve in curves:
        back = curve.reversed()
        assert (back.start, back.end) == (curve.end, curve.start)
        one, two = curve.sector((0.2, 0.3)), back.sector((0.2, 0.3))
        for name in ("area", "x", "y", "xx", "xy", "yy"):
            assert getattr(one, name) == pytest.approx(-getattr(two, name), abs=1e-14)
