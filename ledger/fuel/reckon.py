"""The whole fuel report of a plan: every tank, every feed, and what the rules look at."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from ledger.fuel.capacity import fill_tank
from ledger.fuel.density import density_at
from ledger.fuel.draining import NO_AIR
from ledger.fuel.feeds import feed_rows
from ledger.fuel.report import Airless, FuelReport, Pocketed
from ledger.fuel.stood import Stood, System
from ledger.fuel.tank_fuel import Wanted, tank_fuel
from ledger.fuel.walls import far_openings, overlaps
from ledger.geometry.closed_cell import ClosedCell
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade
from ledger.model.progress import Progress, unwatched
from ledger.model.steps import Steps
from ledger.model.tanks import Tanks


def reckon(
    tanks: Tanks,
    cells: Mapping[str, ClosedCell],
    displaced: Mapping[str, ClosedCell],
    attitudes: tuple[Attitude, ...],
    fuel: FuelGrade | None,
    *,
    levels: int = 100,
    listed: tuple[str, ...] | None = None,
    asked: Attitude | None = None,
    temperature_k: float | None = None,
    volumes_only: bool = False,
    progress: Progress = unwatched,
) -> FuelReport:
    """Reckon all tanks of a plan.

    cells, displaced : proved meshes by the cell's name; `displaced` has those given as meshes.
    levels : steps of each table, which then has one row more.
    listed : names of the attitudes to show, all where None. Usable is over all flight attitudes
        whatever is listed.
    asked : one more attitude to show; it never counts as flight.
    temperature_k : of the fuel, for masses; 15 C where None.
    volumes_only : leave out tables, what moving an opening would free, and whether openings and cells
        lie where they belong: all that two plans are not compared by.
    progress : told every attitude the plan is stood at, then every tank at each attitude shown.
    Raises
        ValueError: levels below 1, or a listed name that is no attitude of the plan.
    """
    _refuse_wrong_use(attitudes, levels, listed)
    if not tanks.tanks:
        return FuelReport(tanks=(), feeds=())
    system = System.of(tanks, cells, displaced)
    return _reckoned(
        system,
        attitudes,
        listed=listed,
        asked=asked,
        progress=progress,
        levels=levels,
        volumes_only=volumes_only,
        density_kg_m3=density_at(fuel, temperature_k),
    )


def _reckoned(
    system: System,
    attitudes: tuple[Attitude, ...],
    *,
    listed: tuple[str, ...] | None,
    asked: Attitude | None,
    progress: Progress,
    levels: int,
    volumes_only: bool,
    density_kg_m3: float | None,
) -> FuelReport:
    chosen = _that_count(attitudes, listed)
    showing = sum(listed is None or one.name in listed for one in chosen) + (asked is not None)
    steps = Steps(len(chosen) + len(system.tanks.tanks) * showing, progress)
    stoods = _stand_all(system, chosen, steps)
    shown = [stood for stood in stoods if listed is None or stood.attitude.name in listed]
    if asked is not None:
        shown.append(Stood(system, replace(asked, flight=False, fill=False)))
    wanted = Wanted(
        told=steps,
        steps=levels,
        volumes_only=volumes_only,
        density_kg_m3=density_kg_m3,
        ground=next((stood for stood in stoods if stood.attitude.fill), None),
        flights=tuple(stood for stood in stoods if stood.attitude.flight),
        listed=tuple(shown),
        any_stood=next(iter((*stoods, *shown)), None) or Stood(system, Attitude(name="level")),
    )
    report = _report(system, wanted)
    steps.end("fuel")
    return report


def _refuse_wrong_use(attitudes: Sequence[Attitude], levels: int, listed: tuple[str, ...] | None) -> None:
    if levels < 1:
        raise ValueError("a table needs at least one step")
    unknown = set(listed or ()) - {attitude.name for attitude in attitudes}
    if unknown:
        raise ValueError(f"no attitude is named {', '.join(sorted(unknown))}")


def _report(system: System, wanted: Wanted) -> FuelReport:
    tanks, ground, flights = system.tanks, wanted.ground, wanted.flights
    filled = {
        tank.name: None if ground is None else fill_tank(tank, system.group_of(tank), ground)
        for tank in tanks.tanks
    }
    return FuelReport(
        tanks=tuple(
            tank_fuel(tank, system.group_of(tank), filled[tank.name], wanted) for tank in tanks.tanks
        ),
        feeds=feed_rows(system, filled, flights),
        far_openings=() if wanted.volumes_only else far_openings(tanks, system.cells),
        overlaps=() if wanted.volumes_only else overlaps(system.cells),
        airless=_airless(flights, tanks),
        pocketed=_pocketed(flights, tanks),
    )


def _that_count(attitudes: Sequence[Attitude], listed: tuple[str, ...] | None) -> tuple[Attitude, ...]:
    """Every attitude that is flown, filled in, or shown."""
    return tuple(
        attitude
        for attitude in attitudes
        if attitude.flight or attitude.fill or listed is None or attitude.name in listed
    )


def _stand_all(system: System, attitudes: Sequence[Attitude], steps: Steps) -> tuple[Stood, ...]:
    stoods = []
    for attitude in attitudes:
        steps.take(f"fuel, {attitude.name}")
        stoods.append(Stood(system, attitude))
    return tuple(stoods)


def _airless(flights: Sequence[Stood], tanks: Tanks) -> tuple[Airless, ...]:
    return tuple(
        Airless(tank=tank.name, cell=cell, attitude=stood.attitude.name)
        for tank in tanks.tanks
        for cell in tank.cells
        for stood in flights
        if stood.kept[cell].by == NO_AIR
    )


def _pocketed(flights: Sequence[Stood], tanks: Tanks) -> tuple[Pocketed, ...]:
    return tuple(
        _pocket(tank.name, cell, stood)
        for tank in tanks.tanks
        for cell in tank.cells
        for stood in flights
        if stood.pockets(cell) > 1
    )


def _pocket(tank: str, cell: str, stood: Stood) -> Pocketed:
    _, *others = stood.bays[cell].pools
    deepest = max(others, key=lambda place: place.depth_m)
    return Pocketed(
        tank=tank,
        cell=cell,
        attitude=stood.attitude.name,
        places=stood.pockets(cell),
        depth_m=deepest.depth_m,
        point_m=deepest.point_m,
    )
