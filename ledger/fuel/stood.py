"""All cells and openings of a plan at one attitude: bays, network and what each cell keeps."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from ledger.fuel.bays import Bay
from ledger.fuel.draining import DRY, Kept, drain, dry_cells
from ledger.fuel.layout import Group, all_pulls, groups_of
from ledger.fuel.ways import Network, Way, ways_at
from ledger.geometry.closed_cell import ClosedCell
from ledger.model.attitude import Attitude
from ledger.model.tanks import Outside, Tank, Tanks
from ledger.model.vectors import Vector


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class System:
    """What does not depend on the attitude."""

    tanks: Tanks
    cells: Mapping[str, ClosedCell]
    displaced: Mapping[str, ClosedCell]
    groups: tuple[Group, ...]
    pulls: tuple[tuple[str, ...], ...]

    @staticmethod
    def of(tanks: Tanks, cells: Mapping[str, ClosedCell], displaced: Mapping[str, ClosedCell]) -> System:
        """The system of a plan whose cells are proved."""
        groups = groups_of(tanks)
        return System(
            tanks=tanks, cells=cells, displaced=displaced, groups=groups, pulls=all_pulls(tanks, groups)
        )

    def joined_with(self, cell: str) -> tuple[str, ...]:
        """Cells whose fuel has to do with that of one cell: of its group, and of groups on a tee with it."""
        groups = [group for group in self.groups if cell in group.cells]
        # Once over for each: a tee may join a group to one that another tee has only just brought in.
        for pull in self.pulls * len(self.pulls):
            drawn = [group for group in self.groups if set(pull).intersection(group.named(Outside.OUTLET))]
            if any(group in groups for group in drawn):
                groups += [group for group in drawn if group not in groups]
        return tuple(name for group in groups for name in group.cells)

    def group_of(self, tank: Tank) -> Group:
        """The tanks that one belongs with."""
        return next(group for group in self.groups if tank in group.tanks)


class Stood:
    """A system at one attitude."""

    def __init__(self, system: System, attitude: Attitude, *, only: tuple[str, ...] | None = None) -> None:
        """`only` names the cells whose volumes will be asked for; all of them otherwise."""
        self.system = system
        self.attitude = attitude
        self.up: Vector = attitude.up
        wanted = None if only is None else set(only)
        self.bays = {
            cell.name: Bay(cell, system.cells[cell.name], system.displaced.get(cell.name), self.up)
            for cell in system.tanks.cells
            if wanted is None or cell.name in wanted
        }
        self.network = Network(
            (cell.name for cell in system.tanks.cells), ways_at(system.tanks.openings, self.up)
        )
        tees = tuple(pull for pull in system.pulls if len(pull) > 1)
        self.dry = dry_cells(self.network, tees)
        self.kept = drain(self.network, system.pulls, self.dry)
        self.freed: dict[Way, float] = {}

    def network_of(self, group: Group) -> Network:
        """The part of the network that is filled together."""
        return Network(group.cells, self.network.ways)

    def kept_from(self, pulls: tuple[tuple[str, ...], ...]) -> dict[str, Kept]:
        """What stays where only some outlets draw."""
        if set(pulls) == set(self.system.pulls):
            return self.kept
        return drain(self.network, pulls, self.dry)

    def trapped(self, cell: str, kept: Kept) -> float:
        """Volume that level keeps in a cell, m3, with what pools too shallow to count may keep."""
        bay = self.bays[cell]
        volume, film = bay.volume(kept.level_m), 0.0 if kept.by == DRY else bay.film_m3
        return min(volume + film, bay.volume(math.inf)) if film else volume

    def pockets(self, cell: str) -> int:
        """Lowest places of a cell; a dry cell has nothing in them to count."""
        return 1 if self.kept[cell].by == DRY else self.bays[cell].pockets

    def trapped_in(self, tank: Tank, kept: Mapping[str, Kept] | None = None) -> float | None:
        """What a tank keeps, m3; None where a cell holds pockets not counted."""
        levels = self.kept if kept is None else kept
        if any(self.pockets(cell) > 1 for cell in tank.cells):
            return None
        return sum(self.trapped(cell, levels[cell]) for cell in tank.cells)
