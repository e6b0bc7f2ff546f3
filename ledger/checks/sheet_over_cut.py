"""More cut from a sheet or offcut than it has."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.plan_index import Indexes
from ledger.model.acts import Cut
from ledger.model.snapshot import Snapshot
from ledger.units import Dimension, show

CODE = "sheet-over-cut"


def sheet_over_cut(facts: Facts) -> tuple[Finding, ...]:
    """Each sheet or offcut whose pieces and kept offcuts together have more area than it."""
    snapshot = facts.snapshot
    display = snapshot.plan.display
    taken, last = _areas_taken(snapshot)
    found = []
    for number, area in taken.items():
        whole = _area_of(number, snapshot)
        if whole is None or area <= whole * (1.0 + 1e-9):
            continue
        found.append(
            Finding(
                code=CODE,
                severity=Severity.LOOK,
                where=Where(entry=last[number], thing=number),
                what=(
                    f"{show(area, Dimension.AREA, display)} cut from"
                    f" {show(whole, Dimension.AREA, display)}, the kerf not counted"
                ),
                do="find which piece came from another sheet and correct its cut",
            )
        )
    return tuple(found)


def _areas_taken(snapshot: Snapshot) -> tuple[dict[str, float], dict[str, int]]:
    indexes = Indexes(snapshot)
    taken: dict[str, float] = {}
    last: dict[str, int] = {}
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Cut):
            continue
        last[act.sheet] = logged.seq
        area = 0.0
        for piece in act.pieces:
            nominal = indexes.nominal(piece)
            area += (nominal.area_m2 or 0.0) if nominal is not None else 0.0
        kept = act.offcut
        if kept is not None and kept.length_m is not None and kept.width_m is not None:
            area += kept.length_m * kept.width_m
        taken[act.sheet] = taken.get(act.sheet, 0.0) + area
    return taken, last


def _area_of(number: str, snapshot: Snapshot) -> float | None:
    if number in snapshot.sheets:
        sheet = snapshot.sheets[number].sheet
        return sheet.length_m * sheet.width_m
    if number in snapshot.offcuts:
        return snapshot.offcuts[number].length_m * snapshot.offcuts[number].width_m
    return None
