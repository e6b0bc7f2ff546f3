"""A lot used after its date."""

from __future__ import annotations

from ledger.checks.batches_used import lots_of
from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "lot-expired"


def lot_expired(facts: Facts) -> tuple[Finding, ...]:
    """Each use of a lot on a day after its expiry."""
    expiries = {
        number: lot.receive.expiry
        for number, lot in facts.snapshot.lots.items()
        if lot.receive.expiry is not None
    }
    if not expiries:
        return ()
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(entry=logged.seq, thing=number),
            what=f"used by {logged.kind} on {logged.at.date()}, expired {expiries[number]}",
            do="hold what it went into, or have the lot tested and extended",
        )
        for logged in facts.snapshot.logged
        for number in lots_of(logged.act)
        if number in expiries and logged.at.date() > expiries[number]
    )
