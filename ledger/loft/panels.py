"""Flat panels: the largest square-edged outline that fits where a wall stands, less the gap for paste."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import groupby
from typing import TYPE_CHECKING

import numpy as np

from ledger.errors import Finding, Where
from ledger.loft.bodies import Body, beyond_plane, mesh_of, plate
from ledger.loft.division import Wall
from ledger.loft.faults import Tick, millimetres, stop
from ledger.loft.layout import NOSE, TAIL, Edge
from ledger.loft.lofted import Floats, PanelEdge
from ledger.loft.ribs import row_stations
from ledger.loft.slabs import Slab
from ledger.loft.webs import WebLine
from ledger.model.plan import Placement

if TYPE_CHECKING:
    from shapely import Polygon
    from shapely.geometry.base import BaseGeometry

    from ledger.loft.layout import Layout

# What a slice leaves over of less than this is a shaving beside the panel.
_SHAVING_M2 = 1e-5
_SHAVING_M3 = 1e-12
_CLEAR_M = 1e-7
_IN_FACE_M = 1e-10
_PARTS_SHOWN = 3


@dataclass(frozen=True, kw_only=True, eq=False)
class FlatPanel:
    """A panel in its own axes. `space` is the outline before the gap, `outline` what is cut; both (n, 2)."""

    part: str
    title: str
    wall: Wall
    space: Floats
    outline: Floats

    @property
    def solid(self) -> Body:
        """The panel, its holes not yet cut."""
        slab = self.wall.slab
        return plate(self.outline, slab.thickness_m, slab.origin_m, slab.axes)

    @property
    def placement(self) -> Placement:
        """Where its own X and Y lie in the build."""
        across, up, _ = (tuple(float(one) for one in axis) for axis in self.wall.slab.axes)
        return Placement(
            origin_m=self.wall.slab.origin_m,
            across=(across[0], across[1], across[2]),
            up_axis=(up[0], up[1], up[2]),
        )


def flat_panels(
    layout: Layout, walls: tuple[Wall, ...], lines: dict[str, WebLine], tick: Tick
) -> tuple[tuple[FlatPanel, ...], tuple[Finding, ...]]:
    """Every wall's panels: one, or where ribs run through a web one for each stretch between them.

    `tick` is called before each wall.
    """
    found: list[FlatPanel] = []
    faults: list[Finding] = []
    filled: list[Wall] = []
    for wall in walls:
        tick()
        pieces = _spaces(wall, _limits(layout, wall, lines))
        if wall.rib is not None and len(pieces) > 1:
            faults.append(_in_pieces(wall, len(pieces)))
            continue
        if not pieces:
            faults.append(_no_room(wall))
        for number, space in enumerate(pieces, start=1):
            outline = _less_gap(space, layout.gap_m)
            if outline is None:
                filled.append(wall)
                continue
            several = len(pieces) > 1
            found.append(
                FlatPanel(
                    part=f"{wall.part}.{number}" if several else wall.part,
                    title=f"{wall.title}, stretch {number}" if several else wall.title,
                    wall=wall,
                    space=_corners(space),
                    outline=_corners(outline),
                )
            )
    if filled:
        faults.append(_all_gap(layout, tuple(dict.fromkeys(wall.part for wall in filled)), filled[0].place))
    return tuple(found), tuple(faults)


def _limits(layout: Layout, wall: Wall, lines: dict[str, WebLine]) -> tuple[float, float]:
    """How far a wall runs along its own X: a web's free ends, or the mid-planes a rib lies between."""
    if wall.web is not None:
        # Square ends have to stay inside the butt lines on both faces.
        along, normal = wall.slab.axes[0], wall.slab.axes[2]
        slack = 0.5 * wall.slab.thickness_m * abs(normal[1] / along[1])
        length = float(np.hypot(*np.subtract(wall.web.end, wall.web.start)))
        return slack, length - slack
    if wall.rib is None:
        raise ValueError("a wall is a web or a rib")
    rows = {row.name: row for row in layout.rows}
    front = row_stations(rows[wall.rows[0]], lines, wall.rib)[0]
    rear = row_stations(rows[wall.rows[-1]], lines, wall.rib)[1]
    x, along = wall.slab.origin_m[0], wall.slab.axes[0, 0]
    return (front - x) / along, (rear - x) / along


def _spaces(wall: Wall, limits: tuple[float, float]) -> list[Polygon]:
    """The outlines that fit between both faces of a wall, in order along it."""
    from shapely import box

    low, high = (float(np.clip(limit, -1e3, 1e3)) for limit in limits)
    room = _near(wall)
    faces = [_slice(wall.slab, room, side) for side in (0.5, -0.5)]
    if wall.web is not None:
        # A web ends where it is told to; a rib's own outline says where its webs stand.
        faces = [face.intersection(box(low, -1e3, high, 1e3)) for face in faces]
    between = [piece for piece in _polygons(faces[0].intersection(faces[1])) if piece.area > _SHAVING_M2]
    fitted = [_inside(wall.slab, room, piece) for piece in between if low < piece.centroid.x < high]
    pieces = [piece for piece in fitted if piece.area > _SHAVING_M2]
    return sorted(pieces, key=lambda piece: float(piece.centroid.x))


def _near(wall: Wall) -> Body:
    """The room of a wall as far as one thickness beyond its faces."""
    slab = wall.slab
    room = wall.room
    for side in (1.5, -1.5):
        face = np.asarray(slab.origin_m) + side * slab.thickness_m * slab.axes[2]
        room = beyond_plane(room, face, -np.sign(side) * slab.axes[2])
    return room


def _inside(slab: Slab, room: Body, piece: Polygon) -> Polygon:
    """A piece that lies in both faces' rooms, less what stands into it between them, such as a bent skin."""
    from shapely import Polygon, union_all

    beyond = plate(_corners(piece), slab.thickness_m, slab.origin_m, slab.axes) - room
    if beyond.volume() <= _SHAVING_M3:
        return piece
    mesh = mesh_of(beyond)
    corners = slab.local(mesh.vertices_m)[:, :2][mesh.faces]
    shadow = union_all([Polygon(triangle).buffer(2.0 * _CLEAR_M, quad_segs=1) for triangle in corners])
    left = piece.difference(shadow).simplify(_CLEAR_M)
    return max(_polygons(left), key=lambda one: float(one.area), default=Polygon())


def _slice(slab: Slab, room: Body, side: float) -> BaseGeometry:
    """The room for a wall cut by one of its faces, in the wall's own X and Y.

    From the triangles of the cut itself: the library's own outlines of a slice are rounded to 0.2 um.
    """
    from shapely import polygons, union_all

    face = side * slab.thickness_m
    point = np.asarray(slab.origin_m) + face * slab.axes[2]
    mesh = mesh_of(beyond_plane(room, point, -np.sign(side) * slab.axes[2]))
    local = slab.local(mesh.vertices_m)
    in_face = (np.abs(local[:, 2] - face) < _IN_FACE_M)[mesh.faces].all(axis=1)
    return union_all(polygons(local[:, :2][mesh.faces[in_face]]))


def _polygons(shape: object) -> Iterator[Polygon]:
    from shapely import Polygon

    for one in getattr(shape, "geoms", (shape,)):
        if isinstance(one, Polygon):
            yield one


def _less_gap(space: Polygon, gap_m: float) -> Polygon | None:
    outline = space.buffer(-gap_m, join_style="mitre") if gap_m > 0.0 else space
    pieces = [piece for piece in _polygons(outline) if piece.area > _SHAVING_M2]
    return max(pieces, key=lambda piece: float(piece.area)) if pieces else None


def _corners(polygon: Polygon) -> Floats:
    """The outer ring, anticlockwise, its first corner not repeated; corners on a straight line left out."""
    from shapely.geometry.polygon import orient

    ring = np.array(orient(polygon).exterior.coords[:-1])
    before, after = ring - np.roll(ring, 1, axis=0), np.roll(ring, -1, axis=0) - ring
    turn = before[:, 0] * after[:, 1] - before[:, 1] * after[:, 0]
    length = np.linalg.norm(before, axis=1) * np.linalg.norm(after, axis=1)
    kept = np.abs(turn) > 1e-9 * np.maximum(length, 1e-12)
    return ring[kept] if kept.sum() >= 3 else ring


def _in_pieces(wall: Wall, count: int) -> Finding:
    return stop(
        wall.place,
        "wall-in-pieces",
        f"{wall.part} falls into {count} pieces",
        "give it a row on each side of a web that stands in it, or make a cap that cuts through it thinner",
    )


def _all_gap(layout: Layout, parts: tuple[str, ...], first: Where) -> Finding:
    """One finding for all: it is the one gap that leaves no panel."""
    more = f" and {len(parts) - _PARTS_SHOWN} more" if len(parts) > _PARTS_SHOWN else ""
    return stop(
        layout.gap_place or first,
        "gap-too-wide",
        f"a gap of {millimetres(layout.gap_m)} at each edge leaves nothing of"
        f" {', '.join(parts[:_PARTS_SHOWN])}{more}",
        "write a smaller gap, or move what is left too small to where the section is deeper",
    )


def _no_room(wall: Wall) -> Finding:
    return stop(
        wall.place,
        "rib-outside-wing" if wall.rib is not None else "web-outside-section",
        f"{wall.part} finds no room for a flat panel between what it meets",
        "move it to where the section is deeper",
    )


def panel_edges(panel: FlatPanel) -> tuple[PanelEdge, ...]:
    """The edge of a panel in stretches by what each meets, in the mid-plane."""
    ring = panel.outline
    meets = [_meets(panel, start, end) for start, end in zip(ring, np.roll(ring, -1, axis=0), strict=True)]
    # Begun where what is met changes, so that no stretch is parted by the first corner.
    first = next((place for place in range(len(ring)) if meets[place] is not meets[place - 1]), 0)
    order = [(first + step) % len(ring) for step in range(len(ring))]
    edges = []
    for met, group in groupby(order, key=lambda place: meets[place]):
        places = list(group)
        flat = ring[[*places, (places[-1] + 1) % len(ring)]]
        edges.append(PanelEdge(meets=met, points_m=panel.wall.slab.placed(flat)))
    return tuple(edges)


def _meets(panel: FlatPanel, start: Floats, end: Floats) -> Edge:
    along = end - start
    outward_x, outward_y = along[1], -along[0]
    if abs(outward_y) >= abs(outward_x):
        return Edge.UPPER if outward_y > 0.0 else Edge.LOWER
    wall = panel.wall
    if wall.web is not None:
        low, high = panel.space[:, 0].min(), panel.space[:, 0].max()
        length = float(np.hypot(*np.subtract(wall.web.end, wall.web.start)))
        slack = wall.slab.thickness_m
        at_start = outward_x < 0.0 and low < slack and start[0] - low < slack
        at_end = outward_x > 0.0 and length - high < slack and high - start[0] < slack
        return Edge.FREE if at_start or at_end else Edge.WALL
    if (outward_x < 0.0 and NOSE in wall.ends) or (outward_x > 0.0 and TAIL in wall.ends):
        return Edge.UPPER if outward_y > 0.0 else Edge.LOWER
    return Edge.WALL
