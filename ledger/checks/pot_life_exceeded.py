"""A cup used after its pot life had run out."""

from __future__ import annotations

from datetime import timedelta

from ledger.checks.batches_used import batches_of
from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.snapshot import Batch, Snapshot

CODE = "pot-life-exceeded"


def pot_life_exceeded(facts: Facts) -> tuple[Finding, ...]:
    """Each use of a batch later than its mixing and the pot life of its lots, else of its materials."""
    lives: dict[str, float | None] = {}
    found = []
    for logged in facts.snapshot.logged:
        for number in batches_of(logged.act):
            batch = facts.snapshot.batches.get(number)
            if batch is None:
                continue
            if number not in lives:
                lives[number] = pot_life_s(batch, facts.snapshot)
            life = lives[number]
            if life is None or logged.at <= batch.at + timedelta(seconds=life):
                continue
            late = (logged.at - batch.at).total_seconds() / 60.0
            found.append(
                Finding(
                    code=CODE,
                    severity=Severity.STOP,
                    where=Where(entry=logged.seq, thing=number),
                    what=f"used {late:.0f} min after mixing, pot life {life / 60.0:.0f} min",
                    do="hold what it went into until a coupon of it has cured well",
                )
            )
    return tuple(found)


def pot_life_s(batch: Batch, snapshot: Snapshot) -> float | None:
    """By lot of the resin, then of the hardener; else by material in that order; None where undeclared."""
    pair = [
        snapshot.lots[number]
        for number in (batch.mix.resin_lot, batch.mix.hardener_lot)
        if number in snapshot.lots
    ]
    lives = [lot.receive.pot_life_s for lot in pair]
    for lot in pair:
        material = snapshot.plan.material(lot.receive.material)
        lives.append(None if material is None else material.pot_life_s)
    return next((life for life in lives if life is not None), None)
