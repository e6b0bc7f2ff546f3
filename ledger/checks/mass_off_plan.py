"""A part whose mass leaves its estimate by more than its class allows and by more than chance."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.fitting import pieces_that_no_longer_fit
from ledger.units import show_small_mass

CODE = "mass-off-plan"

# Two standard uncertainties: about one part in twenty would pass it by chance alone.
_CHANCE = 2.0


def mass_off_plan(facts: Facts) -> tuple[Finding, ...]:
    """Each part begun that is beyond the tolerance of its class, where the plan declares one.

    Where that is because the geometry has changed since a piece was begun, the piece is told of already.
    """
    told = {piece.part for piece, _ in pieces_that_no_longer_fit(facts.snapshot)}
    tolerances = dict(facts.snapshot.plan.tolerances)
    display = facts.snapshot.plan.display
    found = []
    for part in facts.weights.parts:
        tolerance = tolerances.get(part.part_class)
        if tolerance is None or part.estimated_kg is None or part.best_kg is None or part.best_u_kg is None:
            continue
        off = part.best_kg - part.estimated_kg
        if abs(off) <= tolerance * part.estimated_kg or abs(off) <= _CHANCE * part.best_u_kg:
            continue
        cause = max(part.off_plan, key=lambda one: one.mass_kg if off > 0 else -one.mass_kg)
        if part.part in told and cause.cause == "geometry":
            continue
        found.append(
            Finding(
                code=CODE,
                severity=Severity.LOOK,
                where=Where(thing=part.part),
                what=(
                    f"{show_small_mass(abs(off), display)} {'heavy' if off > 0 else 'light'}, beyond"
                    f" {tolerance * 100:.3g} % and beyond chance; most of it {cause.cause.replace('_', ', ')}"
                ),
                do="look at what moved it, and accept it or mend it",
            )
        )
    return tuple(found)
