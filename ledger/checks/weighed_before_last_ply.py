"""A piece weighed while steps of its laminate were still to come."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "weighed-before-last-ply"


def weighed_before_last_ply(facts: Facts) -> tuple[Finding, ...]:
    """Each open piece whose mass is a weighing that does not hold the plies still to be laid."""
    steps: dict[str, list[str]] = {}
    for notice in facts.weights.plies:
        if notice.what == "to come":
            steps.setdefault(notice.piece, []).append(str(notice.step))
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(thing=piece),
            what=f"weighed with step {', '.join(numbers)} not logged: its mass now is without them",
            do="log the steps when they are laid, or weigh it as finished",
        )
        for piece, numbers in steps.items()
    )
