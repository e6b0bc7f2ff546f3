"""Caps that stand in a tank: the ledge they make keeps fuel in pockets of its own."""

from __future__ import annotations

from ledger.errors import Finding, Severity
from ledger.loft.bays import TankBay
from ledger.loft.layout import Layout


def caps_in_tanks(layout: Layout, cells: tuple[TankBay, ...]) -> tuple[Finding, ...]:
    """Each cap wider than its web that stands inside a cell."""
    wet = {web for cell in cells for web in (cell.bay.row.front, cell.bay.row.rear)}
    thick = {web.name: web.thickness_m for web in layout.webs}
    return tuple(
        Finding(
            code="cap-in-tank",
            severity=Severity.LOOK,
            where=cap.place,
            what=f"{cap.part} stands out from web {cap.web} into a tank, and fuel stays beside its ledge",
            do="let it into the skin (let_in = true), or make it no wider than the web",
        )
        for cap in layout.caps
        if cap.web in wet and not cap.let_in and cap.width_m > thick.get(cap.web, 0.0)
    )
