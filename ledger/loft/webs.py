"""Webs: where they run in plan, the straight lengths they are cut into, and what keeps them from it."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import combinations, pairwise

import numpy as np

from ledger.errors import Finding
from ledger.loft.bodies import prism
from ledger.loft.faults import millimetres, stop
from ledger.loft.layout import Layout, PlanPoint, Web
from ledger.loft.part_names import web_part
from ledger.loft.shell import Shell
from ledger.loft.slabs import Slab, chord_point, reach_of

# A web bends where its corner lies this far off the straight line.
_STRAIGHT_M = 1e-6
# A web that runs less than this share of its length along the span is a rib.
_LEAST_SPANWISE = 0.3


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
        named = len(cuts) > 2 or bool(web.lengths)
        part = web_part(web.name, name if named else None)
        title = f"{web.title}, {_length_word(name)}" if named else web.title
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
