"""Caps let into a skin: where they lie, and whether the skin is thick enough for them."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ledger.errors import Finding
from ledger.loft.faults import millimetres, stop
from ledger.loft.layout import Cap, Layout, Surface
from ledger.loft.lofted import Strip
from ledger.loft.shell import Shell
from ledger.loft.webs import WebLine


def let_in_strips(
    layout: Layout, shell: Shell, lines: dict[str, WebLine]
) -> tuple[tuple[Strip, ...], tuple[Finding, ...]]:
    """Every cap that lies in a skin, as a line in the middle of the skin's thickness."""
    found, faults = [], []
    for cap in layout.caps:
        if not cap.let_in:
            continue
        places = tuple(_places(cap, shell, lines[cap.web]))
        thin = min(thickness for _, thickness in places)
        if cap.thickness_m > thin:
            faults.append(
                stop(
                    cap.place,
                    "cap-thicker-than-skin",
                    f"{cap.part} is {millimetres(cap.thickness_m)} thick and its skin {millimetres(thin)}",
                    "make it thinner and wider, or leave out let_in",
                )
            )
        line = np.array([point for point, _ in places])
        found.append(Strip(part=cap.part, title=cap.title, material=cap.material, line_m=line))
    return tuple(found), tuple(faults)


def _places(cap: Cap, shell: Shell, line: WebLine) -> Iterator[tuple[tuple[float, float, float], float]]:
    """Points in the middle of the skin over a web, inboard to outboard, each with the skin's thickness."""
    low, high = cap.between_m or (line.points[0][1], line.points[-1][1])
    inner = {float(at) for at in shell.butt_lines_m if low < at < high}
    inner |= {y for _, y in line.points if low < y < high}
    nose = len(shell.shares) - 1
    upper = cap.surface is Surface.UPPER
    corners = np.arange(nose, -1, -1) if upper else np.arange(nose, 2 * nose + 1)
    for at in sorted({low, high, *inner}):
        piece = int(np.clip(np.searchsorted(shell.butt_lines_m, at) - 1, 0, len(shell.zone) - 1))
        first, last = shell.butt_lines_m[piece : piece + 2]
        share = (at - first) / (last - first)
        ring = shell.outer_m[piece] * (1.0 - share) + shell.outer_m[piece + 1] * share
        way = shell.mitre[piece] * (1.0 - share) + shell.mitre[piece + 1] * share
        x = line.station(at)
        corner = int(np.clip(np.searchsorted(ring[corners, 0], x), 1, nose))
        one, other = corners[corner - 1], corners[corner]
        thickness = float(shell.thickness_m[piece, min(one, other)])
        along = (x - ring[one, 0]) / (ring[other, 0] - ring[one, 0])
        middle = ring + 0.5 * thickness * way
        place = middle[one] * (1.0 - along) + middle[other] * along
        yield (float(place[0]), at, float(place[2])), thickness
