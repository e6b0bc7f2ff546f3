"""Fuel figures that leave out what flow needs."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.tanks import Outside

CODE = "feed-flow-unknown"


def feed_flow_unknown(facts: Facts) -> tuple[Finding, ...]:
    """Once, where the plan has an outlet and does not say how much the engine draws."""
    plan = facts.snapshot.plan
    if not any(opening.outside is Outside.OUTLET for opening in plan.tanks.openings):
        return ()
    if plan.fuel is not None and plan.fuel.feed_flow_m3_s is not None:
        return ()
    return (
        Finding(
            code=CODE,
            severity=Severity.NOTE,
            where=Where(file="plan.toml", thing="fuel", column="feed_flow"),
            what="usable fuel is for a still tank: the head that full flow needs at each opening is left out",
            do='declare the engine\'s full flow, for example feed_flow = "40 L/h"',
        ),
    )
