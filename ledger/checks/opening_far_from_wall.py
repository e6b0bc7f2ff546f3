"""An opening that does not lie where it is said to."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.units import Dimension, show

CODE = "opening-far-from-wall"


def opening_far_from_wall(facts: Facts) -> tuple[Finding, ...]:
    """Each opening farther from a cell it should join than its depth and 5 mm."""
    if facts.fuel is None:
        return ()
    display = facts.snapshot.plan.display
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="tanks.toml", thing=far.opening),
            what=(
                f"the opening is {show(far.distance_m, Dimension.LENGTH, display)} from cell {far.cell}, more"
                f" than its depth and paste allow ({show(far.allowed_m, Dimension.LENGTH, display)})"
            ),
            do="check its centre, its depth and the cells it is between",
        )
        for far in facts.fuel.far_openings
    )
