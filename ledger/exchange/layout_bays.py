"""The bays and walls of a layout by their names: `A3` is the bay outboard of rib 3 in row A, or that rib.

A bay inboard of the first rib of a row is named with 0, as `A0`. A stretch of a web is named by the web
and the rib inboard of it.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

from ledger.loft.layout import Rib, Row, TankBays, Walls, Web


def rib_line_m(rib: Rib) -> float:
    """The butt line of a rib, of its middle where it is canted."""
    if rib.points_m is not None:
        return 0.5 * (rib.points_m[0][1] + rib.points_m[1][1])
    return rib.butt_line_m or 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class WallBetween:
    """A rib in a row, or a stretch of a web, and the bays on its sides, None where there is none."""

    name: str
    kind: Walls
    sides: tuple[str | None, str | None]


@dataclass(frozen=True, kw_only=True)
class Bays:
    """All bays and walls of the rows; the ribs of each row root to tip."""

    rows: tuple[Row, ...]
    ribs: tuple[Rib, ...]
    webs: tuple[Web, ...]
    tanks: tuple[TankBays, ...]

    def ribs_in(self, row: str) -> tuple[Rib, ...]:
        """The ribs that stand in a row, root to tip."""
        return tuple(sorted((rib for rib in self.ribs if row in rib.rows), key=rib_line_m))

    @cached_property
    def names(self) -> tuple[str, ...]:
        """Every bay."""
        return tuple(
            f"{row.name}{name}"
            for row in self.rows
            for name in ("0", *(r.name for r in self.ribs_in(row.name)))
        )

    @cached_property
    def tank_of(self) -> dict[str, str]:
        """The tank of each bay that is in one; the first that claims it."""
        found: dict[str, str] = {}
        for tank in self.tanks:
            for bay in self.in_tank(tank):
                found.setdefault(bay, tank.name)
        return found

    def in_tank(self, tank: TankBays) -> tuple[str, ...]:
        """The bays of a tank; none in a row that an end rib is not in."""
        found: list[str] = []
        for row in tank.rows:
            names = [rib.name for rib in self.ribs_in(row)]
            if set(tank.ribs) <= set(names):
                found += [
                    f"{row}{name}" for name in names[names.index(tank.ribs[0]) : names.index(tank.ribs[1])]
                ]
        return tuple(found)

    @cached_property
    def rib_walls(self) -> dict[str, WallBetween]:
        """Each rib in each row, by row and rib."""
        found = {}
        for row in self.rows:
            for before, rib in pairwise((None, *self.ribs_in(row.name))):
                if rib is not None:
                    inboard = f"{row.name}{before.name if before is not None else '0'}"
                    name = f"{row.name}{rib.name}"
                    found[name] = WallBetween(name=name, kind=Walls.RIBS, sides=(inboard, name))
        return found

    @cached_property
    def web_walls(self) -> dict[str, WallBetween]:
        """Each stretch of each web, by web and the rib inboard of it."""
        found = {}
        for web in self.webs:
            front = next((row.name for row in self.rows if row.rear == web.name), None)
            rear = next((row.name for row in self.rows if row.front == web.name), None)
            whole = (self._first_bay(front), self._first_bay(rear))
            found[f"{web.name}0"] = WallBetween(name=f"{web.name}0", kind=Walls.WEBS, sides=whole)
            for rib in self.ribs:
                if front in rib.rows or rear in rib.rows:
                    sides = (self._bay_at(front, rib), self._bay_at(rear, rib))
                    name = f"{web.name}{rib.name}"
                    found[name] = WallBetween(name=name, kind=Walls.WEBS, sides=sides)
        return found

    def _first_bay(self, row: str | None) -> str | None:
        return None if row is None else f"{row}0"

    def _bay_at(self, row: str | None, rib: Rib) -> str | None:
        """The bay of a row just outboard of a rib, whether that stands in the row or not."""
        if row is None:
            return None
        inboard = [one.name for one in self.ribs_in(row) if rib_line_m(one) <= rib_line_m(rib)]
        return f"{row}{inboard[-1] if inboard else '0'}"

    def wall(self, name: str, kind: Walls | None = None) -> WallBetween | None:
        """A wall by its name; where a rib and a web share it and no kind is told, the rib."""
        rib, web = self.rib_walls.get(name), self.web_walls.get(name)
        if kind is not None:
            return rib if kind is Walls.RIBS else web
        return rib or web

    def inside_tanks(self, kind: Walls) -> tuple[WallBetween, ...]:
        """The ribs, or the stretches of webs, that part two bays of one tank."""
        walls = self.rib_walls if kind is Walls.RIBS else self.web_walls
        return tuple(wall for wall in walls.values() if self.parts_one(wall))

    def tanks_beside(self, wall: WallBetween) -> tuple[str, ...]:
        """The tanks on the sides of a wall, one for each wet side."""
        return tuple(self.tank_of[side] for side in wall.sides if side is not None and side in self.tank_of)

    def parts_one(self, wall: WallBetween) -> bool:
        """Whether both sides are of one tank."""
        tanks = self.tanks_beside(wall)
        return len(tanks) == 2 and tanks[0] == tanks[1]
