"""The network of openings at one attitude, and the searches over it.

A crest of a way is the highest level fuel must rise above along it. The search for the least crest,
or for the way on which air passes under the highest rim, is Dijkstra's with the sum of lengths
replaced by their extreme.
"""

from __future__ import annotations

import heapq
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass

from ledger.fuel.rims import crests_of
from ledger.model.tanks import Opening, Outside
from ledger.model.vectors import Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Way:
    """An opening at one attitude. `cells` has two names, or one where it leads outside."""

    name: str
    cells: tuple[str, ...]
    outside: Outside | None
    low_m: float
    high_m: float
    one_way: str | None
    air_both: bool

    def fuel_passes(self, into: str | None) -> bool:
        """Whether fuel may pass into that cell; None is the outside."""
        return self.one_way is None or self.one_way == into

    def air_passes(self, into: str | None) -> bool:
        """Whether air may pass into that cell; None is the outside."""
        return self.air_both or self.fuel_passes(into)


@dataclass(frozen=True, slots=True, kw_only=True)
class Reached:
    """The best level along any way, and the opening that sets it (None: where the way begins)."""

    level_m: float
    set_by: str | None


class Network:
    """The ways between some cells at one attitude."""

    def __init__(self, cells: Iterable[str], ways: Iterable[Way]) -> None:
        self.cells = tuple(cells)
        known = set(self.cells)
        self.ways = tuple(way for way in ways if known.issuperset(way.cells))
        self.outside: dict[Outside, list[Way]] = {kind: [] for kind in Outside}
        self.beside: dict[str, list[tuple[str, Way]]] = {cell: [] for cell in self.cells}
        for way in self.ways:
            if way.outside is not None:
                self.outside[way.outside].append(way)
            else:
                one, two = way.cells
                self.beside[one].append((two, way))
                self.beside[two].append((one, way))


def ways_at(openings: Iterable[Opening], up: Vector) -> tuple[Way, ...]:
    """Every opening as it stands along `up`."""
    return tuple(way_at(opening, up) for opening in openings)


def way_at(opening: Opening, up: Vector) -> Way:
    """One opening as it stands along `up`."""
    crests = crests_of(opening, up)
    return Way(
        name=opening.name,
        cells=opening.cells,
        outside=opening.outside,
        low_m=crests.low_m,
        high_m=crests.high_m,
        one_way=opening.one_way,
        air_both=opening.air_both,
    )


def least_crests(network: Network, starts: Mapping[str, Reached], among: set[str]) -> dict[str, Reached]:
    """For each cell from which fuel can flow to a start, the least crest on any way there.

    starts : the crest of the start itself, by its cell. among : cells fuel may pass through.
    """
    found: dict[str, Reached] = {}
    heap = [(start.level_m, cell, start.set_by or "") for cell, start in starts.items() if cell in among]
    heapq.heapify(heap)
    while heap:
        level, cell, set_by = heapq.heappop(heap)
        if cell in found:
            continue
        found[cell] = Reached(level_m=level, set_by=set_by or None)
        for other, way in network.beside[cell]:
            if other in among and other not in found and way.fuel_passes(cell):
                higher = way.low_m > level
                heapq.heappush(heap, (max(level, way.low_m), other, way.name if higher else set_by))
    return found


def highest_airways(network: Network, starts: Mapping[str, Reached]) -> dict[str, Reached]:
    """For each cell from which air can leave to a start, the greatest of the least `high_m` on any way."""
    found: dict[str, Reached] = {}
    heap = [(-start.level_m, cell, start.set_by or "") for cell, start in starts.items()]
    heapq.heapify(heap)
    while heap:
        negative, cell, set_by = heapq.heappop(heap)
        if cell in found:
            continue
        found[cell] = Reached(level_m=-negative, set_by=set_by or None)
        for other, way in network.beside[cell]:
            if other not in found and way.air_passes(cell):
                lower = way.high_m < -negative
                heapq.heappush(heap, (-min(-negative, way.high_m), other, way.name if lower else set_by))
    return found


def spread(network: Network, starts: Iterable[str], passes: Callable[[str, str, Way], bool]) -> set[str]:
    """Cells reached from the starts through openings for which `passes(from, into, way)` holds."""
    reached = set(starts)
    left = list(reached)
    while left:
        cell = left.pop()
        for other, way in network.beside[cell]:
            if other not in reached and passes(cell, other, way):
                reached.add(other)
                left.append(other)
    return reached
