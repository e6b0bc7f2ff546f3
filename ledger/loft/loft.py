"""A layout lofted: everything a plan needs, or every reason why it cannot be built."""

from __future__ import annotations

from functools import partial

from ledger.errors import Finding
from ledger.loft.accounting import account, is_proved
from ledger.loft.bays import Spot, TankBay, filled_space, spots, tank_bays
from ledger.loft.bodies import mesh_of
from ledger.loft.bonds import bond_runs, fillets_in
from ledger.loft.division import Division, divide
from ledger.loft.faults import stop
from ledger.loft.holes import LaidHole, lay_holes, openings_of
from ledger.loft.layout import Layout
from ledger.loft.ledges import caps_in_tanks
from ledger.loft.lofted import Lofted, LoftedCell, LoftedSkin, Panel
from ledger.loft.panels import FlatPanel, flat_panels, panel_edges
from ledger.loft.ports import place_ports
from ledger.loft.ribs import rib_planes
from ledger.loft.shell import Shell, build_shell, skin_surface
from ledger.loft.solids import lofted_solids, taken_by_blocks
from ledger.loft.strips import let_in_strips
from ledger.loft.webs import WebLine, web_lines
from ledger.model.plan import PartClass
from ledger.model.progress import Progress, unwatched

_STEPS = ("sections and skins", "webs and ribs", "panels", "cells", "holes and bonds", "account")


def loft(layout: Layout, progress: Progress = unwatched) -> tuple[Lofted | None, tuple[Finding, ...]]:
    """The right wing of a layout.

    Returns None and what is wrong where anything holds the wing back; each finding stands at the line
    of the layout that says it. A wing that lofts may still carry findings to look at. What `progress`
    raises goes through.
    """
    _tell(progress, 0)
    shell, faults = build_shell(layout)
    if shell is None:
        return None, faults
    _tell(progress, 1)
    lines, faults = web_lines(layout, shell)
    if faults:
        return None, faults
    by_name = {line.web.name: line for line in lines}
    planes, faults = rib_planes(layout, shell, by_name)
    if faults:
        return None, faults
    division, faults = divide(layout, shell, lines, planes, partial(_tell, progress, 1))
    if division is None:
        return None, faults
    return _fitted_out(layout, shell, division, by_name, progress)


def _fitted_out(
    layout: Layout, shell: Shell, division: Division, lines: dict[str, WebLine], progress: Progress
) -> tuple[Lofted | None, tuple[Finding, ...]]:
    panels, unfit = flat_panels(layout, (*division.ribs, *division.webs), lines, partial(_tell, progress, 2))
    if unfit:
        return None, unfit
    _tell(progress, 3)
    cells, no_tank = tank_bays(layout, division)
    fills, no_fill = filled_space(layout, division, cells)
    parted = spots(layout, division, panels, lines)
    _tell(progress, 4)
    laid, no_hole = lay_holes(layout, parted, cells)
    ports, no_port = place_ports(layout, cells, lines)
    bonds, no_bond = bond_runs(layout, panels)
    strips, no_strip = let_in_strips(layout, shell, lines)
    faults = (*no_tank, *no_fill, *no_hole, *no_port, *no_bond, *no_strip)
    if faults:
        return None, faults
    found = account(shell, division, panels, cells, fills, tick=partial(_tell, progress, 5))
    if not is_proved(found):
        return None, (_unproved(layout, found.apart_m3, found.shared_m3),)
    lofted = Lofted(
        panels=tuple(_panel(panel, laid) for panel in panels),
        skins=_skins(layout, shell),
        solids=tuple(lofted_solids(layout, shell, division, fills)),
        bonds=bonds,
        strips=strips,
        cells=tuple(_cell(layout, cell, parted) for cell in cells),
        openings=(*openings_of(laid, cells), *ports),
        items=layout.items,
        feeds=layout.feeds,
        account=found,
    )
    _tell(progress, len(_STEPS))
    return lofted, caps_in_tanks(layout, cells)


def _tell(progress: Progress, done: int) -> None:
    progress(f"lofting: {_STEPS[min(done, len(_STEPS) - 1)]}", done, len(_STEPS))


def _panel(panel: FlatPanel, laid: tuple[LaidHole, ...]) -> Panel:
    wall = panel.wall
    made = wall.rib.rib if wall.rib is not None else wall.web.web if wall.web is not None else None
    if made is None:
        raise ValueError("a wall is a web or a rib")
    return Panel(
        part=panel.part,
        title=panel.title,
        part_class=PartClass.WEB if wall.rib is None else PartClass.RIB,
        laminate=made.laminate,
        thickness_m=wall.slab.thickness_m,
        placement=panel.placement,
        outline_m=panel.outline,
        holes=tuple(one.hole for one in laid if one.spot.panel is panel),
        edges=panel_edges(panel),
    )


def _skins(layout: Layout, shell: Shell) -> tuple[LoftedSkin, ...]:
    return tuple(
        LoftedSkin(
            part=skin.part,
            title=skin.title,
            laminate=skin.laminate,
            surface=skin_surface(shell, number),
            finish=skin.finish,
            finish_part=skin.finish_part,
        )
        for number, skin in enumerate(layout.skins)
    )


def _cell(layout: Layout, cell: TankBay, parted: tuple[Spot, ...]) -> LoftedCell:
    return LoftedCell(
        number=cell.number,
        bay=cell.bay.name,
        tank=cell.tank,
        mesh=mesh_of(cell.space),
        displaced_m3=fillets_in(layout, cell, parted) + taken_by_blocks(layout, cell.space),
    )


def _unproved(layout: Layout, apart_m3: float, shared_m3: float) -> Finding:
    return stop(
        layout.place,
        "box-not-accounted-for",
        f"what was lofted leaves {1e6 * abs(apart_m3):.3g} mL of the box over and claims"
        f" {1e6 * abs(shared_m3):.3g} mL twice",
        "please report this layout; move walls that all but touch, and loft again",
    )
