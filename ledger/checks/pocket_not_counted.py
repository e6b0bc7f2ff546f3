"""A cell that gathers fuel in several places at once, which is not reckoned yet."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import Pocketed
from ledger.units import Dimension, Display, show

CODE = "pocket-not-counted"


def pocket_not_counted(facts: Facts) -> tuple[Finding, ...]:
    """Each cell with more than one lowest place in a flight attitude; usable of its tank is then unknown."""
    if facts.fuel is None:
        return ()
    pools: dict[str, list[Pocketed]] = {}
    for one in facts.fuel.pocketed:
        pools.setdefault(one.cell, []).append(one)
    display = facts.snapshot.plan.display
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.STOP,
            where=Where(file="tanks.toml", thing=cell),
            what=(
                f"the cell has more than one lowest place ({', '.join(one.attitude for one in found)}); what"
                f" stays in them is not counted, so usable fuel is unknown; {_deepest(found, display)}"
            ),
            do="divide the cell where its floor rises, with an opening there, or make its floor fall one way",
        )
        for cell, found in pools.items()
    )


def _deepest(found: list[Pocketed], display: Display) -> str:
    one = max(found, key=lambda pool: pool.depth_m)
    station, butt_line, _ = (show(value, Dimension.LENGTH, display) for value in one.point_m)
    deep = show(one.depth_m, Dimension.LENGTH, display)
    return f"the deepest pool, {deep}, is at FS {station} BL {butt_line} ({one.attitude})"
