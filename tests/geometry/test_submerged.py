"""One cell asked for one level at a time: against the table, and round from volume to level."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from ledger.geometry import level_table
from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.solids import mass_moments_of_solid
from ledger.geometry.submerged import CellAt, level_for_volume, submerged

Floats = NDArray[np.float64]
UP = (0.0, 0.0, 1.0)
seeds = st.integers(0, 2**31)


@settings(max_examples=40, deadline=None)
@given(body=seeds, tilt=seeds)
def test_one_level_at_a_time_is_the_table(shapes: Any, body: int, tilt: int) -> None:
    vertices, faces = shapes.star(body, 2)
    cell = ClosedCell.from_proved(vertices, faces)
    up = shapes.rotation(tilt)[0]
    at = CellAt(cell, up)
    span = at.highest_m - at.lowest_m
    levels = np.linspace(at.lowest_m - 0.1 * span, at.highest_m + 0.1 * span, 23)
    table = level_table(vertices, faces, up, levels)
    again = at.at_levels(levels)
    for row, level in enumerate(levels):
        part = at.moments(float(level))
        assert part.volume_m3 == pytest.approx(table.volume_m3[row], abs=1e-14)
        assert part.surface_m2 == pytest.approx(table.surface_m2[row], abs=1e-12)
        assert at.volume(float(level)) == part.volume_m3
        assert at.surface(float(level)) == part.surface_m2
        if part.volume_m3 > 1e-6:
            assert part.centroid_m == pytest.approx(table.centroid_m[row], abs=1e-8)
    assert again.volume_m3 == pytest.approx(table.volume_m3, abs=1e-14)


@settings(max_examples=60, deadline=None)
@given(body=seeds, tilt=seeds, share=st.floats(0.0, 1.0))
def test_the_level_for_a_volume_holds_it(shapes: Any, body: int, tilt: int, share: float) -> None:
    cell = ClosedCell.from_proved(*shapes.star(body, 1))
    at = CellAt(cell, shapes.rotation(tilt)[0])
    volume = share * cell.volume_m3
    level = at.level_for(volume)
    assert at.lowest_m <= level <= at.highest_m
    assert at.volume(level) == pytest.approx(volume, abs=1e-12 * cell.volume_m3)
    assert level_for_volume(cell, shapes.rotation(tilt)[0], volume) == level


def test_an_hourglass_on_its_tip_is_solved_through_its_waist(shapes: Any) -> None:
    square = np.array([(-1.0, -1.0), (1.0, -1.0), (1.0, 1.0), (-1.0, 1.0)])
    lower = shapes.prism(square, 1e-9 * square, 1.0)
    upper = shapes.prism(1e-9 * square, square, 1.0)
    cell = ClosedCell.from_proved(*shapes.joined(lower, (upper[0] + [0, 0, 1.0], upper[1])))
    at = CellAt(cell, UP)
    for share in (1e-6, 0.3, 0.4999, 0.5, 0.5001, 0.9, 1.0 - 1e-9):
        assert at.volume(at.level_for(share * cell.volume_m3)) == pytest.approx(
            share * cell.volume_m3, abs=1e-13 * cell.volume_m3
        )


def test_where_the_volume_is_flat_the_lowest_level_is_given(shapes: Any) -> None:
    one = shapes.box(1.0, 1.0, 1.0)
    apart = shapes.joined(one, (one[0] + [0.0, 0.0, 3.0], one[1]))
    for turn in range(5):
        rotation = np.eye(3) if turn == 0 else shapes.rotation(turn)
        at = CellAt(ClosedCell.from_mesh(apart[0] @ rotation.T, apart[1]), rotation[:, 2])
        assert at.level_for(0.0) == pytest.approx(0.0, abs=1e-14)
        assert at.level_for(1.0) == pytest.approx(1.0, abs=1e-13)
        assert at.level_for(1.5) == pytest.approx(3.5, abs=1e-13)
        assert at.level_for(2.0) == pytest.approx(4.0, abs=1e-13)


def test_a_volume_the_cell_cannot_hold_is_refused(shapes: Any) -> None:
    at = CellAt(ClosedCell.from_mesh(*shapes.box(1.0, 1.0, 1.0)), UP)
    for volume in (-0.1, 1.1, math.nan):
        with pytest.raises(ValueError, match="the cell holds from 0 to"):
            at.level_for(volume)
    with pytest.raises(ValueError, match="a level must be finite"):
        at.volume(math.inf)
    with pytest.raises(ValueError, match="up must not be zero"):
        CellAt(at.cell, (0.0, 0.0, 0.0))


def test_an_empty_cell_has_no_centroid_and_a_full_one_its_own(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.star(4, 2))
    assert submerged(cell, UP, -9.0).centroid_m is None
    full = submerged(cell, UP, 9.0)
    assert (full.volume_m3, full.centroid_m, full.surface_m2) == (cell.volume_m3, cell.centroid_m, 0.0)


@pytest.mark.parametrize("turn", range(4))
def test_wetted_area_counts_floor_walls_and_at_last_the_lid(shapes: Any, turn: int) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    rotation = np.eye(3) if turn == 0 else shapes.rotation(turn)
    at = CellAt(ClosedCell.from_mesh(vertices @ rotation.T, faces), rotation[:, 2])
    areas = [at.wetted_area(level) for level in (0.0, 0.05, 0.15, 0.2, 0.3)]
    assert areas == pytest.approx([0.0, 0.65, 0.95, 1.6, 1.6], abs=1e-12)


@settings(max_examples=25, deadline=None)
@given(body=seeds, tilt=seeds, share=st.floats(0.02, 0.98))
def test_second_moments_below_a_level_are_those_of_the_cut_solid(
    shapes: Any, body: int, tilt: int, share: float
) -> None:
    import manifold3d

    vertices, faces = shapes.star(body, 1)
    cell = ClosedCell.from_proved(vertices, faces)
    at = CellAt(cell, shapes.rotation(tilt)[0])
    level = at.lowest_m + share * (at.highest_m - at.lowest_m)
    found = at.solid(level)
    mesh = manifold3d.Mesh64(vert_properties=vertices, tri_verts=faces.astype(np.uint64), tolerance=1e-12)
    part = manifold3d.Manifold(mesh).trim_by_plane(tuple(-c for c in at.up), -level).to_mesh64()
    expected = mass_moments_of_solid(
        ClosedCell.from_proved(part.vert_properties[:, :3], part.tri_verts.astype(int))
    )
    assert found is not None
    assert found.measure == pytest.approx(expected.measure, rel=1e-8)
    assert found.centroid == pytest.approx(expected.centroid, abs=1e-7)
    assert np.array(found.second) == pytest.approx(np.array(expected.second), abs=1e-8)


def test_the_free_surface_of_a_box_is_its_floor_lifted(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    for turn in range(1, 4):
        rotation = shapes.rotation(turn)
        at = CellAt(ClosedCell.from_mesh(vertices @ rotation.T, faces), rotation[:, 2])
        surface = at.free_surface(0.125)
        assert surface is not None
        assert surface.measure == pytest.approx(0.5, rel=1e-13)
        assert surface.centroid == pytest.approx(rotation @ [0.5, 0.25, 0.125], abs=1e-13)
        own = rotation.T @ np.array(surface.second) @ rotation
        assert own == pytest.approx(np.diag([0.5 / 12.0, 0.125 / 12.0, 0.0]), abs=1e-14)
    assert at.free_surface(-1.0) is None
    assert at.solid(-1.0) is None


def test_the_whole_cell_has_its_own_second_moments(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.star(8, 2))
    whole = CellAt(cell, (0.1, 0.4, 1.0)).solid(9.0)
    own = mass_moments_of_solid(cell)
    assert whole is not None
    assert whole.measure == pytest.approx(own.measure, rel=1e-13)
    assert whole.centroid == pytest.approx(own.centroid, abs=1e-13)
    assert np.array(whole.second) == pytest.approx(np.array(own.second), abs=1e-14)


def test_a_table_runs_from_empty_to_gross_in_even_steps(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.star(2, 2))
    at = CellAt(cell, (0.1, 0.4, 1.0))
    table = at.table(10)
    assert table.levels_m == pytest.approx(np.linspace(at.lowest_m, at.highest_m, 11), abs=0.0)
    assert table.volume_m3[[0, -1]] == pytest.approx([0.0, cell.volume_m3], rel=1e-14)
    with pytest.raises(ValueError, match="at least one step"):
        at.table(0)
    with pytest.raises(ValueError, match="finite heights"):
        at.at_levels([math.nan])
