"""A mass that cannot be known from what was recorded."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "mass-unknown"


def mass_unknown(facts: Facts) -> tuple[Finding, ...]:
    """Each thing or entry whose mass is in no total because a figure is missing."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=one.seq, thing=one.thing),
            what=one.what,
            do=one.do,
        )
        for one in facts.weights.unknowns
    )
