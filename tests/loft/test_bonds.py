"""Bonds: lengths along the edges of panels, paste in them, and what fillets take from a cell."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from ledger.loft.bonds import fillet_area
from ledger.loft.layout import NOSE, TAIL, Edge, FilletShape, Layout, Walls
from ledger.loft.loft import loft
from ledger.loft.lofted import BondRun, Lofted, Panel

Floats = NDArray[np.float64]

RADIUS = 0.006
ALL = (Edge.UPPER, Edge.LOWER, Edge.WALL)


def lofted(layout: Layout) -> Lofted:
    found, findings = loft(layout)
    assert found is not None, findings
    return found


def length_of(lines: Any) -> float:
    return float(sum(np.linalg.norm(np.diff(line, axis=0), axis=1).sum() for line in lines))


def perimeter(panel: Panel) -> float:
    ring = panel.outline_m
    return float(np.linalg.norm(np.roll(ring, -1, axis=0) - ring, axis=1).sum())


def bond_of(found: Lofted, part: str) -> BondRun:
    return next(bond for bond in found.bonds if bond.part == part)


def test_fillet_areas() -> None:
    # checks: concave 0.2146 r^2, flat at 45 degrees 0.5 r^2
    assert fillet_area(RADIUS, FilletShape.CONCAVE) == pytest.approx(0.2146 * RADIUS**2, rel=2e-5)
    assert fillet_area(RADIUS, FilletShape.FLAT) == 0.5 * RADIUS**2
    # checks: r 6 mm at 1.15 g/cm3 8.88 g/m concave, 20.7 g/m flat
    assert 1150.0 * fillet_area(RADIUS, FilletShape.CONCAVE) == pytest.approx(0.00888, abs=5e-6)
    assert 1150.0 * fillet_area(RADIUS, FilletShape.FLAT) == pytest.approx(0.0207, abs=5e-6)


def test_a_bond_all_round_the_ribs_is_as_long_as_their_outlines(wings: Any) -> None:
    found = lofted(wings.plain(gap_m=0.0005, joints=(wings.joint("JNT", Walls.RIBS, ALL, RADIUS),)))
    ribs = [panel for panel in found.panels if panel.part.startswith("RIB")]
    bond = bond_of(found, "JNT")
    assert length_of(bond.lines_m) == pytest.approx(sum(perimeter(rib) for rib in ribs), rel=1e-12)
    # The gap under the edge, and a fillet on both faces.
    assert bond.section_m2 == pytest.approx(0.0005 * 0.006 + 2.0 * (1.0 - math.pi / 4.0) * RADIUS**2)


def test_edges_of_a_panel_are_its_outline_each_stretch_once(wings: Any) -> None:
    found = lofted(wings.plain(gap_m=0.001))
    for panel in found.panels:
        assert length_of(edge.points_m for edge in panel.edges) == pytest.approx(perimeter(panel), rel=1e-12)
        meets = [edge.meets for edge in panel.edges]
        if panel.part.startswith("RIB"):
            assert sorted(meets) == [Edge.LOWER, Edge.UPPER, Edge.WALL, Edge.WALL]
        else:
            assert sorted(meets) == [Edge.FREE, Edge.FREE, Edge.LOWER, Edge.UPPER]
        # Each lies in the panel's own mid-plane.
        normal = np.cross(panel.placement.across, panel.placement.up_axis)
        for edge in panel.edges:
            assert (edge.points_m - panel.placement.origin_m) @ normal == pytest.approx(0.0, abs=1e-12)


def test_upper_and_lower_edges_are_where_they_say(wings: Any) -> None:
    found = lofted(wings.plain())
    for panel in found.panels:
        height = {edge.meets: edge.points_m[:, 2].mean() for edge in panel.edges}
        assert height[Edge.LOWER] < 0.0 < height[Edge.UPPER]


def test_a_rib_to_the_nose_and_tail_meets_skins_all_round(wings: Any) -> None:
    rib = next(panel for panel in lofted(wings.plain(webs=(), rows=(wings.row("R", NOSE, TAIL),))).panels)
    assert {edge.meets for edge in rib.edges} == {Edge.UPPER, Edge.LOWER}


def test_a_web_cut_by_a_rib_that_runs_through_meets_it(wings: Any) -> None:
    layout = wings.plain(
        webs=(wings.web("A", 0.2), wings.web("B", 0.4), wings.web("C", 0.6)),
        rows=(wings.row("R", "A", "B"), wings.row("S", "B", "C")),
        ribs=(
            wings.rib("1", 0.1, rows=("R", "S")),
            wings.rib("2", 1.0, rows=("R", "S"), through=("B",)),
            wings.rib("3", 1.9, rows=("R", "S")),
        ),
    )
    panels = {panel.part: panel for panel in lofted(layout).panels}
    assert {"RIB.RS2", "RIB.R1", "RIB.S1", "WEB.B.1", "WEB.B.2", "WEB.A"} <= set(panels)
    for part in ("WEB.B.1", "WEB.B.2"):
        assert sorted(edge.meets for edge in panels[part].edges) == [
            Edge.FREE,
            Edge.LOWER,
            Edge.UPPER,
            Edge.WALL,
        ]


@pytest.mark.parametrize("shape", FilletShape)
@pytest.mark.parametrize("gap", [0.0, 0.0005])
def test_fillets_of_a_cell_are_its_edges_times_one_fillet(wings: Any, gap: float, shape: FilletShape) -> None:
    joints = tuple(
        wings.joint(part, walls, ALL, RADIUS, fillet_shape=shape)
        for part, walls in (("JNT.RIB", Walls.RIBS), ("JNT.WEB", Walls.WEBS))
    )
    found = lofted(wings.plain(gap_m=gap, joints=joints))
    panels = {panel.part: panel for panel in found.panels}
    ribs = perimeter(panels["RIB.R1"]) + perimeter(panels["RIB.R2"])
    # Along both skins at each web, from rib face to rib face; a straight wing, so as long as the bay.
    webs = 2.0 * 2.0 * (0.9 - 0.006)
    assert found.cells[0].displaced_m3 == pytest.approx((ribs + webs) * fillet_area(RADIUS, shape), rel=1e-9)


def test_a_cell_without_joints_loses_nothing_to_fillets(wings: Any) -> None:
    assert lofted(wings.plain()).cells[0].displaced_m3 == 0.0


def test_only_the_named_walls_and_edges_are_bonded(wings: Any) -> None:
    joints = (
        wings.joint("JNT.ONE", ("R2",), (Edge.WALL,)),
        wings.joint("JNT.WEB", ("A",), (Edge.LOWER,)),
    )
    found = lofted(wings.plain(joints=joints))
    panels = {panel.part: panel for panel in found.panels}
    for bond, part, meets in (("JNT.ONE", "RIB.R2", Edge.WALL), ("JNT.WEB", "WEB.A", Edge.LOWER)):
        edges = [edge.points_m for edge in panels[part].edges if edge.meets is meets]
        assert length_of(bond_of(found, bond).lines_m) == pytest.approx(length_of(edges), rel=1e-12)
