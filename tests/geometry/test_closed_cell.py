"""A mesh is proved to enclose a solid once, or refused with its reason and place."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.errors import MeshRefused
from ledger.geometry.closed_cell import ClosedCell

seeds = st.integers(0, 2**31)


def refusal(vertices: Any, faces: Any) -> MeshRefused:
    with pytest.raises(MeshRefused) as caught:
        ClosedCell.from_mesh(vertices, faces)
    return caught.value


def is_refused(vertices: Any, faces: Any) -> bool:
    try:
        ClosedCell.from_mesh(vertices, faces)
    except MeshRefused as error:
        return error.code == "mesh-overlaps"
    return False


def test_a_box_is_a_cell(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.box(1.0, 0.5, 0.2))
    assert cell.volume_m3 == pytest.approx(0.1, rel=1e-15)
    assert cell.centroid_m == pytest.approx((0.5, 0.25, 0.1), rel=1e-15)
    assert not cell.vertices_m.flags.writeable
    assert not cell.faces.flags.writeable


def test_the_caller_keeps_its_own_arrays(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    cell = ClosedCell.from_mesh(vertices, faces)
    vertices[:] = 0.0
    assert cell.volume_m3 == 1.0
    assert cell.vertices_m.max() == 1.0


def test_a_file_of_loose_triangles_is_closed_by_equal_corners(shapes: Any) -> None:
    vertices, faces = shapes.star(1, 2)
    cell = ClosedCell.from_mesh(*shapes.soup((vertices, faces)))
    assert len(cell.vertices_m) == len(vertices)
    assert cell.volume_m3 == pytest.approx(ClosedCell.from_mesh(vertices, faces).volume_m3, rel=1e-14)


@settings(max_examples=30, deadline=None)
@given(seed=seeds)
def test_corners_apart_by_the_rounding_of_a_file_are_one(shapes: Any, seed: int) -> None:
    vertices, faces = shapes.soup(shapes.box(1.0, 0.5, 0.2))
    noise = np.random.default_rng(seed).uniform(-4e-10, 4e-10, vertices.shape)
    cell = ClosedCell.from_mesh(vertices + noise, faces)
    assert len(cell.vertices_m) == 8
    assert cell.volume_m3 == pytest.approx(0.1, abs=2e-9)


def test_a_gap_wider_than_rounding_stays_a_gap(shapes: Any) -> None:
    vertices, faces = shapes.soup(shapes.box(1.0, 0.5, 0.2))
    vertices[0] += [0.0, 0.0, 1e-6]
    assert refusal(vertices, faces).code == "mesh-open"


def test_an_open_mesh_names_its_first_three_edges(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    error = refusal(vertices, np.delete(faces, [0, 5], axis=0))
    assert error.code == "mesh-open"
    assert "(0, 0, 0) mm to (1000, 0, 0) mm" in error.what
    assert error.what.count(" to ") == 3
    assert "at 4 edges" in error.what
    assert "and 1 more" in error.what
    assert "close the hole" in error.do


def test_a_triangle_that_hangs_on_a_closed_body_is_open(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    fin = np.concatenate((vertices, [[2.0, 2.0, 2.0]]))
    assert refusal(fin, np.concatenate((faces, [[0, 1, 8]]))).code == "mesh-open"


def test_one_flipped_face_is_named(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 0.5, 0.2)
    faces[4] = faces[4][::-1]
    error = refusal(vertices, faces)
    assert error.code == "mesh-flipped"
    assert "across 3 edges" in error.what


def test_a_mesh_inside_out_as_a_whole_is_refused(shapes: Any) -> None:
    vertices, faces = shapes.star(2, 2)
    error = refusal(vertices, faces[:, ::-1])
    assert (error.code, "inward" in error.what) == ("mesh-flipped", True)


def test_an_inside_out_shell_beside_a_good_one_is_refused(shapes: Any) -> None:
    box = shapes.box(1.0, 1.0, 1.0)
    small = shapes.box(0.5, 0.5, 0.5)
    both = shapes.joined(box, (small[0] + [3.0, 0.0, 0.0], small[1][:, ::-1]))
    assert refusal(*both).code == "mesh-flipped"


@settings(max_examples=30, deadline=None)
@given(turn=seeds, shift=st.tuples(*[st.floats(-0.6, 0.6)] * 3))
def test_two_shells_that_overlap_are_refused(
    shapes: Any, turn: int, shift: tuple[float, float, float]
) -> None:
    one, two = shapes.star(turn, 1, least=0.7), shapes.star(turn + 1, 1, least=0.7)
    assert refusal(*shapes.joined(one, (two[0] + shift, two[1]))).code == "mesh-overlaps"


def test_overlap_is_what_a_boolean_kernel_says_it_is(shapes: Any) -> None:
    import manifold3d

    def solid(mesh: Any) -> Any:
        tri = mesh[1].astype(np.uint64)
        return manifold3d.Manifold(manifold3d.Mesh64(vert_properties=mesh[0], tri_verts=tri, tolerance=1e-12))

    rng = np.random.default_rng(11)
    verdicts = []
    for _ in range(40):
        one, two = shapes.star(int(rng.integers(99)), 1), shapes.star(int(rng.integers(99)), 1)
        two = (two[0] + rng.uniform(-1.2, 1.2, 3), two[1])
        apart = solid(one).volume() + solid(two).volume() - (solid(one) + solid(two)).volume()
        verdicts.append((apart > 1e-9, is_refused(*shapes.joined(one, two))))
    assert all(expected == found for expected, found in verdicts)
    assert {expected for expected, _ in verdicts} == {True, False}


def test_a_single_shell_that_runs_through_itself_is_refused(shapes: Any) -> None:
    tube_vertices, tube_faces = shapes.ball(4)
    # A hose bent so that its ends pass through one another.
    x, y, z = tube_vertices.T
    angle = 3.6 * x
    bent = np.column_stack(((1.0 + 0.2 * y) * np.cos(angle), (1.0 + 0.2 * y) * np.sin(angle), 0.2 * z))
    error = refusal(bent, tube_faces[:, ::-1] if _signed(bent, tube_faces) < 0 else tube_faces)
    assert error.code == "mesh-overlaps"
    assert "runs through itself near" in error.what


def _signed(vertices: Any, faces: Any) -> float:
    a, b, c = (vertices[faces[:, i]] for i in range(3))
    return float(np.einsum("ij,ij->i", a, np.cross(b, c)).sum()) / 6.0


def test_bars_that_cross_flush_are_refused_though_only_their_edges_meet(shapes: Any) -> None:
    one, two = shapes.box(3.0, 1.0, 1.0), shapes.box(1.0, 3.0, 1.0)
    assert refusal(*shapes.joined(one, (two[0] + [1.0, -1.0, 0.0], two[1]))).code == "mesh-overlaps"


def test_the_same_body_twice_is_refused(shapes: Any) -> None:
    box = shapes.box(1.0, 1.0, 1.0)
    assert refusal(*shapes.joined(box, box)).code == "mesh-overlaps"
    star = shapes.star(6, 2)
    assert refusal(*shapes.joined(star, star)).code == "mesh-overlaps"


def test_a_body_inside_another_is_counted_twice_unless_it_is_a_cavity(shapes: Any) -> None:
    outer, inner = shapes.box(1.0, 1.0, 1.0), shapes.box(0.5, 0.5, 0.5)
    inner = (inner[0] + 0.25, inner[1])
    assert refusal(*shapes.joined(outer, inner)).code == "mesh-overlaps"
    hollow = ClosedCell.from_mesh(*shapes.joined(outer, (inner[0], inner[1][:, ::-1])))
    assert hollow.volume_m3 == pytest.approx(1.0 - 0.125, rel=1e-14)
    island = shapes.box(0.25, 0.25, 0.25)
    island = (island[0] + 0.375, island[1])
    third = ClosedCell.from_mesh(*shapes.joined(outer, (inner[0], inner[1][:, ::-1]), island))
    assert third.volume_m3 == pytest.approx(1.0 - 0.125 + 0.25**3, rel=1e-14)


def test_a_cavity_that_breaks_through_the_wall_is_refused(shapes: Any) -> None:
    outer, inner = shapes.box(1.0, 1.0, 1.0), shapes.box(0.5, 0.5, 0.5)
    out = shapes.joined(outer, (inner[0] + [0.75, 0.3, 0.3], inner[1][:, ::-1]))
    assert refusal(*out).code == "mesh-overlaps"


def test_bodies_that_only_touch_are_one_cell(shapes: Any) -> None:
    box = shapes.box(1.0, 1.0, 1.0)
    for shift in ([1.0, 0.0, 0.0], [1.0, 1.0, 0.0], [1.0, 1.0, 1.0], [1.0, 0.5, 0.0]):
        both = shapes.joined(box, (box[0] + shift, box[1]))
        assert ClosedCell.from_mesh(*both).volume_m3 == pytest.approx(2.0, rel=1e-14)
    edge = shapes.soup(shapes.joined(box, (box[0] + [1.0, 1.0, 0.0], box[1])))
    assert ClosedCell.from_mesh(*edge).volume_m3 == pytest.approx(2.0, rel=1e-14)


def test_flat_empty_and_broken_numbers_are_refused(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    assert refusal(vertices * [1.0, 1.0, 0.0], faces).code == "mesh-flat"
    assert refusal(vertices * [1.0, 1.0, 1e-14], faces).code == "mesh-flat"
    assert refusal(np.zeros((0, 3)), np.zeros((0, 3), dtype=int)).code == "mesh-empty"
    assert refusal(np.zeros((8, 3)), faces[:0]).code == "mesh-empty"
    assert refusal(vertices, np.zeros_like(faces)).code == "mesh-empty"
    vertices[3, 1] = np.inf
    error = refusal(vertices, faces)
    assert (error.code, "corner 4" in error.what) == ("mesh-not-finite", True)
    error = refusal(*(vertices := shapes.box(1.0, 1.0, 1.0)[0], faces + 1))
    assert (error.code, "there are 8" in error.what) == ("mesh-index", True)
    assert refusal(vertices, faces - 1).code == "mesh-index"


def test_a_thin_cell_is_not_flat(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.box(2.0, 1.0, 1e-6))
    assert cell.volume_m3 == pytest.approx(2e-6, rel=1e-9)


def test_triangles_that_are_lines_do_not_open_a_mesh(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    assert ClosedCell.from_mesh(vertices, np.concatenate((faces, [[0, 1, 1], [2, 2, 2]]))).volume_m3 == 1.0


def test_a_proved_cell_comes_back_from_its_arrays_with_the_same_digest(shapes: Any) -> None:
    cell = ClosedCell.from_mesh(*shapes.star(9, 2))
    again = ClosedCell.from_proved(cell.vertices_m, cell.faces.astype(np.int32))
    assert again.digest == cell.digest
    assert (again.volume_m3, again.centroid_m) == (cell.volume_m3, cell.centroid_m)
    moved = ClosedCell.from_proved(cell.vertices_m + 1e-15, cell.faces)
    assert moved.digest != cell.digest
    assert len(cell.digest) == 64


def test_arrays_that_cannot_have_been_proved_are_a_mistake_of_the_program(shapes: Any) -> None:
    vertices, faces = shapes.box(1.0, 1.0, 1.0)
    for bad in (faces + 1, faces[:0], faces[:, ::-1], faces[:, :2]):
        with pytest.raises(ValueError, match=r"cannot have been proved|rows of three"):
            ClosedCell.from_proved(vertices, bad)


@pytest.mark.parametrize("slivers", [3, 200])
def test_a_prism_of_slivers_is_proved_in_reasonable_time(shapes: Any, slivers: int) -> None:
    ring = shapes.ring(slivers, 1.0)
    cell = ClosedCell.from_mesh(*shapes.prism(ring, ring, 50.0))
    assert cell.volume_m3 == pytest.approx(25.0 * slivers * np.sin(2.0 * np.pi / slivers), rel=1e-12)
