"""An attitude leaning to one side whose opposite is not in the plan."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.vectors import Vector

CODE = "attitude-without-mirror"

# About a twentieth of a degree.
_SAME = 1e-3


def attitude_without_mirror(facts: Facts) -> tuple[Finding, ...]:
    """Each flight attitude that leans left or right without one that leans as far the other way."""
    plan = facts.snapshot.plan
    if not plan.tanks.tanks:
        return ()
    flights = [attitude for attitude in plan.attitudes if attitude.flight]
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="plan.toml", thing=attitude.name),
            what="the attitude leans to one side and no flight attitude leans as far to the other",
            do="add its mirror: the same with roll_deg and ay_g of the other sign",
        )
        for attitude in flights
        if abs(attitude.up[1]) > _SAME and not any(_mirrors(attitude.up, other.up) for other in flights)
    )


def _mirrors(one: Vector, other: Vector) -> bool:
    return max(abs(one[0] - other[0]), abs(one[1] + other[1]), abs(one[2] - other[2])) <= _SAME
