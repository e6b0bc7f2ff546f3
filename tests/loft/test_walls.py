"""Webs and ribs: where they stand, which way they lean, and which bays they part."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from shapely import LineString, Polygon

from ledger.loft.layout import NOSE, Layout, Surface
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted, Panel
from ledger.loft.ribs import rib_planes
from ledger.loft.shell import build_shell
from ledger.loft.webs import web_lines


def lofted(layout: Layout) -> Lofted:
    found, findings = loft(layout)
    assert found is not None, findings
    return found


def panel_of(found: Lofted, part: str) -> Panel:
    return next(panel for panel in found.panels if panel.part == part)


def corners_of(panel: Panel) -> Any:
    place = panel.placement
    return np.array(place.origin_m) + panel.outline_m @ np.array([place.across, place.up_axis])


@pytest.mark.parametrize("lean", [10.0, -10.0])
def test_a_rib_leans_its_top_outboard(wings: Any, lean: float) -> None:
    ribs = (wings.rib("1", 0.1), wings.rib("2", 1.0, lean_deg=lean), wings.rib("3", 1.9))
    corners = corners_of(panel_of(lofted(wings.plain(ribs=ribs)), "RIB.R2"))
    # At the chord line it stands at its butt line.
    assert (corners[:, 1] - 1.0) / corners[:, 2] == pytest.approx(np.tan(np.radians(lean)), abs=1e-9)


def test_panels_are_flat_and_stand_where_the_layout_says(wings: Any) -> None:
    found = lofted(wings.plain())
    rib = corners_of(panel_of(found, "RIB.R1"))
    assert rib[:, 1] == pytest.approx(0.1, abs=1e-12)
    assert (rib[:, 0].min(), rib[:, 0].max()) == pytest.approx((1.205, 1.595), abs=1e-9)
    web = corners_of(panel_of(found, "WEB.A"))
    assert web[:, 0] == pytest.approx(1.2, abs=1e-12)
    assert (web[:, 1].min(), web[:, 1].max()) == pytest.approx((0.0, 2.0), abs=1e-9)


def test_a_swept_web_is_as_thick_as_its_sheet(wings: Any) -> None:
    # Square to the web its faces are a sheet apart; along the chord more. The ribs end at those faces.
    sections = (wings.section(0.0), wings.section(2.0, leading_edge_m=2.2))
    rib = corners_of(panel_of(lofted(wings.plain(sections=sections)), "RIB.R2"))
    aside = 0.005 * np.hypot(1.0, 0.6)
    # Half the rib's own thickness further the web has moved on by 0.6 of that: the panel is square.
    aside += 0.6 * 0.003
    assert (rib[:, 0].min(), rib[:, 0].max()) == pytest.approx((1.8 + aside, 2.2 - aside), abs=1e-9)


def test_ribs_are_in_the_order_in_which_they_stand_in_their_row(wings: Any) -> None:
    # The middle rib's forward end, far ahead of the row, is inboard of all others.
    ribs = (
        wings.rib("1", 0.8),
        wings.rib("2", points_m=((0.2, 0.5), (1.4, 1.2))),
        wings.rib("3", 1.9),
    )
    found = lofted(wings.plain(ribs=ribs))
    assert [cell.bay for cell in found.cells] == ["R1", "R2"]
    inner, outer = (cell.mesh.vertices_m[:, 1] for cell in found.cells)
    assert inner.min() == pytest.approx(0.803, abs=1e-9)
    assert outer.max() == pytest.approx(1.897, abs=1e-9)
    assert found.account.cells_m3 > 0.0


def test_a_row_between_webs_that_would_cross_beyond_the_tip(wings: Any) -> None:
    found = lofted(wings.plain(webs=(wings.web("A", (0.2, 0.38)), wings.web("B", (0.6, 0.42)))))
    assert len(found.cells) == 2
    narrow = panel_of(found, "RIB.R3")
    assert Polygon(narrow.outline_m).area < 0.3 * Polygon(panel_of(found, "RIB.R1").outline_m).area


def test_a_row_ends_where_its_webs_carried_on_would_cross(wings: Any) -> None:
    # Web B ends at 1.2; carried on it would meet A at 1.5, short of the tip.
    webs = (
        wings.web("A", 0.3),
        wings.web("B", points_m=((1.6, 0.0), (1.36, 1.2))),
    )
    ribs = (wings.rib("1", 0.1), wings.rib("2", 0.6), wings.rib("3", 1.1))
    found = lofted(wings.plain(webs=webs, ribs=ribs, fills=(wings.fill("FOAM", ("R",)),)))
    assert [cell.bay for cell in found.cells] == ["R1", "R2"]
    (foam,) = found.solids
    # Their middles meet at 1.5, their rear and front faces a little sooner where B still stands.
    assert foam.mesh.vertices_m[:, 1].max() == pytest.approx(1.5, abs=0.03)
    assert foam.mesh.vertices_m[:, 0].max() < 1.6


def test_lengths_of_a_web_meet_at_their_splice(wings: Any) -> None:
    sections = (
        wings.section(0.0),
        wings.section(1.0, leading_edge_m=1.1),
        wings.section(2.0, leading_edge_m=1.4),
    )
    webs = tuple(
        wings.web(name, at, splices_m=(1.0,), lengths=("IN", "OUT")) for name, at in (("A", 0.2), ("B", 0.6))
    )
    ribs = (wings.rib("1", 0.1), wings.rib("2", 0.8), wings.rib("3", 1.9))
    found = lofted(wings.plain(sections=sections, webs=webs, ribs=ribs))
    assert {"WEB.A.IN", "WEB.A.OUT", "WEB.B.IN", "WEB.B.OUT"} <= {panel.part for panel in found.panels}
    inner, outer = (corners_of(panel_of(found, f"WEB.A.{end}")) for end in ("IN", "OUT"))
    # Ends are square to the panel and stay within the butt line on both faces.
    assert inner[:, 1].max() == pytest.approx(1.0, abs=0.005 * 0.3)
    assert outer[:, 1].min() == pytest.approx(1.0, abs=0.005 * 0.3)
    assert inner[:, 1].max() <= 1.0 <= outer[:, 1].min()


def test_a_gap_is_left_all_round_each_panel(wings: Any) -> None:
    close, loose = (lofted(wings.plain(gap_m=gap)) for gap in (0.0, 0.001))
    for panel in loose.panels:
        inner, outer = Polygon(panel.outline_m), Polygon(panel_of(close, panel.part).outline_m)
        assert outer.contains(inner)
        assert inner.exterior.distance(outer.exterior) == pytest.approx(0.001, abs=1e-9)
        assert inner.exterior.hausdorff_distance(outer.exterior) < 0.0025


def test_a_panel_keeps_clear_of_a_skin_that_bends_into_its_wall(wings: Any) -> None:
    # The lower side of a 6409 is hollow aft: what both faces of a thick web have room for is too much.
    layout = wings.plain(
        sections=(wings.section(0.0, profile="6409"), wings.section(2.0, profile="6409")),
        webs=(wings.web("A", 0.2), wings.web("B", 0.6, thickness_m=0.12)),
        tanks=(),
        ports=(),
        corners=48,
    )
    found = lofted(layout)
    assert abs(found.account.shared_m3) < 1e-9
    assert panel_of(found, "WEB.B").thickness_m == 0.12


def test_the_nose_row_is_bounded_by_the_skins(wings: Any) -> None:
    layout = wings.plain(rows=(wings.row("R", NOSE, "A"),), webs=(wings.web("A", 0.2),), corners=96)
    found = lofted(layout)
    x = found.cells[0].mesh.vertices_m[:, 0]
    # Two millimetres of skin, to how far the nose's own corner stands off the curve.
    assert x.min() == pytest.approx(1.002, abs=1e-4)
    assert x.max() == pytest.approx(1.195, abs=1e-9)


def test_skin_surfaces_cover_the_outside_once(wings: Any) -> None:
    layout = wings.plain(
        skins=(
            wings.skin("NOSE", Surface.BOTH, (0.0, 0.08), 1.2),
            wings.skin("UPR.IN", Surface.UPPER, (0.08, 1.0), 3.0, between_m=(0.0, 0.8)),
            wings.skin("UPR.OUT", Surface.UPPER, (0.08, 1.0), 2.0, between_m=(0.8, 2.0)),
            wings.skin("LWR", Surface.LOWER, (0.08, 1.0), 2.0),
        )
    )
    whole = lofted(wings.plain())

    def area(found: Lofted) -> float:
        total = 0.0
        for skin in found.skins:
            a, b, c = skin.surface.vertices_m[skin.surface.faces].transpose(1, 0, 2)
            total += 0.5 * float(np.linalg.norm(np.cross(b - a, c - a), axis=1).sum())
        return total

    # A corner stands at 0.08 in one and not in the other: a hair of area along the curve.
    assert area(lofted(layout)) == pytest.approx(area(whole), rel=2e-4)
    (skin,) = whole.skins
    a, b, c = skin.surface.vertices_m[skin.surface.faces].transpose(1, 0, 2)
    middles, normals = (a + b + c) / 3.0, np.cross(b - a, c - a)
    # Outward: away from the middle of the section.
    assert (np.einsum("ij,ij->i", normals[:, [0, 2]], middles[:, [0, 2]] - (1.4, 0.015)) > 0.0).all()


@pytest.mark.parametrize("butt_line", [-0.5, 0.4, 1.0, 1.6, 2.4])
def test_a_canted_rib_meets_a_web_with_a_bend_where_their_lines_cross_in_plan(
    wings: Any, butt_line: float
) -> None:
    # The first and the last rib stand beyond root and tip, where the web is carried on straight.
    sections = (wings.section(0.0), wings.section(1.0), wings.section(2.0, leading_edge_m=1.3))
    canted = ((1.1, butt_line), (1.8, butt_line + 0.2))
    layout = wings.bare(
        sections,
        webs=(wings.web("A", 0.2, splices_m=(1.0,), lengths=("IN", "OUT")),),
        rows=(wings.row("R", "A", "tail"),),
        ribs=(wings.rib("1", points_m=canted),),
    )
    shell, _ = build_shell(layout)
    assert shell is not None
    (line,), _ = web_lines(layout, shell)
    (plane,), _ = rib_planes(layout, shell, {"A": line})
    assert line.points == ((1.2, 0.0), (1.2, 1.0), (1.5, 2.0))
    (x0, y0), (x1, y1) = canted
    carried_on = LineString([(x0 - (x1 - x0), y0 - (y1 - y0)), (x1, y1)])
    met = LineString(((1.2, -1.0), *line.points, (1.8, 3.0))).intersection(carried_on)
    assert plane.crossing(line) == pytest.approx(met.coords[0], abs=1e-12)
