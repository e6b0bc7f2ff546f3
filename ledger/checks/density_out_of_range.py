"""A fuel density that its grade does not usually have."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.density import USUAL_DENSITY_KG_M3
from ledger.units import Dimension, show

CODE = "density-out-of-range"


def density_out_of_range(facts: Facts) -> tuple[Finding, ...]:
    """The density of the plan's fuel at 15 C, where it lies outside the grade's usual range."""
    plan = facts.snapshot.plan
    if plan.fuel is None or plan.fuel.density_15c_kg_m3 is None:
        return ()
    usual = USUAL_DENSITY_KG_M3.get(plan.fuel.grade)
    density = plan.fuel.density_15c_kg_m3
    if usual is None or usual[0] <= density <= usual[1]:
        return ()
    low, high = (show(one, Dimension.DENSITY, plan.display) for one in usual)
    return (
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="plan.toml", thing="fuel", column="density_15C"),
            what=(
                f"{show(density, Dimension.DENSITY, plan.display)} at 15 C is not usual for {plan.fuel.grade}"
                f" ({low} to {high})"
            ),
            do="check that the density is at 15 C and belongs to this grade",
        ),
    )
