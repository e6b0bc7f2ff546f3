"""What moving the opening that traps a cell would free: 1 mm lower, and 10 % wider."""

from __future__ import annotations

from dataclasses import replace

from ledger.fuel.draining import drain
from ledger.fuel.rims import widened
from ledger.fuel.stood import Stood
from ledger.fuel.ways import Network, Way, way_at

LOWER_M = 0.001
WIDER = 1.1
# A cell that keeps less than this is not worth an opening's name and a second search.
LEAST_M3 = 1e-9


def freed_lower(stood: Stood, opening: str) -> float:
    """Volume freed over all cells by setting an opening 1 mm lower along up, m3."""
    way = next(one for one in stood.network.ways if one.name == opening)
    return _freed(stood, replace(way, low_m=way.low_m - LOWER_M, high_m=way.high_m - LOWER_M))


def freed_wider(stood: Stood, opening: str) -> float:
    """Volume freed over all cells by making an opening 10 % wider about its middle, m3.

    Below 0 where the move would trap more, as a wider outlet draws air sooner.
    """
    drawn = next(one for one in stood.system.tanks.openings if one.name == opening)
    return _freed(stood, way_at(widened(drawn, WIDER), stood.up))


def _freed(stood: Stood, changed: Way) -> float:
    known = stood.freed.get(changed)
    if known is None:
        joined = stood.system.joined_with(changed.cells[0])
        network = Network(
            joined, (changed if way.name == changed.name else way for way in stood.network.ways)
        )
        moved = drain(network, stood.system.pulls, stood.dry.intersection(joined))
        known = 0.0
        for cell in joined:
            before, after = stood.kept[cell].level_m, moved[cell].level_m
            if before != after and cell in stood.bays:
                known += stood.bays[cell].volume(before) - stood.bays[cell].volume(after)
        stood.freed[changed] = known
    return known
