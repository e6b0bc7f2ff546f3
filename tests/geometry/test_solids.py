"""Volume, centroid and second moments of closed cells."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.moments import inertia_of
from ledger.geometry.solids import mass_moments_of_solid

seeds = st.integers(0, 2**31)


@settings(max_examples=30, deadline=None)
@given(turn=seeds, at=st.tuples(*[st.floats(-5, 5)] * 3))
def test_a_box_turned_and_moved(shapes: Any, turn: int, at: tuple[float, float, float]) -> None:
    rotation = shapes.rotation(turn)
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    found = mass_moments_of_solid(ClosedCell.from_proved(vertices @ rotation.T + at, faces))
    assert found.measure == pytest.approx(0.1, rel=1e-12)
    assert found.centroid == pytest.approx(rotation @ [0.5, 0.25, 0.1] + at, abs=1e-12)
    own = 0.1 / 12.0 * np.diag([1.0, 0.25, 0.04])
    assert np.array(found.second) == pytest.approx(rotation @ own @ rotation.T, abs=1e-13)


@settings(max_examples=20, deadline=None)
@given(body=seeds)
def test_inertia_agrees_with_the_mesh_library(shapes: Any, body: int) -> None:
    import trimesh

    vertices, faces = shapes.star(body, 2)
    mesh = trimesh.Trimesh(vertices, faces, process=False)
    found = mass_moments_of_solid(ClosedCell.from_proved(vertices, faces))
    assert found.measure == pytest.approx(mesh.volume, rel=1e-12)
    assert found.centroid == pytest.approx(mesh.center_mass, abs=1e-12)
    assert np.array(inertia_of(found.second, 1.0)) == pytest.approx(mesh.moment_inertia, abs=1e-12)


def test_a_cavity_takes_its_moments_off(shapes: Any) -> None:
    outer, inner = shapes.box(2.0, 2.0, 2.0), shapes.box(1.0, 1.0, 1.0)
    cell = ClosedCell.from_mesh(*shapes.joined(outer, (inner[0] + 0.5, inner[1][:, ::-1])))
    found = mass_moments_of_solid(cell)
    assert found.measure == pytest.approx(7.0)
    assert np.array(found.second) == pytest.approx(np.eye(3) * (32.0 - 1.0) / 12.0, abs=1e-13)
