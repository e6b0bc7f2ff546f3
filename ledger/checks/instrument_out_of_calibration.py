"""An instrument used after its calibration was due."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "instrument-out-of-calibration"


def instrument_out_of_calibration(facts: Facts) -> tuple[Finding, ...]:
    """Each entry that names an instrument on a day after its calibration was due."""
    due = {
        number: scale.instrument.due
        for number, scale in facts.snapshot.scales.items()
        if scale.instrument.due is not None
    }
    if not due:
        return ()
    found = []
    for logged in facts.snapshot.logged:
        scale = getattr(logged.act, "scale", None)
        if scale not in due or logged.at.date() <= due[scale]:
            continue
        found.append(
            Finding(
                code=CODE,
                severity=Severity.LOOK,
                where=Where(entry=logged.seq, thing=scale),
                what=f"read on {logged.at.date()}, calibration was due {due[scale]}",
                do="check it against a known mass, then log the instrument again with its new date",
            )
        )
    return tuple(found)
