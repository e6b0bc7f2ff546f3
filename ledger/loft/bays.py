"""Which bays are tank cells and which are filled, and which bays a wall parts."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from ledger.errors import Finding
from ledger.loft.bodies import Body, united
from ledger.loft.division import Bay, Division
from ledger.loft.faults import stop
from ledger.loft.layout import Fill, Layout, Row, TankBays
from ledger.loft.panels import FlatPanel
from ledger.loft.ribs import RibPlane, row_stations
from ledger.loft.webs import WebLine


@dataclass(frozen=True, kw_only=True, eq=False)
class TankBay:
    """A bay that is a cell: its number from the root, its tank and its space."""

    number: int
    bay: Bay
    tank: TankBays
    space: Body


@dataclass(frozen=True, kw_only=True, eq=False)
class Spot:
    """A stretch of one panel between its neighbours, and the two bays it parts, front or inboard one first.

    `label` is how a layout names it: `A3` is rib 3 in row A, `M3` is web M outboard of rib 3; where both
    could be meant, the rib is. The stretch runs from `start_m` to `end_m` in the panel's own X.
    """

    label: str
    panel: FlatPanel
    start_m: float
    end_m: float
    bays: tuple[Bay | None, Bay | None]


def tank_bays(layout: Layout, division: Division) -> tuple[tuple[TankBay, ...], tuple[Finding, ...]]:
    """Every cell in order: tanks as the layout lists them, from the root outboard, rows as listed."""
    found: list[TankBay] = []
    faults: list[Finding] = []
    for tank in layout.tanks:
        rows = [_between_ribs(division, name, tank.ribs) for name in tank.rows]
        for name, bays in zip(tank.rows, rows, strict=True):
            if not bays:
                faults.append(
                    stop(
                        tank.place,
                        "tank-rib-missing",
                        f"row {name} has no bays between rib {tank.ribs[0]} and rib {tank.ribs[1]}",
                        "name two ribs that stand in every row of the tank, the inboard one first",
                    )
                )
        longest = max((len(bays) for bays in rows), default=0)
        for step in range(longest):
            for bays in rows:
                if step < len(bays):
                    space = division.space(bays[step])
                    found.append(TankBay(number=len(found) + 1, bay=bays[step], tank=tank, space=space))
    return tuple(found), tuple(faults)


def _between_ribs(division: Division, row: str, ribs: tuple[str, str]) -> tuple[Bay, ...]:
    bays = [bay for bay in division.bays if bay.row.name == row]
    first = next((i for i, bay in enumerate(bays) if bay.inboard and bay.inboard.rib.name == ribs[0]), None)
    last = next((i for i, bay in enumerate(bays) if bay.outboard and bay.outboard.rib.name == ribs[1]), None)
    return () if first is None or last is None else tuple(bays[first : last + 1])


def filled_space(
    layout: Layout, division: Division, cells: tuple[TankBay, ...]
) -> tuple[tuple[tuple[Fill, Body], ...], tuple[Finding, ...]]:
    """The dry bays that each fill takes, as one solid; a bay is filled once."""
    taken = {cell.bay.name for cell in cells}
    found, faults = [], []
    for fill in layout.fills:
        bays = _bays_of(fill, division)
        wet = [bay.name for bay in bays if bay.name in {cell.bay.name for cell in cells}]
        if wet and fill.ribs is not None:
            faults.append(
                stop(
                    fill.place,
                    "fill-in-tank",
                    f"{fill.part} would fill bay {wet[0]}, which is a tank",
                    "name ribs that leave the tank out, or leave out the ribs to fill all dry bays",
                )
            )
            continue
        dry = [bay for bay in bays if bay.name not in taken]
        taken |= {bay.name for bay in dry}
        solid = united(division.space(bay) for bay in dry)
        if solid.volume() <= 0.0:
            faults.append(
                stop(
                    fill.place,
                    "fill-empty",
                    f"{fill.part} finds no dry bay to fill",
                    "name other rows or ribs",
                )
            )
            continue
        found.append((fill, solid))
    return tuple(found), tuple(faults)


def _bays_of(fill: Fill, division: Division) -> list[Bay]:
    ribs = fill.ribs
    if ribs is None:
        return [bay for name in fill.rows for bay in division.bays if bay.row.name == name]
    return [bay for name in fill.rows for bay in _between_ribs(division, name, ribs)]


def spots(
    layout: Layout, division: Division, panels: tuple[FlatPanel, ...], lines: dict[str, WebLine]
) -> tuple[Spot, ...]:
    """Every stretch of every panel that parts two bays."""
    found: list[Spot] = []
    for panel in panels:
        if panel.wall.rib is not None:
            found.extend(_rib_spots(layout, division, panel, panel.wall.rib, lines))
        else:
            found.extend(_web_spots(layout, division, panel))
    return tuple(found)


def _rib_spots(
    layout: Layout, division: Division, panel: FlatPanel, plane: RibPlane, lines: dict[str, WebLine]
) -> Iterator[Spot]:
    low, high = float(panel.space[:, 0].min()), float(panel.space[:, 0].max())
    x, along = plane.slab.origin_m[0], plane.slab.axes[0, 0]
    for row in layout.rows:
        if row.name not in panel.wall.rows:
            continue
        front, rear = row_stations(row, lines, plane)
        start = max(low, (front - x) / along + _half_crossing(lines.get(row.front), plane))
        end = min(high, (rear - x) / along - _half_crossing(lines.get(row.rear), plane))
        inboard = next((bay for bay in division.bays if bay.row is row and bay.outboard is plane), None)
        outboard = next((bay for bay in division.bays if bay.row is row and bay.inboard is plane), None)
        yield Spot(
            label=f"{row.name}{plane.rib.name}",
            panel=panel,
            start_m=start,
            end_m=end,
            bays=(inboard, outboard),
        )


def _half_crossing(line: WebLine | None, plane: RibPlane) -> float:
    """Half of what a web takes up along a rib that meets it."""
    if line is None:
        return 0.0
    slab = line.lengths[0].slab
    return 0.5 * slab.thickness_m / abs(float(slab.axes[2] @ plane.slab.axes[0]))


def _web_spots(layout: Layout, division: Division, panel: FlatPanel) -> Iterator[Spot]:
    if panel.wall.web is None:
        raise ValueError("a wall is a web or a rib")
    name = panel.wall.web.web.name
    sides = [_row_beside(layout, name, front=True), _row_beside(layout, name, front=False)]
    low, high = float(panel.space[:, 0].min()), float(panel.space[:, 0].max())
    ends: dict[float, tuple[str, float]] = {}
    for bay in division.bays:
        if bay.row in sides and bay.inboard is not None:
            middle, half = _meeting(panel, bay.inboard)
            ends[middle] = (bay.inboard.rib.name, half)
        if bay.row in sides and bay.outboard is not None:
            middle, half = _meeting(panel, bay.outboard)
            ends.setdefault(middle, (bay.outboard.rib.name, half))
    stops = [(-np.inf, ("0", 0.0)), *sorted(ends.items()), (np.inf, ("", 0.0))]
    for (at, (rib, half)), (after, (_, next_half)) in pairwise(stops):
        start, end = max(low, at + half), min(high, after - next_half)
        if start < end:
            bays = tuple(_bay_at(division, row, panel, 0.5 * (start + end)) for row in sides)
            yield Spot(label=f"{name}{rib}", panel=panel, start_m=start, end_m=end, bays=(bays[0], bays[1]))


def _row_beside(layout: Layout, web: str, *, front: bool) -> Row | None:
    return next((row for row in layout.rows if (row.rear if front else row.front) == web), None)


def _meeting(panel: FlatPanel, plane: RibPlane) -> tuple[float, float]:
    """Where a rib meets a web, in the web's own X, and half of what it takes up there."""
    slab = panel.wall.slab
    normal, origin = plane.slab.axes[2], np.asarray(plane.slab.origin_m)
    across = float(normal @ slab.axes[0])
    at = float(normal @ (origin - np.asarray(slab.origin_m))) / across
    return at, 0.5 * plane.rib.thickness_m / abs(across)


def _bay_at(division: Division, row: Row | None, panel: FlatPanel, at: float) -> Bay | None:
    if row is None:
        return None
    for bay in division.bays:
        if bay.row is not row:
            continue
        inboard = -np.inf if bay.inboard is None else _meeting(panel, bay.inboard)[0]
        outboard = np.inf if bay.outboard is None else _meeting(panel, bay.outboard)[0]
        if inboard < at < outboard:
            return bay
    return None
