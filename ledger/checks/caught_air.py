"""Air that cannot leave a cell when the tank is filled."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import FilledCell, TankFuel
from ledger.units import Dimension, Display, Rounding, show

CODE = "caught-air"

# Less than this share of a cell is the air above any hole bored clear of a skin.
_SMALL_SHARE = 0.01


def caught_air(facts: Facts) -> tuple[Finding, ...]:
    """Each cell in which air stays on filling, with the opening under which it stays.

    Small bubbles are told together, once for a tank: one finding a bay would hide the bay that matters.
    """
    display = facts.snapshot.plan.display
    found = []
    for tank in () if facts.fuel is None else facts.fuel.tanks:
        caught = [cell for cell in tank.cells if cell.caught_air_m3]
        small = [cell for cell in caught if (cell.caught_air_m3 or 0.0) < _SMALL_SHARE * cell.gross_m3]
        found += [_of_cell(cell, display) for cell in caught if cell not in small]
        if small:
            found.append(_of_tank(tank, small, display))
    return tuple(found)


def _of_cell(cell: FilledCell, display: Display) -> Finding:
    air = show(cell.caught_air_m3, Dimension.VOLUME, display, rounding=Rounding.UP, places=2)
    return Finding(
        code=CODE,
        severity=Severity.LOOK,
        where=Where(file="tanks.toml", thing=cell.cell),
        what=f"{air} of air cannot leave on filling: {cell.air_caught_by}",
        do="set the hole its air leaves through higher, or give it one",
    )


def _of_tank(tank: TankFuel, cells: list[FilledCell], display: Display) -> Finding:
    total = sum(cell.caught_air_m3 or 0.0 for cell in cells)
    air = show(total, Dimension.VOLUME, display, rounding=Rounding.UP, places=2)
    under = ", ".join(f"{cell.cell} under {cell.air_caught_by}" for cell in cells)
    return Finding(
        code=CODE,
        severity=Severity.NOTE,
        where=Where(file="tanks.toml", thing=tank.tank),
        what=f"{air} of air stays above holes bored clear of the skin when the tank is filled ({under})",
        do="bore the holes air leaves through as high as the paste allows",
    )
