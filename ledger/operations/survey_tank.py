"""What one tank does over its openings, its levels and other tilts: asked for beside the drawing."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ledger.model.attitude import Attitude
from ledger.operations.look_at_tank import TankDrawn, water_line


@dataclass(frozen=True, slots=True, kw_only=True)
class Gain:
    """What moving one opening would free over the tank, m3; below 0 where it would trap more."""

    opening: str
    cells: tuple[str, ...]
    lower_1mm_m3: float
    wider_10pc_m3: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Rung:
    """One level of the curve: the surface's water line at the outlet, and what the tank then holds."""

    outlet_wl_m: float
    volume_m3: float


def gains_of(drawn: TankDrawn, attitude: Attitude) -> tuple[Gain, ...]:
    """Every opening that traps fuel at an attitude, the one worth most first."""
    from ledger.fuel.freeing import freed_lower, freed_wider

    at = drawn.turned(attitude)
    openings = {opening.name: opening for opening in drawn.system.tanks.openings}
    names = {at.stood.kept[cell].opening for cell in drawn.tank.cells}
    gains = [
        Gain(
            opening=name,
            cells=openings[name].cells,
            lower_1mm_m3=freed_lower(at.stood, name),
            wider_10pc_m3=freed_wider(at.stood, name),
        )
        for name in sorted(name for name in names if name is not None)
    ]
    return tuple(sorted(gains, key=lambda gain: -max(gain.lower_1mm_m3, gain.wider_10pc_m3)))


def trapped_over(
    drawn: TankDrawn, pitches_deg: tuple[float, ...], rolls_deg: tuple[float, ...]
) -> tuple[tuple[float | None, ...], ...]:
    """What the tank traps at each pitch (rows) and roll (columns), m3; None where it cannot be known."""
    from ledger.fuel.stood import Stood

    def trapped(pitch: float, roll: float) -> float | None:
        attitude = Attitude(name="map", pitch_deg=pitch, roll_deg=roll)
        return Stood(drawn.system, attitude, only=drawn.tank.cells).trapped_in(drawn.tank)

    return tuple(tuple(trapped(pitch, roll) for roll in rolls_deg) for pitch in pitches_deg)


def curve_of(drawn: TankDrawn, attitude: Attitude, steps: int) -> tuple[Rung, ...]:
    """What the tank holds at even levels, from where it stops feeding to full; empty without an outlet."""
    from ledger.fuel.levels import level_holding
    from ledger.model.tanks import Outside

    at = drawn.turned(attitude)
    bays = [at.stood.bays[cell] for cell in drawn.tank.cells]
    stops = [
        at.levels[way.cells[0]]
        for way in at.stood.network.outside[Outside.OUTLET]
        if way.cells[0] in at.levels and math.isfinite(at.levels[way.cells[0]])
    ]
    if not stops or at.trapped_m3 is None or at.trapped_m3 >= drawn.most_m3 or steps < 2:
        return ()
    low, high = min(stops), level_holding(bays, drawn.most_m3, at.holds, at.rises)
    rungs = []
    for step in range(steps):
        level = low + (high - low) * step / (steps - 1)
        wl = water_line(drawn, at, level)
        if wl is not None:
            rungs.append(Rung(outlet_wl_m=wl, volume_m3=sum(at.holds(bay, level) for bay in bays)))
    return tuple(rungs)
