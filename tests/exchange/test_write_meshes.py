"""Meshes and runs written as files, read back as what they were."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.exchange.figure_texts import exact, figure, millimetres, plain, with_unit
from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.geometry_files import GeometryFiles
from ledger.exchange.obj_mesh import read_obj
from ledger.exchange.plan_files import StoredFiles
from ledger.exchange.write_meshes import mesh_file, run_file
from ledger.geometry.closed_cell import ClosedCell
from ledger.loft.lofted import Mesh
from ledger.units import Dimension, read_quantity

FACES = np.array(
    [
        *((0, 3, 2), (0, 2, 1), (4, 5, 6), (4, 6, 7), (0, 1, 5), (0, 5, 4)),
        *((1, 2, 6), (1, 6, 5), (2, 3, 7), (2, 7, 6), (3, 0, 4), (3, 4, 7)),
    ]
)


def canted(lean: float = 0.1234567) -> Mesh:
    """A box of 1/3 x 0.7 x 0.1 m turned and sheared so that no corner is a round number."""
    box = [(x, y, z) for z in (0.0, 0.1) for x, y in ((0, 0), (1 / 3, 0), (1 / 3, 0.7), (0, 0.7))]
    x, y, z = np.array(box).T
    turned = np.column_stack((x * math.cos(lean) - y * math.sin(lean), x * math.sin(lean) + y, z + lean * y))
    return Mesh(vertices_m=turned + np.array((2.5, 0.6, -0.1)), faces=FACES)


def proved(content: bytes) -> ClosedCell:
    """The cell as a plan reads it."""
    return GeometryFiles(StoredFiles({"a.obj": content}), MemoryCache()).cell("a.obj", "mm")


def test_a_canted_cell_is_the_same_to_the_last_place_and_is_proved_closed() -> None:
    mesh = canted()
    cell = proved(mesh_file(mesh))
    assert np.abs(cell.vertices_m - mesh.vertices_m).max() <= 4.5e-16
    assert (cell.faces == mesh.faces).all()
    # Turned and sheared by a matrix of determinant cos + sin * sin.
    lean = 0.1234567
    stretched = math.cos(lean) + math.sin(lean) ** 2
    assert cell.volume_m3 == pytest.approx(1 / 3 * 0.7 * 0.1 * stretched, rel=1e-13)


def test_a_mirrored_cell_looks_outward_on_the_other_side() -> None:
    right, left = proved(mesh_file(canted())), proved(mesh_file(canted(), mirrored=True))
    assert left.volume_m3 == pytest.approx(right.volume_m3, rel=1e-14)
    x, y, z = right.centroid_m
    assert left.centroid_m == pytest.approx((x, -y, z), rel=1e-12)


def test_a_surface_turned_over_looks_to_the_other_side() -> None:
    upright, over = read_obj(mesh_file(canted())), read_obj(mesh_file(canted(), turned_over=True))
    assert (over.objects[0].faces == upright.objects[0].faces[:, ::-1]).all()


def test_a_run_of_several_lines_is_as_long_as_they_are_together() -> None:
    lines = (
        np.array([(0.0, 0.0, 0.0), (0.3, 0.4, 0.0), (0.3, 0.4, 1.0)]),
        np.array([(5.0, 1.0, 0.0), (5.0, 1.0, 0.25)]),
        np.array([(9.0, 9.0, 9.0)]),
    )
    figures = GeometryFiles(StoredFiles({"a.obj": run_file(lines)}), MemoryCache()).figures(
        "run", "a.obj", "mm"
    )
    assert figures.measure == pytest.approx(0.5 + 1.0 + 0.25, rel=1e-14)
    middle = (0.5 * np.array((0.15, 0.2, 0.0)) + (0.3, 0.4, 0.5) + 0.25 * np.array((5.0, 1.0, 0.125))) / 1.75
    assert figures.centroid == pytest.approx(tuple(middle), rel=1e-13)


ANY = st.floats(allow_nan=False, allow_infinity=False, min_value=-1e4, max_value=1e4)


@given(ANY)
def test_a_coordinate_reads_back_within_its_last_place_and_has_no_exponent(value_m: float) -> None:
    text = millimetres(value_m)
    assert "e" not in text
    assert abs(float(text) * 0.001 - value_m) <= math.ulp(value_m)


@pytest.mark.parametrize(
    ("value_m", "text"),
    [
        (2.86, "2860"),
        (0.0005, "0.5"),
        (-0.0, "0"),
        (0.1 + 0.2, "300.00000000000006"),
        (1 / 3, "333.3333333333333"),
    ],
)
def test_a_coordinate_is_as_short_as_it_can_be(value_m: float, text: str) -> None:
    assert millimetres(value_m) == text


@given(ANY)
def test_an_exact_number_is_that_number(number: float) -> None:
    assert float(exact(number)) == number
    assert "e" not in exact(number)


@given(st.decimals(min_value="0.001", max_value="99999", places=3))
def test_a_figure_that_was_typed_reads_back_to_its_last_bit(typed: object) -> None:
    for unit, dimension in (
        ("g", Dimension.MASS),
        ("lb/US gal", Dimension.DENSITY),
        ("L/h", Dimension.FLOW),
        ("%", Dimension.FRACTION),
        ("mm", Dimension.LENGTH),
    ):
        value = read_quantity(f"{typed} {unit}", dimension)
        text = with_unit(value, unit, dimension)
        assert read_quantity(text, dimension) == value
        assert len(text) <= len(f"{typed} {unit}")


@given(st.floats(min_value=1e-9, max_value=1e9))
def test_any_figure_reads_back_to_twelve_places(value: float) -> None:
    text = figure(value, "g", Dimension.MASS)
    assert read_quantity(text, Dimension.MASS, unit="g") == pytest.approx(value, rel=5e-12)


@pytest.mark.parametrize(("number", "text"), [(0.0, "0"), (-0.0, "0"), (1e-7, "0.0000001"), (2e6, "2000000")])
def test_a_plain_number_has_neither_exponent_nor_noughts_at_its_end(number: float, text: str) -> None:
    assert plain(number) == text
