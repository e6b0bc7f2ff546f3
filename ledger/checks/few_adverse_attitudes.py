"""A plan whose attitudes leave out the usual adverse ones."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "few-adverse-attitudes"

# About one degree.
_LEANS = 0.0175


def few_adverse_attitudes(facts: Facts) -> tuple[Finding, ...]:
    """Once, where nose up, nose down or either side is missing among the flight attitudes."""
    plan = facts.snapshot.plan
    if not plan.tanks.tanks:
        return ()
    ups = [attitude.up for attitude in plan.attitudes if attitude.flight]
    usual = {
        "nose up": any(up[0] < -_LEANS for up in ups),
        "nose down": any(up[0] > _LEANS for up in ups),
        "right wing down": any(up[1] < -_LEANS for up in ups),
        "left wing down": any(up[1] > _LEANS for up in ups),
    }
    missing = [words for words, there in usual.items() if not there]
    if not missing:
        return ()
    return (
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="plan.toml", thing="attitude"),
            what=f"no flight attitude has {', '.join(missing)}: usable fuel may be less there",
            do="add the steepest climb, the descent and a steady slip to each side",
        ),
    )
