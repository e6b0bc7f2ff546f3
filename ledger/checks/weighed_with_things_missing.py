"""The last weighing of a thing was made with some of its contents off the scale."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Weigh
from ledger.model.entry import Logged

CODE = "weighed-with-things-missing"


def weighed_with_things_missing(facts: Facts) -> tuple[Finding, ...]:
    """Each thing whose last weighing names what was missing."""
    last: dict[str, Logged] = {}
    for logged in facts.snapshot.logged:
        if isinstance(logged.act, Weigh):
            last[logged.act.what] = logged
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=logged.seq, thing=what),
            what=f"weighed without {', '.join(logged.act.missing)}",
            do="weigh it again complete",
        )
        for what, logged in last.items()
        if isinstance(logged.act, Weigh) and logged.act.missing and what not in facts.snapshot.gone
    )
