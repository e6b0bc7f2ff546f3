"""One tank's part of the report."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ledger.fuel.capacity import Filled, lost_overboard
from ledger.fuel.freeing import LEAST_M3, freed_lower, freed_wider
from ledger.fuel.layout import Group
from ledger.fuel.pool import Pool
from ledger.fuel.report import AttitudeFuel, DrainedCell, DrainedRow, FilledCell, TableRow, TankFuel
from ledger.fuel.stood import Stood
from ledger.fuel.tank_tables import Draining, table_rows
from ledger.fuel.worst import UNKNOWN, Worst, usable_uncertainty, worst_of
from ledger.model.steps import Steps
from ledger.model.tanks import Outside, Tank


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Wanted:
    """The attitudes that count and what the report is to show.

    ground : where the tanks are filled. flights : all flight attitudes. listed : those to show.
    any_stood : one of them, or a level one where the plan has none, for what no attitude changes.
    volumes_only : no tables, and not what moving an opening would free.
    told : who is told each attitude of a tank before it is reckoned.
    """

    steps: int
    volumes_only: bool
    density_kg_m3: float | None
    ground: Stood | None
    flights: tuple[Stood, ...]
    listed: tuple[Stood, ...]
    any_stood: Stood
    told: Steps


def tank_fuel(tank: Tank, group: Group, filled: Filled | None, wanted: Wanted) -> TankFuel:
    """Capacity, usable and every listed attitude of one tank."""
    worst = worst_of([tank], wanted.flights) if group.named(Outside.OUTLET) else UNKNOWN
    usable, usable_u = _usable(tank, filled, worst, wanted)
    limit = worst.trapped_m3 if usable is not None else None
    return TankFuel(
        tank=tank.name,
        gross_m3=sum(wanted.any_stood.bays[cell].gross_m3 for cell in tank.cells),
        capacity_m3=None if filled is None else filled.capacity_m3,
        capacity_limit=None if filled is None else filled.limit,
        caught_air_m3=None if filled is None else filled.caught_air_m3,
        usable_m3=usable,
        usable_u_m3=usable_u,
        governing_attitude=worst.attitude,
        cells=_unfilled(tank, wanted.any_stood) if filled is None else filled.cells,
        attitudes=tuple(
            _attitude(tank, group, stood, filled, worst_m3=limit, wanted=wanted) for stood in wanted.listed
        ),
        filler=None if filled is None else filled.filling.filler,
        fill_level_m=None if filled is None else filled.filling.level_m,
        expansion_missing_m3=None if filled is None else filled.missing_m3,
    )


def _usable(
    tank: Tank, filled: Filled | None, worst: Worst, wanted: Wanted
) -> tuple[float | None, float | None]:
    """Usable with its uncertainty; None without a filler, an outlet, or a flight attitude all counted."""
    if filled is None or wanted.ground is None or worst.trapped_m3 is None:
        return None, None
    governing = next(stood for stood in wanted.flights if stood.attitude.name == worst.attitude)
    return (
        max(0.0, filled.capacity_m3 - worst.trapped_m3),
        usable_uncertainty(tank, filled, wanted.ground, governing),
    )


def _unfilled(tank: Tank, stood: Stood) -> tuple[FilledCell, ...]:
    return tuple(
        FilledCell(
            cell=cell,
            gross_m3=stood.bays[cell].gross_m3,
            filled_m3=None,
            caught_air_m3=None,
            air_caught_by=None,
            reached=False,
            dry=cell in stood.dry,
        )
        for cell in tank.cells
    )


def _attitude(
    tank: Tank, group: Group, stood: Stood, filled: Filled | None, *, worst_m3: float | None, wanted: Wanted
) -> AttitudeFuel:
    wanted.told.take(f"fuel, {tank.name} at {stood.attitude.name}")
    trapped = stood.trapped_in(tank)
    lost = None if filled is None else lost_overboard(tank, group, stood, filled)
    table: tuple[TableRow, ...] = ()
    drained: tuple[DrainedRow, ...] = ()
    if not wanted.volumes_only:
        table, drained = _tables(tank, stood, filled, wanted, lost_m3=lost, worst_m3=worst_m3)
    return AttitudeFuel(
        attitude=stood.attitude.name,
        pitch_deg=stood.attitude.pitch_deg,
        roll_deg=stood.attitude.roll_deg,
        up=stood.up,
        flight=stood.attitude.flight,
        trapped_m3=trapped,
        lost_m3=lost,
        cells=tuple(_drained_cell(cell, stood, freeing=not wanted.volumes_only) for cell in tank.cells),
        table=table,
        drained=drained,
    )


def _tables(
    tank: Tank,
    stood: Stood,
    filled: Filled | None,
    wanted: Wanted,
    *,
    lost_m3: float | None,
    worst_m3: float | None,
) -> tuple[tuple[TableRow, ...], tuple[DrainedRow, ...]]:
    """What the tank holds below each level, and what is in it while it drains."""
    bays = [stood.bays[cell] for cell in tank.cells]
    pool = Pool(bays)
    levels = np.linspace(pool.lowest_m, pool.highest_m, wanted.steps + 1)
    sums = pool.at(levels)
    drained: tuple[DrainedRow, ...] = ()
    if filled is not None and lost_m3 is not None and stood.trapped_in(tank) is not None:
        drained = Draining(bays, stood.kept, (pool, levels, sums)).rows(
            filled.capacity_m3 - lost_m3, wanted.steps, worst_m3=worst_m3, density_kg_m3=wanted.density_kg_m3
        )
    table = table_rows(
        levels,
        sums,
        displaced_m3=sum(bay.cell.displaced_m3 or 0.0 for bay in bays),
        filled_m3=0.0 if filled is None else _standing_when_filled(filled, wanted.ground),
    )
    return table, drained


def _standing_when_filled(filled: Filled, ground: Stood | None) -> float:
    """Room below the fill levels, plain displaced volumes not taken off, m3."""
    if ground is None:
        return 0.0
    return sum(ground.bays[cell.cell].net(filled.filling.level_of(cell.cell)) for cell in filled.cells)


def _drained_cell(name: str, stood: Stood, *, freeing: bool) -> DrainedCell:
    kept, bay = stood.kept[name], stood.bays[name]
    pockets = stood.pockets(name)
    trapped = stood.trapped(name, kept)
    partly = 0.0 < trapped < bay.volume(math.inf)
    lower = wider = None
    if freeing and kept.opening is not None and pockets == 1 and trapped > LEAST_M3:
        lower, wider = freed_lower(stood, kept.opening), freed_wider(stood, kept.opening)
    return DrainedCell(
        cell=name,
        trapped_m3=trapped if pockets == 1 else None,
        level_m=kept.level_m if partly and math.isfinite(kept.level_m) else None,
        trapped_by=kept.by,
        frees_lower_1mm_m3=lower,
        frees_wider_10pc_m3=wider,
        pockets=pockets,
    )
