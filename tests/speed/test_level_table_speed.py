"""How long a table of levels takes, against one capped cut by the mesh library and one sort.

All ratios are of medians of seven inside one run, so a slow machine or a busy one moves both sides.
"""

from __future__ import annotations

import tracemalloc
from collections.abc import Callable
from typing import Any

import numpy as np
import trimesh
from numpy.typing import NDArray

from ledger.geometry import level_table

Floats = NDArray[np.float64]
LEVELS = 101


def sliver_prism(sides: int) -> trimesh.Trimesh:
    """A prism as tall as it is wide, its walls of two slivers a side, its ends fans about their middles."""
    at = np.linspace(0.0, 2.0 * np.pi, sides, endpoint=False)
    ring = np.column_stack((np.cos(at), np.sin(at)))
    vertices = np.concatenate(
        (
            np.column_stack((ring, np.zeros(sides))),
            np.column_stack((ring, np.full(sides, 2.0))),
            [[0.0, 0.0, 0.0], [0.0, 0.0, 2.0]],
        )
    )
    i = np.arange(sides)
    j = (i + 1) % sides
    low, high = np.full(sides, 2 * sides), np.full(sides, 2 * sides + 1)
    walls = (np.column_stack((i, j, j + sides)), np.column_stack((i, j + sides, i + sides)))
    ends = (np.column_stack((j, i, low)), np.column_stack((i + sides, j + sides, high)))
    return trimesh.Trimesh(vertices, np.concatenate((*walls, *ends)), process=False)


def table_work(mesh: trimesh.Trimesh, up: Floats) -> Callable[[], object]:
    vertices, faces = np.array(mesh.vertices), np.array(mesh.faces)
    heights = vertices @ up
    levels = np.linspace(heights.min(), heights.max(), LEVELS)
    return lambda: level_table(vertices, faces, up, levels)


def test_a_ball_of_80_thousand_triangles(race: Any, say: Any) -> None:
    mesh = trimesh.creation.icosphere(subdivisions=6)
    assert len(mesh.faces) == 81920
    up = np.array([0.1, 0.2, 1.0])
    up /= np.linalg.norm(up)
    corner_heights = (np.array(mesh.vertices) @ up)[np.array(mesh.faces)].ravel()
    table, cut, sort = race.medians(
        table_work(mesh, up),
        lambda: mesh.slice_plane([0.0, 0.0, 0.0], -up, cap=True),
        lambda: np.argsort(corner_heights),
    )
    say(
        [
            (f"table of {LEVELS} levels, ball of 81,920: ms", 1e3 * table, None),
            ("  in capped cuts", table / cut, 1.0),
            ("  in sorts of the corner heights", table / sort, 4.0),
        ]
    )
    assert table < cut
    assert table < 4.0 * sort


def test_a_prism_of_slivers_that_nearly_every_level_cuts(race: Any, say: Any) -> None:
    mesh = sliver_prism(20480)
    assert len(mesh.faces) == 81920
    up = np.array([0.02, 0.01, 1.0])
    up /= np.linalg.norm(up)
    work = table_work(mesh, up)
    # Capping a ring of tens of thousands of corners takes many seconds: one cut is enough to know.
    (table,) = race.medians(work)
    (cut,) = race.medians(lambda: sliver_prism(2048).slice_plane([0.0, 0.0, 1.0], -up, cap=True), times=1)
    (small,) = race.medians(table_work(sliver_prism(2048), up))
    tracemalloc.start()
    work()
    peak = tracemalloc.get_traced_memory()[1] / 1e6
    tracemalloc.stop()
    say(
        [
            (f"table of {LEVELS} levels, 81,920 slivers: ms", 1e3 * table, None),
            ("  8,192 slivers, in capped cuts", small / cut, 2.0),
            ("  peak memory: MB", peak, 300.0),
        ]
    )
    assert small < 2.0 * cut
    assert table < 2.0 * 10.0 * cut
    assert peak < 300.0
