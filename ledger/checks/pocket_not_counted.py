"""A cell that gathers fuel in several places at once, which is not reckoned yet."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "pocket-not-counted"


def pocket_not_counted(facts: Facts) -> tuple[Finding, ...]:
    """Each cell with more than one lowest place in a flight attitude; usable of its tank is then unknown."""
    if facts.fuel is None:
        return ()
    attitudes: dict[str, list[str]] = {}
    for one in facts.fuel.pocketed:
        attitudes.setdefault(one.cell, []).append(one.attitude)
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(file="tanks.toml", thing=cell),
            what=(
                f"the cell has more than one lowest place ({', '.join(names)}); what stays in them is not"
                " counted, so usable fuel is unknown"
            ),
            do="divide the cell where its floor rises, with an opening there, or make its floor fall one way",
        )
        for cell, names in attitudes.items()
    )
