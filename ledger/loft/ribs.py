"""Ribs: the planes they stand in, and what keeps them from it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from ledger.errors import Finding
from ledger.loft.bodies import plate
from ledger.loft.faults import millimetres, stop
from ledger.loft.layout import NOSE, TAIL, Layout, PlanPoint, Rib, Row
from ledger.loft.shell import Shell
from ledger.loft.slabs import Slab, chord_point, reach_of
from ledger.loft.webs import WebLine

# Less than this a rib may stand out beyond the end of the wing.
_OUT_M = 1e-6
# A rib that runs less than this share of its length along the chord is a web.
_LEAST_CHORDWISE = 0.3


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
        if len(clear) and clear.min() < -_OUT_M:
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


def row_stations(row: Row, lines: dict[str, WebLine], plane: RibPlane) -> tuple[float, float]:
    """Stations of the mid-planes of the webs that bound a row where a rib meets them."""
    front = -np.inf if row.front == NOSE else plane.crossing(lines[row.front])[0]
    rear = np.inf if row.rear == TAIL else plane.crossing(lines[row.rear])[0]
    return float(front), float(rear)
