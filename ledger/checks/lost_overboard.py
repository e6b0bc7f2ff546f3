"""Fuel of a full tank that runs out of a vent in flight."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import TankFuel
from ledger.units import Dimension, Display, Rounding, show

CODE = "lost-overboard"

# Less is what the coarseness of a tank's levels makes of nothing.
_LEAST_M3 = 1e-4


def lost_overboard(facts: Facts) -> tuple[Finding, ...]:
    """Each tank that, filled to capacity, loses fuel at a flight attitude; the worst one first."""
    display = facts.snapshot.plan.display
    return tuple(
        _of_tank(tank, lost, display)
        for tank in (() if facts.fuel is None else facts.fuel.tanks)
        if (lost := _lost(tank))
    )


def _lost(tank: TankFuel) -> list[tuple[float, str]]:
    lost = [
        (attitude.lost_m3, attitude.attitude)
        for attitude in tank.attitudes
        if attitude.flight and attitude.lost_m3 is not None and attitude.lost_m3 > _LEAST_M3
    ]
    return sorted(lost, key=lambda one: -one[0])


def _of_tank(tank: TankFuel, lost: list[tuple[float, str]], display: Display) -> Finding:
    litres = ", ".join(
        f"{show(volume, Dimension.VOLUME, display, rounding=Rounding.UP)} at {attitude}"
        for volume, attitude in lost
    )
    return Finding(
        code=CODE,
        severity=Severity.LOOK,
        where=Where(file="tanks.toml", thing=tank.tank),
        what=f"of the capacity {litres} would run out of a vent: fuel that stands above a vent's spill height"
        " is lost there; usable still counts it",
        do="move the vent, or fill less",
    )
