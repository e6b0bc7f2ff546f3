"""Caps, foam, closeouts and blocks, by volumes that are known."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from ledger.loft.layout import NOSE, TAIL, Block, Closeout, Layout, Surface
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted, Solid
from ledger.loft.shell import build_shell
from ledger.model.plan import PartClass


def lofted(layout: Layout) -> Lofted:
    found, findings = loft(layout)
    assert found is not None, findings
    return found


def solid_of(found: Lofted, part: str) -> Solid:
    return next(solid for solid in found.solids if solid.part == part)


@pytest.mark.parametrize("sweep", [0.0, 0.6])
def test_a_cap_is_as_wide_and_as_thick_as_it_says(wings: Any, measured: Any, sweep: float) -> None:
    # A 0012 at its deepest is all but flat, so a cap there is a straight strip.
    layout = wings.plain(
        sections=(
            wings.section(0.0, profile="0012"),
            wings.section(2.0, profile="0012", leading_edge_m=1.0 + 2.0 * sweep),
        ),
        webs=(wings.web("A", 0.3),),
        rows=(),
        ribs=(),
        tanks=(),
        ports=(),
        caps=(wings.cap("A", Surface.UPPER),),
        corners=48,
    )
    cap = solid_of(lofted(layout), "CAP.A.upper")
    assert cap.part_class is PartClass.CAP
    volume, middle = measured(cap.mesh.vertices_m, cap.mesh.faces)
    # Width is square to the web, so the strip is as long as the web: an edge cut at the butt lines is skew.
    assert volume == pytest.approx(0.03 * 0.004 * 2.0 * np.hypot(1.0, sweep), rel=5e-3)
    assert middle[:2] == pytest.approx((1.3 + sweep, 1.0), abs=1e-4)


def test_caps_under_both_skins_take_from_their_web(wings: Any) -> None:
    plain = lofted(wings.plain())
    capped = lofted(wings.plain(caps=(wings.cap("A", Surface.UPPER), wings.cap("A", Surface.LOWER))))

    def height(found: Lofted) -> float:
        outline = next(panel.outline_m for panel in found.panels if panel.part == "WEB.A")
        return float(np.ptp(outline[:, 1]))

    # The cap follows the curve of the skin and the web's top is square, so a little more than twice 4 mm.
    assert height(plain) - height(capped) == pytest.approx(0.008, abs=3e-4)


def test_foam_fills_the_dry_bays_of_its_row(wings: Any, measured: Any) -> None:
    rows = (wings.row("N", NOSE, "A"), wings.row("R", "A", "B"), wings.row("S", "B", TAIL))
    found = lofted(wings.plain(rows=rows, fills=(wings.fill("FOAM", ("N", "S")), wings.fill("MORE", ("R",)))))
    foam, more = solid_of(found, "FOAM"), solid_of(found, "MORE")
    volumes = [measured(solid.mesh.vertices_m, solid.mesh.faces)[0] for solid in (foam, more)]
    # Nothing is left: the nose, the tail, and the bays outboard of rib 3 and inboard of rib 1.
    assert found.account.dry_m3 == pytest.approx(0.0, abs=1e-9)
    assert sum(volumes) == pytest.approx(found.account.solids_m3, rel=1e-9)
    assert found.account.cells_m3 > volumes[1]


def test_foam_between_two_ribs(wings: Any, measured: Any) -> None:
    found = lofted(wings.plain(tanks=(), ports=(), fills=(wings.fill("FOAM", ("R",), ("1", "2")),)))
    foam = solid_of(found, "FOAM")
    y = foam.mesh.vertices_m[:, 1]
    assert (y.min(), y.max()) == pytest.approx((0.103, 0.997), abs=1e-12)
    cell = lofted(wings.plain()).cells[0]
    assert measured(foam.mesh.vertices_m, foam.mesh.faces)[0] == pytest.approx(
        measured(cell.mesh.vertices_m, cell.mesh.faces)[0], rel=1e-12
    )


@pytest.mark.parametrize("at_tip", [True, False])
def test_a_closeout_is_the_end_section_carried_on_along_the_nose(
    wings: Any, measured: Any, polygon_moments: Any, at_tip: bool
) -> None:
    sections = (wings.section(0.0), wings.section(2.0, leading_edge_m=1.4, chord_m=0.5, water_line_m=0.2))
    closeout = Closeout(
        place=sections[0].place, part="CLO", title="tip", at_tip=at_tip, length_m=0.06, material="F"
    )
    layout = wings.bare(sections, closeouts=(closeout,))
    mesh = solid_of(lofted(layout), "CLO").mesh
    volume, middle = measured(mesh.vertices_m, mesh.faces)
    shell, _ = build_shell(layout)
    assert shell is not None
    area, centre = polygon_moments(shell.outer_m[-1 if at_tip else 0][:, [0, 2]])
    # A prism of the end section; it leans as the nose's corner does, half its length on.
    assert volume == pytest.approx(0.06 * area, rel=1e-9)
    way = (0.03 if at_tip else -0.03) * np.array([0.2, 0.1])
    assert middle == pytest.approx(
        (centre[0] + way[0], 2.03 if at_tip else -0.03, centre[1] + way[1]), abs=2e-6
    )


def test_a_block_is_a_box(wings: Any, measured: Any) -> None:
    block = Block(
        place=wings.section().place,
        part="FIT",
        title="fitting",
        part_class=PartClass.FITTING,
        material="M",
        corner_m=(1.0, -0.1, 0.2),
        size_m=(0.012, 0.15, 0.045),
    )
    mesh = solid_of(lofted(wings.plain(blocks=(block,))), "FIT").mesh
    volume, middle = measured(mesh.vertices_m, mesh.faces)
    assert volume == pytest.approx(0.012 * 0.15 * 0.045, rel=1e-12)
    assert middle == pytest.approx((1.006, -0.025, 0.2225), abs=1e-12)


def test_a_block_takes_from_a_cell_only_what_stands_in_it(wings: Any) -> None:
    # Bay R1 lies between BL 0.1 and 1.0 and webs at 0.2 and 0.6 of a chord of 1 m that begins at FS 1.
    block = Block(
        place=wings.section().place,
        part="FIT",
        title="fitting",
        part_class=PartClass.FITTING,
        material="M",
        corner_m=(1.35, 0.5, -0.005),
        size_m=(0.1, 0.2, 0.02),
    )
    empty, taken = (
        [cell.displaced_m3 for cell in lofted(wings.plain(blocks=blocks)).cells] for blocks in ((), (block,))
    )
    assert taken[0] - empty[0] == pytest.approx(0.1 * 0.2 * 0.02, rel=1e-9)
    assert taken[1] == empty[1]
