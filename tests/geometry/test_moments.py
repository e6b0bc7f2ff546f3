"""Moments add, move, turn and mirror as bodies do; lines have theirs."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.geometry import moments as m
from ledger.geometry.moments import Moments
from ledger.geometry.polylines import moments_of_polyline
from ledger.geometry.vectors import vector

seeds = st.integers(0, 2**31)


def cloud(seed: int, n: int = 7) -> tuple[np.ndarray[Any, Any], np.ndarray[Any, Any]]:
    rng = np.random.default_rng(seed)
    return rng.normal(size=(n, 3)), rng.uniform(0.1, 2.0, n)


def of_points(points: np.ndarray[Any, Any], masses: np.ndarray[Any, Any]) -> Moments:
    centroid = masses @ points / masses.sum()
    arms = points - centroid
    return Moments(
        measure=float(masses.sum()),
        centroid=vector(centroid),
        second=m.matrix((arms * masses[:, None]).T @ arms),
    )


def same(one: Moments, two: Moments) -> None:
    assert one.measure == pytest.approx(two.measure, rel=1e-12)
    assert one.centroid == pytest.approx(two.centroid, abs=1e-12)
    assert np.array(one.second) == pytest.approx(np.array(two.second), abs=1e-11)


@settings(max_examples=40, deadline=None)
@given(seed=seeds)
def test_adding_parts_is_measuring_the_whole(seed: int) -> None:
    points, masses = cloud(seed)
    parts = [of_points(points[i : i + 1], masses[i : i + 1]) for i in range(len(points))]
    same(m.add(*parts), of_points(points, masses))
    same(m.add(m.add(*parts[:3]), m.add(*parts[3:])), of_points(points, masses))


@settings(max_examples=40, deadline=None)
@given(seed=seeds)
def test_moving_turning_and_mirroring_are_those_of_the_points(shapes: Any, seed: int) -> None:
    points, masses = cloud(seed)
    body, axes = of_points(points, masses), shapes.rotation(seed)
    same(m.moved(body, (1.0, -2.0, 3.0)), of_points(points + np.array([1.0, -2.0, 3.0]), masses))
    same(m.turned(body, axes), of_points(points @ axes, masses))
    same(m.mirrored(body), of_points(points * [1.0, -1.0, 1.0], masses))
    same(m.mirrored(m.mirrored(body)), body)
    same(m.placed(body, (5.0, 6.0, 7.0), axes[0], axes[1]), of_points(points @ axes + [5, 6, 7], masses))
    same(m.scaled(body, 2.5), of_points(points, 2.5 * masses))


@settings(max_examples=40, deadline=None)
@given(seed=seeds)
def test_inertia_has_minus_the_products_off_its_diagonal(seed: int) -> None:
    points, masses = cloud(seed)
    body = of_points(points, masses)
    x, y, z = (points - body.centroid).T
    inertia = m.inertia_of(body.second, 3.0)
    assert inertia[0][0] == pytest.approx(3.0 * masses @ (y * y + z * z))
    assert inertia[0][1] == pytest.approx(-3.0 * masses @ (x * y), abs=1e-11)
    assert inertia[2][1] == pytest.approx(-3.0 * masses @ (y * z), abs=1e-11)


def test_mirroring_turns_the_sign_of_xy_and_yz_inertia() -> None:
    body = of_points(*cloud(3))
    left, right = m.inertia_of(m.mirrored(body).second, 1.0), m.inertia_of(body.second, 1.0)
    assert (left[0][1], left[1][2], left[0][2]) == (-right[0][1], -right[1][2], right[0][2])


def test_numbers_that_are_not_finite_and_measures_below_nothing_are_refused() -> None:
    zero = ((0.0, 0.0, 0.0),) * 3
    with pytest.raises(ValueError, match="finite"):
        Moments(measure=1.0, centroid=(math.nan, 0.0, 0.0), second=zero)
    with pytest.raises(ValueError, match="negative"):
        Moments(measure=-1.0, centroid=(0.0, 0.0, 0.0), second=zero)
    with pytest.raises(ValueError, match="nothing to add"):
        m.add()


def test_adding_nothing_much_keeps_a_place() -> None:
    zero = ((0.0, 0.0, 0.0),) * 3
    nothing = Moments(measure=0.0, centroid=(1.0, 2.0, 3.0), second=zero)
    assert m.add(nothing, nothing).centroid == (1.0, 2.0, 3.0)


def test_a_straight_run_anywhere() -> None:
    found = moments_of_polyline([(1.0, 2.0, 3.0), (1.0, 2.0, 5.0)])
    assert (found.measure, found.centroid) == (2.0, (1.0, 2.0, 4.0))
    assert found.second[2][2] == pytest.approx(8.0 / 12.0)
    assert found.second[0] == (0.0, 0.0, 0.0)


def test_a_run_cut_finer_is_the_same_run() -> None:
    corners = np.random.default_rng(5).normal(size=(6, 3))
    fine = np.concatenate([np.linspace(a, b, 9) for a, b in pairwise(corners)])
    same(moments_of_polyline(fine), moments_of_polyline(corners))


def test_a_ring_of_short_pieces_nears_the_hoop(shapes: Any) -> None:
    ring = shapes.ring(4096, 1.0)
    points = np.column_stack((ring, np.zeros(len(ring))))
    found = moments_of_polyline(np.concatenate((points, points[:1])))
    assert found.measure == pytest.approx(2.0 * math.pi, rel=1e-6)
    assert np.array(found.second) == pytest.approx(math.pi * np.diag([1.0, 1.0, 0.0]), abs=1e-5)


@pytest.mark.parametrize(
    "points", [[(0, 0, 0)], [(0, 0, 0), (0, 0, 0)], [(0, 0), (1, 1)], [(0, 0, 0), (math.nan, 0, 0)]]
)
def test_a_line_of_nothing_is_refused(points: list[tuple[float, ...]]) -> None:
    with pytest.raises(ValueError, match="polyline"):
        moments_of_polyline(points)
