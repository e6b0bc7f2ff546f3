"""A batch whose readings prove that its ratio is outside its tolerance."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.mix_ratio import Verdict
from ledger.mass.report import BatchAccount
from ledger.model.snapshot import Snapshot

CODE = "mix-ratio-out"


def mix_ratio_out(facts: Facts) -> tuple[Finding, ...]:
    """Each batch of which no ratio that the readings allow is in."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(entry=seq_of(account.batch, facts.snapshot), thing=account.batch),
            what=f"mixed {ratio_read(account)} hardener to 100 resin, wants {account.ratio_wanted * 100:.1f}",
            do="do not use it; hold it and what it went into",
        )
        for account in facts.weights.batches
        if account.ratio_verdict == Verdict.OUT and account.ratio_wanted is not None
    )


def ratio_read(account: BatchAccount) -> str:
    """The ratios that the readings allow, per hundred of resin."""
    if account.ratio_low is None or account.ratio_high is None:
        return "?"
    return f"{account.ratio_low * 100:.1f} to {account.ratio_high * 100:.1f}"


def seq_of(batch: str, snapshot: Snapshot) -> int | None:
    """The entry that mixed it."""
    known = snapshot.batches.get(batch)
    return None if known is None else known.seq
