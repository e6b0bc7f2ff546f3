"""The level at which several cells together hold a quantity."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from ledger.fuel.bays import Bay

_SHARE = 1e-13
_MOST_STEPS = 100


def level_holding(
    bays: Sequence[Bay],
    quantity_m3: float,
    holds: Callable[[Bay, float], float],
    rises: Callable[[Bay, float], float] = Bay.surface,
) -> float:
    """The level at which the cells hold a quantity; where that is so over a range, one within it.

    holds : what a cell holds up to a level, never falling with it; rises : how fast that grows.
    Beyond what the cells hold at all the level is their highest or lowest point. Newton's step,
    kept inside a bracket that shrinks by half when the step leaves it.
    """
    low, high = min(bay.lowest_m for bay in bays), max(bay.highest_m for bay in bays)
    slack = _SHARE * sum(holds(bay, high) for bay in bays)
    level = 0.5 * (low + high)
    for _ in range(_MOST_STEPS):
        off = sum(holds(bay, level) for bay in bays) - quantity_m3
        if abs(off) <= slack or high - low <= 1e-13:
            break
        low, high = (low, level) if off > 0.0 else (level, high)
        slope = sum(rises(bay, level) for bay in bays)
        step = level - off / slope if slope > 0.0 else low
        level = step if low < step < high else 0.5 * (low + high)
    return level
