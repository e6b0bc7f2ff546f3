"""The greatest trapped quantity over all flight attitudes, and its uncertainty."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from ledger.fuel.capacity import Filled
from ledger.fuel.draining import Kept
from ledger.fuel.stood import Stood
from ledger.model.tanks import Tank

# Assumed for a wing laid up by hand, without a source: how far a skin stands from where it is drawn,
# and how far an opening is bored from where it is planned.
SKIN_TOLERANCE_M = 0.0005
OPENING_TOLERANCE_M = 0.001


@dataclass(frozen=True, slots=True, kw_only=True)
class Worst:
    """The most that stays, m3, and the attitude in which it does; None where that is unknown."""

    trapped_m3: float | None
    attitude: str | None


UNKNOWN = Worst(trapped_m3=None, attitude=None)


def worst_of(
    tanks: Sequence[Tank],
    flights: Sequence[Stood],
    kept: Mapping[str, Mapping[str, Kept]] | None = None,
) -> Worst:
    """The worst attitude for some tanks taken together.

    kept : what stays by attitude where not all outlets draw. Pockets not counted in any flight
    attitude leave the worst unknown: the attitude left out might be the one that governs.
    """
    worst = UNKNOWN
    for stood in flights:
        levels = None if kept is None else kept[stood.attitude.name]
        trapped = [stood.trapped_in(tank, levels) for tank in tanks]
        known = [one for one in trapped if one is not None]
        if len(known) < len(trapped):
            return UNKNOWN
        total = sum(known)
        if worst.trapped_m3 is None or total > worst.trapped_m3:
            worst = Worst(trapped_m3=total, attitude=stood.attitude.name)
    return worst


def usable_uncertainty(
    tank: Tank,
    filled: Filled,
    ground: Stood,
    governing: Stood,
    *,
    skin_m: float = SKIN_TOLERANCE_M,
    opening_m: float = OPENING_TOLERANCE_M,
) -> float:
    """Standard uncertainty of usable, m3.

    A skin that stands out adds wall by wall to what is filled and to what is trapped; the walls wet
    in both cancel. Openings are bored by one hand to one drawing, so their errors add up.
    """
    walls = surface = 0.0
    for cell in tank.cells:
        full, left = filled.filling.level_of(cell), governing.kept[cell].level_m
        walls += ground.bays[cell].wetted_area(full) - governing.bays[cell].wetted_area(left)
        surface += ground.bays[cell].surface(full) + governing.bays[cell].surface(left)
    return math.hypot(skin_m * walls, opening_m * surface)
