"""The sample's drawings: DXF outlines a router could cut, OBJ skins, solids, runs and cells."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path

import ezdxf
from wing import (
    FRONT,
    MIDDLE,
    REAR,
    RIB_M,
    ROOT_Y,
    SKIN_M,
    TANK_RIBS,
    TIP_Y,
    WEB_M,
    Point,
    fraction,
    spread,
    station,
    surface,
)

MM = 1000.0
ROWS = {"F": (FRONT, MIDDLE), "A": (MIDDLE, REAR)}


def row_ends(row: str, y: float) -> tuple[float, float]:
    """Stations of the faces of the two webs that bound a row of bays at butt line `y`."""
    front, rear = ROWS[row]
    return station(front, y) + WEB_M / 2, station(rear, y) - WEB_M / 2


def inside(x: float, y: float, side: int) -> float:
    """Height of the inner face of a skin above station `x` at butt line `y`."""
    return surface(fraction(x, y), y, side)[2] - side * SKIN_M


# --- panels -------------------------------------------------------------------------------------


def write_panel(
    path: Path, outline: list[tuple[float, float]], holes: Iterable[tuple[float, float, float]]
) -> None:
    """One closed outline with round holes, in millimetres, on layer CUT."""
    drawing = ezdxf.new("R2010", units=ezdxf.units.MM)
    drawing.layers.add("CUT")
    space = drawing.modelspace()
    space.add_lwpolyline([(x * MM, y * MM) for x, y in outline], close=True, dxfattribs={"layer": "CUT"})
    for x, y, diameter_mm in holes:
        space.add_circle((x * MM, y * MM), diameter_mm / 2, dxfattribs={"layer": "CUT"})
    drawing.saveas(path)
    keep_reproducible(path)


def write_splined_panel(
    path: Path,
    upper: list[tuple[float, float]],
    lower: list[tuple[float, float]],
    holes: Iterable[tuple[float, float, float]],
) -> None:
    """An outline whose long edges are splines through points and whose ends are straight lines."""
    drawing = ezdxf.new("R2010", units=ezdxf.units.MM)
    drawing.layers.add("CUT")
    space = drawing.modelspace()
    attributes = {"layer": "CUT"}
    for edge in (upper, lower):
        space.add_cad_spline_control_frame([(x * MM, y * MM) for x, y in edge], dxfattribs=attributes)
    for first, last in ((upper[0], lower[0]), (upper[-1], lower[-1])):
        space.add_line((first[0] * MM, first[1] * MM), (last[0] * MM, last[1] * MM), dxfattribs=attributes)
    for x, y, diameter_mm in holes:
        space.add_circle((x * MM, y * MM), diameter_mm / 2, dxfattribs=attributes)
    drawing.saveas(path)
    keep_reproducible(path)


def keep_reproducible(path: Path) -> None:
    """Blank what a DXF writer stamps anew at each run, so that the same wing gives the same bytes."""
    lines = path.read_text().splitlines()
    stamped = {"$TDCREATE", "$TDUCREATE", "$TDUPDATE", "$TDUUPDATE", "$VERSIONGUID", "$FINGERPRINTGUID"}
    kept = list(lines)
    for index, line in enumerate(lines):
        if line in stamped:
            kept[index + 2] = "{00000000-0000-0000-0000-000000000000}" if line.endswith("GUID") else "0.0"
        if " @ 20" in line:
            kept[index] = line.split(" @ ", maxsplit=1)[0]
    path.write_text("\n".join(kept) + "\n")


def rib_edges(row: str, y: float) -> tuple[list[tuple[float, float]], list[tuple[float, float]]]:
    """Upper and lower edge of a rib in local metres: X aft from the chord line's nose, Y up."""
    first, last = row_ends(row, y)
    gap = 0.0005
    stations = spread(first + gap, last - gap, 16)
    base = station(0.0, y), inside_origin(y)
    upper = [(x - base[0], inside(x, y, 1) - base[1]) for x in stations]
    lower = [(x - base[0], inside(x, y, -1) - base[1]) for x in stations]
    return upper, lower


def inside_origin(y: float) -> float:
    """Height of the chord line's nose at butt line `y`, the local origin of its rib."""
    return surface(0.0, y, 1)[2]


def rib_hole(row: str, y: float, *, share: float, side: int, diameter_mm: float, clear_m: float) -> Point:
    """Centre of a rib's hole: a share of the way aft, `clear_m` of paste left to the skin."""
    first, last = row_ends(row, y)
    x = first + share * (last - first)
    return x, y, inside(x, y, side) - side * (diameter_mm / MM / 2 + clear_m)


def local(point: Point, y: float) -> tuple[float, float]:
    """A point of a rib in the rib's own X and Y."""
    return point[0] - station(0.0, y), point[2] - inside_origin(y)


def web_outline(u: float, first_y: float, last_y: float) -> list[tuple[float, float]]:
    """A web's outline: X outboard from its inboard end, Y up from the root's chord line."""
    ys = (first_y + 0.001, last_y - 0.001)
    base_z = inside_origin(ROOT_Y)
    lower = [(y - first_y, inside(station(u, y), y, -1) - base_z) for y in ys]
    upper = [(y - first_y, inside(station(u, y), y, 1) - base_z) for y in reversed(ys)]
    return lower + upper


# --- meshes -------------------------------------------------------------------------------------


def write_obj(
    path: Path, points: list[Point], faces: list[tuple[int, ...]], *, mirrored: bool = False
) -> None:
    """Vertices in millimetres and one-based faces; mirrored at y = 0 with the faces turned over."""
    sign = -1.0 if mirrored else 1.0
    lines = [f"v {x * MM:.4f} {sign * y * MM:.4f} {z * MM:.4f}" for x, y, z in points]
    lines += [
        "f " + " ".join(str(index + 1) for index in (reversed(face) if mirrored else face)) for face in faces
    ]
    path.write_text("\n".join(lines) + "\n")


def skin_mesh(us: list[float], side: int, ys: list[float]) -> tuple[list[Point], list[tuple[int, ...]]]:
    """A skin as quads over chord fractions and butt lines."""
    points = [surface(u, y, side) for y in ys for u in us]
    wide = len(us)
    faces = [
        (row * wide + index, row * wide + index + 1, (row + 1) * wide + index + 1, (row + 1) * wide + index)
        for row in range(len(ys) - 1)
        for index in range(wide - 1)
    ]
    return points, faces


def nose_mesh(ys: list[float]) -> tuple[list[Point], list[tuple[int, ...]]]:
    """The leading edge skin, wrapped round the nose from 8 % above to 8 % below."""
    us = [0.08, 0.055, 0.035, 0.02, 0.01, 0.004, 0.0]
    wide = len(us) * 2 - 1
    points = [
        point
        for y in ys
        for point in [surface(u, y, 1) for u in us] + [surface(u, y, -1) for u in reversed(us[:-1])]
    ]
    faces = [
        (row * wide + index, row * wide + index + 1, (row + 1) * wide + index + 1, (row + 1) * wide + index)
        for row in range(len(ys) - 1)
        for index in range(wide - 1)
    ]
    return points, faces


def cell_mesh(row: str, bay: int, steps: int = 14) -> tuple[list[Point], list[tuple[int, ...]]]:
    """The closed bay between two ribs and two webs, net of skins and panels, outward triangles."""
    ends = (TANK_RIBS[bay] + RIB_M / 2, TANK_RIBS[bay + 1] - RIB_M / 2)
    points: list[Point] = []
    for y in ends:
        stations = spread(*row_ends(row, y), steps)
        points += [(x, y, inside(x, y, -1)) for x in stations]
        points += [(x, y, inside(x, y, 1)) for x in reversed(stations)]
    ring = 2 * (steps + 1)
    faces: list[tuple[int, ...]] = []
    for index in range(ring):
        after = (index + 1) % ring
        faces += [(index, ring + after, after), (index, ring + index, ring + after)]
    for index in range(steps):
        low, high = (index, index + 1), (ring - 1 - index, ring - 2 - index)
        faces += [(low[0], low[1], high[1]), (low[0], high[1], high[0])]
        faces += [
            (ring + low[0], ring + high[1], ring + low[1]),
            (ring + low[0], ring + high[0], ring + high[1]),
        ]
    return points, faces


def box_mesh(corner: Point, size: Point) -> tuple[list[Point], list[tuple[int, ...]]]:
    """A block by one corner and its size."""
    points = [
        (corner[0] + i * size[0], corner[1] + j * size[1], corner[2] + k * size[2])
        for k in (0, 1)
        for j in (0, 1)
        for i in (0, 1)
    ]
    quads = [(0, 2, 3, 1), (4, 5, 7, 6), (0, 1, 5, 4), (2, 6, 7, 3), (0, 4, 6, 2), (1, 3, 7, 5)]
    return points, [*quads]


def tip_mesh() -> tuple[list[Point], list[tuple[int, ...]]]:
    """The foam tip block: the tip section carried 60 mm outboard."""
    us = [0.02, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.97]
    ring = [surface(u, TIP_Y, -1) for u in us] + [surface(u, TIP_Y, 1) for u in reversed(us)]
    points = ring + [(x, y + 0.060, z + 0.060 * 0.0699) for x, y, z in ring]
    count = len(ring)
    faces: list[tuple[int, ...]] = [
        (index, count + index, count + (index + 1) % count, (index + 1) % count) for index in range(count)
    ]
    faces += [(index, index + 1, count - 2 - index, count - 1 - index) for index in range(len(us) - 1)]
    faces += [
        (count + index, 2 * count - 1 - index, 2 * count - 2 - index, count + index + 1)
        for index in range(len(us) - 1)
    ]
    return points, faces


def write_polyline(path: Path, points: list[Point]) -> None:
    """A run as one OBJ line."""
    lines = [f"v {x * MM:.4f} {y * MM:.4f} {z * MM:.4f}" for x, y, z in points]
    lines.append("l " + " ".join(str(index + 1) for index in range(len(points))))
    path.write_text("\n".join(lines) + "\n")
