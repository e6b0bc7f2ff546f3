"""Lofted cells and boxes against exact solids of a general boundary-representation kernel.

The kernel's solids are built here from the section's own polynomial: smooth curves through the true
inner mould line, ruled between sections, cut by the faces of webs and ribs. Nothing of the loft but its
records is used for them.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from ledger.loft.layout import Layout, Surface
from ledger.loft.loft import loft
from ledger.loft.section import camber_line, half_thickness

pytest.importorskip("OCP", reason="the kernel library is not there: install cadquery-ocp-novtk")

Floats = NDArray[np.float64]

ROOT_RIB, TIP_RIB, RIB = 0.1, 1.9, 0.006
WEB, SKIN = 0.01, 0.002


def curve(number: str, angle: Floats, upper: bool) -> Floats:
    """Points (n, 2) of a unit section by an angle: share of the chord (1 - cos) / 2."""
    x = 0.5 * (1.0 - np.cos(angle))
    camber, slope = camber_line(number, x)
    turn, side = np.arctan(slope), 1.0 if upper else -1.0
    half = side * half_thickness(int(number[-2:]) / 100.0, x)
    return np.column_stack((x - half * np.sin(turn), camber + half * np.cos(turn)))


def placed(section: Any, unit: Floats) -> Floats:
    turn, (x, z) = np.radians(section.twist_deg), section.chord_m * unit.T
    return np.column_stack(
        (
            section.leading_edge_m + x * np.cos(turn) + z * np.sin(turn),
            np.full(len(x), section.butt_line_m),
            section.water_line_m - x * np.sin(turn) + z * np.cos(turn),
        )
    )


def surface_at(sections: tuple[Any, Any], share: float, angle: Floats, upper: bool) -> tuple[Floats, Floats]:
    """Points of the ruled outer surface and its outward unit normals, at a share of the span."""

    def point(at: Floats) -> tuple[Floats, Floats]:
        ends = [placed(section, curve(section.profile, at, upper)) for section in sections]
        return ends[0] + share * (ends[1] - ends[0]), ends[1] - ends[0]

    step = 1e-5
    here, ruling = point(angle)
    normal = np.cross(point(angle + step)[0] - point(angle - step)[0], ruling)
    # Aft across outboard is up.
    return here, (1.0 if upper else -1.0) * normal / np.linalg.norm(normal, axis=1)[:, None]


def inner_curve(sections: tuple[Any, Any], share: float, angle: Floats, upper: bool, skin: float) -> Floats:
    """The inner mould line in the plane of a butt line: where the surface a skin further in meets it."""
    here, normal = surface_at(sections, share, angle, upper)
    inward = -normal[:, [0, 2]]
    # Square to the surface the skin is `skin` thick; in the plane of the section a little more.
    flat = np.linalg.norm(inward, axis=1)[:, None]
    moved = here.copy()
    moved[:, [0, 2]] += skin * inward / flat**2
    return moved


def spline(points: Floats, angle: Floats) -> Any:
    from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeEdge
    from OCP.collections import HArray1_double, HArray1_gp_Pnt
    from OCP.GeomAPI import GeomAPI_Interpolate
    from OCP.gp import gp_Pnt

    through, at = HArray1_gp_Pnt(1, len(points)), HArray1_double(1, len(points))
    for number, (point, place) in enumerate(zip(points, angle, strict=True), start=1):
        through.SetValue(number, gp_Pnt(*(float(one) for one in point)))
        at.SetValue(number, float(place))
    found = GeomAPI_Interpolate(through, at, False, 1e-12)
    found.Perform()
    return BRepBuilderAPI_MakeEdge(found.Curve()).Edge()


def straight(start: Floats, end: Floats) -> Any:
    from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeEdge
    from OCP.gp import gp_Pnt

    return BRepBuilderAPI_MakeEdge(
        gp_Pnt(*(float(one) for one in start)), gp_Pnt(*(float(one) for one in end))
    ).Edge()


def through_sections(rings: list[tuple[Floats, Floats]], angle: Floats) -> Any:
    """A ruled solid between stations; each an upper and a lower curve from front to rear."""
    from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeWire
    from OCP.BRepOffsetAPI import BRepOffsetAPI_ThruSections

    made = BRepOffsetAPI_ThruSections(True, True, 1e-9)
    made.CheckCompatibility(False)
    for upper, lower in rings:
        wire = BRepBuilderAPI_MakeWire()
        wire.Add(spline(upper, angle))
        wire.Add(straight(upper[-1], lower[-1]))
        wire.Add(spline(lower[::-1], np.pi - angle[::-1]))
        if np.linalg.norm(upper[0] - lower[0]) > 1e-9:
            wire.Add(straight(lower[0], upper[0]))
        made.AddWire(wire.Wire())
    made.Build()
    return made.Shape()


def upright_prism(corners: list[tuple[float, float]], low: float, high: float) -> Any:
    from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeFace, BRepBuilderAPI_MakePolygon
    from OCP.BRepPrimAPI import BRepPrimAPI_MakePrism
    from OCP.gp import gp_Pnt, gp_Vec

    outline = BRepBuilderAPI_MakePolygon()
    for x, y in corners:
        outline.Add(gp_Pnt(float(x), float(y), low))
    outline.Close()
    face = BRepBuilderAPI_MakeFace(outline.Wire()).Face()
    return BRepPrimAPI_MakePrism(face, gp_Vec(0.0, 0.0, high - low)).Shape()


def common(one: Any, other: Any) -> Any:
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common

    return BRepAlgoAPI_Common(one, other).Shape()


def moments(shape: Any) -> tuple[float, Floats]:
    from OCP.BRepGProp import BRepGProp
    from OCP.GProp import GProp_GProps

    found = GProp_GProps()
    BRepGProp.VolumeProperties_s(shape, found, 1e-10)
    middle = found.CentreOfMass()
    return abs(found.Mass()), np.array([middle.X(), middle.Y(), middle.Z()])


def cell_outline(sections: tuple[Any, Any], webs: tuple[float, float]) -> list[tuple[float, float]]:
    """The cell in plan: rear face of the front web, front face of the rear web, faces of both ribs."""
    corners = []
    for share, side in zip(webs, (0.5, -0.5), strict=True):
        ends = [
            (one.leading_edge_m + share * one.chord_m * np.cos(np.radians(one.twist_deg)), one.butt_line_m)
            for one in sections
        ]
        slope = (ends[1][0] - ends[0][0]) / (ends[1][1] - ends[0][1])
        aside = side * WEB * np.hypot(1.0, slope)
        lines = (ROOT_RIB + 0.5 * RIB, TIP_RIB - 0.5 * RIB)
        pair = [(ends[0][0] + slope * (y - ends[0][1]) + aside, y) for y in lines]
        corners.extend(pair if side > 0.0 else pair[::-1])
    return corners


def exact_cell(sections: tuple[Any, Any], webs: tuple[float, float], stations: int) -> tuple[float, Floats]:
    # From well ahead of the front web to well behind the rear one.
    angle = np.linspace(0.45, 2.2, 161)
    rings = [
        (
            inner_curve(sections, share, angle, True, SKIN),
            inner_curve(sections, share, angle, False, SKIN),
        )
        for share in np.linspace(0.0, 1.0, stations)
    ]
    return moments(
        common(through_sections(rings, angle), upright_prism(cell_outline(sections, webs), -1.0, 1.0))
    )


def exact_box(sections: tuple[Any, Any]) -> tuple[float, Floats]:
    angle = np.linspace(0.0, np.pi, 241)
    rings = [
        (
            placed(section, curve(section.profile, angle, True)),
            placed(section, curve(section.profile, angle, False)),
        )
        for section in sections
    ]
    return moments(through_sections(rings, angle))


def layout_of(wings: Any, sections: tuple[Any, Any], webs: tuple[float, float], corners: int) -> Layout:
    plain = wings.plain(
        sections=sections,
        skins=(wings.skin("SKIN", Surface.BOTH, (0.0, 1.0), 1000.0 * SKIN),),
        webs=tuple(wings.web(name, at, thickness_m=WEB) for name, at in zip("AB", webs, strict=True)),
        ribs=tuple(
            wings.rib(name, line, thickness_m=RIB) for name, line in (("1", ROOT_RIB), ("3", TIP_RIB))
        ),
        corners=corners,
    )
    assert isinstance(plain, Layout)
    return plain


def pair_of(wings: Any, twist: float, profile: str) -> tuple[Any, Any]:
    return (
        wings.section(0.0, profile=profile),
        wings.section(
            2.0, profile=profile, chord_m=0.6, leading_edge_m=1.3, water_line_m=0.12, twist_deg=twist
        ),
    )


def lofted_cell(layout: Layout, measured: Any) -> tuple[float, Floats]:
    found, findings = loft(layout)
    assert found is not None, findings
    volume, middle = measured(found.cells[0].mesh.vertices_m, found.cells[0].mesh.faces)
    return volume, middle


@pytest.mark.parametrize("profile", ["2412", "23015"])
def test_cells_are_the_kernel_solids_and_near_them_with_every_corner(
    wings: Any, measured: Any, profile: str
) -> None:
    sections = pair_of(wings, 0.0, profile)
    # How far off one cell is depends on where its webs fall among the corners: the worst of three counts.
    worst = dict.fromkeys((12, 24, 48, 96), 0.0)
    for webs in ((0.2, 0.6), (0.17, 0.54), (0.26, 0.67)):
        volume, middle = exact_cell(sections, webs, 2)
        for corners, before in worst.items():
            found, at = lofted_cell(layout_of(wings, sections, webs, corners), measured)
            worst[corners] = max(before, abs(found / volume - 1.0))
            assert at == pytest.approx(middle, abs=0.5 / corners**2)
    off = list(worst.values())
    assert off[2] < 1e-5
    # Second order: about four times nearer with twice the corners.
    assert all(finer < coarser / 3.0 for coarser, finer in pairwise(off)), off


def test_a_cell_of_a_twisted_wing_is_the_kernel_solid(wings: Any, measured: Any) -> None:
    # Strips are not flat here. The kernel's inner mould line is taken at 33 stations.
    sections = pair_of(wings, -4.0, "2412")
    volume, middle = exact_cell(sections, (0.2, 0.6), 33)
    found, at = lofted_cell(layout_of(wings, sections, (0.2, 0.6), 48), measured)
    assert found == pytest.approx(volume, rel=1e-5)
    assert at == pytest.approx(middle, abs=5e-5)


# A strip that is wound is drawn in eight pieces of two triangles each.
@pytest.mark.parametrize(("twist", "tolerance"), [(0.0, 1e-9), (-4.0, 1e-5)])
def test_a_whole_unskinned_box_is_the_kernel_solid(wings: Any, twist: float, tolerance: float) -> None:
    sections = pair_of(wings, twist, "2412")
    volume, _ = exact_box(sections)
    found, findings = loft(wings.bare(sections))
    assert found is not None, findings
    assert found.account.box_m3 == pytest.approx(volume, rel=tolerance)
