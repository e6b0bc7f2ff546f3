"""A piece begun under an earlier iteration whose part has changed since."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.fitting import BUILT_TO_EARLIER, pieces_that_no_longer_fit

CODE = BUILT_TO_EARLIER


def built_to_earlier_iteration(facts: Facts) -> tuple[Finding, ...]:
    """Each live piece whose part is not what it was when the piece was begun, unless spare or accepted."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(thing=piece.name),
            what=f"begun under {piece.iteration}; {why}",
            do="measure whether it still fits; accept it, or make another and scrap it or hold it for stock",
        )
        for piece, why in pieces_that_no_longer_fit(facts.snapshot)
    )
