"""Area, centroid and second moments of open surfaces."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.errors import MeshRefused
from ledger.geometry.surfaces import moments_of_surface

seeds = st.integers(0, 2**31)
PLATE = np.array([[0.0, 0.0, 0.0], [2.0, 0.0, 0.0], [2.0, 1.0, 0.0], [0.0, 1.0, 0.0]])
HALVES = np.array([[0, 1, 2], [0, 2, 3]])


@settings(max_examples=30, deadline=None)
@given(turn=seeds, at=st.tuples(*[st.floats(-5, 5)] * 3), offset=st.floats(-0.1, 0.1))
def test_a_flat_plate_anywhere_with_an_offset(
    shapes: Any, turn: int, at: tuple[float, float, float], offset: float
) -> None:
    rotation = shapes.rotation(turn)
    found = moments_of_surface(PLATE @ rotation.T + at, HALVES, offset)
    assert found.measure == pytest.approx(2.0, rel=1e-12)
    assert found.centroid == pytest.approx(rotation @ [1.0, 0.5, offset] + at, abs=1e-12)
    own = np.diag([2.0 / 3.0, 1.0 / 6.0, 0.0])
    assert np.array(found.second) == pytest.approx(rotation @ own @ rotation.T, abs=1e-12)


def test_a_sphere_with_an_offset_is_the_larger_sphere_to_first_order(shapes: Any) -> None:
    vertices, faces = shapes.ball(5)
    plain = moments_of_surface(vertices, faces)
    assert plain.measure == pytest.approx(4.0 * math.pi, rel=1e-3)
    for offset in (0.01, -0.01):
        shell = moments_of_surface(vertices, faces, offset)
        assert shell.measure == pytest.approx(plain.measure * (1.0 + offset) ** 2, rel=1e-6)
        assert shell.second[0][0] == pytest.approx(plain.second[0][0] * (1.0 + offset) ** 4, rel=1e-6)


def test_loose_triangles_move_together(shapes: Any) -> None:
    vertices, faces = shapes.ball(2)
    whole = moments_of_surface(vertices, faces, 0.05)
    apart, rows = shapes.soup((vertices, faces))
    loose = moments_of_surface(apart, rows, 0.05)
    assert loose.measure == pytest.approx(whole.measure, rel=1e-13)


def test_it_agrees_with_the_mesh_library(shapes: Any) -> None:
    import trimesh

    vertices, faces = shapes.star(4, 2)
    part = faces[::2]
    mesh = trimesh.Trimesh(vertices, part, process=False)
    found = moments_of_surface(vertices, part)
    assert found.measure == pytest.approx(mesh.area, rel=1e-13)
    expected = (mesh.triangles_center * mesh.area_faces[:, None]).sum(axis=0) / mesh.area
    assert found.centroid == pytest.approx(expected, abs=1e-13)


def test_a_triangle_cut_finer_keeps_its_second_moments() -> None:
    corners = np.array([[0.3, 0.1, 0.0], [1.7, 0.4, 0.9], [-0.2, 1.1, 2.0]])
    whole = moments_of_surface(corners, [[0, 1, 2]])
    middle = (corners + np.roll(corners, -1, axis=0)) / 2.0
    fine = moments_of_surface(np.concatenate((corners, middle)), [[0, 3, 5], [3, 1, 4], [5, 4, 2], [3, 4, 5]])
    assert fine.measure == pytest.approx(whole.measure, rel=1e-14)
    assert np.array(fine.second) == pytest.approx(np.array(whole.second), abs=1e-14)


def test_triangles_without_area_add_nothing() -> None:
    found = moments_of_surface(PLATE, np.concatenate((HALVES, [[0, 0, 1], [1, 1, 1]])))
    assert found.measure == pytest.approx(2.0)


@pytest.mark.parametrize("turned", [[0, 1, 2], [2, 1, 0], [1, 2, 0]])
def test_a_triangle_there_twice_is_refused(turned: list[int]) -> None:
    with pytest.raises(MeshRefused, match="there twice") as caught:
        moments_of_surface(PLATE, np.concatenate((HALVES, [turned])))
    assert caught.value.code == "surface-doubled"


def test_a_copy_with_corners_of_its_own_is_refused_too() -> None:
    twice = np.concatenate((PLATE, PLATE))
    with pytest.raises(MeshRefused, match="2 triangles"):
        moments_of_surface(twice, np.concatenate((HALVES, HALVES + 4)))


def test_a_surface_of_nothing_is_refused() -> None:
    for vertices, faces, code in (
        (PLATE, HALVES[:0], "mesh-empty"),
        (PLATE * [1.0, 0.0, 0.0], HALVES, "mesh-empty"),
        (np.where(PLATE == 2.0, np.nan, PLATE), HALVES, "mesh-not-finite"),
        (PLATE, HALVES + 2, "mesh-index"),
    ):
        with pytest.raises(MeshRefused) as caught:
            moments_of_surface(vertices, faces)
        assert caught.value.code == code
    with pytest.raises(ValueError, match="offset_m must be finite"):
        moments_of_surface(PLATE, HALVES, math.nan)
