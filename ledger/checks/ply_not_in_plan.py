"""A step logged on a piece whose laminate has no such step."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "ply-not-in-plan"


def ply_not_in_plan(facts: Facts) -> tuple[Finding, ...]:
    """Each step logged that the laminate does not have."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=notice.seqs[-1], thing=notice.piece),
            what=f"its laminate has no step {notice.step}",
            do="correct the step, or log what was added as a build_up",
        )
        for notice in facts.weights.plies
        if notice.what == "not in plan"
    )
