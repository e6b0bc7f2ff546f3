from __future__ import annotations

import math
from typing import Any

import pytest

from ledger.errors import LedgerError
from ledger.fuel.reckon import reckon
from ledger.fuel.standing import stand, tank_at
from ledger.fuel.stood import System
from ledger.model.attitude import Attitude


@pytest.fixture
def pair(build: Any) -> Any:
    """Two boxes of 1 m3, a drain hole that keeps 0.04 in B, an outlet at the floor of A."""
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.hole("drain", "A B", (0.5, 1.0, 0.05), 0.02, (0.0, 1.0, 0.0)),
        build.slot("high", "A B", 0.9, 1.0, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tanks = build.tanks(cells, openings)
    return System.of(tanks, cells, {}), tanks, cells


def test_a_level_tank_stands_at_one_level_in_both_cells(pair: Any) -> None:
    system, tanks, _ = pair
    shown = stand(tank_at(system, tanks.tanks[0], Attitude(name="now")), 1.0, density_kg_m3=715.0)
    assert [cell.level_m for cell in shown.cells] == pytest.approx([0.5, 0.5], rel=1e-12)
    assert [cell.percent_full for cell in shown.cells] == pytest.approx([50.0, 50.0])
    assert shown.cg_m == pytest.approx((0.5, 1.0, 0.25), rel=1e-12)
    assert shown.mass_kg == 715.0
    assert shown.level_at_outlet_m == pytest.approx(0.5)
    assert shown.trapped_m3 == pytest.approx(0.04)


def test_near_empty_the_cell_behind_the_hole_keeps_its_own_level(pair: Any) -> None:
    system, tanks, _ = pair
    at = tank_at(system, tanks.tanks[0], Attitude(name="now"))
    shown = stand(at, 0.05)
    outlet, behind = shown.cells
    assert [outlet.level_m, behind.level_m] == pytest.approx([0.01, 0.04])
    assert (behind.trapped_by, behind.opening) == ("drain", "drain")
    assert at.frees_lower(behind.cell) == pytest.approx(0.001)
    assert behind.trapped_m3 == pytest.approx(0.04)
    assert shown.level_at_outlet_m == pytest.approx(0.01)
    assert shown.mass_kg is None


def test_below_what_is_trapped_nobody_knows_where_the_fuel_is(pair: Any) -> None:
    system, tanks, _ = pair
    at = tank_at(system, tanks.tanks[0], Attitude(name="now"))
    shown = stand(at, 0.039)
    assert (shown.cg_m, shown.level_at_outlet_m) == (None, None)
    assert all(cell.level_m is None and cell.volume_m3 is None for cell in shown.cells)
    assert shown.trapped_m3 == pytest.approx(0.04)
    assert stand(at, 0.04).cg_m == pytest.approx((0.5, 1.5, 0.02))
    assert stand(tank_at(system, tanks.tanks[0], Attitude(name="down", pitch_deg=-3.0)), 0.0).cg_m is None


def test_more_than_fits_stands_at_the_top_and_a_negative_quantity_is_refused(pair: Any) -> None:
    system, tanks, _ = pair
    at = tank_at(system, tanks.tanks[0], Attitude(name="now"))
    assert [cell.percent_full for cell in stand(at, 3.0).cells] == pytest.approx([100.0, 100.0])
    for wrong in (-1.0, math.nan, math.inf):
        with pytest.raises(ValueError, match="quantity"):
            stand(at, wrong)


@pytest.mark.parametrize(("pitch", "roll"), [(0.0, 0.0), (7.0, -3.0), (-12.0, 4.0)])
def test_the_screen_and_the_report_say_the_same(pair: Any, pitch: float, roll: float) -> None:
    system, tanks, cells = pair
    now = Attitude(name="now", pitch_deg=pitch, roll_deg=roll)
    ground = Attitude(name="ground", fill=True, flight=False)
    listed = reckon(tanks, cells, {}, (ground, now), None, levels=8).tanks[0].attitudes[1]
    at = tank_at(system, tanks.tanks[0], now)
    assert at.trapped_m3 == pytest.approx(listed.trapped_m3, rel=1e-13)
    for row in listed.drained[1:]:
        shown = stand(at, row.quantity_m3)
        assert shown.cg_m == pytest.approx(row.cg_m, abs=1e-7)
        assert sum(cell.volume_m3 or 0.0 for cell in shown.cells) == pytest.approx(row.quantity_m3, rel=1e-11)
    for cell, kept in zip(stand(at, 1.0).cells, listed.cells, strict=True):
        assert cell.trapped_by == kept.trapped_by
        assert cell.trapped_m3 == pytest.approx(kept.trapped_m3)


def test_sealant_and_dry_cells_stand_as_in_the_report(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.1, 0.1),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tanks = build.tanks(cells, openings, sealant_thickness_m=0.001)
    shown = stand(tank_at(System.of(tanks, cells, {}), tanks.tanks[0], Attitude(name="now")), 0.5)
    wet, dry = shown.cells
    assert (dry.volume_m3, dry.trapped_by, dry.level_m) == (0.0, "dry", None)
    # 0.1 is trapped and not reduced; above it each metre of level loses 4 m of wall at 1 mm.
    assert wet.level_m == pytest.approx(0.1 + 0.4 / (1.0 - 0.004), rel=1e-9)


def test_an_attitude_on_its_back_is_refused(pair: Any) -> None:
    system, tanks, _ = pair
    with pytest.raises(LedgerError):
        tank_at(system, tanks.tanks[0], Attitude(name="over", roll_deg=180.0))


@pytest.mark.parametrize(
    ("floors", "heights", "pitch", "roll", "steps"),
    [
        ((0.0, 0.5, 0.0), (0.02, 0.02, 0.02), 0.1, -3.0, 3),
        ((0.3, 0.05, 0.5), (0.1, 0.3, 0.3), 1.0, -3.0, 7),
        ((0.2, 0.5, 0.2), (0.02, 0.3, 0.1), 1.0, 0.0, 4),
        ((0.2, 0.2, 0.05), (0.1, 0.1, 0.02), 9.0, 0.0, 3),
        ((0.0, 0.31, 0.62), (0.3, 0.3, 0.3), 0.0, 0.0, 1),
    ],
)
def test_a_coarse_table_over_cells_apart_in_height_meets_its_quantities_all_the_same(  # noqa: PLR0917
    build: Any, floors: Any, heights: Any, pitch: float, roll: float, steps: int
) -> None:
    cells = {
        name: build.box((0.0, float(k), floors[k]), (1.0, k + 1.0, floors[k] + heights[k]))
        for k, name in enumerate("ABC")
    }
    top = max(floor + height for floor, height in zip(floors, heights, strict=True))
    openings = (
        build.slot("outlet", "A outlet", floors[0], floors[0]),
        build.slot("A-B", "A B", 0.0, 2.0, at=(0.5, 1.0)),
        build.slot("B-C", "B C", 0.0, 2.0, at=(0.5, 2.0)),
        build.slot("filler", "C filler", top - 0.01, top - 0.01, at=(0.5, 2.5)),
        build.slot("vent", "C vent", top, top, at=(0.5, 2.5)),
    )
    ground = Attitude(name="ground", fill=True, flight=False)
    now = Attitude(name="now", pitch_deg=pitch, roll_deg=roll)
    tanks = build.tanks(cells, openings)
    listed = reckon(tanks, cells, {}, (ground, now), None, levels=steps).tanks[0].attitudes[1]
    at = tank_at(System.of(tanks, cells, {}), tanks.tanks[0], now)
    assert len(listed.drained) == steps + 1
    for row in listed.drained:
        if row.quantity_m3 > 1e-9:
            assert row.cg_m == pytest.approx(stand(at, row.quantity_m3).cg_m, abs=2e-6)
