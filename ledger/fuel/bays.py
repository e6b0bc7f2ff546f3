"""One cell at one attitude, as the fuel layer sees it: net of what is displaced and of its sealant."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np

from ledger.fuel.sealant import fillet_below
from ledger.geometry.closed_cell import ClosedCell
from ledger.geometry.lowest_places import Place, places_by_depth
from ledger.geometry.standing import Floats
from ledger.geometry.submerged import CellAt
from ledger.model.tanks import Cell
from ledger.model.vectors import ZERO, Vector

# Up to so many levels one by one cost less than a table of them.
FEW_LEVELS = 5
# A pool no deeper than a coat of paint is not worth a wall: straight pieces of a curved skin leave such
# pools where the real one has none. Common practice, no source.
SHALLOW_M = 5e-5


@dataclass(frozen=True, slots=True, kw_only=True)
class Lying:
    """What lies below a level in one cell: volume, first moment about the datum (m4), free surface."""

    volume_m3: float
    moment_m4: Vector
    surface_m2: float


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Sums:
    """What lies below each of n levels, in one cell or over several.

    volume_m3 : (n,), room net of displaced meshes. moment_m4 : (n, 3), its first moment about the
    datum. surface_m2 : (n,), free surface. sealant_m3 : (n,).
    """

    volume_m3: Floats
    moment_m4: Floats
    surface_m2: Floats
    sealant_m3: Floats

    @property
    def net_m3(self) -> Floats:
        """Room less sealant."""
        return np.maximum(self.volume_m3 - self.sealant_m3, 0.0)


class Bay:
    """A cell standing along `up`.

    Levels may be infinite: minus infinity is empty, plus infinity full. Displaced solids given as a
    mesh are taken off at every level. Sealant, and what is displaced given as a volume, are taken
    off what a cell holds but never off what it traps, so that usable fuel is not overstated.
    """

    def __init__(self, cell: Cell, solid: ClosedCell, inside: ClosedCell | None, up: Vector) -> None:
        self.cell = cell
        self.solid = solid
        self.inside = inside
        self.up = up
        self.at = CellAt(solid, up)
        self.inside_at = None if inside is None else CellAt(inside, up)
        self.lowest_m, self.highest_m = self.at.lowest_m, self.at.highest_m
        self._volumes: dict[float, float] = {}
        self._coats: dict[float, float] = {}

    def volume(self, level_m: float) -> float:
        """Room below a level, m3, net of displaced meshes."""
        if level_m <= self.lowest_m:
            return 0.0
        level = min(level_m, self.highest_m)
        known = self._volumes.get(level)
        if known is None:
            known = self.at.volume(level)
            if self.inside_at is not None:
                known = max(0.0, known - self.inside_at.volume(level))
            self._volumes[level] = known
        return known

    def sealant(self, level_m: float) -> float:
        """Sealant below a level, m3."""
        if level_m <= self.lowest_m or not self.has_sealant:
            return 0.0
        level = min(level_m, self.highest_m)
        known = self._coats.get(level)
        if known is None:
            known = (self.cell.sealant_thickness_m or 0.0) * self.wetted_area(level)
            if self.cell.sealant_fillet_m:
                level_row = np.array([level])
                known += float(fillet_below(self.solid, self.cell.sealant_fillet_m, self.up, level_row)[0])
            self._coats[level] = known
        return known

    @property
    def has_sealant(self) -> bool:
        """Whether the plan gives the cell any."""
        return bool(self.cell.sealant_thickness_m or self.cell.sealant_fillet_m)

    def net(self, level_m: float) -> float:
        """Room below a level less sealant, m3; what is displaced by a plain volume is not taken off."""
        return max(0.0, self.volume(level_m) - self.sealant(level_m))

    def held(self, level_m: float) -> float:
        """What the cell holds filled to a level, m3: nowhere is it known where a plain volume lies."""
        return max(0.0, self.net(level_m) - (self.cell.displaced_m3 or 0.0))

    @cached_property
    def gross_m3(self) -> float:
        """Inside volume less everything displaced and sealant."""
        return self.held(math.inf)

    def surface(self, level_m: float) -> float:
        """Free surface at a level, m2."""
        if not self.lowest_m < level_m <= self.highest_m:
            return 0.0
        whole = self.at.surface(level_m)
        return whole if self.inside_at is None else max(0.0, whole - self.inside_at.surface(level_m))

    def wetted_area(self, level_m: float) -> float:
        """Walls below a level, m2."""
        if level_m <= self.lowest_m:
            return 0.0
        return self.at.wetted_area(min(level_m, self.highest_m))

    def lying(self, level_m: float) -> Lying:
        """Volume, first moment and free surface below a level."""
        if level_m <= self.lowest_m:
            return Lying(volume_m3=0.0, moment_m4=ZERO, surface_m2=0.0)
        level = min(level_m, self.highest_m)
        below = self.at.moments(level)
        volume, surface = below.volume_m3, below.surface_m2
        moment = np.array(below.centroid_m or ZERO) * volume
        if self.inside_at is not None:
            solid = self.inside_at.moments(min(level, self.inside_at.highest_m))
            volume = max(0.0, volume - solid.volume_m3)
            surface = max(0.0, surface - self.inside_at.surface(level))
            moment = moment - np.array(solid.centroid_m or ZERO) * solid.volume_m3
        x, y, z = moment.tolist()
        return Lying(volume_m3=volume, moment_m4=(x, y, z), surface_m2=surface if level_m == level else 0.0)

    def lying_at(self, levels_m: Floats) -> Sums:
        """The same at each of several levels inside the cell."""
        if len(levels_m) <= FEW_LEVELS or self.inside_at is not None:
            one_by_one = [self.lying(level) for level in levels_m.tolist()]
            volume = np.array([lies.volume_m3 for lies in one_by_one])
            moment = np.array([lies.moment_m4 for lies in one_by_one])
            surface = np.array([lies.surface_m2 for lies in one_by_one])
        else:
            table = self.at.at_levels(levels_m)
            volume, surface = table.volume_m3, table.surface_m2
            moment = np.where(np.isnan(table.centroid_m), 0.0, table.centroid_m) * volume[:, None]
        sealant = np.array([self.sealant(level) for level in levels_m.tolist()])
        return Sums(volume_m3=volume, moment_m4=moment, surface_m2=surface, sealant_m3=sealant)

    @property
    def pockets(self) -> int:
        """How many separate lowest places the cell has along `up`; 1 where all runs to one place."""
        return sum(place.depth_m > SHALLOW_M for place in self.pools)

    @property
    def pools(self) -> tuple[Place, ...]:
        """The lowest places with the depth of each pool, lowest first; the first is as deep as the cell."""
        return _pools(self.solid, self.up)

    @property
    def film_m3(self) -> float:
        """At most what pools too shallow to count can keep: each as if it covered the whole cell."""
        shallow = sum(place.depth_m for place in self.pools if place.depth_m <= SHALLOW_M)
        return shallow * _shadow_m2(self.solid, self.up) if shallow else 0.0


@lru_cache(maxsize=4096)
def _pools(solid: ClosedCell, up: Vector) -> tuple[Place, ...]:
    return places_by_depth(solid, up)


def _shadow_m2(solid: ClosedCell, up: Vector) -> float:
    """What the faces that look up and those that look down cover, along `up`, at the least one of them."""
    p, q, r = (solid.vertices_m[solid.faces[:, corner]] for corner in range(3))
    return 0.25 * float(np.abs(np.cross(q - p, r - p) @ np.array(up)).sum())
