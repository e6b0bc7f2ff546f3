"""How sure masses are, against closed forms and an independent library of uncertainties."""

from __future__ import annotations

import math
from typing import Any

import pytest
from uncertainties import ufloat

from ledger.mass.magnitudes import (
    GEOMETRY_TOLERANCE,
    RESIN_HABIT,
    SCATTER_WITHIN_LOT,
)
from ledger.model.acts import Cut, Fit, Lay, Trim, Weigh
from ledger.model.plan import Form, PartClass
from ledger.model.things import Share


def pins(make: Any, count: int) -> Any:
    shop = make.shop(
        make.plan(
            *(
                (
                    make.part(f"PIN.{n}", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.2),
                    make.shape(1.0),
                )
                for n in range(count)
            )
        )
    )
    shop.scale("W1", 0.001, 0.003)
    return shop


def test_two_hundred_readings_on_one_scale_share_its_calibration(make: Any) -> None:
    shop = pins(make, 200)
    for n in range(200):
        shop.log(Weigh(what=f"PIN.{n}/1", reading_kg=(0.2 + n * 1e-4,), scale="W1"))
    total = shop.weights().total
    calibration, step = 0.003 / math.sqrt(3), 0.001 / math.sqrt(12)
    closed = math.sqrt((200 * calibration) ** 2 + 200 * step**2)
    assert total.best_u_kg == pytest.approx(closed, rel=1e-9)
    shared = ufloat(0.0, calibration)
    summed = sum(ufloat(0.2, step) + shared for _ in range(200))
    assert total.best_u_kg == pytest.approx(summed.std_dev, rel=1e-9)


def test_two_scales_are_two_sources(make: Any) -> None:
    shop = pins(make, 2)
    shop.scale("W2", 0.001, 0.003)
    shop.log(Weigh(what="PIN.0/1", reading_kg=(0.2,), scale="W1"))
    shop.log(Weigh(what="PIN.1/1", reading_kg=(0.2,), scale="W2"))
    one = 0.003**2 / 3 + 0.001**2 / 12
    assert shop.weights().total.best_u_kg == pytest.approx(math.sqrt(2 * one), rel=1e-12)


def test_one_tare_taken_off_many_readings_is_one_source(make: Any) -> None:
    shop = pins(make, 3)
    for n in range(3):
        shop.log(Weigh(what=f"PIN.{n}/1", reading_kg=(0.7,), scale="W1", tare_kg=0.5))
    step2, accuracy2 = 0.001**2 / 12, 0.003**2 / 3
    closed = math.sqrt(9 * accuracy2 + 9 * step2 + 3 * step2)
    assert shop.weights().total.best_u_kg == pytest.approx(closed, rel=1e-12)


def test_readings_that_scatter_widen_the_mean_by_their_scatter(make: Any) -> None:
    shop = pins(make, 1)
    shop.log(Weigh(what="PIN.0/1", reading_kg=(0.200, 0.204, 0.202), scale="W1"))
    scatter2 = (0.002**2 + 0.002**2) / 2 / 3
    closed = math.sqrt(scatter2 + 0.001**2 / 12 + 0.003**2 / 3)
    assert shop.weights().total.best_u_kg == pytest.approx(closed, rel=1e-9)


def test_plies_of_one_lot_share_its_mean_and_plies_of_one_cup_its_habit(shop: Any) -> None:
    shop.mix("B1", 4.0, 1.0)
    for step in range(1, 7):
        shop.log(Lay(piece="SKIN/1", step=step, lots=(Share(what="LT"),), batches=(Share(what="B1"),)))
    mean = 0.06 / math.sqrt(3)
    own = math.hypot(SCATTER_WITHIN_LOT, GEOMETRY_TOLERANCE)
    lot, cup = ufloat(0.0, mean), ufloat(0.0, RESIN_HABIT)
    plies = sum(0.6 * (1 + lot + ufloat(0.0, own)) + 0.3 * cup for _ in range(6))
    assert shop.part("SKIN").best_u_kg == pytest.approx(plies.std_dev, rel=1e-9)


def test_pieces_of_one_sheet_are_surer_apart_than_their_sum(shop: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"))
    ribs = next(node for node in shop.weights().assemblies if node.path == "WING/LEFT/ribs")
    one, two = shop.part("RIB.1").best_u_kg, shop.part("RIB.2").best_u_kg
    assert math.hypot(one, two) < ribs.best_u_kg < one + two


def test_an_entry_after_a_weighing_adds_its_own_uncertainty_and_those_before_do_not_count(
    shop: Any,
) -> None:
    for step in range(1, 7):
        shop.log(Lay(piece="SKIN/1", step=step, lots=(Share(what="LT"),)))
    shop.log(Weigh(what="SKIN/1", reading_kg=(3.6,), scale="W1"))
    weighed = math.sqrt(0.002**2 / 3 + 0.001**2 / 12)
    assert shop.part("SKIN").best_u_kg == pytest.approx(weighed, rel=1e-12)
    shop.log(Trim(piece="SKIN/1", mass_kg=0.1, why="sanding"))
    assert shop.part("SKIN").best_u_kg == pytest.approx(math.hypot(weighed, 0.003), rel=1e-12)


def test_a_weighed_assembly_is_as_sure_as_its_weighing_however_unsure_its_pieces(shop: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"))
    for rib in ("RIB.1/1", "RIB.2/1"):
        shop.log(Fit(piece=rib, into="WING/LEFT/ribs"))
    shop.log(Weigh(what="WING/LEFT/ribs", reading_kg=(0.47,), scale="W1"))
    report = shop.weights()
    ribs = next(node for node in report.assemblies if node.path == "WING/LEFT/ribs")
    weighed = math.sqrt(0.002**2 / 3 + 0.001**2 / 12)
    assert ribs.best_kg == pytest.approx(0.47, abs=1e-12)
    assert ribs.best_u_kg == pytest.approx(weighed, rel=1e-9)
    # Knowing the sum of two pieces of one sheet says what the sheet weighs, but not how each was cut.
    own = math.hypot(SCATTER_WITHIN_LOT, GEOMETRY_TOLERANCE)
    sheet = ufloat(0.0, 0.003)
    big, small = 0.3 * (1 + sheet + ufloat(0.0, own)), 0.15 * (1 + sheet + ufloat(0.0, own))
    share = big.std_dev / (big.std_dev + small.std_dev)
    spread = big + share * (ufloat(0.47, weighed) - big - small)
    assert shop.part("RIB.1").best_kg == pytest.approx(spread.nominal_value, rel=1e-12)
    assert shop.part("RIB.1").best_u_kg == pytest.approx(spread.std_dev, rel=1e-9)
