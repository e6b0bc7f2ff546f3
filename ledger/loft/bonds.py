"""Bonds: where panels are glued, how much paste a metre takes, and what its fillets take from a cell."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ledger.errors import Finding
from ledger.loft.bays import Spot, TankBay
from ledger.loft.faults import stop
from ledger.loft.layout import FilletShape, Joint, Layout, Walls
from ledger.loft.lofted import BondRun, Floats, PanelEdge
from ledger.loft.panels import FlatPanel, panel_edges

_SAME_M = 1e-9


@dataclass(frozen=True, kw_only=True, eq=False)
class _Bonded:
    """One stretch of a panel's edge in a joint."""

    joint: Joint
    panel: FlatPanel
    edge: PanelEdge


def fillet_area(radius_m: float, shape: FilletShape) -> float:
    """Cross-section of one fillet in a square corner, m2.

    Concave: the corner's square less a quarter circle. Flat: half the square.
    """
    share = 1.0 - 0.25 * math.pi if shape is FilletShape.CONCAVE else 0.5
    return share * radius_m**2


def bond_runs(
    layout: Layout, panels: tuple[FlatPanel, ...]
) -> tuple[tuple[BondRun, ...], tuple[Finding, ...]]:
    """Every joint with its lines; one that glues nothing, or sheets of several thicknesses, is a finding."""
    found: list[BondRun] = []
    faults: list[Finding] = []
    for joint in layout.joints:
        bonded = tuple(_bonded(joint, panels))
        thick = sorted({one.panel.wall.slab.thickness_m for one in bonded})
        if len(thick) != 1:
            faults.append(_no_one_thickness(joint, len(thick)))
            continue
        found.append(
            BondRun(
                part=joint.part,
                title=joint.title,
                paste=joint.paste,
                section_m2=layout.gap_m * thick[0] + 2.0 * fillet_area(joint.fillet_m, joint.fillet_shape),
                lines_m=tuple(one.edge.points_m for one in bonded),
            )
        )
    return tuple(found), tuple(faults)


def _bonded(joint: Joint, panels: tuple[FlatPanel, ...]) -> Iterator[_Bonded]:
    for panel in panels:
        if _is_meant(joint, panel):
            for edge in panel_edges(panel):
                if edge.meets in joint.edges:
                    yield _Bonded(joint=joint, panel=panel, edge=edge)


def _is_meant(joint: Joint, panel: FlatPanel) -> bool:
    wall = panel.wall
    if isinstance(joint.walls, Walls):
        return (wall.rib is None) == (joint.walls is Walls.WEBS)
    names = {panel.part, wall.part, wall.part.partition(".")[2]}
    if wall.web is not None:
        names.add(wall.web.web.name)
    if wall.rib is not None:
        names |= {wall.rib.rib.name, *(f"{row}{wall.rib.rib.name}" for row in wall.rows)}
    return bool(names & set(joint.walls))


def _no_one_thickness(joint: Joint, count: int) -> Finding:
    if count == 0:
        return stop(
            joint.place,
            "joint-empty",
            f"{joint.part} glues no edge of any panel",
            'name walls that are there, and edges among "upper", "lower" and "wall"',
        )
    return stop(
        joint.place,
        "joint-of-several-sheets",
        f"{joint.part} glues panels of {count} thicknesses, which take different paste",
        "make it a joint for each sheet, with the walls named",
    )


def fillets_in(layout: Layout, cell: TankBay, spots: tuple[Spot, ...]) -> float:
    """What the fillets along the walls of a cell take up in it, m3."""
    total = 0.0
    for joint in layout.joints:
        area = fillet_area(joint.fillet_m, joint.fillet_shape)
        for spot in spots:
            if area > 0.0 and cell.bay in spot.bays and _is_meant(joint, spot.panel):
                total += area * sum(
                    _length_between(spot, edge.points_m)
                    for edge in panel_edges(spot.panel)
                    if edge.meets in joint.edges
                )
    return total


def _length_between(spot: Spot, points_m: Floats) -> float:
    """How much of a line lies along a stretch of its panel; what stands upright at an end counts whole."""
    local = spot.panel.wall.slab.local(points_m)
    start, end = local[:-1], local[1:]
    along = np.abs(end[:, 0] - start[:, 0])
    length = np.linalg.norm(end - start, axis=1)
    # A panel is a gap shorter than its stretch, so what stands at its ends lies just inside.
    low, high = np.minimum(start[:, 0], end[:, 0]), np.maximum(start[:, 0], end[:, 0])
    inside = np.minimum(high, spot.end_m) - np.maximum(low, spot.start_m)
    upright = along < _SAME_M
    share = np.where(upright, inside > -_SAME_M, inside / np.where(upright, 1.0, along))
    return float(np.sum(length * np.clip(share, 0.0, 1.0)))
