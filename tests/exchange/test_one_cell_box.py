"""The one-cell box that is small enough to check by hand."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from ledger.exchange.plan_cells import read_cells
from ledger.exchange.plan_folder import read_plan
from ledger.fuel.reckon import reckon

BOX = Path(__file__).resolve().parents[2] / "sample_builds" / "one_cell_box" / "plan"


def test_its_six_panels_are_those_of_the_box() -> None:
    plan = read_plan(BOX).plan
    assert plan is not None
    areal = {laminate.name: laminate.areal_mass_kg_m2 for laminate in plan.laminates}
    masses = [
        shape.measure * (areal[str(part.made_of)] or 0.0)
        for part, shape in zip(plan.parts, plan.shapes, strict=True)
    ]
    assert masses == pytest.approx([2.8, 1.0, 0.4, 0.4, 0.2, 0.2], rel=1e-13)
    total = sum(masses)
    cg = [
        sum(mass * shape.centroid_m[axis] for mass, shape in zip(masses, plan.shapes, strict=True)) / total
        for axis in range(3)
    ]
    assert total == pytest.approx(5.0, rel=1e-13)
    assert cg == pytest.approx([2.5, 0.35, 0.32 / 5.0], rel=1e-13)


def test_its_fuel_is_that_of_a_box_and_a_wedge() -> None:
    read = read_plan(BOX)
    plan = read.plan
    assert plan is not None
    report = reckon(plan.tanks, read_cells(plan, read.files), {}, plan.attitudes, plan.fuel)
    (tank,) = report.tanks
    wedge = 0.5 * 1.0**2 * math.tan(math.radians(5.0)) * 0.5
    # checks: box 1 x 0.5 x 0.2 m with its drain at the high floor edge, closed form (computed)
    assert wedge == pytest.approx(0.021872166, abs=5e-10)
    assert tank.gross_m3 == pytest.approx(0.1, rel=1e-12)
    assert tank.capacity_m3 == pytest.approx(0.08, rel=1e-9)
    assert tank.capacity_limit == "filler"
    trapped = {attitude.attitude: attitude.trapped_m3 for attitude in tank.attitudes}
    assert trapped == pytest.approx({"ground": 0.0, "level": 0.0, "climb": wedge}, abs=1e-12)
    assert tank.usable_m3 == pytest.approx(0.08 - wedge, rel=1e-9)
    assert tank.governing_attitude == "climb"
