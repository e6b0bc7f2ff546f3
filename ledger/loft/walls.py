"""Webs and ribs as flat slabs: where they run in plan, and what keeps them from it."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import combinations, pairwise

import numpy as np

from ledger.errors import Finding, Where
from ledger.loft.bodies import Body, plate, prism
from ledger.loft.faults import millimetres, stop
from ledger.loft.layout import NOSE, TAIL, Layout, PlanPoint, Rib, Row, Web
from ledger.loft.lofted import Floats
from ledger.loft.shell import Shell
from ledger.model.vectors import Vector

# A web bends where its corner lies this far off the straight line.
_STRAIGHT_M = 1e-6
# A web that runs less than this share of its length along the span is a rib.
_LEAST_SPANWISE = 0.3
# And a rib that runs less than this share along the chord is a web.
_LEAST_CHORDWISE = 0.3


@dataclass(frozen=True, kw_only=True, eq=False)
class Slab:
    """A flat slab. `axes` are rows: along the wall, up, and its normal; the origin is in its mid-plane."""

    place: Where
    thickness_m: float
    origin_m: Vector
    axes: Floats
    body: Body

    def local(self, points_m: Floats) -> Floats:
        """Points (n, 3) in the slab's own axes."""
        return np.asarray((np.asarray(points_m) - np.asarray(self.origin_m)) @ self.axes.T)

    def placed(self, flat_m: Floats) -> Floats:
        """Points (n, 2) of the slab's mid-plane in build axes, (n, 3)."""
        return np.asarray(np.asarray(self.origin_m) + np.asarray(flat_m) @ self.axes[:2])


@dataclass(frozen=True, kw_only=True, eq=False)
class WebLength:
    """One straight length of a web, from its inboard to its outboard end in plan."""

    web: Web
    part: str
    title: str
    start: PlanPoint
    end: PlanPoint
    slab: Slab


@dataclass(frozen=True, kw_only=True, eq=False)
class WebLine:
    """A whole web in plan, inboard to outboard, with its lengths."""

    web: Web
    points: tuple[PlanPoint, ...]
    lengths: tuple[WebLength, ...]

    def reaches(self, butt_line_m: float, slack_m: float = 1e-9) -> bool:
        """Whether the web is there at a butt line."""
        return self.points[0][1] - slack_m <= butt_line_m <= self.points[-1][1] + slack_m

    def station(self, butt_line_m: float) -> float:
        """Station of its mid-plane at a butt line, carried on straight beyond its ends."""
        x, y = np.array(self.points).T
        piece = int(np.clip(np.searchsorted(y, butt_line_m) - 1, 0, len(y) - 2))
        slope = (x[piece + 1] - x[piece]) / (y[piece + 1] - y[piece])
        return float(x[piece] + slope * (butt_line_m - y[piece]))


@dataclass(frozen=True, kw_only=True, eq=False)
class RibPlane:
    """A rib before it is cut between webs."""

    rib: Rib
    slab: Slab

    def butt_line(self, station_m: float) -> float:
        """Butt line of its mid-plane, at its own height, at a station."""
        x, y, _ = self.slab.origin_m
        along = self.slab.axes[0]
        return float(y + (station_m - x) * along[1] / along[0])

    def crossing(self, line: WebLine) -> PlanPoint:
        """Where its mid-line meets that of a web in plan; infinitely far where they are parallel."""
        y = np.array(line.points)[:, 1]
        off = np.array([butt_line - self.butt_line(station) for station, butt_line in line.points])
        passed = np.flatnonzero(off[:-1] * off[1:] <= 0.0)
        last = 0 if abs(off[0]) < abs(off[-1]) else len(y) - 2
        piece = int(passed[0]) if len(passed) else last
        gain = float(off[piece + 1] - off[piece])
        if gain == 0.0:
            return line.points[piece][0], float("inf")
        butt_line = float(y[piece] - off[piece] * (y[piece + 1] - y[piece]) / gain)
        return line.station(butt_line), butt_line


def reach_of(shell: Shell) -> float:
    """A length that is beyond the wing from anywhere in it."""
    return 2.0 * float(np.ptp(shell.outer_m.reshape(-1, 3), axis=0).max())


def chord_point(layout: Layout, butt_line_m: float, share: float) -> Vector:
    """The point of the chord line at a butt line, straight between sections."""
    at = [section.butt_line_m for section in layout.sections]
    twist = np.radians([section.twist_deg for section in layout.sections])
    chord = np.array([section.chord_m for section in layout.sections])
    x = [section.leading_edge_m for section in layout.sections] + share * chord * np.cos(twist)
    z = [section.water_line_m for section in layout.sections] - share * chord * np.sin(twist)
    return float(np.interp(butt_line_m, at, x)), butt_line_m, float(np.interp(butt_line_m, at, z))


def web_lines(layout: Layout, shell: Shell) -> tuple[tuple[WebLine, ...], tuple[Finding, ...]]:
    """Every web, or what is wrong with where it runs."""
    found: list[WebLine] = []
    faults: list[Finding] = []
    for web in layout.webs:
        points = _plan_points(layout, web)
        wrong = tuple(_plan_faults(layout, web, points))
        if wrong:
            faults.extend(wrong)
            continue
        found.append(WebLine(web=web, points=points, lengths=_lengths(layout, shell, web, points)))
    faults.extend(_crossing_webs(found))
    return tuple(found), tuple(faults)


def _plan_points(layout: Layout, web: Web) -> tuple[PlanPoint, ...]:
    first, last = layout.sections[0].butt_line_m, layout.sections[-1].butt_line_m
    if web.points_m is not None:
        ends = sorted(web.points_m, key=lambda point: point[1])
        low, high = web.between_m or (ends[0][1], ends[1][1])
        if ends[0][1] == ends[1][1]:
            return tuple(ends)
        slope = (ends[1][0] - ends[0][0]) / (ends[1][1] - ends[0][1])
        return tuple((ends[0][0] + slope * (line - ends[0][1]), line) for line in (low, high))
    low, high = web.between_m or (first, last)
    inner = [line.butt_line_m for line in layout.sections if low < line.butt_line_m < high]
    shares = web.chord_shares or (0.0, 0.0)
    points = []
    for line in (low, *inner, high):
        share = shares[0] + (shares[1] - shares[0]) * (line - low) / (high - low)
        points.append(chord_point(layout, line, share)[:2])
    return tuple(points)


def _plan_faults(layout: Layout, web: Web, points: tuple[PlanPoint, ...]) -> Iterator[Finding]:
    first, last = layout.sections[0].butt_line_m, layout.sections[-1].butt_line_m
    run, rise = points[-1][0] - points[0][0], points[-1][1] - points[0][1]
    if rise <= 0.0 or rise < _LEAST_SPANWISE * float(np.hypot(run, rise)):
        yield stop(
            web.place,
            "web-across",
            f"web {web.name} runs more along the chord than along the span",
            "give its two ends other butt lines, or make it a rib",
        )
        return
    for x, line in points:
        if not first - 1e-9 <= line <= last + 1e-9:
            yield _outside(web, f"ends at BL {millimetres(line)}, beyond the first or last section")
            return
        nose, tail = chord_point(layout, line, 0.0)[0], chord_point(layout, line, 1.0)[0]
        if not nose < x < tail:
            chord = f"{millimetres(nose)} to {millimetres(tail)}"
            yield _outside(
                web, f"is at FS {millimetres(x)} at BL {millimetres(line)}, where the chord runs from {chord}"
            )
            return
    bends = [
        y1
        for (x0, y0), (x1, y1), (x2, y2) in zip(points, points[1:], points[2:], strict=False)
        if abs(x1 - (x0 + (x2 - x0) * (y1 - y0) / (y2 - y0))) > _STRAIGHT_M
        and all(abs(splice - y1) > 1e-6 for splice in web.splices_m)
    ]
    if bends:
        cuts_mm = sorted(round(1000.0 * line, 4) for line in (*web.splices_m, *bends))
        splices = ", ".join(f'"{line:.10g} mm"' for line in cuts_mm)
        yield stop(
            web.place,
            "web-bends",
            f"web {web.name} bends at BL {' and '.join(map(millimetres, bends))} and a panel is flat",
            f"add splices = [{splices}] and a name for each length in lengths, or give it two points",
        )


def _outside(web: Web, why: str) -> Finding:
    return stop(
        web.place, "web-outside-section", f"web {web.name} {why}", "move it inside the section, or shorten it"
    )


def _lengths(layout: Layout, shell: Shell, web: Web, points: tuple[PlanPoint, ...]) -> tuple[WebLength, ...]:
    x, y = np.array(points).T
    cuts = sorted({y[0], y[-1], *(splice for splice in web.splices_m if y[0] < splice < y[-1])})
    names = web.lengths or tuple(str(number) for number in range(1, len(cuts)))
    found = []
    for name, (low, high) in zip(names, pairwise(cuts), strict=True):
        start, end = ((float(np.interp(line, y, x)), float(line)) for line in (low, high))
        part, title = f"WEB.{web.name}", web.title
        if len(cuts) > 2 or web.lengths:
            part, title = f"{part}.{name}", f"{title}, {_length_word(name)}"
        slab = _web_slab(layout, shell, web, start, end)
        found.append(WebLength(web=web, part=part, title=title, start=start, end=end, slab=slab))
    return tuple(found)


def _length_word(name: str) -> str:
    return {"IN": "inboard", "MID": "middle", "OUT": "outboard"}.get(name.upper(), f"length {name}")


def _web_slab(layout: Layout, shell: Shell, web: Web, start: PlanPoint, end: PlanPoint) -> Slab:
    along = np.array([end[0] - start[0], end[1] - start[1], 0.0])
    along /= np.linalg.norm(along)
    up = np.array([0.0, 0.0, 1.0])
    normal = np.cross(along, up)
    # The ends are cut at butt lines, so that two lengths that meet at an angle leave no gap.
    aside = 0.5 * web.thickness_m / normal[0]
    (x0, y0), (x1, y1) = start, end
    corners = np.array([(x0 + aside, y0), (x1 + aside, y1), (x1 - aside, y1), (x0 - aside, y0)])
    level = chord_point(layout, start[1], 0.0)[2]
    reach = reach_of(shell)
    return Slab(
        place=web.place,
        thickness_m=web.thickness_m,
        origin_m=(start[0], start[1], level),
        axes=np.stack((along, up, normal)),
        body=prism(corners, level - reach, level + reach),
    )


def rib_planes(
    layout: Layout, shell: Shell, lines: dict[str, WebLine]
) -> tuple[tuple[RibPlane, ...], tuple[Finding, ...]]:
    """Every rib, root to tip, or what is wrong with where it stands."""
    planes = [RibPlane(rib=rib, slab=_rib_slab(layout, shell, rib)) for rib in layout.ribs]
    planes.sort(key=lambda plane: plane.slab.origin_m[1])
    faults: list[Finding] = [finding for plane in planes for finding in _along_span(plane)]
    if faults:
        return (), tuple(faults)
    for plane in planes:
        missing = (*_without_web(layout, plane, lines), *_through_end(layout, plane))
        faults.extend(missing or _beyond_ends(layout, shell, plane, lines))
    if not faults:
        faults.extend(_crossing_ribs(layout, planes, lines))
    return tuple(planes), tuple(faults)


def _rib_slab(layout: Layout, shell: Shell, rib: Rib) -> Slab:
    if rib.points_m is None:
        butt_line = rib.butt_line_m or 0.0
        along = np.array([1.0, 0.0, 0.0])
        origin = chord_point(layout, butt_line, 0.0)
    else:
        ends = sorted(rib.points_m)
        along = np.array([ends[1][0] - ends[0][0], ends[1][1] - ends[0][1], 0.0])
        along /= np.linalg.norm(along)
        origin = (*ends[0], chord_point(layout, ends[0][1], 0.0)[2])
    lean = np.radians(rib.lean_deg)
    outboard = np.array([-along[1], along[0], 0.0])
    up = outboard * np.sin(lean) + np.array([0.0, 0.0, np.cos(lean)])
    axes = np.stack((along, up, np.cross(along, up)))
    reach = reach_of(shell)
    square = reach * np.array([(-1.0, -1.0), (1.0, -1.0), (1.0, 1.0), (-1.0, 1.0)])
    return Slab(
        place=rib.place,
        thickness_m=rib.thickness_m,
        origin_m=origin,
        axes=axes,
        body=plate(square, rib.thickness_m, origin, axes),
    )


def _along_span(plane: RibPlane) -> Iterator[Finding]:
    if abs(float(plane.slab.axes[0, 0])) < _LEAST_CHORDWISE:
        yield stop(
            plane.rib.place,
            "rib-along",
            f"rib {plane.rib.name} runs more along the span than along the chord",
            "give its two ends other stations, or make it a web",
        )


def _without_web(layout: Layout, plane: RibPlane, lines: dict[str, WebLine]) -> Iterator[Finding]:
    """A rib is cut between webs, so those of its rows have to be there."""
    first, last = layout.sections[0].butt_line_m, layout.sections[-1].butt_line_m
    stands = [point[1] for point in plane.rib.points_m or ()] or [plane.slab.origin_m[1]]
    if min(stands) > last or max(stands) < first:
        end, line_m = ("ends", last) if min(stands) > last else ("begins", first)
        what = f"rib {plane.rib.name} stands outside the wing, which {end} at BL {millimetres(line_m)}"
        yield stop(plane.rib.place, "rib-outside-wing", what, "move it inside, or add a section beyond it")
        return
    for row in (row for row in layout.rows if row.name in plane.rib.rows):
        for name in (row.front, row.rear):
            if name in lines and not lines[name].reaches(plane.crossing(lines[name])[1]):
                yield stop(
                    plane.rib.place,
                    "rib-meets-no-web",
                    f"rib {plane.rib.name} stands in row {row.name} where web {name} is not",
                    f"carry web {name} on, or leave row {row.name} out of the rib",
                )


def _through_end(layout: Layout, plane: RibPlane) -> Iterator[Finding]:
    """A rib runs through webs from one of its rows to the next, not into one where it ends."""
    rows = [row for row in layout.rows if row.name in plane.rib.rows]
    between = {row.front for row in rows} & {row.rear for row in rows}
    for name in plane.rib.through:
        if name not in between:
            yield stop(
                plane.rib.place,
                "rib-ends-at-web",
                f"rib {plane.rib.name} is to run through web {name}, but has no row on both sides of it",
                f"leave {name} out of through, or add the row beyond it",
            )


def _beyond_ends(
    layout: Layout, shell: Shell, plane: RibPlane, lines: dict[str, WebLine]
) -> Iterator[Finding]:
    """The rib's whole thickness has to lie between the first and the last section."""
    spans = [row_stations(row, lines, plane) for row in layout.rows if row.name in plane.rib.rows]
    front, rear = min(span[0] for span in spans), max(span[1] for span in spans)
    for number, outboard in ((0, 1.0), (-1, -1.0)):
        ring = shell.outer_m[number]
        met = ring[(ring[:, 0] >= front) & (ring[:, 0] <= rear)]
        # The normal of a rib points inboard, so an end inboard of it stands on the positive side.
        clear = outboard * plane.slab.local(met)[:, 2] - 0.5 * plane.rib.thickness_m
        if len(clear) and clear.min() < -_STRAIGHT_M:
            yield stop(
                plane.rib.place,
                "rib-outside-wing",
                f"rib {plane.rib.name} and its thickness reach beyond the section at BL"
                f" {millimetres(shell.butt_lines_m[number])}, by {millimetres(-clear.min())}",
                "move the rib, or carry the section on",
            )
            return


def _crossing_ribs(layout: Layout, planes: list[RibPlane], lines: dict[str, WebLine]) -> Iterator[Finding]:
    """Two ribs of one row may not cross or touch in it."""
    for one, other in combinations(planes, 2):
        for row in layout.rows:
            if row.name not in one.rib.rows or row.name not in other.rib.rows:
                continue
            apart = _apart_in_row(layout, row, lines, one, other)
            if min(apart) * max(apart) <= 0.0:
                yield stop(
                    other.rib.place,
                    "walls-cross",
                    f"rib {other.rib.name} crosses or touches rib {one.rib.name} in row {row.name}",
                    "move one of them",
                )
                break


def _apart_in_row(
    layout: Layout, row: Row, lines: dict[str, WebLine], one: RibPlane, other: RibPlane
) -> list[float]:
    """Gaps between the faces of two ribs at both sides of a row, signed; 0 where they touch."""
    butt_line = one.slab.origin_m[1]
    nose, tail = (chord_point(layout, butt_line, share)[0] for share in (0.0, 1.0))
    stations = [
        nose if row.front == NOSE else lines[row.front].station(butt_line),
        tail if row.rear == TAIL else lines[row.rear].station(butt_line),
    ]
    room = 0.5 * (one.rib.thickness_m + other.rib.thickness_m)
    apart = [other.butt_line(station) - one.butt_line(station) for station in stations]
    return [0.0 if abs(gap) < room else gap for gap in apart]


def _crossing_webs(lines: Iterable[WebLine]) -> Iterator[Finding]:
    for one, other in combinations(lines, 2):
        low = max(one.points[0][1], other.points[0][1])
        high = min(one.points[-1][1], other.points[-1][1])
        if low >= high:
            continue
        ends = {low, high, *(y for _, y in (*one.points, *other.points) if low < y < high)}
        room = 0.5 * (one.web.thickness_m + other.web.thickness_m)
        apart = [other.station(line) - one.station(line) for line in sorted(ends)]
        if min(apart) * max(apart) < 0.0 or min(map(abs, apart)) < room:
            yield stop(
                other.web.place,
                "walls-cross",
                f"web {other.web.name} crosses or touches web {one.web.name}",
                "move one of them, or end it before the other",
            )


def row_stations(row: Row, lines: dict[str, WebLine], plane: RibPlane) -> tuple[float, float]:
    """Stations of the mid-planes of the webs that bound a row where a rib meets them."""
    front = -np.inf if row.front == NOSE else plane.crossing(lines[row.front])[0]
    rear = np.inf if row.rear == TAIL else plane.crossing(lines[row.rear])[0]
    return float(front), float(rear)
