"""What the fuel layer says about the tanks of a plan. Volumes in m3, levels along `up` from the datum."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.vectors import Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class FilledCell:
    """A cell after filling. `air_caught_by` names the opening under which air stays, if any does."""

    cell: str
    gross_m3: float
    filled_m3: float
    caught_air_m3: float
    air_caught_by: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class DrainedCell:
    """A cell after draining. `level_m` is None where the cell keeps nothing, or all it can hold.

    `trapped_by` is an opening's name, `outlet`, `no way out`, `no air` or `dry`.
    """

    cell: str
    trapped_m3: float
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
    """One tank at one attitude. `trapped_m3` is None where a cell holds pockets not counted."""

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
    """One tank. `capacity_limit` is filler, vent or expansion; usable is None with no way to know it."""

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


@dataclass(frozen=True, slots=True, kw_only=True)
class FeedFuel:
    """One feed over all tanks it draws from."""

    feed: str
    join: str
    usable_m3: float | None
    governing_attitude: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelReport:
    """Everything `fuel` prints and the Fuel screen shows."""

    tanks: tuple[TankFuel, ...]
    feeds: tuple[FeedFuel, ...]
