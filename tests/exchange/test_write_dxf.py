"""Panels written as drawings, read back by the reader of plans and by a drawing library."""

from __future__ import annotations

import io
import math
import os
import subprocess
import sys

import ezdxf
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.exchange.figures import Figures
from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.geometry_files import GeometryFiles
from ledger.exchange.plan_files import StoredFiles
from ledger.exchange.write_dxf import panel_drawing
from ledger.loft.lofted import Floats, RoundHole

TRAPEZIUM = np.array([(0.0123456789, -0.1), (0.7, -0.0987654321), (0.7, 0.08), (0.0123456789, 0.1 / 3)])
HOLE = RoundHole(x_m=0.31, y_m=-0.02, diameter_m=0.016)


def read(content: bytes) -> Figures:
    """Figures of the drawing as a plan takes them, its unit from the drawing alone."""
    return GeometryFiles(StoredFiles({"a.dxf": content}), MemoryCache()).figures("panel", "a.dxf#CUT", None)


def shoelace(corners: Floats) -> float:
    x, y = corners.T
    return float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1))) / 2.0


def test_the_area_read_back_is_the_outline_less_its_holes() -> None:
    figures = read(panel_drawing(TRAPEZIUM, (HOLE,)))
    assert figures.measure == pytest.approx(shoelace(TRAPEZIUM) - math.pi * 0.008**2, rel=1e-13)
    assert figures.unit == "mm"
    assert figures.remarks == ()


def test_a_drawing_library_finds_one_closed_outline_and_circles_on_layer_cut() -> None:
    drawing = ezdxf.read(io.StringIO(panel_drawing(TRAPEZIUM, (HOLE, HOLE)).decode()))
    assert drawing.dxfversion == "AC1024"
    assert drawing.units == ezdxf.units.MM
    assert not drawing.audit().has_errors
    entities = list(drawing.modelspace())
    assert [entity.dxftype() for entity in entities] == ["LWPOLYLINE", "CIRCLE", "CIRCLE"]
    assert {entity.dxf.layer for entity in entities} == {"CUT"}
    assert entities[0].closed
    corners = np.array([corner[:2] for corner in entities[0].get_points()])
    assert corners == pytest.approx(TRAPEZIUM * 1000.0, rel=1e-14)
    assert entities[1].dxf.radius == 8.0


def test_the_same_panel_gives_the_same_bytes_and_nothing_is_left_set() -> None:
    before = ezdxf.options.write_fixed_meta_data_for_testing
    first = panel_drawing(TRAPEZIUM, (HOLE,))
    assert panel_drawing(TRAPEZIUM, (HOLE,)) == first
    assert ezdxf.options.write_fixed_meta_data_for_testing == before
    assert ezdxf.__version__.encode() not in first


def test_another_process_writes_the_same_bytes() -> None:
    said = set()
    # The order of a set of texts follows the seed; one of two seeds alone may hit upon the same order.
    for seed in range(4):
        script = (
            "import hashlib, numpy as np\nfrom ledger.exchange.write_dxf import panel_drawing\n"
            "print(hashlib.sha256(panel_drawing(np.eye(3)[:, :2], ())).hexdigest())"
        )
        environment = {**os.environ, "PYTHONHASHSEED": str(seed)}
        done = subprocess.run(
            [sys.executable, "-c", script], env=environment, capture_output=True, text=True, check=True
        )
        said.add(done.stdout)
    assert len(said) == 1


SHARE = st.floats(min_value=0.01, max_value=3.0)


@given(wide=SHARE, high=SHARE, x=st.floats(-5.0, 5.0), y=st.floats(-5.0, 5.0))
def test_a_rectangle_anywhere_keeps_its_area(wide: float, high: float, x: float, y: float) -> None:
    corners = np.array([(x, y), (x + wide, y), (x + wide, y + high), (x, y + high)])
    assert read(panel_drawing(corners, ())).measure == pytest.approx(shoelace(corners), rel=1e-11)
