"""A step of a laminate that was logged more than once."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "ply-twice"


def ply_twice(facts: Facts) -> tuple[Finding, ...]:
    """Each step laid again, or laid on a sheet that already holds it."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=notice.seqs[-1], thing=notice.piece),
            what=f"step {notice.step} was laid {max(len(notice.seqs), 2)} times",
            do="withdraw the entry that is wrong, or accept the extra ply",
        )
        for notice in facts.weights.plies
        if notice.what == "twice"
    )
