"""Sections and footprints for drawings."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
import shapely

from ledger.geometry import level_table
from ledger.geometry.sections_cut import cut_by_plane, plan_outline, segments_by_plane


def test_a_section_encloses_the_free_surface_at_its_height(shapes: Any) -> None:
    vertices, faces = shapes.star(3, 3)
    for seed in range(5):
        axes = shapes.rotation(seed)
        level = 0.05
        segments = segments_by_plane(vertices, faces, level * axes[2], axes[2])
        flat = segments @ axes[:2].T
        rings = shapely.polygonize([shapely.LineString(pair) for pair in np.round(flat, 12)])
        area = sum(part.area for part in rings.geoms)
        assert area == pytest.approx(level_table(vertices, faces, axes[2], [level]).surface_m2[0], rel=1e-9)
        assert segments @ axes[2] == pytest.approx(np.full(segments.shape[:2], level), abs=1e-14)


def test_a_plane_through_corners_still_gives_a_closed_outline(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    for point in ((0.5, 0.5, 0.0), (0.5, 0.5, 0.5)):
        segments = cut_by_plane(vertices, faces, point, (0.0, 0.0, 1.0))
        rings = shapely.polygonize([shapely.LineString([a[:2], b[:2]]) for a, b in segments])
        assert [part.area for part in rings.geoms] == [1.0]
    assert cut_by_plane(vertices, faces, (0.5, 0.5, 1.0), (0.0, 0.0, 1.0)) == ()
    assert cut_by_plane(vertices, faces, (0.5, 0.5, 3.0), (0.0, 0.0, 1.0)) == ()
    with pytest.raises(ValueError, match="up must not be zero"):
        cut_by_plane(vertices, faces, (0.0, 0.0, 0.0), (0.0, 0.0, 0.0))


def test_the_footprint_of_a_box_is_its_floor(shapes: Any) -> None:
    vertices, faces = shapes.box(2.0, 1.0, 0.5)
    assert shapely.Polygon(plan_outline(vertices, faces)).area == pytest.approx(2.0)
    assert shapely.Polygon(plan_outline(vertices, faces, (0, 2))).area == pytest.approx(1.0)


def test_the_footprint_of_a_rough_body_covers_every_corner(shapes: Any) -> None:
    vertices, faces = shapes.star(7, 2)
    flat = shapely.Polygon(plan_outline(vertices, faces))
    assert flat.is_valid
    assert flat.buffer(1e-6).covers(shapely.MultiPoint(vertices[:, :2]))
    assert flat.area < flat.convex_hull.area
