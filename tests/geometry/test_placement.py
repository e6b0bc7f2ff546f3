"""Outlines laid in the build."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.geometry.moments import inertia_of
from ledger.geometry.outlines import Outline, PlaneMoments, outline_moments, polygon
from ledger.geometry.placement import (
    angle_error_deg,
    axes_of,
    axes_square,
    panel_moments,
    place,
    placement_of,
)
from ledger.geometry.solids import mass_moments_of_solid

PLATE: PlaneMoments = outline_moments(Outline(loops=(polygon([(0, 0), (2, 0), (2, 1), (0, 1)]),)))


@settings(max_examples=40, deadline=None)
@given(turn=st.integers(0, 2**31), face=st.sampled_from(["mid", "+normal", "-normal"]))
def test_a_panel_is_the_slab_it_is_cut_from(shapes: Any, turn: int, face: str) -> None:
    from ledger.geometry.closed_cell import ClosedCell

    axes, origin, thickness = shapes.rotation(turn), np.array([3.0, -1.0, 2.0]), 0.05
    vertices, faces = shapes.box(2.0, 1.0, thickness)
    below = {"mid": 0.5, "+normal": 1.0, "-normal": 0.0}[face] * thickness
    slab = ClosedCell.from_proved((vertices - [0.0, 0.0, below]) @ axes + origin, faces)
    solid = mass_moments_of_solid(slab)
    panel = panel_moments(PLATE, placement_of(origin.tolist(), axes[0], axes[1]), thickness, face)
    assert panel.measure == pytest.approx(2.0, rel=1e-13)
    assert panel.centroid == pytest.approx(solid.centroid, abs=1e-12)
    assert np.array(panel.second) * thickness == pytest.approx(np.array(solid.second), abs=1e-13)


def test_inertia_of_a_flat_plate_in_its_own_axes() -> None:
    panel = panel_moments(PLATE, placement_of((0, 0, 0), (1, 0, 0), (0, 1, 0)), 0.0)
    inertia = inertia_of(panel.second, 10.0)
    assert inertia[0][0] == pytest.approx(20.0 * 1.0 / 12.0)
    assert inertia[1][1] == pytest.approx(20.0 * 4.0 / 12.0)
    assert inertia[2][2] == pytest.approx(20.0 * 5.0 / 12.0)


def test_the_normal_is_across_by_up_axis() -> None:
    # A rib that stands in the x-z plane: across aft, up up, so its normal points left.
    rib = placement_of((1, 2, 3), (2, 0, 0), (0, 0, 5))
    assert (rib.across, rib.up_axis, rib.normal) == ((1, 0, 0), (0, 0, 1), (0, -1, 0))
    assert place([(1.0, 1.0)], (1, 2, 3), (2, 0, 0), (0, 0, 5))[0] == pytest.approx([2.0, 2.0, 4.0])
    assert place([(1.0, 1.0, 1.0)], (1, 2, 3), (2, 0, 0), (0, 0, 5))[0] == pytest.approx([2.0, 1.0, 4.0])


@pytest.mark.parametrize(
    ("degrees", "square"), [(0.0, True), (0.09, True), (-0.09, True), (0.11, False), (45, False)]
)
def test_axes_are_square_within_a_tenth_of_a_degree(degrees: float, square: bool) -> None:
    off = math.radians(90.0 - degrees)
    up_axis = (3.0 * math.cos(off), 3.0 * math.sin(off), 0.0)
    assert axes_square((2.0, 0.0, 0.0), up_axis) is square
    assert angle_error_deg((2.0, 0.0, 0.0), up_axis) == pytest.approx(abs(degrees), abs=1e-12)
    if square:
        assert axes_of((2.0, 0.0, 0.0), up_axis)[1] == pytest.approx((0.0, 1.0, 0.0), abs=1e-15)
    else:
        with pytest.raises(ValueError, match="degrees from square"):
            axes_of((2.0, 0.0, 0.0), up_axis)


def test_what_is_no_placement_is_refused() -> None:
    plain = placement_of((0, 0, 0), (1, 0, 0), (0, 1, 0))
    with pytest.raises(ValueError, match="direction"):
        axes_square((0, 0, 0), (0, 1, 0))
    with pytest.raises(ValueError, match="origin"):
        placement_of((0, 0, math.nan), (1, 0, 0), (0, 1, 0))
    with pytest.raises(ValueError, match="face must be one of"):
        panel_moments(PLATE, plain, 0.01, "normal")
    with pytest.raises(ValueError, match="thickness_m"):
        panel_moments(PLATE, plain, -0.01)
    with pytest.raises(ValueError, match="two or three"):
        place([(1.0,)], (0, 0, 0), (1, 0, 0), (0, 1, 0))
