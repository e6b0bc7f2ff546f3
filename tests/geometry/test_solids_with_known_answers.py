"""Solids whose fill is known in closed form, made of triangles and stood at an attitude.

Curved bodies are made of flat facets, so the closed form is met to the facets' error and the
polygon's own closed form to rounding.
"""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from ledger.geometry import level_table
from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.submerged import CellAt, level_for_volume, submerged

Floats = NDArray[np.float64]
UP = (0.0, 0.0, 1.0)
FACETS = 2048


def facet_area(n: int, radius: float) -> float:
    """Area of a regular polygon inside a circle."""
    return 0.5 * n * radius**2 * math.sin(2.0 * math.pi / n)


@pytest.mark.parametrize(
    ("degrees", "volume", "out", "height"),
    [
        # checks: cylindrical wedge, R = h = 1, volume formula mathworld (read), the rest computed
        (60, 0.251840554, 0.789544, 0.289544),
        (90, 2 / 3, 3 * math.pi / 16, 3 * math.pi / 32),
        (120, 1.131144403, 0.404298, 0.301433),
        (180, math.pi / 2, 0.25, 0.3125),
    ],
)
def test_a_tilted_glass_holds_a_cylindrical_wedge(
    shapes: Any, degrees: float, volume: float, out: float, height: float
) -> None:
    ring = shapes.ring(FACETS, 1.0)
    vertices, faces = shapes.prism(ring, ring, 1.0)
    edge = math.cos(math.radians(degrees))
    slope = 1.0 / (1.0 - edge)
    up = np.array([-slope, 0.0, 1.0])
    level = -slope * edge / float(np.linalg.norm(up))
    table = level_table(vertices, faces, up, [level])
    assert table.volume_m3[0] == pytest.approx(volume, rel=1e-5)
    assert table.centroid_m[0] == pytest.approx([out, 0.0, height], abs=3e-6)


def test_a_spherical_cap(shapes: Any) -> None:
    # checks: spherical cap, R = 1, h = 0.5 (closed form, computed)
    vertices, faces = shapes.ball(6)
    for up in (UP, (1.0, 2.0, -0.5)):
        unit = np.asarray(up) / np.linalg.norm(up)
        table = level_table(vertices, faces, up, [-0.5])
        assert table.volume_m3[0] == pytest.approx(0.654498469, rel=5e-4)
        assert table.centroid_m[0] == pytest.approx(-0.675 * unit, abs=1e-4)


def test_a_ball_of_facets_nears_the_cap_as_the_square_of_their_size(shapes: Any) -> None:
    def error(n: int) -> float:
        vertices, faces = shapes.ball(n)
        table = level_table(vertices, faces, (0.3, 0.1, 1.0), [-0.5])
        return abs(float(table.volume_m3[0]) - 5 * math.pi / 24)

    errors = [error(n) for n in (3, 4, 5, 6)]
    ratios = [coarse / fine for coarse, fine in pairwise(errors)]
    assert ratios == pytest.approx([4.0, 4.0, 4.0], rel=0.06)


def test_a_cone_frustum_from_the_big_end(shapes: Any) -> None:
    # checks: cone frustum r 2 to 1, h 3 (closed form, computed)
    ring = shapes.ring(FACETS, 1.0)
    vertices, faces = shapes.prism(2.0 * ring, ring, 3.0)
    table = level_table(vertices, faces, UP, [3.0])
    assert table.volume_m3[0] == pytest.approx(21.991149, rel=2e-6)
    assert table.volume_m3[0] == pytest.approx(7.0 * facet_area(FACETS, 1.0), rel=1e-13)
    assert table.centroid_m[0] == pytest.approx([0.0, 0.0, 1.178571], abs=5e-7)


def test_a_taper_bay_is_not_the_mean_of_its_ends(shapes: Any) -> None:
    # checks: taper bay, similar sections, area 1 to 0.25 over 1 (closed form, computed)
    big = np.array([(0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)])
    vertices, faces = shapes.prism(big, 0.5 * big, 1.0)
    table = level_table(vertices, faces, UP, [0.25, 1.0])
    # Sections shrink as (1 - z / 2): the integral of its square.
    assert table.volume_m3 == pytest.approx([(8 - (2 - 0.25) ** 3) / 12, 7 / 12], rel=1e-14)
    assert table.centroid_m[1, 2] == pytest.approx(0.392857, abs=5e-7)
    assert table.centroid_m[1, 2] == pytest.approx(11 / 28, rel=1e-14)


class TestBox:
    """The box 1 x 0.5 x 0.2 of the checks: x forward here, pitch lifts the far end."""

    @pytest.fixture
    def box(self, shapes: Any) -> ClosedCell:
        return ClosedCell.from_mesh(*shapes.box(1.0, 0.5, 0.2))

    def test_tilting_a_half_full_box_keeps_its_volume_and_shifts_it(self, box: ClosedCell) -> None:
        # checks: pitch 5 deg, mean depth 0.1 (closed form, computed)
        slope = math.tan(math.radians(5.0))
        up = (-slope, 0.0, 1.0)
        level = level_for_volume(box, up, 0.05)
        part = submerged(box, up, level)
        assert part.volume_m3 == pytest.approx(0.05, rel=1e-13)
        assert part.centroid_m is not None
        x, y, z = part.centroid_m
        assert (x - 0.5, z) == pytest.approx((0.0729072, 0.0531893), abs=5e-8)
        # Closed form: shift = slope L^2 / (12 d), height = d / 2 + slope^2 L^2 / (24 d).
        assert (x - 0.5, y) == pytest.approx((slope / 1.2, 0.25), abs=1e-13)
        assert z == pytest.approx(0.05 + slope**2 / 2.4, abs=1e-13)
        # The surface passes over the middle of the floor at the mean depth.
        assert level * math.hypot(slope, 1.0) == pytest.approx(0.1 - slope * 0.5, abs=1e-13)

    def test_what_is_left_lies_as_a_wedge_in_the_low_end(self, box: ClosedCell) -> None:
        # checks: same tilt, volume 0.01: wedge length 0.676167, depth 0.0591570 (closed form, computed)
        slope = math.tan(math.radians(5.0))
        up = (-slope, 0.0, 1.0)
        part = CellAt(box, up).moments(level_for_volume(box, up, 0.01))
        length = math.sqrt(2.0 * 0.01 / (0.5 * slope))
        assert (length, length * slope) == pytest.approx((0.676167, 0.0591570), abs=5e-7)
        assert part.centroid_m is not None
        # checks: centroid 0.225389, 0.0197190 from the corner (computed)
        assert 1.0 - part.centroid_m[0] == pytest.approx(0.225389, abs=5e-7)
        assert part.centroid_m[2] == pytest.approx(0.0197190, abs=5e-8)
        assert 1.0 - part.centroid_m[0] == pytest.approx(length / 3.0, rel=1e-12)

    def test_a_drain_at_the_high_floor_edge_traps_a_full_wedge(self, box: ClosedCell) -> None:
        # checks: drain at the high floor edge, trapped 0.021872166 (closed form, computed)
        slope = math.tan(math.radians(5.0))
        assert submerged(box, (-slope, 0.0, 1.0), 0.0).volume_m3 == pytest.approx(0.021872166, abs=5e-10)
        assert submerged(box, (-slope, 0.0, 1.0), 0.0).volume_m3 == pytest.approx(0.25 * slope, rel=1e-13)

    def test_pitch_and_roll_shift_it_both_ways(self, box: ClosedCell) -> None:
        # checks: slopes tan 2 and tan 3 deg: shifts 0.0291006, 0.0109183; height 0.0507942 (computed)
        up = (-math.tan(math.radians(2.0)), -math.tan(math.radians(3.0)), 1.0)
        part = submerged(box, up, level_for_volume(box, up, 0.05))
        assert part.centroid_m is not None
        x, y, z = part.centroid_m
        assert (x - 0.5, y - 0.25, z) == pytest.approx((0.0291006, 0.0109183, 0.0507942), abs=5e-8)


@pytest.mark.parametrize(
    ("depth", "volume", "below"),
    [
        # checks: horizontal cylinder r 0.5, length 2 (closed form, computed); centroid below the axis
        (0.1, 0.0817506, 0.440364),
        (0.25, 0.3070924, 0.352510),
        (0.5, 0.7853982, 0.212207),
        (0.75, 1.2637039, 0.085663),
        (0.9, 1.4890458, 0.024177),
    ],
)
def test_a_horizontal_cylinder(shapes: Any, depth: float, volume: float, below: float) -> None:
    import shapely

    ring = shapes.ring(FACETS, 0.5)
    vertices, faces = shapes.prism(ring, ring, 2.0)
    # The axis runs along z of the prism; the surface is level across x.
    table = level_table(vertices, faces, (1.0, 0.0, 0.0), [depth - 0.5])
    assert table.volume_m3[0] == pytest.approx(volume, rel=1e-5)
    assert -table.centroid_m[0, 0] == pytest.approx(below, abs=2e-6)
    cut = shapely.Polygon(ring).intersection(shapely.box(-1.0, -1.0, depth - 0.5, 1.0))
    assert table.volume_m3[0] == pytest.approx(2.0 * cut.area, rel=1e-12)
    assert table.centroid_m[0, 0] == pytest.approx(cut.centroid.x, abs=1e-12)


def test_an_ellipsoid_cap(shapes: Any) -> None:
    # checks: ellipsoid 1, 0.5, 0.25, cap of height 0.1 along the short axis (closed form, computed)
    vertices, faces = shapes.ball(6)
    table = level_table(vertices * [1.0, 0.5, 0.25], faces, UP, [-0.15])
    assert table.volume_m3[0] == pytest.approx(0.054454273, rel=1e-3)
    assert table.centroid_m[0] == pytest.approx([0.0, 0.0, -0.184615], abs=5e-5)
    # Stretching a body stretches its fill: exact against the ball with the same facets.
    ball = level_table(vertices, faces, UP, [-0.6])
    assert table.volume_m3[0] == pytest.approx(0.125 * ball.volume_m3[0], rel=1e-12)


def test_a_wedge_behind_a_lip(shapes: Any) -> None:
    # checks: lip 5 mm, 3 deg, chord 600 mm: 0.1431 L = chord h^2 / (2 tan g) (closed form, computed)
    slope = math.tan(math.radians(3.0))
    cell = ClosedCell.from_mesh(*shapes.box(1.0, 0.6, 0.2))
    up = np.array([-slope, 0.0, 1.0])
    lip = float(up @ [1.0, 0.0, 0.005] / np.linalg.norm(up))
    held = submerged(cell, up, lip).volume_m3
    assert held * 1e3 == pytest.approx(0.1431, abs=5e-5)
    assert held == pytest.approx(0.6 * 0.005**2 / (2.0 * slope), rel=1e-11)
