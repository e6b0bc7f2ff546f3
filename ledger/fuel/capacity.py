"""What one tank holds when filled on the ground."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ledger.fuel.filling import EXPANSION, Filling, fill, spill_levels
from ledger.fuel.layout import Group
from ledger.fuel.levels import level_holding
from ledger.fuel.report import FilledCell
from ledger.fuel.stood import Stood
from ledger.model.tanks import Outside, Tank

# Less air than this is rounding, not a bubble.
LEAST_AIR_M3 = 1e-12


@dataclass(frozen=True, slots=True, kw_only=True)
class Filled:
    """A tank filled through one filler. `missing_m3` is the expansion space that had to be cut off."""

    filling: Filling
    capacity_m3: float
    limit: str
    caught_air_m3: float
    missing_m3: float
    cells: tuple[FilledCell, ...]


def fill_tank(tank: Tank, group: Group, ground: Stood) -> Filled | None:
    """Fill a tank at the attitude of filling; None where its network has no filler.

    The filler is the one marked `fill_here`, else the one that gives least, among those that reach
    the tank at all: a filler of a neighbour behind a high crossfeed is not how this one is filled.
    """
    network = ground.network_of(group)
    fillers = network.outside[Outside.FILLER]
    if not fillers:
        return None
    marked = {opening.name for opening in group.openings if opening.fill_here}
    filled = {way.name: _filled(tank, ground, fill(network, way)) for way in fillers}
    own = set(tank.cells)
    reaching = [name for name, one in filled.items() if own & one.filling.reached]
    choice = [name for name in reaching if name in marked] or reaching or list(filled)
    return min((filled[name] for name in choice), key=lambda one: one.capacity_m3)


def _filled(tank: Tank, ground: Stood, filling: Filling) -> Filled:
    cells = tuple(_filled_cell(cell, ground, filling) for cell in tank.cells)
    full = sum(ground.bays[cell].held(filling.level_of(cell)) for cell in tank.cells)
    missing = _missing_space(tank, ground, filling)
    return Filled(
        filling=filling,
        capacity_m3=max(0.0, full - missing),
        limit=EXPANSION if missing > 0.0 else filling.limit,
        caught_air_m3=sum(cell.caught_air_m3 or 0.0 for cell in cells),
        missing_m3=missing,
        cells=cells,
    )


def _filled_cell(name: str, ground: Stood, filling: Filling) -> FilledCell:
    bay = ground.bays[name]
    reached = name in filling.reached
    air = filling.air_m[name]
    caught = 0.0
    if reached and air.level_m < filling.level_m:
        caught = bay.held(filling.level_m) - bay.held(air.level_m)
    shut = caught > LEAST_AIR_M3
    return FilledCell(
        cell=name,
        gross_m3=bay.gross_m3,
        filled_m3=bay.held(filling.level_of(name)),
        caught_air_m3=caught if shut else 0.0,
        air_caught_by=air.set_by if shut else None,
        reached=reached,
        dry=name in ground.dry,
    )


def _missing_space(tank: Tank, ground: Stood, filling: Filling) -> float:
    """How much the space left under the vents falls short of what is declared for expansion, m3."""
    if tank.expansion is None:
        return 0.0
    wet = [ground.bays[cell] for cell in tank.cells if cell in filling.reached]
    wanted = tank.expansion * sum(bay.gross_m3 for bay in wet)
    space = sum(bay.gross_m3 - bay.held(filling.level_m) for bay in wet if bay.cell.name in filling.vented)
    return max(0.0, wanted - space)


def lost_overboard(tank: Tank, group: Group, stood: Stood, filled: Filled) -> float:
    """What of a tank filled to capacity stands above the vents' spill heights at this attitude, m3."""
    if stood.attitude.fill:
        return 0.0
    bays = [stood.bays[cell] for cell in tank.cells if cell in filled.filling.reached]
    spills = spill_levels(stood.network_of(group), filled.filling.reached)
    least = min((spills[bay.cell.name] for bay in bays if bay.cell.name in spills), default=math.inf)
    if not bays or sum(bay.held(least) for bay in bays) >= filled.capacity_m3:
        return 0.0
    level = level_holding(bays, filled.capacity_m3, lambda bay, at: bay.held(at))
    return sum(
        max(0.0, bay.held(level) - bay.held(spills[bay.cell.name])) for bay in bays if bay.cell.name in spills
    )
