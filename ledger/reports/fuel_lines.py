"""The fuel as a person reads it. Usable is rounded down and trapped up, on every line."""

from __future__ import annotations

import math
from collections.abc import Sequence

from ledger.fuel.report import AttitudeFuel, DrainedCell, FeedFuel, FuelReport, TankFuel
from ledger.model.tanks import Join
from ledger.model.vectors import Vector
from ledger.reports.plain import aligned, clean
from ledger.units import Dimension, Display, Rounding, show, shown_number, shown_unit

CAUTION = "COMPUTED: a flow test decides"
EACH_ITS_OWN = "each tank at its own worst"
_ROWS_SHOWN = 10
_NAMES_SHOWN = 3
_NO_HOLE = ("no way out", "no air", "dry")


def fuel_lines(
    report: FuelReport, display: Display, *, tables: bool = False, density: str | None = None
) -> tuple[str, ...]:
    """Everything `fuel` prints, line by line; with `tables`, a short dip table for every attitude."""
    if not report.tanks:
        return ("no tanks in the plan",)
    lines = ["FUEL", f"{CAUTION}; not approved weight and balance"]
    lines += [] if density is None else [density]
    for tank in report.tanks:
        lines += ["", *_tank_lines(tank, display)]
        for attitude in tank.attitudes if tables else ():
            lines += ["", *_table_lines(tank.tank, attitude, display)]
    for feed in report.feeds:
        usable = f"usable {usable_text(feed.usable_m3, display)}{_worst_of_feed(feed, report.tanks)}"
        lines += ["", clean(f"FEED {feed.feed}  joined by {feed.join}  {usable}")]
    return tuple(lines)


def _worst_of_feed(feed: FeedFuel, tanks: Sequence[TankFuel]) -> str:
    """Where a feed has its usable: at one attitude, or each tank at its own."""
    known = [tank.usable_m3 for tank in tanks if tank.usable_m3 is not None]
    own = list(dict.fromkeys(tank.governing_attitude for tank in tanks if tank.governing_attitude))
    adds_up = feed.usable_m3 is not None and math.isclose(feed.usable_m3, math.fsum(known), abs_tol=1e-9)
    if feed.join == Join.SELECT and adds_up and len(known) == len(tanks) and len(own) > 1:
        return f"  {EACH_ITS_OWN}: {', '.join(own)}"
    return _at(feed.governing_attitude)


def density_line(density_kg_m3: float | None, temperature_k: float, display: Display) -> str:
    """The density the masses of a report rest on, at the temperature that was asked for."""
    if density_kg_m3 is None:
        return "density not known: the plan's [fuel] has no density_15C"
    degrees = float(shown_number(temperature_k, Dimension.TEMPERATURE, display))
    unit = shown_unit(Dimension.TEMPERATURE, display)
    return f"density {show(density_kg_m3, Dimension.DENSITY, display)} at {degrees:g} {unit}"


def usable_text(volume_m3: float | None, display: Display) -> str:
    """A usable volume, rounded down."""
    if volume_m3 is None:
        return "not known"
    return show(volume_m3, Dimension.VOLUME, display, rounding=Rounding.DOWN)


def trapped_text(volume_m3: float | None, display: Display) -> str:
    """A trapped volume, rounded up."""
    if volume_m3 is None:
        return "not known"
    return show(volume_m3, Dimension.VOLUME, display, rounding=Rounding.UP)


def tank_line(tank: TankFuel, display: Display) -> str:
    """One tank in one line: what goes in and what comes out."""
    capacity = show(tank.capacity_m3, Dimension.VOLUME, display)
    usable = usable_text(tank.usable_m3, display)
    return clean(f"{tank.tank}  capacity {capacity}  usable {usable}{_at(tank.governing_attitude)}  COMPUTED")


def hole_line(tank: TankFuel, display: Display) -> tuple[str, ...]:
    """What a hole between two cells keeps back most, in flight: the hole that is worth a second look."""
    behind_holes = [
        (cell.trapped_m3, cell, attitude)
        for attitude in tank.attitudes
        for cell in attitude.cells
        if attitude.flight and cell.trapped_m3 and cell.trapped_by not in (*_NO_HOLE, "outlet")
    ]
    if not behind_holes:
        return ()
    trapped_m3, cell, attitude = max(behind_holes, key=lambda one: one[0])
    kept = f"keeps {trapped_text(trapped_m3, display)} in {cell.cell}, {behind(cell.trapped_by)}"
    return (clean(f"{'':{len(tank.tank)}}  {kept}, at {attitude.attitude}"),)


def _tank_lines(tank: TankFuel, display: Display) -> tuple[str, ...]:
    def volume(value_m3: float | None) -> str:
        return show(value_m3, Dimension.VOLUME, display)

    limit = "" if tank.capacity_limit is None else f"  limited by {tank.capacity_limit}"
    spread = "" if tank.usable_u_m3 is None else f" +- {trapped_text(tank.usable_u_m3, display)}"
    return (
        clean(f"TANK {tank.tank}"),
        f"gross       {volume(tank.gross_m3)}",
        f"capacity    {volume(tank.capacity_m3)}{limit}",
        f"caught air  {trapped_text(tank.caught_air_m3, display)}{_caught_by(tank)}",
        clean(
            f"usable      {usable_text(tank.usable_m3, display)}{spread}"
            f"{_at(tank.governing_attitude)}  COMPUTED"
        ),
        "",
        *_attitude_lines(tank, display),
    )


def _caught_by(tank: TankFuel) -> str:
    names = list(dict.fromkeys(cell.air_caught_by for cell in tank.cells if cell.air_caught_by))
    if not names:
        return ""
    more = f" and {len(names) - _NAMES_SHOWN} more" if len(names) > _NAMES_SHOWN else ""
    return clean(f"  under {', '.join(names[:_NAMES_SHOWN])}{more}")


def _attitude_lines(tank: TankFuel, display: Display) -> tuple[str, ...]:
    heads = (
        "attitude",
        "pitch",
        "roll",
        "flight",
        f"trapped {shown_unit(Dimension.VOLUME, display)}",
        f"lost out of vents {shown_unit(Dimension.VOLUME, display)}",
        "mostly in",
    )
    rows = [
        (
            attitude.attitude,
            f"{attitude.pitch_deg:.1f}",
            f"{attitude.roll_deg:.1f}",
            "yes" if attitude.flight else "no",
            "-" if _all_dry(attitude) else _up(attitude.trapped_m3, display),
            _up(attitude.lost_m3, display),
            _worst_cell(attitude, display),
        )
        for attitude in tank.attitudes
    ]
    return aligned(heads, rows, right=(1, 2, 4, 5))


def _all_dry(attitude: AttitudeFuel) -> bool:
    """Whether no fuel ever comes into the tank: then 0 trapped would read as if all of it came out."""
    return bool(attitude.cells) and all(cell.trapped_by == "dry" for cell in attitude.cells)


def _worst_cell(attitude: AttitudeFuel, display: Display) -> str:
    trapping = _trapping(attitude)
    if not trapping:
        return "-"
    worst = trapping[0]
    return f"{worst.cell} {trapped_text(worst.trapped_m3, display)}, {behind(worst.trapped_by)}"


def _trapping(attitude: AttitudeFuel) -> list[DrainedCell]:
    """The cells that keep fuel, the worst first; one whose fuel is not known is worse than any."""
    kept = [cell for cell in attitude.cells if cell.trapped_m3 is None or cell.trapped_m3 > 0]
    return sorted(kept, key=lambda cell: -math.inf if cell.trapped_m3 is None else -cell.trapped_m3)


def behind(trapped_by: str) -> str:
    """What traps a cell, as words: a name of an opening gets `behind`."""
    if trapped_by in _NO_HOLE:
        return trapped_by
    return f"behind {trapped_by}"


def _table_lines(tank: str, attitude: AttitudeFuel, display: Display) -> tuple[str, ...]:
    length, volume = shown_unit(Dimension.LENGTH, display), shown_unit(Dimension.VOLUME, display)
    heads = (f"level {length}", f"volume {volume}", "FS", "BL", "WL")
    stride = max(1, math.ceil((len(attitude.table) - 1) / _ROWS_SHOWN))
    rows = [
        (
            shown_number(row.level_m, Dimension.LENGTH, display),
            shown_number(row.volume_m3, Dimension.VOLUME, display),
            *_place(row.cg_m, display),
        )
        for row in attitude.table[::stride]
    ]
    title = clean(
        f"{tank} at {attitude.attitude}: pitch {attitude.pitch_deg:.1f}, roll {attitude.roll_deg:.1f}"
    )
    cells = [
        (cell.cell, _up(cell.trapped_m3, display), behind(cell.trapped_by)) for cell in _trapping(attitude)
    ]
    trapped = (
        aligned(("cell", f"trapped {volume}", "why"), cells, right=(1,)) if cells else ("nothing trapped",)
    )
    return (title, *trapped, *aligned(heads, rows, right=range(5)))


def _place(cg_m: Vector | None, display: Display) -> tuple[str, str, str]:
    if cg_m is None:
        return ("-", "-", "-")
    x, y, z = (shown_number(value, Dimension.LENGTH, display) for value in cg_m)
    return (x, y, z)


def _up(volume_m3: float | None, display: Display) -> str:
    if volume_m3 is None:
        return "-"
    return shown_number(volume_m3, Dimension.VOLUME, display, rounding=Rounding.UP)


def _at(attitude: str | None) -> str:
    return "" if attitude is None else f" at {attitude}"
