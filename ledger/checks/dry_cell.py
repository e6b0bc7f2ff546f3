"""A cell that holds no fuel because no way leads to it, or a whole tank that nothing fills."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import FilledCell, TankFuel
from ledger.model.tanks import Outside

CODE = "dry-cell"


def dry_cell(facts: Facts) -> tuple[Finding, ...]:
    """Each cell no fuel comes to: from no filler at all, or not when the tank is filled.

    A tank that is dry throughout for want of a filler is named once: its cells have no fault of their own.
    """
    found = []
    for tank in () if facts.fuel is None else facts.fuel.tanks:
        if _has_no_filler(facts, tank):
            found.append(
                _finding(
                    tank.tank,
                    "the tank has no filler: no fuel comes into any of its cells",
                    'add an opening between one of its cells and "filler"',
                )
            )
            continue
        for cell in tank.cells:
            what = _what(cell)
            if what is not None:
                do = "give it a lower hole towards the filler, or leave it out of the tank"
                found.append(_finding(cell.cell, what, do))
    return tuple(found)


def _has_no_filler(facts: Facts, tank: TankFuel) -> bool:
    own = {cell.cell for cell in tank.cells}
    filled = any(
        opening.outside is Outside.FILLER and own.intersection(opening.cells)
        for opening in facts.snapshot.plan.tanks.openings
    )
    # Without one of its own a tank may still be filled through another, by a crossfeed.
    return bool(tank.cells) and not filled and all(cell.dry for cell in tank.cells)


def _what(cell: FilledCell) -> str | None:
    if cell.dry:
        return "no way of fuel leads to this cell from a filler: it holds nothing and traps nothing"
    if cell.reached or cell.filled_m3 is None:
        return None
    return "no fuel comes to this cell on filling, though some may run in later and stay"


def _finding(thing: str, what: str, do: str) -> Finding:
    return Finding(
        code=CODE,
        severity=Severity.LOOK,
        where=Where(file="tanks.toml", thing=thing),
        what=what,
        do=do,
    )
