"""A closed batch account that gives its plies far more or far less resin than they nominally take."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.mix_ratio_out import seq_of
from ledger.errors import Finding, Severity, Where

CODE = "resin-share-far-off"

# Beyond this a use was left out or a cup confused sooner than a layup was so wet or dry; practice, no source.
_MOST = 1.6
_LEAST = 0.6


def resin_share_far_off(facts: Facts) -> tuple[Finding, ...]:
    """Each batch whose residue leaves its uses a share of their nominal demand that no layup has."""
    found = []
    for account in facts.weights.batches:
        if not account.demand_kg or account.shared_kg is None:
            continue
        share = account.shared_kg / account.demand_kg
        if _LEAST <= share <= _MOST:
            continue
        found.append(
            Finding(
                code=CODE,
                severity=Severity.LOOK,
                where=Where(entry=seq_of(account.batch, facts.snapshot), thing=account.batch),
                what=f"its plies take {share * 100:.0f} % of their nominal resin by this account",
                do="log the use that is missing, or correct the residue",
            )
        )
    return tuple(found)
