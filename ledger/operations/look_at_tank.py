"""What the Fuel screen shows, frozen: each tank as drawn, and one tank standing at any attitude and quantity.

`look_at_tanks` does what a plan decides and is kept; `look_at_tank` is asked again at every key.
"""

from __future__ import annotations

import math
from collections import OrderedDict
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property, lru_cache
from typing import TYPE_CHECKING

from ledger.fuel.report import FuelReport, TankFuel
from ledger.model.attitude import Attitude
from ledger.model.tanks import Opening, Outside, Pipe, Tank
from ledger.model.vectors import Vector
from ledger.operations.cut_tank import Cut, X, Y, Z, cut_tank
from ledger.operations.open_build import Build
from ledger.operations.reckon_fuel import reckon_build
from ledger.operations.take_stock import Stock
from ledger.units import Display

if TYPE_CHECKING:
    from ledger.fuel.standing import StandingCell, TankAt
    from ledger.fuel.stood import System

_MOST_KEPT = 64


@dataclass(frozen=True, slots=True, kw_only=True)
class Footprint:
    """The room one cell takes, build axes, and the air caught in it when it is filled."""

    cell: str
    low_m: Vector
    high_m: Vector
    gross_m3: float
    caught_air_m3: float

    @property
    def middle_m(self) -> Vector:
        """The middle of that room."""
        x, y, z = ((low + high) / 2.0 for low, high in zip(self.low_m, self.high_m, strict=True))
        return (x, y, z)


@dataclass(frozen=True, slots=True, kw_only=True)
class HoleMark:
    """An opening on the drawing. `sign` is d (low in the wall), v (high in it), out, F, V or D."""

    name: str
    cells: tuple[str, ...]
    at_m: Vector
    sign: str


@dataclass(frozen=True, slots=True, kw_only=True)
class CellNow:
    """One cell as it stands. Shares are of gross; None where nobody knows where the fuel is."""

    cell: str
    share: float | None
    trapped_share: float | None
    air_share: float
    trapped_m3: float | None
    trapped_by: str
    opening: str | None
    pockets: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Asked:
    """How the tank stands, what is in it, where it is cut."""

    attitude: Attitude
    quantity_m3: float
    axis: int
    at_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class TankNow:
    """One tank as asked. `attitude` is the plan's name for it, or None for one of the screen's own.

    `outlet_wl_m` is the water line of the surface at the outlet; what is freed is by moving
    the opening of the worst cell, over the tank, below 0 where that would trap more.
    """

    asked: Asked
    attitude: str | None
    mass_kg: float | None
    cg_m: Vector | None
    outlet_wl_m: float | None
    trapped_m3: float | None
    cells: tuple[CellNow, ...]
    cut: Cut
    frees_lower_1mm_m3: float | None
    frees_wider_10pc_m3: float | None

    @property
    def worst(self) -> CellNow | None:
        """The cell that traps most; one whose pockets are not counted comes before any."""
        kept = [cell for cell in self.cells if cell.trapped_m3 is None or cell.trapped_m3 > 1e-9]
        return max(
            kept, key=lambda cell: math.inf if cell.trapped_m3 is None else cell.trapped_m3, default=None
        )


@dataclass(frozen=True, eq=False, kw_only=True)
class TankDrawn:
    """One tank of a plan: what does not change with attitude or quantity, and what was reckoned before."""

    tank: Tank
    fuel: TankFuel
    footprints: tuple[Footprint, ...]
    marks: tuple[HoleMark, ...]
    attitudes: tuple[Attitude, ...]
    density_kg_m3: float | None
    system: System
    _turned: OrderedDict[Vector, TankAt] = field(default_factory=OrderedDict)

    @property
    def most_m3(self) -> float:
        """What it can be filled to: its capacity, else all it can hold."""
        return self.fuel.gross_m3 if self.fuel.capacity_m3 is None else self.fuel.capacity_m3

    @property
    def low_m(self) -> Vector:
        """The least of each axis over all cells."""
        x, y, z = (min(one.low_m[axis] for one in self.footprints) for axis in (X, Y, Z))
        return (x, y, z)

    @property
    def high_m(self) -> Vector:
        """The greatest of each axis over all cells."""
        x, y, z = (max(one.high_m[axis] for one in self.footprints) for axis in (X, Y, Z))
        return (x, y, z)

    @cached_property
    def outlines(self) -> Mapping[str, tuple[tuple[float, float], ...]]:
        """True outlines from above, (FS, BL) in metres, by cell. Slow the first time."""
        from ledger.geometry.sections_cut import plan_outline

        solids = self.system.cells
        return {name: plan_outline(solids[name].vertices_m, solids[name].faces) for name in self.tank.cells}

    def turned(self, attitude: Attitude) -> TankAt:
        """The tank at an attitude. Raises NotUpward for one without an upper side."""
        from ledger.fuel.standing import tank_at

        found = self._turned.get(attitude.up)
        if found is None:
            found = self._turned[attitude.up] = tank_at(self.system, self.tank, attitude)
            while len(self._turned) > _MOST_KEPT:
                self._turned.popitem(last=False)
        return found


@dataclass(frozen=True, slots=True, kw_only=True)
class TanksView:
    """Every tank of the current plan."""

    display: Display
    tanks: tuple[TankDrawn, ...]


def look_at_tanks(book: Build | Stock) -> TanksView:
    """All tanks of a build, ready to be turned."""
    build = book if isinstance(book, Build) else book.build
    plan = build.snapshot.plan
    if not plan.tanks.tanks:
        return TanksView(display=plan.display, tanks=())
    report = None if isinstance(book, Build) else book.fuel
    return _drawn(_ByIdentity(build, report if report is not None else reckon_build(build)))


class _ByIdentity:
    """A build keyed by what its drawings depend on: the proved cells, kept as long as the plan stands."""

    def __init__(self, build: Build, report: FuelReport) -> None:
        self.build = build
        self.report = report
        self._key = (build.book, build.snapshot.iterations[-1].seq, id(build.cells()))

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _ByIdentity) and other._key == self._key

    def __hash__(self) -> int:
        return hash(self._key)


@lru_cache(maxsize=2)
def _drawn(wanted: _ByIdentity) -> TanksView:
    from ledger.fuel.density import density_at
    from ledger.fuel.stood import System

    build = wanted.build
    plan = build.snapshot.plan
    system = System.of(plan.tanks, build.cells(), build.displaced())
    density = density_at(plan.fuel, None)
    return TanksView(
        display=plan.display,
        tanks=tuple(
            draw_tank(system, tank, fuel, plan.attitudes, density)
            for tank, fuel in zip(plan.tanks.tanks, wanted.report.tanks, strict=True)
        ),
    )


def draw_tank(
    system: System,
    tank: Tank,
    fuel: TankFuel,
    attitudes: tuple[Attitude, ...],
    density_kg_m3: float | None,
) -> TankDrawn:
    """What of one tank does not change with attitude or quantity."""
    filled = {cell.cell: cell for cell in fuel.cells}
    footprints = []
    for name in tank.cells:
        corners = system.cells[name].vertices_m
        low, high = corners.min(axis=0).tolist(), corners.max(axis=0).tolist()
        footprints.append(
            Footprint(
                cell=name,
                low_m=(low[0], low[1], low[2]),
                high_m=(high[0], high[1], high[2]),
                gross_m3=filled[name].gross_m3,
                caught_air_m3=filled[name].caught_air_m3 or 0.0,
            )
        )
    own = {one.cell: one for one in footprints}
    marks = tuple(_mark(opening, own) for opening in system.tanks.openings if set(opening.cells) & own.keys())
    return TankDrawn(
        tank=tank,
        fuel=fuel,
        footprints=tuple(footprints),
        marks=marks,
        attitudes=attitudes,
        density_kg_m3=density_kg_m3,
        system=system,
    )


def _mark(opening: Opening, own: Mapping[str, Footprint]) -> HoleMark:
    from ledger.fuel.rims import middle_of

    at = middle_of(opening.rim)
    outside = {Outside.OUTLET: "out", Outside.FILLER: "F", Outside.VENT: "V", Outside.DRAIN: "D"}
    cells = tuple(cell for cell in opening.cells if cell in own)
    if opening.outside is not None:
        sign = outside[opening.outside]
    elif isinstance(opening.rim, Pipe):
        sign = "p"
    else:
        # Half-way up the two cells at the hole decides: what lies lower drains, what lies higher airs.
        middle = sum(own[cell].middle_m[Z] for cell in cells) / len(cells)
        sign = "d" if at[Z] < middle else "v"
    return HoleMark(name=opening.name, cells=cells, at_m=at, sign=sign)


def look_at_tank(drawn: TankDrawn, asked: Asked) -> TankNow:
    """One tank as asked.

    Raises
        NotUpward: the attitude has no upper side.
    """
    from ledger.fuel.freeing import freed_wider
    from ledger.fuel.standing import stand

    at = drawn.turned(asked.attitude)
    standing = stand(at, asked.quantity_m3, density_kg_m3=drawn.density_kg_m3)
    levels = {cell.cell: -math.inf if cell.level_m is None else cell.level_m for cell in standing.cells}
    unknown = all(cell.volume_m3 is None for cell in standing.cells)
    now = TankNow(
        asked=asked,
        attitude=next((one.name for one in drawn.attitudes if one.up == asked.attitude.up), None),
        mass_kg=standing.mass_kg,
        cg_m=standing.cg_m,
        outlet_wl_m=water_line(drawn, at, standing.level_at_outlet_m),
        trapped_m3=standing.trapped_m3,
        cells=tuple(map(_cell_now, standing.cells, drawn.footprints)),
        cut=_cut(drawn, at, asked, at.levels if unknown else levels),
        frees_lower_1mm_m3=None,
        frees_wider_10pc_m3=None,
    )
    worst = now.worst
    lower = None if worst is None else at.frees_lower(worst.cell)
    if worst is None or lower is None or worst.opening is None:
        return now
    wider = freed_wider(at.stood, worst.opening)
    return replace(now, frees_lower_1mm_m3=lower, frees_wider_10pc_m3=wider)


def _cell_now(cell: StandingCell, foot: Footprint) -> CellNow:
    gross = foot.gross_m3 or math.inf
    kept = cell.trapped_m3
    share = None if cell.percent_full is None else cell.percent_full / 100.0
    return CellNow(
        cell=cell.cell,
        share=share,
        # Trapped is reckoned without sealant and may come out a hair above what the cell holds.
        trapped_share=None if kept is None else min(kept / gross, 1.0 if share is None else share),
        air_share=foot.caught_air_m3 / gross,
        trapped_m3=kept,
        trapped_by=cell.trapped_by,
        opening=cell.opening,
        pockets=cell.pockets,
    )


def _cut(drawn: TankDrawn, at: TankAt, asked: Asked, levels: Mapping[str, float]) -> Cut:
    axis = asked.axis
    solids = {
        foot.cell: drawn.system.cells[foot.cell]
        for foot in drawn.footprints
        if foot.low_m[axis] <= asked.at_m <= foot.high_m[axis]
    }
    return cut_tank(solids, axis, asked.at_m, asked.attitude.up, levels=levels, kept_levels=at.levels)


def water_line(drawn: TankDrawn, at: TankAt, level_m: float | None) -> float | None:
    """The water line of the fuel's surface at the outlet that `level_at_outlet_m` is beside.

    A level along up tells nobody anything once the tank is tilted; a water line can be measured.
    """
    if level_m is None:
        return None
    from ledger.fuel.rims import middle_of

    own = set(drawn.tank.cells)
    x, y, _ = next(
        middle_of(opening.rim)
        for opening in drawn.system.tanks.openings
        if opening.outside is Outside.OUTLET
        and opening.cells[0] in own
        and at.levels[opening.cells[0]] != -math.inf
    )
    up = at.stood.up
    return (level_m - up[X] * x - up[Y] * y) / up[Z]
