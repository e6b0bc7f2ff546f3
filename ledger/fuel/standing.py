"""One tank at any attitude and quantity: what the Fuel screen shows at each key.

`tank_at` does what depends on the attitude, `stand` what depends on the quantity, so that adding a
litre costs no search.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ledger.fuel.bays import Bay
from ledger.fuel.freeing import LEAST_M3, freed_lower
from ledger.fuel.levels import level_holding
from ledger.fuel.stood import Stood, System
from ledger.model.attitude import Attitude
from ledger.model.tanks import Outside, Tank
from ledger.model.vectors import ZERO, Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class StandingCell:
    """One cell. Level, volume and share are None where the distribution is unknown.

    `level_m` is None too in an empty cell; `percent_full` is of gross. `opening` is the one to move
    where there is one.
    """

    cell: str
    level_m: float | None
    volume_m3: float | None
    percent_full: float | None
    trapped_m3: float | None
    trapped_by: str
    opening: str | None
    pockets: int


@dataclass(frozen=True, slots=True, kw_only=True)
class StandingTank:
    """One tank at one attitude with one quantity. CG and mass are None where they are unknown.

    Below what is trapped nobody knows which cell the fuel is in, so there is no CG.
    """

    tank: str
    up: Vector
    quantity_m3: float
    mass_kg: float | None
    cg_m: Vector | None
    level_at_outlet_m: float | None
    trapped_m3: float | None
    cells: tuple[StandingCell, ...]


class TankAt:
    """One tank of a system at one attitude, ready for any quantity."""

    def __init__(self, system: System, tank: Tank, attitude: Attitude) -> None:
        self.tank = tank
        self.stood = Stood(system, attitude, only=tank.cells)
        self.trapped_m3 = self.stood.trapped_in(tank)
        self.levels = {cell: self.stood.kept[cell].level_m for cell in tank.cells}
        self._extra = {cell: self._uncoated(cell) for cell in tank.cells}

    def _uncoated(self, cell: str) -> float:
        """Sealant below the kept level, which is not taken off what is trapped."""
        bay, level = self.stood.bays[cell], self.levels[cell]
        return bay.volume(level) - bay.net(level)

    def frees_lower(self, cell: str) -> float | None:
        """What a cell's opening 1 mm lower frees over the tank, m3; None where no move of one frees it."""
        kept = self.stood.kept[cell]
        counted = self.stood.pockets(cell) == 1 and self.stood.trapped(cell, kept) > LEAST_M3
        return freed_lower(self.stood, kept.opening) if counted and kept.opening is not None else None

    def holds(self, bay: Bay, level_m: float) -> float:
        """What a cell holds when the tank stands at a level, m3: never less than it keeps."""
        kept = self.levels[bay.cell.name]
        if kept == -math.inf:
            return 0.0
        return bay.net(max(level_m, kept)) + self._extra[bay.cell.name]

    def rises(self, bay: Bay, level_m: float) -> float:
        """Free surface that moves with the tank's level, m2."""
        kept = self.levels[bay.cell.name]
        return bay.surface(level_m) if -math.inf < kept <= level_m else 0.0

    def cell_level(self, cell: str, level_m: float) -> float:
        """The level in one cell when the tank stands at a level."""
        kept = self.levels[cell]
        return kept if kept == -math.inf else max(level_m, kept)


def tank_at(system: System, tank: Tank, attitude: Attitude) -> TankAt:
    """Turn a tank to an attitude. Raises NotUpward for an attitude without an upper side."""
    return TankAt(system, tank, attitude)


def stand(at: TankAt, quantity_m3: float, *, density_kg_m3: float | None = None) -> StandingTank:
    """The tank drained from full to a quantity; more than it can hold stands at its top.

    Raises ValueError for a quantity that is not finite or below 0.
    """
    if not (math.isfinite(quantity_m3) and quantity_m3 >= 0.0):
        raise ValueError("a quantity must be finite and not below 0")
    bays = [at.stood.bays[cell] for cell in at.tank.cells]
    # A hair below what is trapped is the rounding of the same figure, not another state.
    least = None if at.trapped_m3 is None else at.trapped_m3 * (1.0 - 1e-9)
    level = None
    if least is not None and quantity_m3 >= least:
        level = level_holding(bays, quantity_m3, at.holds, at.rises)
    return StandingTank(
        tank=at.tank.name,
        up=at.stood.up,
        quantity_m3=quantity_m3,
        mass_kg=None if density_kg_m3 is None else density_kg_m3 * quantity_m3,
        cg_m=None if level is None else _centre(at, bays, level),
        level_at_outlet_m=None if level is None else _level_at_outlet(at, level),
        trapped_m3=at.trapped_m3,
        cells=tuple(_standing_cell(at, bay, level) for bay in bays),
    )


def _standing_cell(at: TankAt, bay: Bay, level_m: float | None) -> StandingCell:
    name = bay.cell.name
    kept = at.stood.kept[name]
    pockets = at.stood.pockets(name)
    volume = None if level_m is None else at.holds(bay, level_m)
    level = None if level_m is None else min(at.cell_level(name, level_m), bay.highest_m)
    return StandingCell(
        cell=name,
        level_m=level if volume else None,
        volume_m3=volume,
        percent_full=None if volume is None else 100.0 * min(1.0, volume / bay.volume(math.inf)),
        trapped_m3=at.stood.trapped(name, kept) if pockets == 1 else None,
        trapped_by=kept.by,
        opening=kept.opening,
        pockets=pockets,
    )


def _centre(at: TankAt, bays: list[Bay], level_m: float) -> Vector | None:
    total, moment = 0.0, np.array(ZERO)
    for bay in bays:
        held = at.holds(bay, level_m)
        lies = bay.lying(at.cell_level(bay.cell.name, level_m))
        if held > 0.0 and lies.volume_m3 > 0.0:
            total += held
            moment = moment + np.array(lies.moment_m4) * (held / lies.volume_m3)
    if total == 0.0:
        return None
    x, y, z = (moment / total).tolist()
    return (x, y, z)


def _level_at_outlet(at: TankAt, level_m: float) -> float | None:
    """The level beside the tank's first outlet; None without one, or where its cell is dry."""
    own = set(at.tank.cells)
    for way in at.stood.network.outside[Outside.OUTLET]:
        if way.cells[0] in own and at.levels[way.cells[0]] != -math.inf:
            bay = at.stood.bays[way.cells[0]]
            return min(max(at.cell_level(way.cells[0], level_m), bay.lowest_m), bay.highest_m)
    return None
