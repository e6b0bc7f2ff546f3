"""Where liquid and air gather in a cell."""

from __future__ import annotations

import time
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.lowest_places import highest_places, lowest_places, places_by_depth

Floats = NDArray[np.float64]
UP = (0.0, 0.0, 1.0)


def profile(floor: list[tuple[float, float]], lid: float = 2.0) -> tuple[Floats, Any]:
    """A bar one metre wide whose side is a polygon: a floor line from left to right under a flat lid."""
    import shapely
    import trimesh

    side = shapely.Polygon([*floor, (floor[-1][0], lid), (floor[0][0], lid)])
    mesh = trimesh.creation.extrude_polygon(side, 1.0, engine="manifold")
    # Extruded along z; turned so that the side's y points up.
    return np.array(mesh.vertices)[:, [0, 2, 1]] * [1, -1, 1], np.array(mesh.faces)


def cell_of(floor: list[tuple[float, float]]) -> ClosedCell:
    return ClosedCell.from_mesh(*profile(floor))


W_FLOOR = [(0.0, 1.0), (1.0, 0.0), (2.0, 0.5), (3.0, 0.2), (4.0, 1.0)]


def test_a_w_floor_has_two_lowest_places_lowest_first() -> None:
    places = places_by_depth(cell_of(W_FLOOR), UP)
    assert [place.point_m[0] for place in places] == [1.0, 3.0]
    assert [place.height_m for place in places] == pytest.approx([0.0, 0.2], abs=1e-12)
    assert places[0].depth_m == float("inf")
    assert places[1].depth_m == pytest.approx(0.3, abs=1e-12)
    assert places[1].join_m == pytest.approx(0.5, abs=1e-12)


def test_a_pocket_shallower_than_asked_belongs_to_its_neighbour() -> None:
    cell = cell_of(W_FLOOR)
    assert len(lowest_places(cell, UP, 0.29)) == 2
    assert len(lowest_places(cell, UP, 0.31)) == 1
    with pytest.raises(ValueError, match="ignore_depth_m"):
        lowest_places(cell, UP, -1.0)


def test_tilting_the_floor_drains_one_pocket_into_the_other() -> None:
    cell = cell_of(W_FLOOR)
    # The far pocket's near wall falls 0.3 in 1 m: past that slope it holds nothing.
    assert len(lowest_places(cell, (0.29, 0.0, 1.0))) == 2
    assert len(lowest_places(cell, (0.31, 0.0, 1.0))) == 1


def test_a_flat_lid_is_one_highest_place_and_turned_over_the_floor_gives_two() -> None:
    cell = cell_of(W_FLOOR)
    assert len(highest_places(cell, UP)) == 1
    assert highest_places(cell, UP)[0][2] == pytest.approx(2.0)
    assert {point[0] for point in highest_places(cell, (0, 0, -1))} == {1.0, 3.0}


@settings(max_examples=30, deadline=None)
@given(turn=st.integers(0, 2**31), fine=st.integers(0, 3))
def test_a_level_floor_turned_anywhere_counts_once(shapes: Any, turn: int, fine: int) -> None:
    import trimesh

    mesh = trimesh.creation.box((1.0, 0.5, 0.2))
    for _ in range(fine):
        mesh = mesh.subdivide()
    rotation = shapes.rotation(turn)
    order = np.random.default_rng(turn).permutation(len(mesh.vertices))
    back = np.argsort(order)
    cell = ClosedCell.from_proved(np.array(mesh.vertices)[order] @ rotation.T, back[np.array(mesh.faces)])
    for axis in range(3):
        assert len(lowest_places(cell, rotation[:, axis])) == 1
        assert len(highest_places(cell, rotation[:, axis], 0.0)) == 1


def test_two_level_trays_at_one_height_count_twice() -> None:
    trays = [(0.0, 0.0), (1.0, 0.0), (1.0, 0.5), (2.0, 0.5), (2.0, 0.0), (3.0, 0.0)]
    assert len(lowest_places(cell_of(trays), UP)) == 2


def test_the_tip_of_what_hangs_into_the_cell_is_no_lowest_place(shapes: Any) -> None:
    # A square cell with a spike down from the lid, and one up from the floor.
    box = shapes.box(2.0, 2.0, 2.0)
    spike = np.array([[0.8, 0.8, 1.8], [1.2, 0.8, 1.8], [1.2, 1.2, 1.8], [0.8, 1.2, 1.8], [1.0, 1.0, 0.7]])
    faces = np.array([[0, 1, 2], [0, 2, 3], [1, 0, 4], [2, 1, 4], [3, 2, 4], [0, 3, 4]])
    hanging = ClosedCell.from_mesh(*shapes.joined(box, (spike, faces[:, ::-1])))
    assert hanging.volume_m3 < 8.0
    places = lowest_places(hanging, UP)
    assert [point[2] for point in places] == [0.0]
    # What stands on top of the hanging body is caught there by nothing: its flat top is no pocket.
    assert [point[2] for point in highest_places(hanging, UP)] == [2.0]
    assert len(lowest_places(hanging, (0, 0, -1))) == 1


def test_a_cup_that_hangs_in_the_cell_holds_a_pocket(shapes: Any) -> None:
    import trimesh

    outer = trimesh.creation.box((4.0, 4.0, 4.0))
    cup = trimesh.boolean.difference(
        [
            trimesh.creation.box((1.0, 1.0, 1.0)),
            trimesh.creation.box(
                (0.8, 0.8, 1.0), transform=trimesh.transformations.translation_matrix((0, 0, 0.2))
            ),
        ],
        engine="manifold",
    )
    both = shapes.joined(
        (np.array(outer.vertices), np.array(outer.faces)),
        (np.array(cup.vertices), np.array(cup.faces)[:, ::-1]),
    )
    places = places_by_depth(ClosedCell.from_mesh(*both), UP)
    assert [place.point_m[2] for place in places] == pytest.approx([-2.0, -0.3])


def test_eighty_thousand_triangles_take_less_than_a_second(shapes: Any) -> None:
    vertices, faces = shapes.ball(6)
    rough = vertices * np.random.default_rng(0).uniform(0.97, 1.03, (len(vertices), 1))
    for points in (vertices, rough):
        cell = ClosedCell.from_proved(points, faces)
        start = time.process_time()
        places = lowest_places(cell, (0.1, 0.2, 1.0))
        assert time.process_time() - start < 1.0
        assert places
    assert len(places) > 100
