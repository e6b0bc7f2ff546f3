"""The open wing box: geometry and figures that this project did not make."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.typing import ArrayLike, NDArray

from ledger.geometry import level_table
from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.moments import add
from ledger.geometry.surfaces import moments_of_surface

Floats = NDArray[np.float64]
# The box's areal mass as its README states it: 1550 x (0.0065 + 2 x 0.050 x 0.006 / 0.150) kg/m2.
AREAL_MASS = 1550.0 * (0.0065 + 2.0 * 0.050 * 0.006 / 0.150)
BAYS = 22
ATTITUDES = ((0.0, 0.0, 1.0), (-0.2, 0.1, 1.0), (0.9, -0.4, 0.3), (0.05, -1.0, 0.02))


def read_obj(path: Path) -> tuple[Floats, dict[str, NDArray[np.intp]]]:
    """Corners, and the triangles of each object; a quad is cut along one diagonal."""
    corners: list[list[float]] = []
    objects: dict[str, list[list[int]]] = {}
    faces = objects.setdefault("", [])
    for line in path.read_text().splitlines():
        word, *rest = line.split() or [""]
        if word == "v":
            corners.append([float(value) for value in rest])
        elif word == "o":
            faces = objects.setdefault(rest[0], [])
        elif word == "f":
            at = [int(value.split("/")[0]) - 1 for value in rest]
            faces.extend([at[0], at[i], at[i + 1]] for i in range(1, len(at) - 1))
    return np.array(corners), {name: np.array(rows) for name, rows in objects.items() if rows}


@pytest.fixture(scope="module")
def bays(wing_box: Path) -> list[ClosedCell]:
    cells = []
    for path in sorted((wing_box / "cells").glob("bay_*.obj")):
        vertices, objects = read_obj(path)
        cells.append(ClosedCell.from_mesh(vertices, np.concatenate(list(objects.values()))))
    return cells


def test_every_bay_is_a_closed_cell_of_its_published_volume(
    wing_box_figures: dict[str, float], bays: list[ClosedCell]
) -> None:
    assert len(bays) == BAYS
    for number, cell in enumerate(bays):
        # reference.csv: computed from the mesh by its authors with another library
        assert cell.volume_m3 == pytest.approx(wing_box_figures[f"volume, bay_{number:02d}"], rel=1e-12)
    whole = sum(cell.volume_m3 for cell in bays)
    assert whole == pytest.approx(wing_box_figures["volume, all bays"], rel=1e-12)


@pytest.mark.parametrize("number", range(BAYS))
def test_tables_of_each_bay_agree_with_a_library_that_cuts_and_caps(
    bays: list[ClosedCell],
    capped_cut: Callable[[Any, ArrayLike, float], tuple[float, Floats]],
    number: int,
) -> None:
    import trimesh

    rng = np.random.default_rng(number)
    cell = bays[number]
    mesh = trimesh.Trimesh(cell.vertices_m, cell.faces, process=False)
    for up in (ATTITUDES[number % len(ATTITUDES)], rng.normal(size=3)):
        heights = cell.vertices_m @ up / np.linalg.norm(up)
        shares = np.concatenate(([0.02, 0.97], rng.uniform(size=3)))
        levels = heights.min() + shares * np.ptp(heights)
        table = level_table(cell.vertices_m, cell.faces, up, levels)
        for row, level in enumerate(levels):
            volume, centroid = capped_cut(mesh, up, float(level))
            assert table.volume_m3[row] == pytest.approx(volume, abs=1e-8 * cell.volume_m3)
            if volume > 1e-4 * cell.volume_m3:
                assert table.centroid_m[row] == pytest.approx(centroid, abs=1e-6)


def test_the_shell_weighs_what_was_published(wing_box: Path, wing_box_figures: dict[str, float]) -> None:
    corners, objects = read_obj(wing_box / "panels.obj")
    assert len(objects) == 111
    groups = {"ribs": "RIB", "spars": "SPAR", "upper skin": "U_SKIN", "lower skin": "L_SKIN"}
    parts = {
        name: add(
            *(moments_of_surface(corners, faces) for key, faces in objects.items() if key.startswith(start))
        )
        for name, start in groups.items()
    }
    for name, part in parts.items():
        # reference.csv: published by the example; two flat triangles a quad agree to about 1e-6
        assert part.measure * AREAL_MASS == pytest.approx(wing_box_figures[f"mass, {name}"], rel=2e-6)
    whole = add(*parts.values()).measure * AREAL_MASS
    assert whole == pytest.approx(wing_box_figures["mass, all panels"], rel=2e-6)
