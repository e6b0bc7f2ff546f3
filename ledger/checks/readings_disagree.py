"""Two readings of one piece that differ by more than their uncertainty."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.units import show_small_mass

CODE = "readings-disagree"


def readings_disagree(facts: Facts) -> tuple[Finding, ...]:
    """Each weighing at odds with the one before and the entries between, or readings at odds within one."""
    display = facts.snapshot.plan.display
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=one.seq, thing=one.piece),
            what=(
                f"{show_small_mass(abs(one.difference_kg), display)} from"
                f" {'one reading to another' if one.seq == one.earlier_seq else f'entry {one.earlier_seq}'},"
                f" where {show_small_mass(one.allowed_kg, display)} could be chance"
            ),
            do="weigh it again, unloaded in between, and log what was put on or taken off",
        )
        for one in facts.weights.disagreements
    )
