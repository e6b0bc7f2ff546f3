"""A tank at one attitude as tables: all cells at one level, and drained from full by equal quantities."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

import numpy as np

from ledger.fuel.bays import Bay, Sums
from ledger.fuel.draining import Kept
from ledger.fuel.pool import Pool
from ledger.fuel.report import DrainedRow, TableRow
from ledger.geometry.standing import Floats

_HALVINGS = 44
_PASSES = 40
# A quantity met to this share is near enough for the last step between rows, less for a small one.
_CLOSE_SHARE = 2e-6
_SMALL_SHARE = 1e-3


def table_rows(
    levels_m: Floats, sums: Sums, *, displaced_m3: float, filled_m3: float
) -> tuple[TableRow, ...]:
    """Rows from empty to gross.

    displaced_m3 : what is displaced, given as a plain volume; it is taken off only around and above
        the quantity `filled_m3` that stands in the cells when filled, since nobody said where it lies.
    """
    net = sums.net_m3
    volume = np.minimum(net, np.maximum(np.maximum(filled_m3 - displaced_m3, net - displaced_m3), 0.0))
    rows = []
    for row in range(len(levels_m)):
        wet = volume[row] > 0.0 and sums.volume_m3[row] > 0.0
        x, y, z = (sums.moment_m4[row] / sums.volume_m3[row]).tolist() if wet else (0.0, 0.0, 0.0)
        rows.append(
            TableRow(
                level_m=float(levels_m[row]),
                volume_m3=float(volume[row]),
                surface_m2=float(sums.surface_m2[row]),
                cg_m=(x, y, z) if wet else None,
            )
        )
    return tuple(rows)


class Draining:
    """The cells of a tank at one attitude, each never below the level it keeps."""

    def __init__(
        self, bays: Sequence[Bay], kept: Mapping[str, Kept], whole: tuple[Pool, Floats, Sums]
    ) -> None:
        """`whole` is the pool of all the tank's cells with a table of it, used where no cell is shut off."""
        wet = [bay for bay in bays if kept[bay.cell.name].level_m != -math.inf]
        self._levels = {bay.cell.name: kept[bay.cell.name].level_m for bay in wet}
        moving = [bay for bay in wet if self._levels[bay.cell.name] < math.inf]
        self.trapped_m3 = sum(bay.volume(self._levels[bay.cell.name]) for bay in wet)
        # Only these differ from the pool at a level below the one they keep.
        self._holding = [bay for bay in moving if self._levels[bay.cell.name] > bay.lowest_m]
        still = [bay for bay in wet if self._levels[bay.cell.name] == math.inf]
        # Sealant is not taken off what is trapped.
        own = [(bay, self._levels[bay.cell.name]) for bay in self._holding]
        self._more = sum(bay.volume(level) - bay.net(level) for bay, level in own)
        self._still = [bay.lying(math.inf) for bay in still]
        self._more += sum(lying.volume_m3 for lying in self._still)
        pool, levels, sums = whole
        if moving and len(moving) < len(bays):
            pool = Pool(moving)
            levels = np.linspace(pool.lowest_m, pool.highest_m, len(levels))
            sums = pool.at(levels)
        self._pool = pool if moving else None
        self._grid = levels
        self._table = self._held(levels, sums) if moving else None

    def rows(
        self, full_m3: float, steps: int, *, worst_m3: float | None, density_kg_m3: float | None
    ) -> tuple[DrainedRow, ...]:
        """Rows by equal quantities from what is trapped up to full."""
        if full_m3 < self.trapped_m3:
            return ()
        count = steps + 1 if full_m3 > self.trapped_m3 else 1
        quantities = np.linspace(self.trapped_m3, full_m3, count)
        centres = self._centres(quantities)
        return tuple(
            DrainedRow(
                quantity_m3=quantity,
                usable_m3=None if worst_m3 is None else max(0.0, quantity - worst_m3),
                mass_kg=None if density_kg_m3 is None else density_kg_m3 * quantity,
                cg_m=None if quantity <= 0.0 or math.isnan(x) else (x, y, z),
            )
            for quantity, (x, y, z) in zip(quantities.tolist(), centres.tolist(), strict=True)
        )

    def _held(self, levels: Floats, sums: Sums) -> tuple[Floats, Floats, Floats, Floats]:
        """Quantity, volume, first moment and free surface at each level h, cells standing at max(h, own)."""
        volume, moment = sums.volume_m3.copy(), sums.moment_m4.copy()
        surface, net = sums.surface_m2.copy(), sums.net_m3.copy()
        for bay in self._holding:
            own = self._levels[bay.cell.name]
            under = np.flatnonzero(levels < own)
            if len(under) == 0:
                continue
            lies = bay.lying(own)
            volume[under] += lies.volume_m3
            net[under] += bay.net(own)
            moment[under] += np.array(lies.moment_m4)
            between = under[levels[under] > bay.lowest_m]
            if len(between) == 0:
                continue
            below = bay.lying_at(levels[between])
            volume[between] -= below.volume_m3
            net[between] -= below.net_m3
            moment[between] -= below.moment_m4
            surface[between] -= below.surface_m2
        for lying in self._still:
            volume += lying.volume_m3
            moment += np.array(lying.moment_m4)
        return net + self._more, volume, moment, np.maximum(surface, 0.0)

    def _centres(self, quantities: Floats) -> Floats:
        """Centres (n, 3) of the fuel at each quantity; NaN where there is none."""
        if self._pool is None or self._table is None:
            return self._centres_of_still(len(quantities))
        held, _, _, surface = self._table
        low, high, levels = _levels_between(self._grid, held, surface, quantities)
        got, volume, moment, surface = self._held(levels, self._pool.at(levels))
        close = _CLOSE_SHARE * np.maximum(quantities, _SMALL_SHARE * held[-1])
        for _ in range(_PASSES):
            off = quantities - got
            wide = np.flatnonzero(np.abs(off) > close)
            if len(wide) == 0:
                break
            low[wide] = np.where(off[wide] > 0.0, levels[wide], low[wide])
            high[wide] = np.where(off[wide] > 0.0, high[wide], levels[wide])
            step = np.divide(off, surface, out=np.full_like(off, np.inf), where=surface > 0.0)[wide]
            newton = levels[wide] + step
            inside = (low[wide] < newton) & (newton < high[wide])
            levels[wide] = np.where(inside, newton, 0.5 * (low[wide] + high[wide]))
            again = self._held(levels[wide], self._pool.at(levels[wide]))
            got[wide], volume[wide], moment[wide], surface[wide] = again
        return _centred(quantities, got, volume, moment)

    def _centres_of_still(self, count: int) -> Floats:
        volume = sum(lying.volume_m3 for lying in self._still)
        moment = sum((np.array(lying.moment_m4) for lying in self._still), np.zeros(3))
        return np.tile(moment / volume if volume > 0.0 else np.full(3, np.nan), (count, 1))


def _centred(quantities: Floats, got: Floats, volume: Floats, moment: Floats) -> Floats:
    """Centres at the quantities, from volumes and moments that hold nearly as much.

    The last step is one of interpolation: the moment follows in proportion to the step between
    neighbouring rows, with an error of second order in an already small difference. Rows so near to
    one another that their difference is rounding are left as they are.
    """
    off = quantities - got
    slope = np.zeros_like(moment)
    near = np.ones(len(off), dtype=bool)
    if len(volume) > 1:
        spacing = float(quantities[1] - quantities[0])
        gained = np.diff(volume)[:, None]
        slopes = np.diff(moment, axis=0) / np.where(gained > 0.5 * spacing, gained, np.inf)
        slope[:-1] += 0.5 * slopes
        slope[1:] += 0.5 * slopes
        slope[0], slope[-1] = slopes[0], slopes[-1]
        near = (np.abs(off) > 0.1 * spacing) | (np.abs(slope).max(axis=1) == 0.0)
    off[near] = 0.0
    total = volume + off
    centres = (moment + off[:, None] * slope) / np.where(total > 0.0, total, np.nan)[:, None]
    return np.asarray(centres, dtype=np.float64)


def _levels_between(
    levels: Floats, held: Floats, surface: Floats, quantities: Floats
) -> tuple[Floats, Floats, Floats]:
    """Levels of a table on either side of each quantity, and one between read from its slopes."""
    at = np.clip(np.searchsorted(held, quantities, side="left"), 1, len(levels) - 1)
    low, high = levels[at - 1], levels[at]
    step = high - low
    start, rise = held[at - 1], held[at] - held[at - 1]
    slope_low, slope_high = surface[at - 1] * step, surface[at] * step
    wanted = quantities - start
    under, over = np.zeros(len(at)), np.ones(len(at))
    for _ in range(_HALVINGS):
        t = 0.5 * (under + over)
        curve = t * t * (3.0 - 2.0 * t) * rise + t * (1.0 - t) * ((1.0 - t) * slope_low - t * slope_high)
        short = curve < wanted
        under, over = np.where(short, t, under), np.where(short, over, t)
    return low, high, low + over * step
