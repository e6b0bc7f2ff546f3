"""A batch of which more went out than was mixed."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.mix_ratio_out import seq_of
from ledger.errors import Finding, Severity, Where
from ledger.units import show_small_mass

CODE = "batch-account-short"

# Grams stated on a bench scale do not add up better than this; common practice, no source.
_ROUNDING = 0.02


def batch_account_short(facts: Facts) -> tuple[Finding, ...]:
    """Each batch whose pieces, residue, bleed and scrap together are more than was mixed."""
    display = facts.snapshot.plan.display
    found = []
    for account in facts.weights.batches:
        out = (
            account.charged_kg + account.scrapped_kg + (account.residue_kg or 0.0) + (account.bled_kg or 0.0)
        )
        if out <= account.mixed_kg * (1.0 + _ROUNDING):
            continue
        found.append(
            Finding(
                code=CODE,
                severity=Severity.LOOK,
                where=Where(entry=seq_of(account.batch, facts.snapshot), thing=account.batch),
                what=(
                    f"{show_small_mass(account.mixed_kg, display)} mixed and"
                    f" {show_small_mass(out, display)} used"
                ),
                do="find the entry that named the wrong cup, or a cup that was not logged",
            )
        )
    return tuple(found)
