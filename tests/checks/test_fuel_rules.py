"""Each rule about fuel: one plan that breaks it, and the same plan put right."""

from __future__ import annotations

import inspect
from collections.abc import Callable, Mapping
from dataclasses import replace
from datetime import UTC, datetime
from importlib import import_module
from typing import Any, cast

import numpy as np
import pytest

from ledger.checks.facts import Facts
from ledger.checks.run import RULES
from ledger.errors import Finding, Severity
from ledger.fuel.reckon import reckon
from ledger.geometry.closed_cell import ClosedCell
from ledger.mass.report import WeightReport
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade, Plan
from ledger.model.snapshot import Iteration, Snapshot
from ledger.model.tanks import Cell, Circle, Feed, Join, Opening, Outside, Polygon, Tank, Tanks
from ledger.model.vectors import Vector
from ledger.units import Display

NOW = datetime(2026, 10, 2, 12, 0, tzinfo=UTC)
FACES = np.array(
    [
        [0, 1, 3],
        [0, 3, 2],
        [4, 6, 7],
        [4, 7, 5],
        [0, 4, 5],
        [0, 5, 1],
        [2, 3, 7],
        [2, 7, 6],
        [0, 2, 6],
        [0, 6, 4],
        [1, 5, 7],
        [1, 7, 3],
    ]
)
GROUND = Attitude(name="ground", fill=True, flight=False)
FLIGHTS = (
    Attitude(name="climb", pitch_deg=10.0),
    Attitude(name="descent", pitch_deg=-5.0),
    Attitude(name="slip right", roll_deg=5.0),
    Attitude(name="slip left", roll_deg=-5.0),
)
AVGAS = FuelGrade(grade="avgas", density_15c_kg_m3=715.0, feed_flow_m3_s=1e-5)


def box(low: Vector, high: Vector) -> ClosedCell:
    corners = [[x, y, z] for x in (low[0], high[0]) for y in (low[1], high[1]) for z in (low[2], high[2])]
    return ClosedCell.from_mesh(np.array(corners), FACES)


def slot(name: str, between: str, low: float, high: float, y: float = 0.5) -> Opening:
    one, two = between.split()
    outside = Outside(two) if two in {kind.value for kind in Outside} else None
    points = ((0.5, y, low), (0.5, y + 0.01, low), (0.5, y + 0.01, high), (0.5, y, high))
    return Opening(
        name=name, cells=(one,) if outside else (one, two), outside=outside, rim=Polygon(points_m=points)
    )


CELLS = {"A": box((0.0, 0.0, 0.0), (1.0, 1.0, 1.0)), "B": box((0.0, 1.0, 0.0), (1.0, 2.0, 1.0))}
GOOD = {
    one.name: one
    for one in (
        slot("outlet", "A outlet", 0.0, 0.0),
        slot("drain", "A drain", 0.0, 0.0),
        slot("filler", "A filler", 0.9, 0.9),
        slot("vent", "A vent", 1.0, 1.0),
        slot("low", "A B", 0.0, 0.05, 1.0),
        slot("high", "A B", 0.95, 1.0, 1.0),
    )
}
Openings = Mapping[str, Opening]


def plan_of(tanks: Tanks, attitudes: tuple[Attitude, ...], fuel: FuelGrade | None) -> Plan:
    """A plan of tanks and nothing else."""
    return Plan(
        name="r1",
        title="first",
        display=Display.METRIC,
        materials=(),
        laminates=(),
        parts=(),
        shapes=(),
        tanks=tanks,
        attitudes=attitudes,
        fuel=fuel,
    )


NOTHING_BUILT = Snapshot(
    iterations=(),
    logged=(),
    pieces={},
    lots={},
    sheets={},
    offcuts={},
    batches={},
    scales={},
    held={},
    gone={},
    last_seq=1,
    last_digest="",
    now=NOW,
)


def facts(
    openings: Openings = GOOD,
    *,
    cells: Mapping[str, ClosedCell] = CELLS,
    attitudes: tuple[Attitude, ...] = (GROUND, *FLIGHTS),
    fuel: FuelGrade | None = AVGAS,
    split: bool = False,
    feeds: tuple[Feed, ...] = (),
    reckoned: bool = True,
) -> Facts:
    """What the rules see of two boxes side by side with these openings."""
    names = tuple(cells)
    members = tuple((name,) for name in names) if split else (names,) * bool(names)
    tanks = Tanks(
        tanks=tuple(Tank(name=f"tank {own[0]}", cells=own, expansion=0.02) for own in members),
        cells=tuple(Cell(name=name, mesh=name) for name in names),
        openings=tuple(openings.values()),
        feeds=feeds,
    )
    iteration = Iteration(name="r1", seq=1, at=NOW, plan=plan_of(tanks, attitudes, fuel))
    snapshot = replace(NOTHING_BUILT, iterations=(iteration,))
    report = reckon(tanks, cells, {}, attitudes, fuel, levels=2) if reckoned else None
    return Facts(snapshot=snapshot, weights=cast(WeightReport, None), fuel=report)


def without(*names: str) -> Openings:
    return {name: opening for name, opening in GOOD.items() if name not in names}


def ridged() -> ClosedCell:
    """A box whose floor has a ridge across the middle."""
    section = [(0.0, 0.0), (0.5, 0.4), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)]
    corners = [(x, y, z) for y in (0.0, 1.0) for x, z in section]
    sides = [(k, (k + 1) % 5, n) for k in range(5) for n in ((k + 1) % 5 + 5,)]
    sides += [(k, (k + 1) % 5 + 5, k + 5) for k in range(5)]
    ends = [(1, b, a) for a, b in ((2, 3), (3, 4), (4, 0))]
    far = [(6, a + 5, b + 5) for _, b, a in ends]
    return ClosedCell.from_mesh(np.array(corners), np.array([*sides, *ends, *far])[:, ::-1])


STRAY = replace(GOOD["low"], rim=Circle(centre_m=(0.5, 0.9, 0.05), diameter_m=0.1, normal=(0.0, 1.0, 0.0)))
APART = {
    one.name: one
    for one in (
        *without("low", "high").values(),
        slot("outlet B", "B outlet", 0.0, 0.0, 1.5),
        slot("filler B", "B filler", 0.9, 0.9, 1.5),
        slot("vent B", "B vent", 1.0, 1.0, 1.5),
        slot("drain B", "B drain", 0.0, 0.0, 1.5),
    )
}
# At the front wall, as high as the fuel on the ground: nose up or down the fuel stands above it.
LOW_VENT = slot("vent", "A vent", 0.9, 0.9, 0.02)
FEED = (Feed(name="engine", outlets=("outlet", "outlet B"), join=Join.SELECT),)

# Rule, how grave, the thing it names, a plan that breaks it.
BROKEN: dict[str, tuple[Severity, tuple[str, ...], Callable[[], Facts]]] = {
    "attitude_without_mirror": (
        Severity.LOOK,
        ("slip right",),
        lambda: facts(attitudes=(GROUND, *FLIGHTS[:3])),
    ),
    "can_be_overfilled": (
        Severity.LOOK,
        ("tank A",),
        lambda: facts({**GOOD, "filler": slot("filler", "A filler", 0.99, 0.99)}),
    ),
    "caught_air": (Severity.LOOK, ("B",), lambda: facts(without("high"))),
    "cell_not_aired": (
        Severity.LOOK,
        ("B",),
        lambda: facts({**without("high"), "outlet": slot("outlet", "A outlet", 0.0, 0.2)}),
    ),
    "cells_overlap": (
        Severity.STOP,
        ("A",),
        lambda: facts(cells={**CELLS, "B": box((0.0, 0.9, 0.0), (1.0, 2.0, 1.0))}),
    ),
    "density_out_of_range": (
        Severity.LOOK,
        ("fuel",),
        lambda: facts(fuel=replace(AVGAS, density_15c_kg_m3=800.0)),
    ),
    "dry_cell": (Severity.LOOK, ("B",), lambda: facts(without("low", "high"))),
    "feed_flow_unknown": (Severity.NOTE, ("fuel",), lambda: facts(fuel=replace(AVGAS, feed_flow_m3_s=None))),
    "few_adverse_attitudes": (
        Severity.LOOK,
        ("attitude",),
        lambda: facts(attitudes=(GROUND, FLIGHTS[0], *FLIGHTS[2:])),
    ),
    "lost_overboard": (Severity.LOOK, ("tank A",), lambda: facts({**GOOD, "vent": LOW_VENT})),
    "no_drain": (Severity.LOOK, ("tank A",), lambda: facts(without("drain"))),
    "opening_far_from_wall": (Severity.LOOK, ("low",), lambda: facts({**GOOD, "low": STRAY})),
    "outlet_in_no_feed": (Severity.LOOK, ("outlet", "outlet B"), lambda: facts(APART, split=True)),
    "pocket_not_counted": (Severity.STOP, ("A",), lambda: facts(cells={**CELLS, "A": ridged()})),
}


def findings(rule: str, seen: Facts) -> tuple[Finding, ...]:
    return cast(tuple[Finding, ...], getattr(import_module(f"ledger.checks.{rule}"), rule)(seen))


@pytest.mark.parametrize("rule", sorted(BROKEN))
def test_a_plan_that_breaks_the_rule_is_named_with_place_severity_and_what_to_do(rule: str) -> None:
    severity, things, broken = BROKEN[rule]
    found = findings(rule, broken())
    assert tuple(one.where.thing for one in found) == things
    for one in found:
        assert one.code == rule.replace("_", "-")
        assert one.severity is severity
        assert one.what
        assert one.do


@pytest.mark.parametrize("rule", sorted(BROKEN))
def test_a_sound_plan_is_left_in_peace(rule: str) -> None:
    assert findings(rule, facts()) == ()
    assert findings(rule, facts(APART, split=True, feeds=FEED)) == ()


@pytest.mark.parametrize("rule", sorted(BROKEN))
def test_a_plan_without_tanks_or_figures_is_left_in_peace(rule: str) -> None:
    assert findings(rule, facts({}, cells={}, attitudes=(), reckoned=False, fuel=None)) == ()
    unreckoned = facts(reckoned=False)
    if rule not in ("outlet_in_no_feed",):
        assert findings(rule, unreckoned) == ()


def test_every_rule_about_fuel_is_run_and_in_order() -> None:
    names = [rule.__name__ for rule in RULES]
    assert set(BROKEN) <= set(names)
    assert names == sorted(names)
    for rule in RULES:
        assert inspect.getmodule(rule) is not None


def test_air_above_a_hole_bored_clear_of_the_skin_is_a_note() -> None:
    high = {**GOOD, "high": slot("high", "A B", 0.80, 0.895, 1.0)}
    (found,) = findings("caught_air", facts(high))
    assert (found.severity, found.where.thing) == (Severity.NOTE, "tank A")
    assert "B under high" in found.what


def test_a_cell_with_no_way_to_the_drain_is_named_by_itself() -> None:
    flap = {name: replace(one, one_way="B") if one.cells == ("A", "B") else one for name, one in GOOD.items()}
    found = findings("no_drain", facts(flap))
    assert [one.where.thing for one in found] == ["B"]


def test_a_cell_no_fuel_comes_to_on_filling_is_dry_though_joined_above() -> None:
    above: dict[str, Any] = {**without("low"), "high": slot("high", "A B", 0.95, 1.0, 1.0)}
    (found,) = findings("dry_cell", facts(above))
    assert "on filling" in found.what


def test_a_tank_without_a_filler_is_named_once_and_not_cell_by_cell() -> None:
    (found,) = findings("dry_cell", facts(without("filler")))
    assert found.where.thing == "tank A"
    assert found.what.startswith("the tank has no filler")
    assert "filler" in found.do


def test_one_of_two_tanks_without_a_filler_is_the_one_that_is_named() -> None:
    unfilled = {name: one for name, one in APART.items() if name != "filler B"}
    (found,) = findings("dry_cell", facts(unfilled, split=True))
    assert found.where.thing == "tank B"
    assert found.what.startswith("the tank has no filler")


def test_the_missing_attitudes_are_named() -> None:
    (found,) = findings("few_adverse_attitudes", facts(attitudes=(GROUND, FLIGHTS[2])))
    for words in ("nose up", "nose down", "left wing down"):
        assert words in found.what
    assert "right wing down" not in found.what


def test_fuel_lost_overboard_is_told_in_litres_for_each_attitude_above_a_tenth_of_a_litre() -> None:
    seen = facts({**GOOD, "vent": LOW_VENT})
    assert seen.fuel is not None
    (tank,) = seen.fuel.tanks
    (found,) = findings("lost_overboard", seen)
    lost = {one.attitude: one.lost_m3 for one in tank.attitudes if one.flight and one.lost_m3}
    assert lost
    for name, volume_m3 in lost.items():
        assert (f" L at {name}" in found.what) == (volume_m3 > 1e-4)
    for litres, told in ((0.09, 0), (0.11, 1)):
        attitudes = tuple(replace(one, lost_m3=litres / 1000.0) for one in tank.attitudes)
        report = replace(seen.fuel, tanks=(replace(tank, attitudes=attitudes),))
        assert len(findings("lost_overboard", replace(seen, fuel=report))) == told
    grounded = tuple(replace(one, flight=False) for one in tank.attitudes)
    report = replace(seen.fuel, tanks=(replace(tank, attitudes=grounded),))
    assert findings("lost_overboard", replace(seen, fuel=report)) == ()
