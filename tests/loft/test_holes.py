"""Holes and ports where their rules put them, measured against the inner faces of the skins."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from shapely import LineString, Point, Polygon

from ledger.loft.layout import Along, Axis, Height, Layout, Surface, Walls
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted, LoftedOpening
from ledger.loft.shell import build_shell
from ledger.model.tanks import Circle, Outside, Pipe

Floats = NDArray[np.float64]


def lofted(layout: Layout) -> Lofted:
    found, findings = loft(layout)
    assert found is not None, findings
    return found


def inner_face(layout: Layout, line: float, surface: Surface) -> Floats:
    """The inner face of a skin at a butt line, (n, 2) of x and z, front to rear."""
    shell, _ = build_shell(layout)
    assert shell is not None
    piece = int(np.clip(np.searchsorted(shell.butt_lines_m, line) - 1, 0, len(shell.butt_lines_m) - 2))
    low, high = shell.butt_lines_m[piece : piece + 2]
    block = next(one for one in shell.blocks if one[0] <= piece < one[1])
    rings, owner = shell.inner_rings(block)
    share = (line - low) / (high - low)
    ring = (1.0 - share) * rings[piece - block[0]] + share * rings[piece + 1 - block[0]]
    nose = len(shell.shares) - 1
    corners = ring[owner <= nose][::-1] if surface is Surface.UPPER else ring[owner >= nose]
    return np.asarray(corners[:, [0, 2]])


def height_at(layout: Layout, line: float, station: float, surface: Surface) -> float:
    x, z = inner_face(layout, line, surface).T
    return float(np.interp(station, x, z))


def circle(opening: LoftedOpening) -> Circle:
    assert isinstance(opening.rim, Circle)
    return opening.rim


SHAPES: dict[str, dict[str, Any]] = {
    "straight": {},
    "tapered": {"chord_m": 0.6, "leading_edge_m": 1.2, "water_line_m": 0.1},
    "twisted": {"chord_m": 0.7, "twist_deg": -4.0, "leading_edge_m": 1.1},
}


def shaped(wings: Any, shape: str, **changed: Any) -> Layout:
    sections = (wings.section(0.0), wings.section(2.0, **SHAPES[shape]))
    layout = wings.plain(sections=sections, **changed)
    assert isinstance(layout, Layout)
    return layout


CLEAR = 0.003


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("along", [0.2, 0.5, 0.8])
@pytest.mark.parametrize("surface", [Surface.LOWER, Surface.UPPER])
def test_a_hole_in_a_rib_is_as_clear_of_the_skin_as_its_rule_says(
    wings: Any, shape: str, along: float, surface: Surface
) -> None:
    height = Height(above_lower_m=CLEAR) if surface is Surface.LOWER else Height(below_upper_m=CLEAR)
    layout = shaped(wings, shape, holes=(wings.hole(along=Along(share=along), height=height),))
    (opening,) = (one for one in lofted(layout).openings if one.outside is None)
    rim = circle(opening)
    x, y, z = rim.centre_m
    assert y == pytest.approx(1.0, abs=1e-12)
    # The panel is square to its plane, so the nearer of both of its faces counts.
    faces = [LineString(inner_face(layout, line, surface)) for line in (0.997, 1.003)]
    away = min(face.distance(Point(x, z)) for face in faces)
    # Quads that are not flat are two triangles in the solid, and one surface here.
    tolerance = 1e-5 if shape == "twisted" else 1e-10
    assert away - 0.5 * rim.diameter_m == pytest.approx(CLEAR, abs=tolerance)


@pytest.mark.parametrize("shape", ["straight", "tapered"])
@pytest.mark.parametrize("surface", [Surface.LOWER, Surface.UPPER])
def test_a_hole_in_a_web_is_as_clear_of_the_skin_as_its_rule_says(
    wings: Any, shape: str, surface: Surface
) -> None:
    height = Height(above_lower_m=CLEAR) if surface is Surface.LOWER else Height(below_upper_m=CLEAR)
    rows = (wings.row("R", "A", "B"), wings.row("S", "B", "C"))
    ribs = tuple(wings.rib(str(n), line, rows=("R", "S")) for n, line in ((1, 0.1), (2, 1.0), (3, 1.9)))
    # A web along the butt line's normal, so that its faces stand at one station each.
    webs = (wings.web("A", 0.2), wings.web("B", points_m=((1.5, 0.0), (1.5, 2.0))), wings.web("C", 0.75))
    hole = wings.hole(walls=Walls.WEBS, along=Along(from_start_m=0.04), height=height)
    layout = shaped(
        wings, shape, webs=webs, rows=rows, ribs=ribs, tanks=(wings.tank(("R", "S")),), holes=(hole,)
    )
    joining = [one for one in lofted(layout).openings if one.outside is None]
    assert [one.cells for one in joining] == [(1, 2), (3, 4)]
    for opening, start in zip(joining, (0.103, 1.003), strict=True):
        rim = circle(opening)
        x, y, z = rim.centre_m
        assert (x, y) == pytest.approx((1.5, start + 0.04), abs=1e-12)
        lines = np.linspace(y - 0.02, y + 0.02, 41)
        faces = [
            LineString([(line, height_at(layout, line, face, surface)) for line in lines])
            for face in (1.495, 1.505)
        ]
        away = min(face.distance(Point(y, z)) for face in faces)
        # The skin bends where a corner of the section passes the web; between two of 41 lines that is lost.
        assert away - 0.5 * rim.diameter_m == pytest.approx(CLEAR, abs=1e-10 if shape == "straight" else 5e-7)


def test_a_share_of_the_height_is_between_the_skins(wings: Any) -> None:
    layout = shaped(wings, "straight", holes=(wings.hole(height=Height(share=0.3)),))
    (opening,) = (one for one in lofted(layout).openings if one.outside is None)
    x, y, z = circle(opening).centre_m
    low, high = (height_at(layout, y, x, surface) for surface in (Surface.LOWER, Surface.UPPER))
    assert z == pytest.approx(low + 0.3 * (high - low), abs=1e-9)
    # Half way between the faces of both webs, which stand at 0.2 and 0.6 of one metre.
    assert x == pytest.approx(1.4, abs=1e-12)


@pytest.mark.parametrize(
    ("along", "station"),
    [
        (Along(share=0.25), 1.205 + 0.25 * 0.39),
        (Along(from_start_m=0.05), 1.255),
        (Along(from_end_m=0.05), 1.545),
    ],
)
def test_how_far_along_is_measured_between_the_faces_of_the_webs(
    wings: Any, along: Along, station: float
) -> None:
    layout = wings.plain(holes=(wings.hole(along=along),))
    (opening,) = (one for one in lofted(layout).openings if one.outside is None)
    assert circle(opening).centre_m[0] == pytest.approx(station, abs=1e-12)


def inside(mesh: Any, point: Floats) -> bool:
    """By the parity of crossings of a ray in an odd direction; written apart from the program's own."""
    way = np.array([0.31, 0.17, 0.93])
    a, b, c = mesh.vertices_m[mesh.faces].transpose(1, 0, 2)
    one, other = b - a, c - a
    across = np.cross(way, other)
    scale = np.einsum("ij,ij->i", one, across)
    scale[scale == 0.0] = np.inf
    from_a = point - a
    u = np.einsum("ij,ij->i", from_a, across) / scale
    turned = np.cross(from_a, one)
    v = turned @ way / scale
    far = np.einsum("ij,ij->i", other, turned) / scale
    return int(((u >= 0) & (v >= 0) & (u + v <= 1) & (far > 0)).sum()) % 2 == 1


@pytest.mark.parametrize("lean", [0.0, 10.0])
@pytest.mark.parametrize("shape", SHAPES)
def test_holes_lie_in_the_mid_plane_inside_their_outline_and_join_the_cells_they_name(
    wings: Any, shape: str, lean: float
) -> None:
    rows = (wings.row("R", "A", "B"), wings.row("S", "B", "C"))
    ribs = tuple(
        wings.rib(str(n), line, rows=("R", "S"), lean_deg=lean) for n, line in ((1, 0.1), (2, 1.0), (3, 1.9))
    )
    found = lofted(
        shaped(
            wings,
            shape,
            webs=(wings.web("A", 0.2), wings.web("B", 0.5), wings.web("C", 0.7)),
            rows=rows,
            ribs=ribs,
            tanks=(wings.tank(("R", "S")),),
            holes=(wings.hole(diameter_m=0.012), wings.hole("web", walls=Walls.WEBS, diameter_m=0.02)),
        )
    )
    cells = {cell.number: cell for cell in found.cells}
    joining = [one for one in found.openings if one.outside is None]
    assert sorted(one.cells for one in joining) == [(1, 2), (1, 3), (2, 4), (3, 4)]
    for opening in joining:
        rim = circle(opening)
        centre, normal = np.array(rim.centre_m), np.array(rim.normal)
        assert opening.depth_m is not None
        for side, away in ((normal, 1.0), (-normal, -1.0)):
            beside = centre + side * (0.5 * opening.depth_m + 1e-6)
            holding = [number for number, cell in cells.items() if inside(cell.mesh, beside)]
            assert len(holding) == 1, away
            assert holding[0] in opening.cells
        assert not any(inside(cell.mesh, centre) for cell in cells.values())
    holes = 0
    for panel in found.panels:
        outline = Polygon(panel.outline_m)
        for hole in panel.holes:
            holes += 1
            middle = Point(hole.x_m, hole.y_m)
            assert outline.contains(middle)
            assert outline.exterior.distance(middle) >= 0.5 * hole.diameter_m
    assert holes == len(joining)


def test_a_hole_between_dry_bays_is_a_hole_in_its_panel_only(wings: Any) -> None:
    found = lofted(wings.plain(tanks=(), ports=(), holes=(wings.hole(walls=("R2",), diameter_m=0.05),)))
    assert found.openings == ()
    assert [panel.part for panel in found.panels if panel.holes] == ["RIB.R2"]


def test_walls_of_a_kind_are_those_inside_tanks(wings: Any) -> None:
    found = lofted(wings.plain(holes=(wings.hole(),)))
    assert [panel.part for panel in found.panels if panel.holes] == ["RIB.R2"]
    left = lofted(wings.plain(holes=(wings.hole(leaving_out=("R2",)),)))
    assert [panel.part for panel in left.panels if panel.holes] == []


def test_a_drain_stands_above_the_lower_skin_and_from_the_rib_as_told(wings: Any) -> None:
    drain = wings.port(
        Outside.DRAIN,
        "R2",
        height=Height(above_lower_m=0.001),
        along_span=Along(from_start_m=0.027),
        along_chord=Along(share=0.25),
        diameter_m=0.006,
    )
    layout = shaped(wings, "straight", ports=(*wings.ports("R1"), drain))
    opening = lofted(layout).openings[-1]
    x, y, z = circle(opening).centre_m
    assert opening.cells == (2,)
    assert (x, y) == pytest.approx((1.205 + 0.25 * 0.39, 1.003 + 0.027), abs=1e-9)
    assert z == pytest.approx(height_at(layout, y, x, Surface.LOWER) + 0.001, abs=1e-9)
    assert circle(opening).normal == (0.0, 0.0, 1.0)


@pytest.mark.parametrize("surface", [Surface.LOWER, Surface.UPPER])
def test_an_upright_rim_keeps_its_edge_clear(wings: Any, surface: Surface) -> None:
    height = Height(above_lower_m=0.002) if surface is Surface.LOWER else Height(below_upper_m=0.002)
    port = wings.port(
        Outside.DRAIN, "R2", height=height, axis=Axis.FORE_AFT, along_span=Along(from_end_m=0.1)
    )
    layout = shaped(wings, "straight", ports=(*wings.ports("R1"), port))
    rim = circle(lofted(layout).openings[-1])
    x, y, z = rim.centre_m
    side = 1.0 if surface is Surface.LOWER else -1.0
    assert y == pytest.approx(1.897 - 0.1, abs=1e-9)
    assert side * (z - height_at(layout, y, x, surface)) == pytest.approx(0.002 + 0.006, abs=1e-9)
    assert rim.normal == (1.0, 0.0, 0.0)


def test_a_pipe_is_told_from_its_mouth(wings: Any) -> None:
    vent = wings.port(
        Outside.VENT, "R2", pipe_m=((0.0, 0.1, 0.02), (0.3, 0.4, -0.1)), height=Height(below_upper_m=0.004)
    )
    layout = shaped(wings, "straight", ports=(*wings.ports("R1"), vent))
    pipe = lofted(layout).openings[-1].rim
    assert isinstance(pipe, Pipe)
    mouth = np.array(pipe.points_m[0])
    assert mouth[2] == pytest.approx(height_at(layout, mouth[1], mouth[0], Surface.UPPER) - 0.004, abs=1e-9)
    assert np.array(pipe.points_m[1:]) - mouth == pytest.approx(
        np.array([(0.0, 0.1, 0.02), (0.3, 0.4, -0.1)]), abs=1e-12
    )
    assert pipe.bore_m == 0.012


def test_a_port_is_placed_between_the_faces_of_canted_ribs(wings: Any) -> None:
    ribs = (
        wings.rib("1", points_m=((1.2, 0.1), (1.6, 0.3))),
        wings.rib("2", 1.0),
        wings.rib("3", 1.9),
    )
    port = wings.port(Outside.DRAIN, "R1", along_span=Along(from_start_m=0.0), height=Height(share=0.5))
    found = lofted(wings.plain(ribs=ribs, ports=(*wings.ports("R1"), port)))
    _, y, _ = circle(found.openings[-1]).centre_m
    # Half way between the webs' faces at 1.4: the rib's middle at 0.2, half its thickness square to it.
    assert y == pytest.approx(0.2 + 0.003 * np.hypot(1.0, 0.5), abs=1e-6)


def test_a_hole_in_a_rib_that_runs_through_is_placed_between_the_webs_of_its_row(wings: Any) -> None:
    rows = (wings.row("R", "A", "B"), wings.row("S", "B", "C"))
    ribs = (
        wings.rib("1", 0.1, rows=("R", "S")),
        wings.rib("2", 1.0, rows=("R", "S"), through=("B",)),
        wings.rib("3", 1.9, rows=("R", "S")),
    )
    webs = (wings.web("A", 0.2), wings.web("B", 0.4), wings.web("C", 0.6))
    hole = wings.hole(along=Along(from_start_m=0.05))
    found = lofted(
        wings.plain(webs=webs, rows=rows, ribs=ribs, tanks=(wings.tank(("R", "S")),), holes=(hole,))
    )
    stations = {one.cells: circle(one).centre_m[0] for one in found.openings if one.outside is None}
    # From the rear faces of webs A and B, five millimetres behind their middles.
    assert stations == {
        (1, 3): pytest.approx(1.205 + 0.05, abs=1e-9),
        (2, 4): pytest.approx(1.405 + 0.05, abs=1e-9),
    }
