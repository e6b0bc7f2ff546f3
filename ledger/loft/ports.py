"""Outlets, fillers, vents and drains: where in a bay they stand."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ledger.errors import Finding
from ledger.geometry.sections_cut import segments_by_plane
from ledger.loft.bays import TankBay
from ledger.loft.bodies import mesh_of
from ledger.loft.faults import stop
from ledger.loft.layout import NOSE, TAIL, Axis, Layout, Port
from ledger.loft.lofted import Floats, LoftedOpening
from ledger.loft.ribs import RibPlane
from ledger.loft.webs import WebLine
from ledger.model.tanks import Circle, Pipe, Rim
from ledger.model.vectors import Vector

_NORMALS: dict[Axis, Vector] = {
    Axis.FORE_AFT: (1.0, 0.0, 0.0),
    Axis.SPANWISE: (0.0, 1.0, 0.0),
    Axis.UP: (0.0, 0.0, 1.0),
}


def place_ports(
    layout: Layout, cells: tuple[TankBay, ...], lines: dict[str, WebLine]
) -> tuple[tuple[LoftedOpening, ...], tuple[Finding, ...]]:
    """Every port in its bay, or why there is no room for it."""
    by_name = {cell.bay.name: cell for cell in cells}
    found: list[LoftedOpening] = []
    faults: list[Finding] = []
    for port in layout.ports:
        cell = by_name.get(port.bay)
        if cell is None:
            faults.append(_no_such_bay(port, by_name))
            continue
        mouth = _mouth(port, cell, lines)
        if mouth is None:
            faults.append(_no_room(port))
            continue
        found.append(
            LoftedOpening(
                name=port.name,
                cells=(cell.number,),
                outside=port.outside,
                rim=_rim(port, mouth),
                depth_m=None,
            )
        )
    faults.extend(_missing(layout, cells))
    return tuple(found), tuple(faults)


def _mouth(port: Port, cell: TankBay, lines: dict[str, WebLine]) -> Vector | None:
    """The middle of a port's rim; None where its rim would not lie in the bay."""
    mesh = mesh_of(cell.space)
    low, high = mesh.vertices_m.min(axis=0), mesh.vertices_m.max(axis=0)
    station = 0.5 * float(low[0] + high[0])
    y = port.along_span.of(*_span(cell, station, float(low[1]), float(high[1])))
    cut = segments_by_plane(mesh.vertices_m, mesh.faces, (0.0, y, 0.0), (0.0, 1.0, 0.0))
    if len(cut) == 0:
        return None
    x = port.along_chord.of(*_chordwise(cell, cut, y, lines))
    heights = _heights(cut, x)
    if heights is None:
        return None
    z = _level(port, *heights)
    rises = 0.0 if port.axis is Axis.UP or port.pipe_m else 0.5 * port.diameter_m
    return (x, y, z) if heights[0] <= z - rises and z + rises <= heights[1] else None


def _span(cell: TankBay, station: float, low: float, high: float) -> tuple[float, float]:
    """Butt lines of the faces of a bay's ribs at a station."""
    return (
        _face(cell.bay.inboard, station, 1.0, low),
        _face(cell.bay.outboard, station, -1.0, high),
    )


def _face(plane: RibPlane | None, station: float, side: float, otherwise: float) -> float:
    if plane is None:
        return otherwise
    return plane.butt_line(station) + side * 0.5 * plane.rib.thickness_m / abs(float(plane.slab.axes[2, 1]))


def _chordwise(cell: TankBay, cut: Floats, y: float, lines: dict[str, WebLine]) -> tuple[float, float]:
    """Stations of the faces of a bay's webs at a butt line; of the cell itself at the wing's own ends."""
    row = cell.bay.row
    ends = []
    for name, side, own in ((row.front, 1.0, cut[:, :, 0].min()), (row.rear, -1.0, cut[:, :, 0].max())):
        if name in (NOSE, TAIL):
            ends.append(float(own))
            continue
        slab = lines[name].lengths[0].slab
        ends.append(lines[name].station(y) + side * 0.5 * slab.thickness_m / abs(float(slab.axes[2, 0])))
    return ends[0], ends[1]


def _heights(cut: Floats, x: float) -> tuple[float, float] | None:
    """The lowest and highest place of a cut (k, 2, 3) at a station."""
    first, last = cut[:, 0], cut[:, 1]
    crossing = (np.minimum(first[:, 0], last[:, 0]) <= x) & (x <= np.maximum(first[:, 0], last[:, 0]))
    crossing &= first[:, 0] != last[:, 0]
    if crossing.sum() < 2:
        return None
    a, b = first[crossing], last[crossing]
    z = a[:, 2] + (x - a[:, 0]) / (b[:, 0] - a[:, 0]) * (b[:, 2] - a[:, 2])
    return float(z.min()), float(z.max())


def _level(port: Port, low: float, high: float) -> float:
    """Height of the rim's middle; a round rim that stands upright keeps its edge clear, not its middle."""
    upright = port.axis is not Axis.UP and not port.pipe_m
    radius = 0.5 * port.diameter_m if upright else 0.0
    if port.height.above_lower_m is not None:
        return low + port.height.above_lower_m + radius
    if port.height.below_upper_m is not None:
        return high - port.height.below_upper_m - radius
    return low + (port.height.share or 0.0) * (high - low)


def _rim(port: Port, mouth: Vector) -> Rim:
    if not port.pipe_m:
        return Circle(centre_m=mouth, diameter_m=port.diameter_m, normal=_NORMALS[port.axis])
    further = [tuple(a + b for a, b in zip(mouth, step, strict=True)) for step in port.pipe_m]
    points = (mouth, *((point[0], point[1], point[2]) for point in further))
    return Pipe(points_m=points, bore_m=port.diameter_m)


def _no_such_bay(port: Port, cells: dict[str, TankBay]) -> Finding:
    return stop(
        port.place,
        "bay-unknown",
        f"{port.outside.value} {port.name!r} stands in bay {port.bay}, which is no tank",
        f"write one of {', '.join(cells) or 'the bays of a [[tank]]; there is none'}",
    )


def _no_room(port: Port) -> Finding:
    return stop(
        port.place,
        "port-outside-bay",
        f"{port.outside.value} {port.name!r} does not lie inside bay {port.bay}",
        "move it along the chord or the span, or nearer to the middle of the height",
    )


def _missing(layout: Layout, cells: tuple[TankBay, ...]) -> Iterator[Finding]:
    """Each tank needs a way out, a way in and air."""
    for tank in layout.tanks:
        bays = {cell.bay.name for cell in cells if cell.tank is tank}
        had = {port.outside.value for port in layout.ports if port.bay in bays}
        for word in ("outlet", "vent", "filler"):
            if bays and word not in had:
                yield stop(
                    tank.place,
                    f"bay-without-{word}",
                    f"no bay of this tank has {'an' if word == 'outlet' else 'a'} {word}",
                    f"add [[{word}]] with bay = one of {', '.join(sorted(bays))}",
                )
