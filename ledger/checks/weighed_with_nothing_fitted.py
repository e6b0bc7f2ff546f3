"""An assembly weighed although the record had nothing in it."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "weighed-with-nothing-fitted"


def weighed_with_nothing_fitted(facts: Facts) -> tuple[Finding, ...]:
    """Each weighed assembly whose planned pieces begun by then had to stand for its contents."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=weighed.seq, thing=weighed.what),
            what=(
                "nothing had been fitted into it; taken to hold "
                + (_planned(len(weighed.contents)) if weighed.contents else "nothing")
            ),
            do="log what was fitted, with its true time, or name what was missing",
        )
        for weighed in facts.weights.weighed
        if weighed.presumed
    )


def _planned(count: int) -> str:
    return f"{count} planned piece{'' if count == 1 else 's'} begun by then"
