"""Which fuel stays behind when the outlets feed: levels cell by cell, and what holds each of them."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from ledger.fuel.ways import Network, Reached, Way, least_crests, spread
from ledger.model.tanks import Outside

OUTLET, NO_WAY_OUT, NO_AIR, DRY = "outlet", "no way out", "no air", "dry"


@dataclass(frozen=True, slots=True, kw_only=True)
class Kept:
    """The level a cell keeps: infinite for all it can hold, minus infinity for nothing at all.

    by : an opening's name, or one of the words above. opening : the opening or outlet that would
    have to move for the level to fall, where there is one.
    """

    level_m: float
    by: str
    opening: str | None


def drain(
    network: Network, pulls: Iterable[tuple[str, ...]], dry: frozenset[str] | set[str]
) -> dict[str, Kept]:
    """Levels left in every cell once nothing more can feed.

    pulls : sets of outlets that draw together. A set of one outlet stops at that outlet's own limit;
        a tee stops at the highest limit among its outlets, because air then enters there.
    dry : cells fuel never comes to; they hold nothing and let air through.

    Air must come in for fuel to go out. A cell that air cannot reach keeps all it can hold and
    leaves the network, which may cut off others: levels only ever rise from one round to the next,
    so the rounds end.
    """
    starts = _starts(network, pulls)
    left = set(network.cells) - set(dry)
    airless: set[str] = set()
    while True:
        levels = least_crests(network, starts, left)
        aired = _aired(network, levels, dry)
        shut = {cell for cell in levels if cell not in aired}
        if not shut:
            break
        airless |= shut
        left -= shut
    outlets = {way.name for way in network.outside[Outside.OUTLET]}
    kept: dict[str, Kept] = {}
    for cell in network.cells:
        if cell in dry:
            kept[cell] = Kept(level_m=-math.inf, by=DRY, opening=None)
        elif cell in airless:
            kept[cell] = Kept(level_m=math.inf, by=NO_AIR, opening=None)
        elif cell in levels:
            name = levels[cell].set_by
            by = OUTLET if name is None or name in outlets else name
            kept[cell] = Kept(level_m=levels[cell].level_m, by=by, opening=name)
        else:
            kept[cell] = Kept(level_m=math.inf, by=NO_WAY_OUT, opening=None)
    return kept


def _starts(network: Network, pulls: Iterable[tuple[str, ...]]) -> dict[str, Reached]:
    """For each cell with an outlet, the level at which it stops feeding of its own accord."""
    outlets = {way.name: way for way in network.outside[Outside.OUTLET]}
    starts: dict[str, Reached] = {}
    for pull in pulls:
        drawn = [outlets[name] for name in pull if name in outlets]
        if not drawn:
            continue
        highest = max(drawn, key=lambda way: way.high_m)
        stop = highest.high_m
        for way in drawn:
            if not way.fuel_passes(None):
                continue
            level = max(stop, way.low_m)
            cell = way.cells[0]
            if cell not in starts or level < starts[cell].level_m:
                starts[cell] = Reached(level_m=level, set_by=way.name if way.low_m > stop else highest.name)
    return starts


def _aired(network: Network, levels: Mapping[str, Reached], dry: frozenset[str] | set[str]) -> set[str]:
    """Cells that air reaches from a vent, each opening clear of the fuel on the side nearer the vent."""

    def passes(here: str, into: str, way: Way) -> bool:
        if here in dry:
            return way.air_passes(into)
        return here in levels and way.air_passes(into) and way.high_m > levels[here].level_m

    vented = [way.cells[0] for way in network.outside[Outside.VENT] if way.air_passes(way.cells[0])]
    return spread(network, vented, passes)


def dry_cells(network: Network, tees: Iterable[tuple[str, ...]]) -> frozenset[str]:
    """Cells to which no way of fuel leads from any filler, a tee's joined outlets counting as a way."""
    joined = [{way.cells[0] for way in network.outside[Outside.OUTLET] if way.name in tee} for tee in tees]
    reached = {way.cells[0] for way in network.outside[Outside.FILLER]}
    while True:
        wet = spread(network, reached, lambda _here, into, way: way.fuel_passes(into))
        more = wet.union(*(cells for cells in joined if cells & wet))
        if more == reached:
            return frozenset(network.cells) - more
        reached = more
