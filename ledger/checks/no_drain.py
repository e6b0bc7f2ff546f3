"""A cell that water cannot be drained from."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.layout import groups_of
from ledger.fuel.ways import Network, spread, ways_at
from ledger.model.tanks import Outside

CODE = "no-drain"

_ANY_UP = (0.0, 0.0, 1.0)


def no_drain(facts: Facts) -> tuple[Finding, ...]:
    """Each tank without a drain, and each cell of the others that no way of fuel joins to one."""
    found = []
    for group in groups_of(facts.snapshot.plan.tanks):
        if not group.named(Outside.DRAIN):
            found += [
                _finding(tank.name, "the tank has no drain: water in it cannot be found or let out")
                for tank in group.tanks
            ]
            continue
        # Which cells are joined does not depend on the attitude.
        network = Network(group.cells, ways_at(group.openings, _ANY_UP))
        drains = [way.cells[0] for way in network.outside[Outside.DRAIN] if way.fuel_passes(None)]
        drained = spread(network, drains, lambda here, _into, way: way.fuel_passes(here))
        found += [
            _finding(cell, "no way leads from this cell to a drain: water in it stays")
            for cell in group.cells
            if cell not in drained
        ]
    return tuple(found)


def _finding(thing: str, what: str) -> Finding:
    return Finding(
        code=CODE,
        severity=Severity.LOOK,
        where=Where(file="tanks.toml", thing=thing),
        what=what,
        do="give the lowest point on the ground a drain, and every cell a low way to it",
    )
