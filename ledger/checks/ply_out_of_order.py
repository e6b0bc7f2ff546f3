"""A step laid on top of one that was not there yet."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "ply-out-of-order"


def ply_out_of_order(facts: Facts) -> tuple[Finding, ...]:
    """Each step that a later one was laid before."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=notice.seqs[0], thing=notice.piece),
            what=f"step {notice.step} was not there when a later step was laid on it",
            do="log it with its true time if it was laid before; else see whether it can still be laid",
        )
        for notice in facts.weights.plies
        if notice.what == "skipped"
    )
