"""What the tanks take at the attitude of filling, where air stays, and what can leave overboard."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ledger.fuel.ways import Network, Reached, Way, highest_airways, least_crests, spread
from ledger.model.tanks import Outside

FILLER, VENT, EXPANSION = "filler", "vent", "expansion"
NO_AIRWAY = "no way out"


@dataclass(frozen=True, slots=True, kw_only=True)
class Filling:
    """One filler open at one attitude, before any volume is known.

    level_m : where the fuel stops, least of the filler and the vents' spill heights; `limit` says which.
    air_m : by cell, the level at which its air is shut in (minus infinity: at once), and by what.
    reached : cells the fuel comes to.
    vented : cells whose space above the fuel stays open to a vent.
    """

    filler: str
    level_m: float
    limit: str
    air_m: dict[str, Reached]
    reached: frozenset[str]
    vented: frozenset[str]

    def level_of(self, cell: str) -> float:
        """The level fuel rises to in a cell; minus infinity in one it does not come to."""
        return min(self.level_m, self.air_m[cell].level_m) if cell in self.reached else -math.inf


def fill(network: Network, filler: Way) -> Filling:
    """Pour through one filler, every other filler and all drains shut."""
    vents = network.outside[Outside.VENT]
    spill = min((way.low_m for way in vents), default=math.inf)
    level = min(filler.low_m, spill)
    air = _airways(network, filler)

    def level_of(cell: str) -> float:
        return min(level, air[cell].level_m)

    reached = spread(
        network,
        [filler.cells[0]],
        lambda here, into, way: way.fuel_passes(into) and way.low_m <= level_of(here),
    )
    open_vents = [way.cells[0] for way in vents if way.air_passes(None) and way.high_m >= level]
    vented = spread(
        network, open_vents, lambda here, _into, way: way.air_passes(here) and way.high_m >= level
    )
    return Filling(
        filler=filler.name,
        level_m=level,
        limit=VENT if spill < filler.low_m else FILLER,
        air_m=air,
        reached=frozenset(reached),
        vented=frozenset(vented & reached),
    )


def _airways(network: Network, filler: Way) -> dict[str, Reached]:
    starts: dict[str, Reached] = {}
    for way in (*network.outside[Outside.VENT], filler):
        if not way.air_passes(None):
            continue
        cell = way.cells[0]
        if cell not in starts or way.high_m > starts[cell].level_m:
            starts[cell] = Reached(level_m=way.high_m, set_by=way.name)
    air = highest_airways(network, starts)
    shut = Reached(level_m=-math.inf, set_by=NO_AIRWAY)
    return {cell: air.get(cell, shut) for cell in network.cells}


def spill_levels(network: Network, reached: frozenset[str]) -> dict[str, float]:
    """The level each cell falls to by running out of the vents; a cell that cannot run out is left out."""
    starts: dict[str, Reached] = {}
    for way in network.outside[Outside.VENT]:
        if not way.fuel_passes(None):
            continue
        cell = way.cells[0]
        if cell not in starts or way.low_m < starts[cell].level_m:
            starts[cell] = Reached(level_m=way.low_m, set_by=way.name)
    crests = least_crests(network, starts, set(network.cells))
    return {cell: crest.level_m for cell, crest in crests.items() if cell in reached}
