"""Cells that share space, so that fuel is counted twice."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.units import Dimension, Rounding, show

CODE = "cells-overlap"


def cells_overlap(facts: Facts) -> tuple[Finding, ...]:
    """Each pair of cells that run into one another."""
    if facts.fuel is None:
        return ()
    display = facts.snapshot.plan.display
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(file="tanks.toml", thing=pair.one),
            what=(
                "the cell shares"
                f" {show(pair.volume_m3, Dimension.VOLUME, display, rounding=Rounding.UP, places=2)}"
                f" with cell {pair.two}, which is counted twice"
            ),
            do="draw both cells net of the wall between them and export again",
        )
        for pair in facts.fuel.overlaps
    )
