"""Fuel of two designs held against each other: closed forms, and each plan by itself."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ledger.model.comparison import Pair
from ledger.operations import open_build as opening
from ledger.operations.reckon_fuel import reckon_build
from ledger.operations.start_book import start_book

LB, US_GAL = 0.45359237, 0.003785411784


def test_fuel_of_a_wider_box_with_a_higher_outlet_is_the_closed_form(
    drawing: Any, two: Any, close: Any
) -> None:
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE
    rows = [drawing.item("PIN", "12 g")]
    first = {"rows": rows, "tank": drawing.tank("box", low=0.0), "head": head}
    second = first | {"tank": drawing.tank("box", low=0.02), "files": {"box": drawing.box(1.0, 0.6)}}
    compared = two(first | {"files": {"box": drawing.box(1.0, 0.5)}}, second)
    for tank in (compared.fuel.whole, *compared.fuel.tanks):
        assert close(tank.gross_m3, 0.1, 0.12)
        assert close(tank.capacity_m3, 0.1, 0.12)
        assert close(tank.caught_air_m3, 0.0, 0.0)
        # What stands below the rim, whose radius is half a micrometre, stays.
        assert close(tank.usable_m3, 0.1, 0.108, 1e-6)
        ground, cruise = tank.attitudes
        assert close(cruise.trapped_m3, 0.0, 0.012, 1e-6)
        assert close(cruise.usable_m3, 0.1, 0.108, 1e-6)
        assert (ground.attitude, ground.flight, ground.usable_m3) == ("ground", False, Pair(a=None, b=None))
        assert (tank.remark, ground.remark, cruise.remark) == (None, None, None)
    assert compared.saved_as_fuel_m3 == pytest.approx(0.0, abs=1e-12)


def test_an_attitude_or_a_tank_of_one_plan_only_and_an_attitude_turned_are_told(
    drawing: Any, two: Any
) -> None:
    head = drawing.fuel("715 kg/m3") + drawing.GROUND
    rows, files = [drawing.item("PIN", "12 g")], {"box": drawing.box(1.0, 0.5)}
    first = {"rows": rows, "files": files, "tank": drawing.tank("main", low=0.0)}
    second = {"rows": rows, "files": files, "tank": drawing.tank("wing", low=0.0)}
    compared = two(
        first | {"head": head + drawing.CRUISE + drawing.climb(5.0)},
        second | {"head": head + drawing.climb(8.0) + drawing.CRUISE.replace("cruise", "dive")},
    )
    remarks = {one.attitude: one.remark for one in compared.fuel.whole.attitudes}
    assert remarks == {
        "ground": None,
        "climb": "pitch 5.0 roll 0.0 in r1, pitch 8.0 roll 0.0 in r2",
        "cruise": "only in r1",
        "dive": "only in r2",
    }
    assert {one.tank: one.remark for one in compared.fuel.tanks} == {
        "main": "only in r1",
        "wing": "only in r2",
    }
    cruise = next(one for one in compared.fuel.whole.attitudes if one.attitude == "cruise")
    assert (cruise.trapped_m3.b, cruise.trapped_m3.change, cruise.usable_m3.b) == (None, None, None)


def test_both_sides_are_what_fuel_says_of_each_plan_by_itself(drawing: Any, two: Any, tmp_path: Path) -> None:
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE + drawing.climb(5.0)
    rows = [drawing.item("PIN", "12 g")]
    first = {"rows": rows, "head": head, "tank": drawing.tank("box", low=0.01)}
    compared = two(
        first | {"files": {"box": drawing.box(1.0, 0.5)}}, first | {"files": {"box": drawing.box(1.2, 0.5)}}
    )
    for word, folder in (("a", "one"), ("b", "two")):
        alone = tmp_path / f"{folder}.book"
        start_book(alone, tmp_path / folder, by="JK")
        (tank,) = reckon_build(opening.open_build(alone)).tanks
        (seen,) = compared.fuel.tanks
        for key in ("gross_m3", "capacity_m3", "caught_air_m3", "usable_m3"):
            assert getattr(getattr(seen, key), word) == getattr(tank, key), key
        assert {one.attitude: getattr(one.trapped_m3, word) for one in seen.attitudes} == {
            one.attitude: one.trapped_m3 for one in tank.attitudes
        }


@pytest.mark.parametrize(
    ("saved_lb", "worth_us_gal"),
    # Common practice, no source: a wing of about 100 lb that saves a tenth saves about 10 lb, and 5 US gal
    # of avgas is about 30 lb. FAA-H-8083-30 (read): avgas 6 lb/US gal.
    [(10.0, 10.0 / 6.0), (30.0, 5.0), (-30.0, -5.0)],
)
def test_saved_mass_is_worth_the_fuel_that_weighs_it(
    drawing: Any, two: Any, saved_lb: float, worth_us_gal: float
) -> None:
    shared = {
        "head": drawing.fuel("6 lb/US gal") + drawing.GROUND + drawing.CRUISE,
        "tank": drawing.tank("box", low=0.0),
        "files": {"box": drawing.box(1.0, 0.5)},
    }
    compared = two(
        {"rows": [drawing.item("WING", "100 lb")]} | shared,
        {"rows": [drawing.item("WING", f"{100 - saved_lb} lb")]} | shared,
    )
    assert compared.mass.now_kg.change == pytest.approx(-saved_lb * LB, rel=1e-12)
    assert compared.saved_as_fuel_m3 / US_GAL == pytest.approx(worth_us_gal, rel=1e-9)


def test_without_a_density_nobody_says_what_saved_mass_is_worth(drawing: Any, two: Any) -> None:
    shared = {
        "head": '[fuel]\ngrade = "avgas"\n' + drawing.GROUND + drawing.CRUISE,
        "tank": drawing.tank("box", low=0.0),
        "files": {"box": drawing.box(1.0, 0.5)},
    }
    compared = two(
        {"rows": [drawing.item("PIN", "2 kg")]} | shared, {"rows": [drawing.item("PIN", "1 kg")]} | shared
    )
    assert (compared.saved_as_fuel_m3, compared.fuel_density_kg_m3) == (None, None)


def test_a_tank_without_an_outlet_has_no_usable_in_any_attitude(drawing: Any, two: Any) -> None:
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE
    tank = drawing.tank("box", low=0.0)
    blind = tank.replace('between = ["B1", "outlet"]', 'between = ["B1", "drain"]')
    shared = {"rows": [drawing.item("PIN", "12 g")], "head": head, "files": {"box": drawing.box(1.0, 0.5)}}
    compared = two(shared | {"tank": tank}, shared | {"tank": blind})
    (box_change,) = compared.fuel.tanks
    cruise = next(one for one in box_change.attitudes if one.attitude == "cruise")
    for pair in (compared.fuel.whole.usable_m3, box_change.usable_m3, cruise.usable_m3):
        assert pair.a == pytest.approx(0.1, abs=1e-6)
        assert (pair.b, pair.change) == (None, None)
