"""Something scrapped that was used all the same."""

from __future__ import annotations

from datetime import datetime

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Scrap
from ledger.model.references import names_used

CODE = "scrapped-used"

_USES = ("mix", "cut", "lay", "bond", "coat", "trim", "build_up", "fit", "sheet")


def scrapped_used(facts: Facts) -> tuple[Finding, ...]:
    """Each entry that used a thing after the time at which it was scrapped."""
    scrapped: dict[str, datetime] = {}
    for logged in facts.snapshot.logged:
        if isinstance(logged.act, Scrap):
            scrapped.setdefault(logged.act.what, logged.at)
    if not scrapped:
        return ()
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(entry=logged.seq, thing=name),
            what=f"{name} was used by {logged.kind} after it was scrapped",
            do="hold what it went into, or withdraw the entry that is wrong",
        )
        for logged in facts.snapshot.logged
        if logged.kind in _USES
        for name in names_used(logged)
        if name in scrapped and logged.at > scrapped[name]
    )
