"""Air that cannot leave a cell when the tank is filled."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.units import Dimension, Rounding, show

CODE = "caught-air"

# Less than this share of a cell is the air above any hole drilled clear of a skin.
_SMALL_SHARE = 0.01


def caught_air(facts: Facts) -> tuple[Finding, ...]:
    """Each cell in which air stays on filling, with the opening under which it stays."""
    display = facts.snapshot.plan.display
    found = []
    for tank in () if facts.fuel is None else facts.fuel.tanks:
        for cell in tank.cells:
            if not cell.caught_air_m3:
                continue
            air = show(cell.caught_air_m3, Dimension.VOLUME, display, rounding=Rounding.UP, places=2)
            found.append(
                Finding(
                    code=CODE,
                    severity=Severity.NOTE
                    if cell.caught_air_m3 < _SMALL_SHARE * cell.gross_m3
                    else Severity.LOOK,
                    where=Where(file="tanks.toml", thing=cell.cell),
                    what=f"{air} of air cannot leave on filling: {cell.air_caught_by}",
                    do="set the hole its air leaves through higher, or give it one",
                )
            )
    return tuple(found)
