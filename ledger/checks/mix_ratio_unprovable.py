"""A batch whose readings cannot tell whether its ratio is in tolerance."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.mix_ratio_out import ratio_read, seq_of
from ledger.errors import Finding, Severity, Where
from ledger.mass.mix_ratio import Verdict
from ledger.mass.report import BatchAccount
from ledger.units import Display, show_small_mass

CODE = "mix-ratio-unprovable"


def mix_ratio_unprovable(facts: Facts) -> tuple[Finding, ...]:
    """Each batch with ratios both in and out among those that the readings allow, or with no tolerance."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=seq_of(account.batch, facts.snapshot), thing=account.batch),
            what=f"{ratio_read(account)} hardener to 100 resin: cannot tell; {account.ratio_why}",
            do=_do(account, facts.snapshot.plan.display),
        )
        for account in facts.weights.batches
        if account.ratio_verdict == Verdict.CANNOT_TELL
    )


def _do(account: BatchAccount, display: Display) -> str:
    if account.smallest_provable_kg is None:
        return "declare the ratio with its lot and the tolerance with its material"
    smallest = show_small_mass(account.smallest_provable_kg, display)
    if account.smallest_provable_kg <= account.mixed_kg:
        return "weigh closer to the target, or keep a coupon of it and hold the piece until it has cured"
    return f"mix at least {smallest} on this scale, or use a finer one; keep a coupon of this batch"
