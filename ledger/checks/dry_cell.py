"""A cell that holds no fuel because no way leads to it."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where

CODE = "dry-cell"


def dry_cell(facts: Facts) -> tuple[Finding, ...]:
    """Each cell no fuel comes to: from no filler at all, or not when the tank is filled."""
    found = []
    for tank in () if facts.fuel is None else facts.fuel.tanks:
        for cell in tank.cells:
            if cell.reached and not cell.dry:
                continue
            if cell.dry:
                what = "no way of fuel leads to this cell from a filler: it holds nothing and traps nothing"
            elif cell.filled_m3 is None:
                continue
            else:
                what = "no fuel comes to this cell on filling, though some may run in later and stay"
            found.append(
                Finding(
                    code=CODE,
                    severity=Severity.LOOK,
                    where=Where(file="tanks.toml", thing=cell.cell),
                    what=what,
                    do="give it a lower hole towards the filler, or leave it out of the tank",
                )
            )
    return tuple(found)
