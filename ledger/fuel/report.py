"""What the fuel layer says about the tanks of a plan. Volumes in m3, levels along `up` from the datum."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.vectors import Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class FilledCell:
    """A cell after filling. `air_caught_by` names the opening under which air stays, if any does.

    `reached` is False where no fuel comes on filling; `dry` is True where no way of fuel leads from
    any filler, so that none comes in flight either. `filled_m3` and `caught_air_m3` are None where the
    plan does not say how the tank is filled.
    """

    cell: str
    gross_m3: float
    filled_m3: float | None
    caught_air_m3: float | None
    air_caught_by: str | None
    reached: bool = True
    dry: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class DrainedCell:
    """A cell after draining. `level_m` is None where the cell keeps nothing, or all it can hold.

    `trapped_by` is an opening's name, `outlet`, `no way out`, `no air` or `dry`. `trapped_m3` is
    None where the cell holds pockets not counted. What moving the opening frees is for all cells
    together, below 0 where the move would trap more.
    """

    cell: str
    trapped_m3: float | None
    level_m: float | None
    trapped_by: str
    frees_lower_1mm_m3: float | None
    frees_wider_10pc_m3: float | None
    pockets: int


@dataclass(frozen=True, slots=True, kw_only=True)
class TableRow:
    """All cells of a tank at one level. The CG of an empty row is None."""

    level_m: float
    volume_m3: float
    surface_m2: float
    cg_m: Vector | None


@dataclass(frozen=True, slots=True, kw_only=True)
class DrainedRow:
    """The tank drained to one quantity from full. Mass is None where the fuel's density is unknown."""

    quantity_m3: float
    usable_m3: float | None
    mass_kg: float | None
    cg_m: Vector | None


@dataclass(frozen=True, slots=True, kw_only=True)
class AttitudeFuel:
    """One tank at one attitude. `trapped_m3` is None where a cell holds pockets not counted.

    `lost_m3` is what runs out of the vents of the tank filled to capacity; None where that is unknown.
    `drained` runs from what is trapped up to full, and is empty where either is unknown.
    """

    attitude: str
    pitch_deg: float
    roll_deg: float
    up: Vector
    flight: bool
    trapped_m3: float | None
    lost_m3: float | None
    cells: tuple[DrainedCell, ...]
    table: tuple[TableRow, ...]
    drained: tuple[DrainedRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class TankFuel:
    """One tank. `capacity_limit` is filler, vent or expansion; usable is None with no way to know it.

    `filler` is the one poured through and `fill_level_m` where the fuel then stops, at the attitude of
    filling; `expansion_missing_m3` is what was cut from capacity because the space left is too small.
    """

    tank: str
    gross_m3: float
    capacity_m3: float | None
    capacity_limit: str | None
    caught_air_m3: float | None
    usable_m3: float | None
    usable_u_m3: float | None
    governing_attitude: str | None
    cells: tuple[FilledCell, ...]
    attitudes: tuple[AttitudeFuel, ...]
    filler: str | None = None
    fill_level_m: float | None = None
    expansion_missing_m3: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class FeedFuel:
    """One feed over all tanks it draws from."""

    feed: str
    join: str
    usable_m3: float | None
    governing_attitude: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class FarOpening:
    """An opening that lies farther from a cell it should join than its depth and 5 mm."""

    opening: str
    cell: str
    distance_m: float
    allowed_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Overlap:
    """Two cells that share space, so that fuel is counted twice."""

    one: str
    two: str
    volume_m3: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Airless:
    """A cell that air cannot reach while it drains, in a flight attitude."""

    tank: str
    cell: str
    attitude: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Pocketed:
    """A cell with more than one lowest place, in a flight attitude.

    `depth_m` is that of the deepest pool beside the lowest, and `point_m` its lowest point.
    """

    tank: str
    cell: str
    attitude: str
    places: int
    depth_m: float
    point_m: Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelReport:
    """Everything `fuel` prints and the Fuel screen shows.

    What `airless` and `pocketed` name is over all flight attitudes, listed or not.
    """

    tanks: tuple[TankFuel, ...]
    feeds: tuple[FeedFuel, ...]
    far_openings: tuple[FarOpening, ...] = ()
    overlaps: tuple[Overlap, ...] = ()
    airless: tuple[Airless, ...] = ()
    pocketed: tuple[Pocketed, ...] = ()
