"""The whole report on tanks of boxes whose figures can be written down."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from ledger.fuel.reckon import reckon
from ledger.fuel.stood import System
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade
from ledger.model.tanks import Cell, Feed, Join, Tank, Tanks


def test_no_tanks_is_an_empty_report(level: Attitude) -> None:
    report = reckon(Tanks(), {}, {}, (level,), None)
    assert (report.tanks, report.feeds) == ((), ())


def test_a_box_pitched_away_from_its_outlet_traps_the_wedge_of_the_closed_form(
    build: Any, ground: Any
) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    tank = build.report(cells, build.one_box(), (ground, build.pitched(-5.0))).tanks[0]
    # checks: box 1 x 0.5 x 0.2, pitch 5 deg, drain at the high floor edge (computed)
    assert build.at(tank, "pitch -5").trapped_m3 == pytest.approx(0.021872166, abs=5e-10)
    assert build.at(tank, "pitch -5").trapped_m3 == pytest.approx(
        0.25 * math.tan(math.radians(5.0)), rel=1e-12
    )
    assert tank.gross_m3 == pytest.approx(0.1, rel=1e-14)
    assert tank.capacity_m3 == pytest.approx(0.095, rel=1e-14)
    assert tank.usable_m3 == pytest.approx(0.095 - 0.25 * math.tan(math.radians(5.0)), rel=1e-12)
    assert (tank.capacity_limit, tank.governing_attitude) == ("filler", "pitch -5")
    kept = build.kept(tank, "A", "pitch -5")
    assert (kept.trapped_by, kept.level_m) == ("outlet", pytest.approx(math.sin(math.radians(5.0))))


def test_fuel_behind_a_lip_is_the_wedge_of_the_closed_form(build: Any, ground: Any) -> None:
    lip, pitch, chord, litres = 0.005, 3.0, 0.6, 0.1431
    # checks: wedge behind a lip, h 5 mm, 3 deg, chord 600 mm: 0.1431 L (computed)
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, chord, 0.2))}
    slope = math.tan(math.radians(pitch))
    openings = (
        # In the wall at the low end, fuel must climb the lip square to the floor.
        build.slot("outlet", "A outlet", lip, lip, at=(1.0, 0.0)),
        build.slot("filler", "A filler", 0.19, 0.19),
        build.slot("vent", "A vent", 0.2, 0.2),
    )
    tank = build.report(cells, openings, (ground, build.pitched(pitch))).tanks[0]
    trapped = build.at(tank, f"pitch {pitch:g}").trapped_m3
    assert trapped == pytest.approx(chord * lip**2 / (2.0 * slope), rel=1e-9)
    assert round(1000.0 * trapped, 4) == litres


def test_a_tank_with_no_vent_feeds_nothing(build: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    tank = build.report(cells, build.one_box()[:2]).tanks[0]
    assert (tank.usable_m3, build.kept(tank, "A").trapped_by) == (0.0, "no air")
    assert tank.capacity_m3 == pytest.approx(0.095)


def test_usable_is_none_without_an_outlet_a_flight_attitude_or_a_filler(
    build: Any, ground: Attitude, level: Attitude
) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    outlet, filler, vent = build.one_box()
    assert build.report(cells, (filler, vent)).tanks[0].usable_m3 is None
    assert build.report(cells, (outlet, filler, vent), (ground,)).tanks[0].usable_m3 is None
    assert build.report(cells, (outlet, filler, vent), (level,)).tanks[0].capacity_m3 is None
    without = build.report(cells, (outlet, vent)).tanks[0]
    assert (without.capacity_m3, without.usable_m3, without.cells[0].filled_m3) == (None, None, None)


def test_usable_is_over_all_flight_attitudes_whatever_is_listed(build: Any, ground: Attitude) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    attitudes = (ground, build.pitched(-2.0), build.pitched(-5.0), build.pitched(-3.0))
    tanks = build.tanks(cells, build.one_box())
    whole = reckon(tanks, cells, {}, attitudes, None, levels=2)
    assert whole.tanks[0].governing_attitude == "pitch -5"
    part = reckon(
        tanks, cells, {}, attitudes, None, levels=2, listed=("pitch -2",), asked=build.pitched(-40.0)
    )
    assert part.tanks[0].usable_m3 == whole.tanks[0].usable_m3
    assert [one.attitude for one in part.tanks[0].attitudes] == ["pitch -2", "pitch -40"]
    assert not part.tanks[0].attitudes[1].flight


def test_pockets_not_counted_leave_trapped_and_usable_unknown(build: Any, ground: Attitude) -> None:
    # A floor with a ridge: two lowest edges when level, one when pitched enough.
    section = [(0.0, 0.0), (0.5, 0.2), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)]
    cells = {"A": build.prism(section)}
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    report = build.report(cells, openings, (ground, build.pitched(0.0), build.pitched(30.0)))
    tank = report.tanks[0]
    assert (tank.usable_m3, tank.governing_attitude) == (None, None)
    assert build.at(tank, "pitch 0").trapped_m3 is None
    assert build.at(tank, "pitch 0").drained == ()
    assert (build.kept(tank, "A", "pitch 0").pockets, build.kept(tank, "A", "pitch 0").trapped_m3) == (
        2,
        None,
    )
    assert build.at(tank, "pitch 30").trapped_m3 is not None
    assert [(one.cell, one.attitude, one.places) for one in report.pocketed] == [("A", "pitch 0", 2)]
    alone = build.report(cells, openings, (ground, build.pitched(30.0))).tanks[0]
    assert alone.usable_m3 is not None


def test_what_stands_above_the_vents_spill_height_is_lost_overboard(build: Any, ground: Attitude) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0, at=(1.0, 0.0)),
        build.slot("filler", "A filler", 0.19, 0.19, at=(0.5, 0.2)),
        build.slot("vent", "A vent", 0.195, 0.195, at=(1.0, 0.2)),
    )
    tank = build.report(cells, openings, (ground, build.pitched(3.0), build.pitched(-3.0))).tanks[0]
    assert build.at(tank, "ground").lost_m3 == 0.0
    assert build.at(tank, "pitch -3").lost_m3 == 0.0
    # Nose up the aft wall is deepest: the surface there falls to the vent, and what is above runs out.
    slope = math.tan(math.radians(3.0))
    stays = 0.5 * (0.195 - 0.5 * slope)
    assert build.at(tank, "pitch 3").lost_m3 == pytest.approx(0.095 - stays, rel=1e-9)
    assert build.at(tank, "pitch 3").drained[-1].quantity_m3 == pytest.approx(stays, rel=1e-9)


def test_joined_tanks_are_one_network_when_filled(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("crossfeed", "A B", 0.0, 1.0, at=(0.5, 1.0), crossfeed=True),
        build.slot("filler A", "A filler", 0.9, 0.9),
        build.slot("filler B", "B filler", 0.7, 0.7, at=(0.0, 1.5)),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tanks = build.report(cells, openings, split=(("A",), ("B",))).tanks
    assert [tank.capacity_m3 for tank in tanks] == pytest.approx([0.7, 0.7])
    marked = (*openings[:2], replace(openings[2], fill_here=True), *openings[3:])
    tanks = build.report(cells, marked, split=(("A",), ("B",))).tanks
    assert [tank.capacity_m3 for tank in tanks] == pytest.approx([0.9, 0.9])


def test_a_filler_behind_a_crossfeed_too_high_to_pass_is_not_how_a_tank_is_filled(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("crossfeed", "A B", 0.95, 1.0, at=(0.5, 1.0), crossfeed=True),
        build.slot("filler A", "A filler", 0.9, 0.9),
        build.slot("filler B", "B filler", 0.7, 0.7, at=(0.0, 1.5)),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tanks = build.report(cells, openings, split=(("A",), ("B",))).tanks
    assert [tank.capacity_m3 for tank in tanks] == pytest.approx([0.9, 0.7])


def test_a_tee_over_two_tanks_is_reckoned_over_both_and_a_selector_tank_by_tank(
    build: Any, ground: Attitude
) -> None:
    cells = {
        "A": build.box((0.0, -1.0, 0.0), (1.0, 0.0, 1.0)),
        "B": build.box((0.0, 0.0, 0.0), (1.0, 1.0, 1.0)),
    }
    openings = (
        build.slot("out A", "A outlet", 0.0, 0.0, at=(0.5, -0.01)),
        build.slot("out B", "B outlet", 0.0, 0.0, at=(0.5, 0.0)),
        build.slot("fill A", "A filler", 0.9, 0.9, at=(0.0, -0.5)),
        build.slot("fill B", "B filler", 0.9, 0.9, at=(0.0, 0.5)),
        build.slot("vent A", "A vent", 1.0, 1.0, at=(0.0, -0.5)),
        build.slot("vent B", "B vent", 1.0, 1.0, at=(0.0, 0.5)),
    )
    rolls = tuple(Attitude(name=f"roll {r}", roll_deg=r) for r in (5.0, -5.0))
    results = {}
    for join in Join:
        feeds = (Feed(name="engine", outlets=("out A", "out B"), join=join),)
        split = (("A",), ("B",))
        report = build.report(cells, openings, (ground, *rolls), feeds=feeds, split=split)
        results[join] = report
    tank_by_tank = results[Join.SELECT]
    assert tank_by_tank.feeds[0].usable_m3 == pytest.approx(sum(t.usable_m3 for t in tank_by_tank.tanks))
    together = results[Join.TEE]
    trapped = [sum(build.at(t, one.name).trapped_m3 for t in together.tanks) for one in rolls]
    assert together.feeds[0].usable_m3 == pytest.approx(1.8 - max(trapped))
    # A higher outlet of the tee draws air while the other tank still covers its own.
    assert together.tanks[1].usable_m3 is not None
    assert together.tanks[1].usable_m3 < tank_by_tank.tanks[1].usable_m3 + 1e-12


def test_a_lower_and_a_wider_hole_free_what_the_closed_form_says(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.hole("drain", "A B", (0.5, 1.0, 0.05), 0.02, (0.0, 1.0, 0.0)),
        build.slot("high", "A B", 0.9, 1.0, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    kept = build.kept(build.report(cells, openings).tanks[0], "B")
    assert (kept.trapped_by, kept.trapped_m3) == ("drain", pytest.approx(0.04))
    assert kept.frees_lower_1mm_m3 == pytest.approx(0.001, rel=1e-9)
    assert kept.frees_wider_10pc_m3 == pytest.approx(0.001, rel=1e-9)


def test_volumes_alone_are_those_of_the_whole_report(build: Any, ground: Attitude, level: Attitude) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.hole("drain", "A B", (0.5, 1.0, 0.05), 0.02, (0.0, 1.0, 0.0)),
        build.slot("high", "A B", 0.9, 1.0, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tanks = build.tanks(cells, openings)
    whole, alone = (
        reckon(tanks, cells, {}, (ground, level), None, volumes_only=only) for only in (False, True)
    )
    assert build.kept(whole.tanks[0], "B").frees_lower_1mm_m3 is not None
    assert all(one.table and one.drained for one in whole.tanks[0].attitudes)

    def bare(attitude: Any) -> Any:
        kept = [replace(one, frees_lower_1mm_m3=None, frees_wider_10pc_m3=None) for one in attitude.cells]
        return replace(attitude, cells=tuple(kept), table=(), drained=())

    tank = replace(whole.tanks[0], attitudes=tuple(map(bare, whole.tanks[0].attitudes)))
    assert alone == replace(whole, tanks=(tank,), far_openings=(), overlaps=())


def test_the_opening_moved_by_1_mm_in_the_plan_frees_what_was_said(build: Any, ground: Attitude) -> None:
    cells = {
        "A": build.box((0.0, 0.0, 0.0), (1.0, 1.0, 1.0)),
        "B": build.box((0.0, 1.0, 0.0), (1.0, 2.0, 1.0)),
    }
    up = build.pitched(4.0).up

    def report(shift: float) -> Any:
        centre = tuple(c - shift * u for c, u in zip((0.5, 1.0, 0.05), up, strict=True))
        openings = (
            build.slot("outlet", "A outlet", 0.0, 0.0, at=(1.0, 0.0)),
            build.hole("drain", "A B", centre, 0.02, (0.0, 1.0, 0.0)),
            build.slot("high", "A B", 0.9, 1.0, at=(0.5, 1.0)),
            build.slot("filler", "A filler", 0.9, 0.9),
            build.slot("vent", "A vent", 1.0, 1.0),
        )
        return build.report(cells, openings, (ground, build.pitched(4.0))).tanks[0]

    before, after = (build.at(report(shift), "pitch 4").trapped_m3 for shift in (0.0, 0.001))
    said = build.kept(report(0.0), "B", "pitch 4").frees_lower_1mm_m3
    assert said == pytest.approx(before - after, rel=1e-9)


def test_a_displaced_volume_is_off_gross_and_capacity_and_never_off_trapped(build: Any, ground: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    attitudes = (ground, build.pitched(-5.0))
    plain = build.report(cells, build.one_box(), attitudes).tanks[0]
    fitted = build.report(cells, build.one_box(), attitudes, displaced_m3=0.003).tanks[0]
    assert fitted.gross_m3 == pytest.approx(plain.gross_m3 - 0.003)
    assert fitted.capacity_m3 == pytest.approx(plain.capacity_m3 - 0.003)
    assert build.at(fitted, "pitch -5").trapped_m3 == build.at(plain, "pitch -5").trapped_m3
    table = build.at(fitted, "pitch -5").table
    before = build.at(plain, "pitch -5").table
    assert table[-1].volume_m3 == pytest.approx(fitted.gross_m3, rel=1e-12)
    for row, was in zip(table, before, strict=True):
        if was.volume_m3 <= 0.092:
            assert row.volume_m3 == was.volume_m3
        if was.volume_m3 >= 0.095:
            assert row.volume_m3 == pytest.approx(was.volume_m3 - 0.003)
    volumes = [row.volume_m3 for row in table]
    assert volumes == sorted(volumes)


def test_a_displaced_solid_is_taken_off_at_every_level(build: Any, ground: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    solid = {"A": build.box((0.2, 0.1, 0.0), (0.4, 0.3, 0.1))}
    attitudes = (ground, Attitude(name="level"))
    tank = build.report(cells, build.one_box(), attitudes, displaced=solid, levels=20).tanks[0]
    assert tank.gross_m3 == pytest.approx(0.1 - 0.004)
    for row in build.at(tank).table[1:]:
        h = row.level_m
        low = min(h, 0.1)
        assert row.volume_m3 == pytest.approx(0.5 * h - 0.04 * low, rel=1e-12)
        moment = 0.5 * h * 0.5 - 0.04 * low * 0.3
        assert row.cg_m is not None
        assert row.cg_m[0] == pytest.approx(moment / row.volume_m3, rel=1e-12)
    for row in build.at(tank).drained[1:]:
        q = row.quantity_m3
        h = q / 0.46 if q <= 0.046 else 0.1 + (q - 0.046) / 0.5
        moment = 0.5 * h * 0.5 - 0.04 * min(h, 0.1) * 0.3
        assert row.cg_m is not None
        assert row.cg_m[0] == pytest.approx(moment / q, rel=1e-9)


def test_mass_follows_the_temperature(build: Any, ground: Any, level: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    tanks = build.tanks(cells, build.one_box())
    fuel = FuelGrade(grade="avgas", density_15c_kg_m3=710.0)
    cold = reckon(tanks, cells, {}, (ground, level), fuel, levels=2, temperature_k=253.15).tanks[0]
    row = build.at(cold).drained[-1]
    assert row.mass_kg == pytest.approx(0.095 * 710.0 * 1.0450, rel=5e-5)
    unknown = reckon(tanks, cells, {}, (ground, level), None, levels=2).tanks[0]
    assert build.at(unknown).drained[-1].mass_kg is None


def test_usable_uncertainty_is_of_walls_and_surfaces(build: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    openings = (
        build.slot("outlet", "A outlet", 0.05, 0.05),
        build.slot("filler", "A filler", 0.19, 0.19),
        build.slot("vent", "A vent", 0.2, 0.2),
    )
    tank = build.report(cells, openings).tanks[0]
    assert tank.usable_u_m3 == pytest.approx(math.hypot(0.0005 * 3.0 * 0.14, 0.001 * (0.5 + 0.5)), rel=1e-12)


def test_a_listed_name_that_is_no_attitude_is_a_mistake_of_the_program(build: Any, ground: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    tanks = build.tanks(cells, build.one_box())
    with pytest.raises(ValueError, match="no attitude"):
        reckon(tanks, cells, {}, (ground,), None, listed=("climb",))
    with pytest.raises(ValueError, match="step"):
        reckon(tanks, cells, {}, (ground,), None, levels=0)


def test_an_opening_far_from_a_cell_it_should_join_is_measured(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.1, 0.2, at=(0.5, 0.5)),
        build.hole("stray", "A B", (0.5, 0.98, 0.5), 0.01, (0.0, 1.0, 0.0), depth_m=0.004),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    far = build.report(cells, openings).far_openings
    assert [(one.opening, one.cell) for one in far] == [("stray", "B")]
    assert far[0].distance_m == pytest.approx(0.02, rel=1e-9)
    assert far[0].allowed_m == pytest.approx(0.009)


def test_a_hole_in_the_middle_of_a_wall_twice_the_allowance_is_not_far(build: Any) -> None:
    cells = {
        "A": build.box((0.0, 0.0, 0.0), (1.0, 1.0, 1.0)),
        "B": build.box((0.0, 1.01, 0.0), (1.0, 2.0, 1.0)),
    }
    openings = (
        build.slot("outlet", "A outlet", 0.1, 0.2, at=(0.5, 0.5)),
        build.hole("drain", "A B", (0.5, 1.005, 0.5), 0.01, (0.0, 1.0, 0.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    assert [one.opening for one in build.report(cells, openings).far_openings] == []


def test_cells_that_share_space_are_named_and_cells_that_touch_are_not(build: Any) -> None:
    cells = build.row_of_boxes(2)
    assert build.report(cells, build.one_box()).overlaps == ()
    cells["C"] = build.box((0.5, 0.9, 0.0), (0.7, 1.1, 0.5))
    found = build.report(cells, build.one_box()).overlaps
    assert [(one.one, one.two) for one in found] == [("A", "C"), ("B", "C")]
    assert [one.volume_m3 for one in found] == pytest.approx([0.01, 0.01], rel=1e-5)


def test_cells_in_no_tank_are_no_matter(build: Any, ground: Any, level: Any) -> None:
    cells = build.row_of_boxes(2)
    tanks = Tanks(
        tanks=(Tank(name="t", cells=("A",)),),
        cells=(Cell(name="A", mesh="a"), Cell(name="B", mesh="b")),
        openings=build.one_box(),
    )
    report = reckon(tanks, cells, {}, (ground, level), None, levels=2)
    assert report.tanks[0].gross_m3 == pytest.approx(1.0)


def test_cells_joined_by_one_tee_after_another_all_have_to_do_with_one_another(build: Any) -> None:
    cells = build.row_of_boxes(4)
    openings = tuple(
        build.slot(f"out {cell}{n}", f"{cell} outlet", 0.0, 0.0, at=(0.5, k + 0.5))
        for k, cell in enumerate("ABCD")
        for n in (1, 2)
    )
    feeds = (
        Feed(name="second", outlets=("out B2", "out C1"), join=Join.TEE),
        Feed(name="first", outlets=("out A1", "out B1"), join=Join.TEE),
        Feed(name="alone", outlets=("out D1",), join=Join.TEE),
    )
    split = (("A",), ("B",), ("C",), ("D",))
    system = System.of(build.tanks(cells, openings, feeds=feeds, split=split), cells, {})
    assert set(system.joined_with("A")) == {"A", "B", "C"}
    assert system.joined_with("D") == ("D",)


@pytest.mark.parametrize(("ridge_mm", "pockets"), [(0.049, 1), (0.051, 2)])
def test_a_pool_no_deeper_than_paint_is_charged_in_full_and_a_deeper_one_is_told(
    build: Any, ground: Attitude, ridge_mm: float, pockets: int
) -> None:
    ridge = ridge_mm / 1000.0
    section = [(0.0, 0.0), (0.5, ridge), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)]
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    report = build.report({"A": build.prism(section)}, openings, (ground, build.pitched(0.0)))
    level = build.at(report.tanks[0], "pitch 0")
    if pockets == 1:
        # Half the floor keeps half a ridge's depth at most; it is charged as if all of it were that deep.
        flat = build.report(
            {"A": build.prism(section[:1] + section[2:])}, openings, (ground, build.pitched(0.0))
        )
        area = build.at(flat.tanks[0], "pitch 0").table[-1].volume_m3
        dry = build.at(flat.tanks[0], "pitch 0").trapped_m3
        assert level.trapped_m3 == pytest.approx(dry + ridge * area, abs=1e-9)
        assert report.pocketed == ()
        assert report.tanks[0].usable_m3 is not None
    else:
        assert (level.trapped_m3, report.tanks[0].usable_m3) == (None, None)
        assert report.pocketed[0].depth_m == pytest.approx(ridge, abs=1e-12)
