"""The table of levels against closed forms, against itself and against another library's cut."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import ArrayLike, NDArray

from ledger.geometry import level_table

Floats = NDArray[np.float64]
seeds = st.integers(0, 2**31)


def test_importing_the_package_loads_no_arrays() -> None:
    code = "import sys, ledger.geometry; print('numpy' in sys.modules)"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "False"


def test_the_package_gives_the_function_whatever_was_imported_before() -> None:
    import ledger.geometry.levels

    assert ledger.geometry.level_table is ledger.geometry.levels.level_table
    with pytest.raises(AttributeError, match="no attribute 'level_tables'"):
        _ = ledger.geometry.level_tables


@settings(max_examples=60, deadline=None)
@given(turn=seeds, at=st.tuples(*[st.floats(-20, 20)] * 3), share=st.floats(0.0, 1.0))
def test_a_box_anywhere_fills_in_proportion_to_depth(
    shapes: Any, turn: int, at: tuple[float, float, float], share: float
) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    rotation = shapes.rotation(turn)
    moved = vertices @ rotation.T + at
    up = rotation @ [0.0, 0.0, 1.0]
    floor = float(up @ np.asarray(at))
    order = np.random.default_rng(turn).permutation(len(faces))
    spun = np.roll(faces[order], turn % 3, axis=1)
    table = level_table(moved, spun, 3.0 * up, [floor + 0.2 * share, floor + 0.2])
    assert table.volume_m3 == pytest.approx([0.1 * share, 0.1], abs=2e-13)
    if 1e-6 < share < 1.0 - 1e-9:
        middle = rotation @ [0.5, 0.25, 0.1 * share] + at
        assert table.centroid_m[0] == pytest.approx(middle, abs=1e-9)
        assert table.surface_m2[0] == pytest.approx(0.5, abs=1e-9)


@settings(max_examples=60, deadline=None)
@given(body=seeds, tilt=seeds, shares=st.lists(st.floats(-0.1, 1.1), min_size=1, max_size=40))
def test_what_lies_below_and_above_a_level_make_the_whole(
    shapes: Any, body: int, tilt: int, shares: list[float]
) -> None:
    vertices, faces = shapes.star(body)
    up = shapes.rotation(tilt)[0]
    heights = vertices @ up
    levels = heights.min() + np.array(shares) * np.ptp(heights)
    below = level_table(vertices, faces, up, levels)
    above = level_table(vertices, faces, -up, -levels)
    gross = level_table(vertices, faces, up, [heights.max()])
    whole = float(gross.volume_m3[0])
    assert below.volume_m3 + above.volume_m3 == pytest.approx(np.full(len(levels), whole), rel=1e-13)
    first = np.nan_to_num(below.centroid_m) * below.volume_m3[:, None]
    first += np.nan_to_num(above.centroid_m) * above.volume_m3[:, None]
    assert first == pytest.approx(np.tile(whole * gross.centroid_m[0], (len(levels), 1)), abs=1e-13)
    assert below.surface_m2 == pytest.approx(above.surface_m2, abs=1e-10)


@settings(max_examples=40, deadline=None)
@given(body=seeds, tilt=seeds)
def test_volume_never_falls_and_the_surface_is_its_slope(shapes: Any, body: int, tilt: int) -> None:
    vertices, faces = shapes.star(body, 2)
    up = shapes.rotation(tilt)[0]
    heights = vertices @ up
    levels = np.linspace(heights.min() - 0.1, heights.max() + 0.1, 301)
    table = level_table(vertices, faces, up, levels)
    assert (np.diff(table.volume_m3) >= 0.0).all()
    assert table.volume_m3[0] == 0.0
    assert table.volume_m3[-1] == pytest.approx(level_table(vertices, faces, up, [9.0]).volume_m3[0])
    step = 1e-6
    inside = levels[20:-20:17]
    near = level_table(vertices, faces, up, np.concatenate((inside - step, inside + step)))
    slope = (near.volume_m3[len(inside) :] - near.volume_m3[: len(inside)]) / (2.0 * step)
    assert slope == pytest.approx(table.surface_m2[20:-20:17], abs=2e-5)


@settings(max_examples=25, deadline=None)
@given(body=seeds, tilt=seeds, share=st.floats(0.05, 0.95))
def test_it_agrees_with_a_boolean_kernel_that_cuts_the_mesh(
    shapes: Any, body: int, tilt: int, share: float
) -> None:
    import manifold3d

    vertices, faces = shapes.star(body, 2)
    up = shapes.rotation(tilt)[0]
    heights = vertices @ up
    level = float(heights.min() + share * np.ptp(heights))
    mesh = manifold3d.Mesh64(
        vert_properties=vertices, tri_verts=np.asarray(faces, dtype=np.uint64), tolerance=1e-12
    )
    part = manifold3d.Manifold(mesh).trim_by_plane(tuple(-up), -level)
    table = level_table(vertices, faces, up, [level])
    assert table.volume_m3[0] == pytest.approx(part.volume(), rel=1e-9)


def test_many_levels_at_once_are_the_levels_one_by_one(shapes: Any) -> None:
    vertices, faces = shapes.star(5, 3)
    up = np.array([0.2, -0.3, 1.0])
    heights = vertices @ up / np.linalg.norm(up)
    levels = np.random.default_rng(1).permutation(np.linspace(heights.min(), heights.max(), 257))
    table = level_table(vertices, faces, up, levels)
    for row in range(0, 257, 16):
        one = level_table(vertices, faces, up, levels[row : row + 1])
        assert table.volume_m3[row] == pytest.approx(one.volume_m3[0], abs=1e-14)
        assert table.surface_m2[row] == pytest.approx(one.surface_m2[0], abs=1e-12)
        assert table.centroid_m[row] == pytest.approx(one.centroid_m[0], abs=1e-9, nan_ok=True)
    assert np.array_equal(table.levels_m, levels)


def test_uneven_and_repeated_levels_are_no_different(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    levels = [0.9, 0.1, 0.1, 0.1 + 1e-13, 0.5, 0.0, 1.0, 0.5]
    table = level_table(vertices, faces, (0, 0, 1), levels)
    assert table.volume_m3 == pytest.approx(levels, abs=1e-15)


@pytest.mark.parametrize("turn", range(6))
def test_the_surface_at_a_flat_face_is_the_one_just_below_it(shapes: Any, turn: int) -> None:
    lower, upper = shapes.box(2.0, 1.0, 1.0), shapes.box(1.0, 1.0, 0.5)
    # A step: a floor of 2 m2, a ledge at 1 m that leaves 1 m2, a lid at 1.5 m.
    step = shapes.joined(lower, (upper[0] + [0.0, 0.0, 1.0], upper[1]))
    rotation = np.eye(3) if turn == 0 else shapes.rotation(turn)
    up = rotation @ [0.0, 0.0, 1.0]
    levels = [0.0, 0.5, 1.0, 1.25, 1.5, 1.75]
    table = level_table(step[0] @ rotation.T, step[1], up, levels)
    assert table.surface_m2 == pytest.approx([0.0, 2.0, 2.0, 1.0, 1.0, 0.0], abs=1e-12)
    assert table.volume_m3 == pytest.approx([0.0, 1.0, 2.0, 2.25, 2.5, 2.5], abs=1e-13)


def test_a_nearly_empty_cone_is_as_exact_as_a_full_one(shapes: Any) -> None:
    ring = shapes.ring(64, 1.0)
    vertices, faces = shapes.prism(1e-200 * ring, ring, 1.0)
    levels = np.logspace(-8, 0, 40)
    table = level_table(vertices, faces, (0, 0, 1), levels)
    area = 32.0 * np.sin(2.0 * np.pi / 64)
    assert table.volume_m3 == pytest.approx(area * levels**3 / 3.0, rel=1e-9)
    assert table.centroid_m[:, 2] == pytest.approx(0.75 * levels, rel=1e-9)


def test_a_body_far_from_the_datum_keeps_its_volume(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.25)
    table = level_table(vertices + np.array([1024.0, -512.0, 256.0]), faces, (0, 0, 1), [256.125])
    assert table.volume_m3[0] == pytest.approx(0.0625, rel=1e-12)
    assert table.centroid_m[0] == pytest.approx([1024.5, -511.75, 256.0625], abs=1e-11)


def test_an_empty_row_has_no_centroid(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    table = level_table(vertices, faces, (0, 0, 1), [-1.0, 0.0, 0.5])
    assert np.isnan(table.centroid_m[:2]).all()
    assert np.isfinite(table.centroid_m[2]).all()


def test_no_levels_give_an_empty_table(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    table = level_table(vertices, faces, (0, 0, 1), [])
    assert table.volume_m3.shape == (0,)
    assert table.centroid_m.shape == (0, 3)


@pytest.mark.parametrize("up", [(0, 0, 0), (0, 0, np.inf), (np.nan, 0, 1), (0, 1)])
def test_an_up_without_direction_is_refused(shapes: Any, up: ArrayLike) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    with pytest.raises(ValueError, match="up must"):
        level_table(vertices, faces, up, [0.5])


def test_wrong_arrays_are_refused(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    up = (0, 0, 1)
    with pytest.raises(ValueError, match="finite heights"):
        level_table(vertices, faces, up, [np.nan])
    with pytest.raises(ValueError, match="does not exist"):
        level_table(vertices, faces + 1, up, [0.5])
    with pytest.raises(ValueError, match="whole numbers"):
        level_table(vertices, faces.astype(float), up, [0.5])
    with pytest.raises(ValueError, match="corner is not finite"):
        level_table(np.where(vertices == 1.0, np.nan, vertices), faces, up, [0.5])
    with pytest.raises(ValueError, match="rows of three coordinates"):
        level_table(vertices[:, :2], faces, up, [0.5])
    with pytest.raises(ValueError, match="rows of three corner numbers"):
        level_table(vertices, faces[:0], up, [0.5])


def test_it_agrees_with_a_mesh_library_that_cuts_and_caps(
    shapes: Any, capped_cut: Callable[[Any, ArrayLike, float], tuple[float, Floats]]
) -> None:
    import trimesh

    vertices, faces = shapes.star(3, 2, least=0.8)
    mesh = trimesh.Trimesh(vertices, faces, process=False)
    for tilt in range(4):
        up = shapes.rotation(tilt)[0]
        heights = vertices @ up
        levels = heights.min() + np.array([0.2, 0.45, 0.8]) * np.ptp(heights)
        table = level_table(vertices, faces, up, levels)
        for row, level in enumerate(levels):
            volume, centroid = capped_cut(mesh, up, float(level))
            assert table.volume_m3[row] == pytest.approx(volume, rel=1e-9)
            assert table.centroid_m[row] == pytest.approx(centroid, abs=1e-9)
