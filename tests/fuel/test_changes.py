"""Sums over tanks hold only what is known of every one of them."""

from __future__ import annotations

import pytest

from ledger.fuel.changes import ALL, fuel_change
from ledger.fuel.report import AttitudeFuel, FuelReport, TankFuel
from ledger.model.comparison import Pair

NAMES = ("r1", "r2")


def tank(name: str, usable: float | None, trapped: float | None, capacity: float = 0.1) -> TankFuel:
    """A tank at one flight attitude."""
    climb = AttitudeFuel(
        attitude="climb",
        pitch_deg=5.0,
        roll_deg=0.0,
        up=(0.0, 0.0, 1.0),
        flight=True,
        trapped_m3=trapped,
        lost_m3=0.0,
        cells=(),
        table=(),
        drained=(),
    )
    return TankFuel(
        tank=name,
        gross_m3=0.1,
        capacity_m3=capacity,
        capacity_limit="filler",
        caught_air_m3=0.001,
        usable_m3=usable,
        usable_u_m3=None,
        governing_attitude="climb",
        cells=(),
        attitudes=(climb,),
    )


def report(*tanks: TankFuel) -> FuelReport:
    """A report of these tanks."""
    return FuelReport(tanks=tanks, feeds=())


def test_all_tanks_are_the_sum_of_each() -> None:
    whole = fuel_change(
        report(tank("left", 0.09, 0.01), tank("right", 0.08, 0.02)), report(tank("left", 0.07, 0.03)), NAMES
    )
    assert whole is not None
    assert whole.whole.tank == ALL
    assert whole.whole.gross_m3.a == pytest.approx(0.2, abs=1e-15)
    assert whole.whole.usable_m3.change == pytest.approx(0.07 - 0.17, abs=1e-15)
    (climb,) = whole.whole.attitudes
    assert climb.trapped_m3.change == pytest.approx(0.03 - 0.03, abs=1e-15)
    assert [one.remark for one in whole.tanks] == [None, "only in r1"]


def test_one_tank_not_known_leaves_the_sum_not_known_and_the_others_as_they_are() -> None:
    change = fuel_change(
        report(tank("left", 0.09, 0.01), tank("right", None, None)), report(tank("left", 0.09, 0.01)), NAMES
    )
    assert change is not None
    assert change.whole.usable_m3.a is None
    assert change.whole.usable_m3.change is None
    (climb,) = change.whole.attitudes
    assert (climb.trapped_m3.a, climb.usable_m3.a) == (None, None)
    assert change.tanks[0].usable_m3 == Pair(a=0.09, b=0.09)


def test_more_trapped_than_goes_in_leaves_nothing_usable_rather_than_less() -> None:
    change = fuel_change(report(tank("left", 0.0, 0.08, 0.05)), report(), NAMES)
    assert change is not None
    assert change.whole.attitudes[0].usable_m3 == Pair(a=0.0, b=None)


def test_two_plans_without_tanks_have_no_fuel_to_compare() -> None:
    assert fuel_change(report(), report(), NAMES) is None
