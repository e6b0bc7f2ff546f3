"""A cell that cannot drain because no air comes in."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "cell-not-aired"


def cell_not_aired(facts: Facts) -> tuple[Finding, ...]:
    """Each cell that keeps all it can hold in some flight attitude for want of air."""
    if facts.fuel is None:
        return ()
    attitudes: dict[str, list[str]] = {}
    for one in facts.fuel.airless:
        attitudes.setdefault(one.cell, []).append(one.attitude)
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="tanks.toml", thing=cell),
            what=f"no air comes in while it drains ({', '.join(names)}), so it keeps all it can hold",
            do="open it to the vent above the fuel that stays beside it",
        )
        for cell, names in attitudes.items()
    )
