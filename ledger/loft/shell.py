"""The outside of the wing and, one skin thickness further in, its void: rings of corners along the span.

Every strip of skin is a flat or nearly flat quad between two butt lines; its inner face is laid off
square to it, so the void, the skins and what the void is divided into all share the same corners.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from ledger.errors import Finding
from ledger.loft.bodies import runs, strips, tidied, tube
from ledger.loft.faults import stop
from ledger.loft.layout import Layout, Section, SkinZone, Surface
from ledger.loft.lofted import Floats, Indices, Mesh
from ledger.loft.profile import chord_shares, section_ring

if TYPE_CHECKING:
    from shapely import Polygon

# Between sections that are not alike a strip is wound; so many pieces of span follow it closely.
_PIECES_WHERE_WOUND = 8
# Places nearer to one another than this are one.
_SAME_M = 1e-9


@dataclass(frozen=True, kw_only=True, eq=False)
class Shell:
    """The rings of a wing.

    shares : (n,) float
        Chord shares of the corners, 0 to 1. Ring corner i is share n - 1 - i of the upper surface up to
        the nose (i = n - 1), then share i - n + 1 of the lower; strip i runs from corner i to the next.
    butt_lines_m : (m,) float, rising
    outer_m : (m, 2 n - 1, 3) float, metres, build axes
    zone : (m - 1, 2 n - 2) int
        For each piece of span and strip the number of the skin in `skins`.
    """

    shares: Floats
    butt_lines_m: Floats
    outer_m: Floats
    zone: Indices
    skins: tuple[SkinZone, ...]

    @cached_property
    def thickness_m(self) -> Floats:
        """Skin thickness of each piece of span and strip, (m - 1, 2 n - 2)."""
        return np.array([skin.thickness_m for skin in self.skins])[self.zone]

    @cached_property
    def mitre(self) -> Floats:
        """For each corner, the way to the inner face of a skin one metre thick, (m, 2 n - 1, 3).

        In the plane of the section; the trailing edge's closing line counts as without thickness.
        """
        normals = self._normals()
        way = np.zeros_like(self.outer_m)
        for number, ring in enumerate(self.outer_m):
            way[number][:, [0, 2]] = _mitres(ring[:, [0, 2]], normals[number])
        return way

    def _normals(self) -> Floats:
        """In-plane part (x, z) of the outward unit normal of each strip at each station, (m, k - 1, 2)."""
        a, b = self.outer_m[:-1, :-1], self.outer_m[:-1, 1:]
        d, c = self.outer_m[1:, :-1], self.outer_m[1:, 1:]
        square = np.cross(d - b, c - a)
        unit = (square / np.linalg.norm(square, axis=2, keepdims=True))[..., [0, 2]]
        # Where two pieces of span meet at an angle the corner serves both.
        inboard, outboard = np.concatenate((unit[:1], unit)), np.concatenate((unit, unit[-1:]))
        return np.asarray(0.5 * (inboard + outboard))

    @property
    def blocks(self) -> tuple[tuple[int, int], ...]:
        """Runs of pieces of span that carry the same skins, as first and last station."""
        changes = 1 + np.flatnonzero((self.zone[1:] != self.zone[:-1]).any(axis=1))
        return tuple(pairwise((0, *(int(piece) for piece in changes), len(self.zone))))

    def box(self) -> Mesh:
        """The lofted box: everything inside the outer faces, its ends and trailing edge closed flat."""
        return tube(self.outer_m)

    def inner_rings(self, block: tuple[int, int], extra_m: float = 0.0) -> tuple[Floats, Indices]:
        """Inner corners of a block, (stations, k, 3), and for each the outer corner it belongs to, (k,).

        Where neighbouring strips differ in thickness a corner has two inner ones, one under the other.
        """
        first, last = block
        depth = self.thickness_m[first] + extra_m
        before, after = np.concatenate((depth[:1], depth)), np.concatenate((depth, depth[-1:]))
        owner, deep = [], []
        for corner, (one, other) in enumerate(zip(before, after, strict=True)):
            for value in (one,) if one == other else (one, other):
                owner.append(corner)
                deep.append(value)
        chosen = np.array(owner, dtype=np.intp)
        outer, way = self.outer_m[first : last + 1, chosen], self.mitre[first : last + 1, chosen]
        rings = outer + way * np.array(deep)[:, None]
        # What is deeper than a skin is not ended where both sides meet: it shows that it finds no room.
        if extra_m == 0.0:
            rings = np.stack([_pinched(ring, chosen, len(self.shares) - 1) for ring in rings])
        return rings, chosen


def build_shell(layout: Layout) -> tuple[Shell | None, tuple[Finding, ...]]:
    """The shell of a layout, or what keeps its skins from having an inside."""
    wanted = {share for skin in layout.skins for share in (skin.from_chord, skin.to_chord)}
    shares = chord_shares(layout.corners, tuple(sorted(wanted)))
    butt_lines = _stations(layout)
    shell = Shell(
        shares=shares,
        butt_lines_m=butt_lines,
        outer_m=_outer(layout.sections, shares, butt_lines),
        zone=_zones(layout.skins, shares, butt_lines),
        skins=layout.skins,
    )
    faults = tuple(_crossed(layout.sections, shell)) or _folded(shell)
    return (None, faults) if faults else (shell, ())


def _stations(layout: Layout) -> Floats:
    lines = {section.butt_line_m for section in layout.sections}
    first, last = min(lines), max(lines)
    for skin in layout.skins:
        lines |= {line for line in skin.between_m or () if first < line < last}
    for one, other in pairwise(layout.sections):
        if not _alike(one, other):
            lines |= set(np.linspace(one.butt_line_m, other.butt_line_m, _PIECES_WHERE_WOUND + 1)[1:-1])
    return np.array(sorted(lines))


def _alike(one: Section, other: Section) -> bool:
    """Whether straight lines between two sections lie in flat strips."""
    return (one.profile, one.coordinates, one.twist_deg) == (
        other.profile,
        other.coordinates,
        other.twist_deg,
    )


def _outer(sections: tuple[Section, ...], shares: Floats, butt_lines: Floats) -> Floats:
    """Corners at every station: those of the sections, and straight between them."""
    rings = np.stack([_placed(section, section_ring(section, shares)) for section in sections])
    at = np.array([section.butt_line_m for section in sections])
    number = np.clip(np.searchsorted(at, butt_lines, side="right") - 1, 0, len(at) - 2)
    share = ((butt_lines - at[number]) / (at[number + 1] - at[number]))[:, None, None]
    # Written so that a station at a section has that section's corners to the last bit.
    return np.asarray(rings[number] * (1.0 - share) + rings[number + 1] * share)


def _placed(section: Section, ring: Floats) -> Floats:
    """A unit section at its place, (k, 3); twisted nose up about its leading edge."""
    x, z = section.chord_m * ring.T
    twist = np.radians(section.twist_deg)
    return np.column_stack(
        (
            section.leading_edge_m + x * np.cos(twist) + z * np.sin(twist),
            np.full(len(ring), section.butt_line_m),
            section.water_line_m - x * np.sin(twist) + z * np.cos(twist),
        )
    )


def _zones(skins: tuple[SkinZone, ...], shares: Floats, butt_lines: Floats) -> Indices:
    middle = 0.5 * (shares[:-1] + shares[1:])
    strips = np.concatenate((middle[::-1], middle))
    upper = np.arange(len(strips)) < len(middle)
    zone = np.full((len(butt_lines) - 1, len(strips)), -1, dtype=np.intp)
    span = 0.5 * (butt_lines[:-1] + butt_lines[1:])
    for number, skin in enumerate(skins):
        across = (strips > skin.from_chord) & (strips < skin.to_chord)
        if skin.surface is not Surface.BOTH:
            across &= upper if skin.surface is Surface.UPPER else ~upper
        low, high = skin.between_m or (-np.inf, np.inf)
        zone[np.ix_((span > low) & (span < high), across)] = number
    if (zone < 0).any():
        raise ValueError("the skins do not cover the wing")
    return zone


def _mitres(ring: Floats, normals: Floats) -> Floats:
    """Where the inner faces of one metre meet, from each corner of a ring: (k, 2).

    ring : (k, 2); normals : (k - 1, 2), in-plane parts of the strips' outward unit normals.
    """
    closing = ring[0] - ring[-1]
    length = float(np.hypot(*closing))
    # The closing line has no thickness: a corner on it moves along it.
    ends = np.array([[-closing[1], closing[0]]]) / (length if length > _SAME_M else 1.0)
    before, after = np.concatenate((ends, normals)), np.concatenate((normals, ends))
    depth_before, depth_after = np.full(len(ring), -1.0), np.full(len(ring), -1.0)
    depth_before[0] = depth_after[-1] = 0.0
    if length <= _SAME_M:
        before[0], after[-1] = after[0], before[-1]
        depth_before[0] = depth_after[-1] = -1.0
    turn = before[:, 0] * after[:, 1] - before[:, 1] * after[:, 0]
    both = before + after
    straight = np.abs(turn) < 1e-4
    safe = np.where(straight, 1.0, turn)
    x = (depth_before * after[:, 1] - depth_after * before[:, 1]) / safe
    z = (before[:, 0] * depth_after - after[:, 0] * depth_before) / safe
    along = -2.0 * both / np.einsum("ij,ij->i", both, both)[:, None]
    return np.where(straight[:, None], along, np.stack((x, z), axis=1))


def _pinched(ring: Floats, owner: Indices, nose: int) -> Floats:
    """A ring whose upper and lower inner faces meet before the trailing edge, ended where they meet."""
    from shapely import LineString

    upper = np.flatnonzero(owner <= nose // 2)
    lower = np.flatnonzero(owner >= owner.max() - nose // 2)
    meeting = LineString(ring[upper][:, [0, 2]]).intersection(LineString(ring[lower][:, [0, 2]]))
    if meeting.is_empty:
        return ring
    points = [point for one in getattr(meeting, "geoms", (meeting,)) for point in one.coords]
    x, z = min(points)
    ended = ring.copy()
    for chain in (upper, lower):
        past = chain[ring[chain, 0] >= x - _SAME_M]
        ended[past] = (x, ring[0, 1], z)
    return ended


def _folded(shell: Shell) -> tuple[Finding, ...]:
    """A finding for each skin too thick for the curve it lies on."""
    from shapely import Polygon
    from shapely.validation import explain_validity

    found: dict[str, Finding] = {}
    for block in shell.blocks:
        rings, owner = shell.inner_rings(block)
        stations = range(block[0], block[1] + 1)
        for ring, station in zip(rings, stations, strict=True):
            butt_line, outer = shell.butt_lines_m[station], shell.outer_m[station]
            corners = ring[:, [0, 2]]
            kept = corners[(corners != np.roll(corners, 1, axis=0)).any(axis=1)]
            inside = Polygon(kept) if len(kept) > 2 else Polygon()
            if inside.is_valid and inside.exterior.is_ccw and _holds(outer, inside):
                continue
            skin = _thickest_near(shell, block, owner, ring, explain_validity(inside))
            found.setdefault(
                skin.part,
                stop(
                    skin.place,
                    "skin-too-thick",
                    f"{skin.part} is {1000 * skin.thickness_m:.1f} mm thick, more than the section at"
                    f" BL {1000 * butt_line:.0f} mm has room for",
                    "make it thinner there, or end it before the curve",
                ),
            )
    return tuple(found.values())


def _crossed(sections: tuple[Section, ...], shell: Shell) -> Iterator[Finding]:
    """Sections whose outline crosses itself, as of points that do not lie on a smooth curve."""
    from shapely import Polygon

    for section in sections:
        ring = shell.outer_m[int(np.searchsorted(shell.butt_lines_m, section.butt_line_m))]
        outline = Polygon(ring[:, [0, 2]])
        if not (outline.is_valid and outline.exterior.is_ccw):
            yield stop(
                section.place,
                "section-crossed",
                f"section {section.profile} crosses itself",
                "give it points on a smooth curve, from the upper trailing edge round the nose",
            )


def _holds(outer: Floats, inside: Polygon) -> bool:
    """Whether what is inside the skins lies inside the section, to a hair."""
    from shapely import Polygon as Outline

    whole = Outline(outer[:, [0, 2]])
    return inside.area > 0.0 and whole.buffer(_SAME_M, join_style="mitre").covers(inside)


def _thickest_near(
    shell: Shell, block: tuple[int, int], owner: Indices, ring: Floats, explained: str
) -> SkinZone:
    """The thickest skin about the place where a ring crosses itself."""
    _, told, place = explained.rpartition("[")
    numbers = place.rstrip("]").split() if told else []
    near = set(shell.zone[block[0]])
    if len(numbers) >= 2:
        at = np.array([float(numbers[0]), float(numbers[1])])
        away = np.linalg.norm(ring[:, [0, 2]] - at, axis=1)
        corners = owner[away <= away.min() + float(shell.thickness_m.max())]
        strip = np.minimum(corners, shell.zone.shape[1] - 1)
        near = set(shell.zone[block[0], strip]) | set(shell.zone[block[0], np.maximum(corners - 1, 0)])
    return max((shell.skins[int(number)] for number in near), key=lambda skin: skin.thickness_m)


def skin_surface(shell: Shell, number: int) -> Mesh:
    """The outer faces of one skin, open, normals outward."""
    piece, strip = np.nonzero(shell.zone == number)
    faces = strips(shell.outer_m)[piece, strip].reshape(-1, 3)
    return tidied(shell.outer_m.reshape(-1, 3), faces)


def skin_solids(shell: Shell) -> tuple[Mesh, ...]:
    """Every skin as closed solids, one for each unbroken run of strips in each block."""
    return tuple(_between(shell, block, run) for block in shell.blocks for run in _runs(shell.zone[block[0]]))


def tail_solids(shell: Shell) -> tuple[Mesh, ...]:
    """The paste between the inner faces and the closing line of the trailing edge, where there is any."""
    found = []
    for block in shell.blocks:
        rings, _ = shell.inner_rings(block)
        outer = shell.outer_m[block[0] : block[1] + 1]
        corners = np.stack((outer[:, 0], rings[:, 0], rings[:, -1], outer[:, -1]), axis=1)
        # Seen from inboard the closing line runs down, so this ring turns the way all do.
        thick = np.array([_area(corner) > 1e-12 for corner in corners])
        for first, last in runs((thick[:-1] | thick[1:]).tolist()):
            found.append(tube(corners[first : last + 1]))
    return tuple(found)


def void(shell: Shell) -> tuple[Mesh, ...]:
    """Everything inside the skins, a mesh for each block."""
    return tuple(tube(shell.inner_rings(block)[0]) for block in shell.blocks)


def layer(shell: Shell, block: tuple[int, int], run: tuple[int, int], depth_m: float) -> Mesh:
    """A layer of a depth under the skin of a block, from one outer corner to another."""
    shallow, owner = shell.inner_rings(block)
    deep, _ = shell.inner_rings(block, depth_m)
    chosen = np.flatnonzero((owner >= run[0]) & (owner <= run[1]))
    return tube(np.concatenate((shallow[:, chosen], deep[:, chosen[::-1]]), axis=1))


def _between(shell: Shell, block: tuple[int, int], run: tuple[int, int]) -> Mesh:
    rings, owner = shell.inner_rings(block)
    depth = shell.thickness_m[block[0]]
    outer = shell.outer_m[block[0] : block[1] + 1, run[0] : run[1] + 1]
    inner = list(np.flatnonzero((owner > run[0]) & (owner < run[1])))
    first, last = np.flatnonzero(owner == run[0]), np.flatnonzero(owner == run[1])
    # Beside a thinner skin the end face passes its inner corner on the way to this one's own.
    if run[0] > 0 and depth[run[0] - 1] > depth[run[0]]:
        first = first[-1:]
    if run[1] < len(depth) and depth[run[1]] > depth[run[1] - 1]:
        last = last[:1]
    chosen = np.array([*first, *inner, *last], dtype=np.intp)
    return tube(np.concatenate((outer, rings[:, chosen[::-1]]), axis=1))


def _runs(zones: Indices) -> tuple[tuple[int, int], ...]:
    """First and last corner of each run of strips of one skin."""
    edges = [0, *(int(place) + 1 for place in np.flatnonzero(np.diff(zones))), len(zones)]
    return tuple(pairwise(edges))


def _area(corners: Floats) -> float:
    x, z = (corners - corners[0])[:, [0, 2]].T
    return 0.5 * float(np.sum(x * np.roll(z, -1) - np.roll(x, -1) * z))
