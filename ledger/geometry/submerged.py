"""What one cell holds below one level, asked many times at one up direction.

`level_table` answers for many levels at once; solving for a level asks one at a time. `CellAt`
keeps the running sums of the whole triangles in order of height and the cut-off corners as
coefficients, so that one more level costs a few short vector operations.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.levels import AX, AXZ, AY, AYZ, AZZ, LevelTable, table_of, triangle_integrals
from ledger.geometry.moments import Moments
from ledger.geometry.standing import Floats, Indices, Standing, stand
from ledger.geometry.vectors import Vector, vector
from ledger.geometry.wet_part import free_surface_moments, wet_moments

# Steps of the table that brackets a level before Newton's method closes in on it.
BRACKETS = 16
# Volumes that differ by less than this share of the gross are the same volume.
VOLUME_SHARE = 1e-14
MOST_STEPS = 200


@dataclass(frozen=True, slots=True, kw_only=True)
class Submerged:
    """The part of a cell below a level: volume, its centroid (None where empty), free surface."""

    volume_m3: float
    centroid_m: Vector | None
    surface_m2: float


class _Corners(NamedTuple):
    """Corners cut off triangles while the level is above `low` and not above `high`.

    Volume is c d^2 |d|, with d the level less the corner's height `apex`.
    """

    low: Floats
    high: Floats
    apex: Floats
    c: Floats


class _CornerMoments(NamedTuple):
    """Coefficients of the same corners: cx, cy of |d|^3; gx, gy of |d|^3 d; side of d |d| for true area."""

    cx: Floats
    cy: Floats
    gx: Floats
    gy: Floats
    side: Floats


class CellAt:
    """A proved cell standing at one up direction.

    Heights are measured along up from the datum's origin, as everywhere.
    lowest_m, highest_m : heights of its lowest and highest corner.
    gross_m3 : its whole volume.
    Raises ValueError for an up that is zero or not finite, and for levels that are not finite.
    """

    def __init__(self, cell: ClosedCell, up: ArrayLike) -> None:
        self.cell = cell
        self._standing, self._heights = _with_level_faces(stand(cell.vertices_m, cell.faces, up))
        self.up: Vector = vector(self._standing.axes[2])
        self.lowest_m = self._standing.lowest_m
        self._top = float(self._heights[-1])
        self.highest_m = self.lowest_m + self._top
        self.gross_m3: float = cell.volume_m3
        self._ranked = _ranked_corners(self._standing)
        z = self._standing.z
        self._area = _projected_areas(self._standing)
        low, middle, high = (z.take(corner) for corner in self._ranked)
        self._order = np.argsort(middle)
        self._entry = middle.take(self._order)
        self._below = _running(self._order, self._area, self._area * (low + middle + high) / 3.0)
        tolerance = self._standing.tolerance_m
        self._cut_low = np.flatnonzero(middle - low > tolerance)
        self._cut_high = np.flatnonzero(high - middle > tolerance)
        self._corners = _cut_corners((low, middle, high), self._area, self._cut_low, self._cut_high)

    @cached_property
    def _below_moments(self) -> Floats:
        """Running sums of whole triangles for the first moments, rows AX, AY, AXZ, AYZ, AZZ."""
        corners = self._standing.faces.T
        x, y, z = (values.take(corners) for values in (self._standing.x, self._standing.y, self._standing.z))
        whole = triangle_integrals(x, y, z)
        return _running(self._order, *(whole[row] for row in (AX, AY, AXZ, AYZ, AZZ)))

    @cached_property
    def _below_side(self) -> Floats:
        """Running sum of the true areas of whole triangles."""
        return np.asarray(_running(self._order, self._sides)[0])

    @cached_property
    def _sides(self) -> Floats:
        corners = self.cell.vertices_m[self.cell.faces]
        normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        return np.asarray(0.5 * np.linalg.norm(normal, axis=1))

    @cached_property
    def _corner_moments(self) -> _CornerMoments:
        return _cut_corner_moments(
            self._standing, self._ranked, self._corners, self._sides, (self._cut_low, self._cut_high)
        )

    def _local(self, level_m: float) -> float:
        """A level in the frame, put on a corner that lies within rounding of it."""
        local = float(level_m) - self.lowest_m
        if not np.isfinite(local):
            raise ValueError("a level must be finite")
        heights = self._heights
        at = int(heights.searchsorted(local))
        for near in heights[max(at - 1, 0) : at + 1]:
            if abs(near - local) <= self._standing.tolerance_m:
                return float(near)
        return local

    def _cut(self, local: float) -> Indices:
        return np.flatnonzero((self._corners.low < local) & (local <= self._corners.high))

    def _entered(self, local: float) -> int:
        """How many triangles lie with their middle corner below a level."""
        return int(self._entry.searchsorted(local, side="left"))

    def volume(self, level_m: float) -> float:
        """Cubic metres below a level, from 0 at the lowest corner to the gross at the highest."""
        return self._volume(self._local(level_m))

    def _volume(self, local: float) -> float:
        if local <= 0.0:
            return 0.0
        if local >= self._top:
            return self.gross_m3
        (area, height), cut = self._below[:, self._entered(local)].tolist(), self._cut(local)
        d = local - self._corners.apex.take(cut)
        volume = height - local * area + float(self._corners.c.take(cut) @ (d * d * np.abs(d)))
        return float(min(max(volume, 0.0), self.gross_m3))

    def surface(self, level_m: float) -> float:
        """Free surface in m2; at a flat face the value just below it."""
        return self._surface(self._local(level_m))

    def _surface(self, local: float) -> float:
        if local <= 0.0 or local > self._top:
            return 0.0
        area, cut = float(self._below[0, self._entered(local)]), self._cut(local)
        d = local - self._corners.apex.take(cut)
        return max(3.0 * float(self._corners.c.take(cut) @ (d * np.abs(d))) - area, 0.0)

    def wetted_area(self, level_m: float) -> float:
        """Square metres of the cell's walls below a level."""
        local = self._local(level_m)
        if local <= 0.0:
            return 0.0
        if local >= self._top:
            # A face at the very top is wet once the cell is full.
            return float(self._below_side[-1])
        cut = self._cut(local)
        d = local - self._corners.apex.take(cut)
        # d |d| is below 0 above the middle corner, where the corner cut off is dry.
        wet = self._corner_moments.side.take(cut) @ (d * np.abs(d))
        return max(float(self._below_side[self._entered(local)] + wet), 0.0)

    def moments(self, level_m: float) -> Submerged:
        """Volume, centroid and free surface below a level."""
        local = self._local(level_m)
        volume = self._volume(local)
        if volume == 0.0:
            return Submerged(volume_m3=0.0, centroid_m=None, surface_m2=self._surface(local))
        if local >= self._top:
            return Submerged(
                volume_m3=volume, centroid_m=self.cell.centroid_m, surface_m2=self._surface(local)
            )
        entered, cut = self._entered(local), self._cut(local)
        area, height = self._below[:, entered].tolist()
        x, y, xz, yz, zz = self._below_moments[:, entered].tolist()
        c, k = self._corners.c.take(cut), self._corner_moments
        d = local - self._corners.apex.take(cut)
        square = d * np.abs(d)
        cube = square * d
        fourth = cube * d
        first = (
            xz - local * x + float(k.cx.take(cut) @ cube + k.gx.take(cut) @ fourth),
            yz - local * y + float(k.cy.take(cut) @ cube + k.gy.take(cut) @ fourth),
            0.5 * (zz - local * (2.0 * height - local * area)) - 0.25 * float(c @ fourth),
        )
        surface = max(3.0 * float(c @ square) - area, 0.0)
        return Submerged(
            volume_m3=volume, centroid_m=self._centroid(first, volume, local), surface_m2=surface
        )

    def _centroid(self, first: Sequence[float], volume: float, local: float) -> Vector:
        """In build axes; held inside the cell's box, which rounding may leave when nearly nothing is wet."""
        at = np.array([[first[0] / volume, first[1] / volume, local + first[2] / volume]])
        for axis, (low, high) in enumerate(self._reach):
            at[0, axis] = min(max(at[0, axis], low), high)
        at[0, 2] = min(max(at[0, 2], 0.0), local)
        return vector(self._standing.in_build_axes(at)[0])

    @cached_property
    def _reach(self) -> tuple[tuple[float, float], ...]:
        return tuple((float(v.min()), float(v.max())) for v in (self._standing.x, self._standing.y))

    def solid(self, level_m: float) -> Moments | None:
        """Volume, centroid and second moments (m5) of the part below a level; None where it is empty."""
        local = self._local(level_m)
        if self._volume(local) == 0.0:
            return None
        return wet_moments(self._standing, min(local, self._top))

    def free_surface(self, level_m: float) -> Moments | None:
        """Area, centroid and second moments (m4) of the free surface; None where there is none."""
        local = self._local(level_m)
        if self._surface(local) == 0.0:
            return None
        return free_surface_moments(self._standing, local)

    def table(self, steps: int) -> LevelTable:
        """Figures at `steps` + 1 even levels from the lowest corner to the highest."""
        if steps < 1:
            raise ValueError("a table needs at least one step")
        return table_of(self._standing, np.linspace(self.lowest_m, self.highest_m, steps + 1))

    def at_levels(self, levels_m: ArrayLike) -> LevelTable:
        """Figures at many levels (n,) in metres in one pass, in the order given."""
        levels = np.asarray(levels_m, dtype=np.float64)
        if levels.ndim != 1 or not np.isfinite(levels).all():
            raise ValueError("levels_m must be a row of finite heights")
        return table_of(self._standing, levels)

    @cached_property
    def _brackets(self) -> tuple[Floats, Floats]:
        """Local heights, and the volume below each."""
        heights = np.linspace(0.0, self._top, BRACKETS + 1)
        return heights, np.array([self._volume(float(height)) for height in heights])

    def level_for(self, volume_m3: float) -> float:
        """The lowest level below which the cell holds a volume.

        Raises ValueError for a volume that is not finite, below 0 or above the gross.
        """
        slack = VOLUME_SHARE * self.gross_m3
        if not -slack <= volume_m3 <= self.gross_m3 * (1.0 + 1e-12):
            raise ValueError(f"the cell holds from 0 to {self.gross_m3} m3, not {volume_m3}")
        if volume_m3 <= slack:
            return self.lowest_m
        if volume_m3 >= self.gross_m3 - slack:
            return self.highest_m
        heights, volumes = self._brackets
        at = int(np.searchsorted(volumes, volume_m3, side="left"))
        level = self._solve(volume_m3, float(heights[at - 1]), float(heights[at]))
        return self.lowest_m + self._lowest_of_flat(volume_m3, level)

    def _solve(self, volume_m3: float, low: float, high: float) -> float:
        """Newton's method on the volume, whose slope is the free surface, kept inside its bracket."""
        slack = VOLUME_SHARE * self.gross_m3
        level = 0.5 * (low + high)
        for _ in range(MOST_STEPS):
            off = self._volume(level) - volume_m3
            if abs(off) <= slack:
                return level
            low, high = (low, level) if off > 0.0 else (level, high)
            if high - low <= self._standing.tolerance_m:
                return high
            slope = self._surface(level)
            step = level - off / slope if slope > 0.0 else low
            level = step if low < step < high else 0.5 * (low + high)
        return high

    def _lowest_of_flat(self, volume_m3: float, level: float) -> float:
        """Where nothing is gained between a corner and the level found, the corner's height."""
        at = int(np.searchsorted(self._heights, level, side="left"))
        slack = 4.0 * VOLUME_SHARE * self.gross_m3
        while at > 0 and self._volume(float(self._heights[at - 1])) >= volume_m3 - slack:
            at -= 1
            level = float(self._heights[at])
        return level


def submerged(cell: ClosedCell, up: ArrayLike, level_m: float) -> Submerged:
    """The part of a proved cell below one level; `CellAt` is quicker for several.

    up : (3,) float
        Away from the pull felt, build axes; any length.
    level_m : float
        Height along up from the datum's origin, metres.
    Raises ValueError for an up that is zero or not finite, or a level that is not finite.
    References
        Divergence theorem with a field that vanishes on the free surface; see `levels`.
    """
    return CellAt(cell, up).moments(level_m)


def level_for_volume(cell: ClosedCell, up: ArrayLike, volume_m3: float) -> float:
    """The lowest level (m), along up from the datum's origin, below which the cell holds a volume (m3).

    Raises ValueError for a volume below 0, above the gross or not finite, and for an up as `submerged`.
    """
    return CellAt(cell, up).level_for(volume_m3)


def _with_level_faces(standing: Standing) -> tuple[Standing, Floats]:
    """Corners that differ in height only by rounding put at one height, and the distinct heights.

    A flat face turned to its up direction would else be a slope of a few units in the last place,
    half wet at a level that touches it.
    """
    order = np.argsort(standing.z)
    ranked = standing.z.take(order)
    fresh = np.empty(len(ranked), dtype=bool)
    fresh[0] = True
    np.greater(ranked[1:] - ranked[:-1], standing.tolerance_m, out=fresh[1:])
    heights = ranked[fresh]
    z = np.empty_like(ranked)
    z[order] = heights.take(np.cumsum(fresh) - 1)
    return replace(standing, z=z), heights


def _ranked_corners(standing: Standing) -> tuple[Indices, Indices, Indices]:
    """Lowest, middle and highest corner number of each triangle; of equal ones each is named once."""
    z0, z1, z2 = (standing.z.take(standing.faces[:, corner]) for corner in range(3))
    lowest = np.where(z2 < np.minimum(z0, z1), 2, z1 < z0)
    highest = np.where(z2 >= np.maximum(z0, z1), 2, z1 >= z0)
    flat, head = standing.faces.reshape(-1), np.arange(0, 3 * len(lowest), 3)
    return flat.take(head + lowest), flat.take(head + (3 - lowest - highest)), flat.take(head + highest)


def _projected_areas(standing: Standing) -> Floats:
    a, b, c = standing.faces.T
    x, y = standing.x, standing.y
    x0, y0 = x.take(a), y.take(a)
    return np.asarray(0.5 * ((x.take(b) - x0) * (y.take(c) - y0) - (x.take(c) - x0) * (y.take(b) - y0)))


def _running(order: Indices, *rows: Floats) -> Floats:
    """Sums of the first 0, 1, 2, ... values of each row, taken in an order."""
    below = np.zeros((len(rows), len(order) + 1))
    for row, values in enumerate(rows):
        np.cumsum(values.take(order), out=below[row, 1:])
    return below


def _cut_corners(
    heights: tuple[Floats, Floats, Floats], area: Floats, low_cut: Indices, high_cut: Indices
) -> _Corners:
    """The corner below each triangle's middle height, then the one above."""
    low, middle, high = heights
    c = area / (-3.0 * (high - low + np.finfo(np.float64).tiny))
    return _Corners(
        low=np.concatenate((low.take(low_cut), middle.take(high_cut))),
        high=np.concatenate((middle.take(low_cut), high.take(high_cut))),
        apex=np.concatenate((low.take(low_cut), high.take(high_cut))),
        c=np.concatenate(
            (
                c.take(low_cut) / (middle - low).take(low_cut),
                c.take(high_cut) / (high - middle).take(high_cut),
            )
        ),
    )


def _cut_corner_moments(
    standing: Standing,
    ranked: tuple[Indices, Indices, Indices],
    corners: _Corners,
    sides: Floats,
    cuts: tuple[Indices, Indices],
) -> _CornerMoments:
    low, middle, high = ranked
    at = np.concatenate((low.take(cuts[0]), high.take(cuts[1])))
    near = np.concatenate((middle.take(cuts[0]), middle.take(cuts[1])))
    far = np.concatenate((high.take(cuts[0]), low.take(cuts[1])))
    x, y, z, c = standing.x, standing.y, standing.z, corners.c
    rise_b, rise_c = z.take(near) - corners.apex, z.take(far) - corners.apex
    over_b, over_c = 0.25 * c / rise_b, 0.25 * c / rise_c
    xa, ya = x.take(at), y.take(at)
    return _CornerMoments(
        cx=c * xa,
        cy=c * ya,
        gx=(x.take(near) - xa) * over_b + (x.take(far) - xa) * over_c,
        gy=(y.take(near) - ya) * over_b + (y.take(far) - ya) * over_c,
        side=sides.take(np.concatenate(cuts)) / (rise_b * rise_c),
    )
