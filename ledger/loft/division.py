"""The void divided: caps under the skins, webs, ribs between them, and the bays that are left."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import partial
from itertools import pairwise

import numpy as np

from ledger.errors import Finding, Where
from ledger.loft.bodies import Body, beyond_plane, body_of, prism, runs, united
from ledger.loft.faults import Tick, stop
from ledger.loft.layout import Cap, Layout, Row, Surface
from ledger.loft.lofted import Floats
from ledger.loft.part_names import rib_part
from ledger.loft.ribs import RibPlane, row_stations
from ledger.loft.shell import Shell, layer, void
from ledger.loft.slabs import Slab, chord_point, reach_of
from ledger.loft.webs import WebLength, WebLine

# What is left of a wall over less than this is a shaving, not a panel.
_SHAVING_M3 = 1e-9
# A layer that is deeper than its skin is curved folds, and has less than a straight one.
_UNFOLDED = 0.9


@dataclass(frozen=True, kw_only=True, eq=False)
class Wall:
    """A wall as the void leaves room for it. `solid` includes what paste its panel's edges will need.

    `room` is all that it may be cut from. `rows` are those a rib's panel runs through, and `ends` what
    bounds them at the front and at the rear: webs, or the wing's own nose and tail.
    """

    part: str
    title: str
    place: Where
    slab: Slab
    solid: Body
    room: Body
    rib: RibPlane | None = None
    web: WebLength | None = None
    rows: tuple[str, ...] = ()
    ends: tuple[str, ...] = ()


@dataclass(frozen=True, kw_only=True, eq=False)
class CapSolid:
    """A cap and its body, and the least that a straight strip of its size takes up."""

    cap: Cap
    solid: Body
    strip_m3: float


@dataclass(frozen=True, kw_only=True, eq=False)
class Bay:
    """A bay of a row, named by the row and its inboard rib; without a rib it runs to the wing's end."""

    name: str
    row: Row
    inboard: RibPlane | None
    outboard: RibPlane | None


@dataclass(frozen=True, kw_only=True, eq=False)
class Division:
    """Everything inside the skins, as bodies that share their faces."""

    caps: tuple[CapSolid, ...]
    ribs: tuple[Wall, ...]
    webs: tuple[Wall, ...]
    bays: tuple[Bay, ...]
    free: Body
    rows: dict[str, Body]

    def space(self, bay: Bay) -> Body:
        """The space of a bay, bounded by the faces of its walls."""
        found = self.rows[bay.row.name]
        for plane, side in ((bay.inboard, -1.0), (bay.outboard, 1.0)):
            if plane is not None:
                normal = side * plane.slab.axes[2]
                face = np.asarray(plane.slab.origin_m) + normal * 0.5 * plane.rib.thickness_m
                found = beyond_plane(found, face, normal)
        return united(piece for piece in found.decompose() if piece.volume() > _SHAVING_M3)


def divide(
    layout: Layout, shell: Shell, lines: tuple[WebLine, ...], planes: tuple[RibPlane, ...], tick: Tick
) -> tuple[Division | None, tuple[Finding, ...]]:
    """Cut the void up. A rib is cut between webs but for those it runs through; webs are cut for those.

    Everything is cut by whole slabs that reach beyond what they cut: two solids whose faces all but lie
    in one another are what a solid library is least sure of.
    """
    by_name = {line.web.name: line for line in lines}
    inside = united(body_of(mesh) for mesh in void(shell))
    caps = tuple(_cap_solids(layout, shell, by_name))
    open_space = inside - united(cap.solid for cap in caps) if caps else inside
    cutters = tuple(_rib_cutters(layout, shell, planes, by_name))
    ribs, faults = _rib_walls(cutters, by_name, open_space, tick)
    webs, more = _web_walls(lines, cutters, open_space, tick)
    crossing = (*_too_thick(caps, inside), *_overlapping(caps), *_crossing(ribs), *_crossing(webs))
    if faults or more or crossing:
        return None, (*faults, *more, *crossing)
    slabs = united(length.slab.body for line in lines for length in line.lengths)
    between = {row.name: _row_prism(layout, shell, row, by_name) for row in layout.rows}
    division = Division(
        caps=caps,
        ribs=ribs,
        webs=webs,
        bays=tuple(_bays(layout, planes, by_name)),
        free=open_space - slabs - united(cutter.body for cutter in cutters),
        rows={name: (open_space ^ body) - slabs for name, body in between.items()},
    )
    return division, ()


def _cap_solids(layout: Layout, shell: Shell, lines: dict[str, WebLine]) -> Iterator[CapSolid]:
    for cap in layout.caps:
        if cap.let_in:
            continue
        line = lines[cap.web]
        low, high = cap.between_m or (line.points[0][1], line.points[-1][1])
        pieces = []
        for block in shell.blocks:
            run = _strips_over(shell, block, line, cap)
            strip = prism(_strip_over_web(line, cap, low, high))
            pieces.append(body_of(layer(shell, block, run, cap.thickness_m)) ^ strip)
        strip_m3 = cap.width_m * cap.thickness_m * (high - low)
        yield CapSolid(cap=cap, solid=united(pieces), strip_m3=strip_m3)


def _strip_over_web(line: WebLine, cap: Cap, low_m: float, high_m: float) -> Floats:
    """A cap seen from above, anticlockwise: so wide along the chord that its own width is true."""
    lines = sorted({low_m, high_m, *(y for _, y in line.points if low_m < y < high_m)})
    slope = np.gradient([line.station(at) for at in lines], lines)
    half = 0.5 * cap.width_m * np.sqrt(1.0 + slope**2)
    middle = np.array([line.station(at) for at in lines])
    aft = np.column_stack((middle + half, lines))
    forward = np.column_stack((middle - half, lines))[::-1]
    return np.concatenate((aft, forward))


def _strips_over(shell: Shell, block: tuple[int, int], line: WebLine, cap: Cap) -> tuple[int, int]:
    """Ring corners between which a surface lies over a cap all along a block."""
    ring = shell.outer_m[block[0] : block[1] + 1]
    nose = len(shell.shares) - 1
    corners = np.arange(nose + 1) if cap.surface is Surface.UPPER else np.arange(nose, ring.shape[1])
    reach = cap.width_m + 2.0 * cap.thickness_m
    hit: list[int] = []
    for station, at in zip(ring, shell.butt_lines_m[block[0] : block[1] + 1], strict=True):
        off = np.abs(station[corners, 0] - line.station(at))
        hit.extend(int(place) for place in np.flatnonzero(off <= max(reach, float(off.min()))))
    first, last = max(0, min(hit) - 1), min(len(corners) - 1, max(hit) + 1)
    return int(corners[first]), int(corners[last])


@dataclass(frozen=True, kw_only=True, eq=False)
class _Cutter:
    """A rib's slab in the rows it runs through together, from the middle of one web to that of another."""

    plane: RibPlane
    group: tuple[Row, ...]
    body: Body


def _rib_cutters(
    layout: Layout, shell: Shell, planes: tuple[RibPlane, ...], lines: dict[str, WebLine]
) -> Iterator[_Cutter]:
    for plane in planes:
        for group in _joined_rows(layout, plane, lines):
            rows = united(_row_prism(layout, shell, row, lines) for row in group)
            yield _Cutter(plane=plane, group=group, body=plane.slab.body ^ rows)


def _rib_walls(
    cutters: tuple[_Cutter, ...], lines: dict[str, WebLine], open_space: Body, tick: Tick
) -> tuple[tuple[Wall, ...], tuple[Finding, ...]]:
    walls, faults = [], []
    rooms: dict[tuple[str, ...], Body] = {}
    for cutter in cutters:
        tick()
        plane, group = cutter.plane, cutter.group
        cutting = tuple(name for name, line in lines.items() if not _runs_through(cutter, line))
        if cutting not in rooms:
            slabs = [length.slab.body for name in cutting for length in lines[name].lengths]
            rooms[cutting] = open_space - united(slabs)
        room = rooms[cutting]
        solid = room ^ cutter.body
        if solid.volume() < _SHAVING_M3:
            name = f"rib {plane.rib.name} in row {group[0].name}"
            faults.append(_no_room(plane.rib.place, "rib-outside-wing", name))
            continue
        names = tuple(row.name for row in group)
        butt_line = plane.butt_line(_middle(group, lines, plane))
        walls.append(
            Wall(
                part=rib_part("".join(names), plane.rib.name),
                title=f"{group[0].title} rib at BL {1000.0 * butt_line:.0f} mm",
                place=plane.rib.place,
                slab=plane.slab,
                solid=solid,
                room=room,
                rib=plane,
                rows=names,
                ends=(group[0].front, group[-1].rear),
            )
        )
    return tuple(walls), tuple(faults)


def _joined_rows(layout: Layout, plane: RibPlane, lines: dict[str, WebLine]) -> list[tuple[Row, ...]]:
    """The rows of a rib front to rear, those together that it runs through from one to the next."""
    rows = [row for row in layout.rows if row.name in plane.rib.rows]
    rows.sort(key=lambda row: row_stations(row, lines, plane)[0])
    groups: list[list[Row]] = []
    for row in rows:
        if groups and groups[-1][-1].rear == row.front and row.front in plane.rib.through:
            groups[-1].append(row)
        else:
            groups.append([row])
    return [tuple(group) for group in groups]


def _extent(group: tuple[Row, ...], lines: dict[str, WebLine], plane: RibPlane) -> tuple[float, float]:
    return row_stations(group[0], lines, plane)[0], row_stations(group[-1], lines, plane)[1]


def _middle(group: tuple[Row, ...], lines: dict[str, WebLine], plane: RibPlane) -> float:
    front, rear = _extent(group, lines, plane)
    known = [station for station in (front, rear) if np.isfinite(station)]
    return float(np.mean(known)) if known else plane.slab.origin_m[0]


def _web_walls(
    lines: tuple[WebLine, ...], cutters: tuple[_Cutter, ...], open_space: Body, tick: Tick
) -> tuple[tuple[Wall, ...], tuple[Finding, ...]]:
    walls, faults = [], []
    for line in lines:
        tick()
        running = [cutter.body for cutter in cutters if _runs_through(cutter, line)]
        room = open_space - united(running) if running else open_space
        for length in line.lengths:
            solid = room ^ length.slab.body
            if solid.volume() < _SHAVING_M3:
                faults.append(_no_room(line.web.place, "web-outside-section", f"web {line.web.name}"))
                continue
            walls.append(
                Wall(
                    part=length.part,
                    title=length.title,
                    place=line.web.place,
                    slab=length.slab,
                    solid=solid,
                    room=room,
                    web=length,
                )
            )
    return tuple(walls), tuple(faults)


def _runs_through(cutter: _Cutter, line: WebLine) -> bool:
    return any(line.web.name == row.front for row in cutter.group[1:])


def _crossing(walls: tuple[Wall, ...]) -> Iterator[Finding]:
    """Walls of one kind that meet; ribs and webs are cut for one another."""
    for one, other in _meeting([wall.solid for wall in walls]):
        what = f"{walls[other].part} crosses {walls[one].part}"
        yield stop(walls[other].place, "walls-cross", what, "move one of them")


def _too_thick(caps: tuple[CapSolid, ...], inside: Body) -> Iterator[Finding]:
    for one in caps:
        cap, volume = one.cap, one.solid.volume()
        folded = volume < _UNFOLDED * one.strip_m3
        if folded or volume - (one.solid ^ inside).volume() > _SHAVING_M3:
            what = f"{cap.part} has no room under the {cap.surface.value} skin"
            yield stop(
                cap.place, "cap-too-thick", what, "make it thinner, or end it where the section is deep"
            )


def _overlapping(caps: tuple[CapSolid, ...]) -> Iterator[Finding]:
    for one, other in _meeting([cap.solid for cap in caps]):
        cap = caps[other].cap
        what = f"{cap.part} takes up the place of {caps[one].cap.part}"
        yield stop(cap.place, "caps-overlap", what, "make one of them narrower or thinner")


def _meeting(bodies: list[Body]) -> Iterator[tuple[int, int]]:
    """Numbers of each two bodies that share more than a shaving."""
    boxes = np.array([body.bounding_box() for body in bodies]).reshape(-1, 6)
    low, high = boxes[:, :3], boxes[:, 3:]
    for one, body in enumerate(bodies):
        near = (np.maximum(low, low[one]) < np.minimum(high, high[one])).all(axis=1)
        for other in np.flatnonzero(near):
            if other > one and (body ^ bodies[other]).volume() > _SHAVING_M3:
                yield one, int(other)


def _no_room(place: Where, code: str, name: str) -> Finding:
    what = f"{name} finds no room between the skins"
    return stop(place, code, what, "move it to where the section is deep enough")


def _row_prism(layout: Layout, shell: Shell, row: Row, lines: dict[str, WebLine]) -> Body:
    """Everything above and below a row, between the mid-planes of the webs that bound it.

    Both are carried on beyond their ends; where they would cross there, the row has come to its end.
    """
    reach = reach_of(shell)
    low, high = float(shell.butt_lines_m[0]), float(shell.butt_lines_m[-1])
    nose, _, level = chord_point(layout, low, 0.0)
    bounds = [lines[name] for name in (row.front, row.rear) if name in lines]
    at = np.array(sorted({low, high, *(y for line in bounds for _, y in line.points if low < y < high)}))
    front = _stations_of(lines.get(row.front), nose - reach, at)
    rear = _stations_of(lines.get(row.rear), nose + reach, at)
    at, front, rear = _with_crossings(at, front, rear)
    # Straight on across the span beyond root and tip, where two lines at an angle would cross in the end.
    at[0], at[-1] = low - reach, high + reach
    at, front, rear = (np.concatenate((one[:1], one, one[-1:])) for one in (at, front, rear))
    at[1], at[-2] = low, high
    pieces = []
    for first, last in runs((rear[:-1] + rear[1:] > front[:-1] + front[1:]).tolist()):
        aft = np.column_stack((rear, at))[first : last + 1]
        forward = np.column_stack((front, at))[first : last + 1][::-1]
        pieces.append(prism(np.concatenate((aft, forward)), level - reach, level + reach))
    return united(pieces)


def _stations_of(line: WebLine | None, beyond: float, at: Floats) -> Floats:
    return np.array([beyond if line is None else line.station(float(one)) for one in at])


def _with_crossings(at: Floats, front: Floats, rear: Floats) -> tuple[Floats, Floats, Floats]:
    """Two lines with a corner more wherever they cross."""
    wide = rear - front
    crossed = np.flatnonzero(wide[:-1] * wide[1:] < 0.0)
    share = wide[crossed] / (wide[crossed] - wide[crossed + 1])
    lines = at[crossed] + share * (at[crossed + 1] - at[crossed])
    stations = front[crossed] + share * (front[crossed + 1] - front[crossed])
    place = crossed + 1
    return np.insert(at, place, lines), np.insert(front, place, stations), np.insert(rear, place, stations)


def _bays(layout: Layout, planes: tuple[RibPlane, ...], lines: dict[str, WebLine]) -> Iterator[Bay]:
    for row in layout.rows:
        standing = [plane for plane in planes if row.name in plane.rib.rows]
        standing.sort(key=partial(_butt_line_in, row, lines))
        for inboard, outboard in pairwise((None, *standing, None)):
            name = f"{row.name}{inboard.rib.name if inboard is not None else '0'}"
            yield Bay(name=name, row=row, inboard=inboard, outboard=outboard)


def _butt_line_in(row: Row, lines: dict[str, WebLine], plane: RibPlane) -> float:
    """Where a rib stands in the middle of a row, which may be another order than that of its origin."""
    return plane.butt_line(_middle((row,), lines, plane))
