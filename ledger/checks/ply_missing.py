"""A finished piece with a step of its laminate that nobody logged."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "ply-missing"


def ply_missing(facts: Facts) -> tuple[Finding, ...]:
    """Each step left out of a finished piece."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(thing=notice.piece),
            what=f"step {notice.step} of its laminate was never logged and the piece is finished",
            do="log the step with its true time if it was laid; else hold the piece",
        )
        for notice in facts.weights.plies
        if notice.what == "missing"
    )
