"""A piece or cell that holds a cup mixed out of its ratio."""

from __future__ import annotations

from ledger.checks.batches_used import batches_of
from ledger.checks.facts import Facts
from ledger.checks.live_pieces import is_live, pieces_of
from ledger.errors import Finding, Severity, Where
from ledger.mass.mix_ratio import Verdict
from ledger.model.acts import Coat

CODE = "mix-ratio-out-used"


def mix_ratio_out_used(facts: Facts) -> tuple[Finding, ...]:
    """Each live piece, and each cell, with the bad cups it holds."""
    bad = {account.batch for account in facts.weights.batches if account.ratio_verdict == Verdict.OUT}
    holding: dict[str, dict[str, None]] = {}
    for logged in facts.snapshot.logged if bad else ():
        used = [batch for batch in batches_of(logged.act) if batch in bad]
        cell = logged.act.cell if isinstance(logged.act, Coat) else None
        pieces = [piece for piece in pieces_of(logged.act) if is_live(piece, facts.snapshot)]
        for thing in (*pieces, *(() if cell is None else (cell,))) if used else ():
            holding.setdefault(thing, {}).update(dict.fromkeys(used))
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(thing=thing),
            what=f"holds {', '.join(batches)}, mixed out of ratio",
            do="hold it; a coupon of the cup, or taking it off again, decides",
        )
        for thing, batches in holding.items()
    )
