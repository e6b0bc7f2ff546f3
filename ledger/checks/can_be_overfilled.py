"""A tank without the space its fuel needs to expand."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.units import Dimension, Rounding, show

CODE = "can-be-overfilled"


def can_be_overfilled(facts: Facts) -> tuple[Finding, ...]:
    """Each tank whose vented space above the fill level is less than declared for expansion."""
    if facts.fuel is None:
        return ()
    display = facts.snapshot.plan.display
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="tanks.toml", thing=tank.tank),
            what=(
                "filled to the brim the space left for expansion is short by"
                f" {show(tank.expansion_missing_m3, Dimension.VOLUME, display, rounding=Rounding.UP)};"
                " capacity is cut by as much, but nothing stops the fuel there"
            ),
            do="set the filler lower, or open the space of the upper cells to the vent",
        )
        for tank in facts.fuel.tanks
        if tank.expansion_missing_m3 is not None and tank.expansion_missing_m3 > 0.0
    )
