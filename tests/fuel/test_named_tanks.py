"""Small tanks that a simpler rule gets wrong, each by the figure it must have."""

from __future__ import annotations

from typing import Any

import pytest

from ledger.model.tanks import Feed, Join


def test_a_bay_joined_only_by_a_low_hole_that_the_outlets_pool_covers_keeps_its_fuel(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.10),
        build.slot("low hole", "A B", 0.0, 0.08, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tank = build.report(cells, openings).tanks[0]
    assert build.kept(tank, "A").trapped_m3 == pytest.approx(0.10, rel=1e-12)
    assert build.kept(tank, "B").trapped_by == "no air"
    assert build.kept(tank, "B").trapped_m3 == pytest.approx(1.0, rel=1e-12)
    higher = (*openings[:1], build.slot("low hole", "A B", 0.0, 0.12, at=(0.5, 1.0)), *openings[2:])
    tank = build.report(cells, higher).tanks[0]
    assert build.kept(tank, "B").trapped_m3 == pytest.approx(0.10, rel=1e-12)
    assert build.kept(tank, "B").trapped_by == "outlet"


def test_a_vent_lower_than_the_filler_limits_filling(build: Any) -> None:
    cells = build.row_of_boxes(1)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("filler", "A filler", 0.9, 0.95),
        build.pipe("vent", "A vent", ((0.5, 0.5, 0.95), (0.5, 0.5, 0.7), (0.5, 2.0, 0.7)), 0.0),
    )
    tank = build.report(cells, openings).tanks[0]
    assert (tank.capacity_limit, tank.capacity_m3) == ("filler", pytest.approx(0.9))
    lower = build.pipe("vent", "A vent", ((0.5, 0.5, 0.6), (0.5, 0.5, 0.7), (0.5, 2.0, 0.7)), 0.0)
    tank = build.report(cells, (*openings[:2], lower)).tanks[0]
    assert (tank.capacity_limit, tank.capacity_m3) == ("vent", pytest.approx(0.7))


def test_a_cell_behind_an_air_locked_cell_stays_dry_on_filling(build: Any) -> None:
    cells = build.row_of_boxes(3)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("low A-B", "A B", 0.0, 0.1, at=(0.5, 1.0)),
        build.slot("high B-C", "B C", 0.5, 0.6, at=(0.5, 2.0)),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tank = build.report(cells, openings).tanks[0]
    filled = {cell.cell: cell for cell in tank.cells}
    assert filled["B"].filled_m3 == pytest.approx(0.1)
    assert (filled["B"].air_caught_by, filled["B"].caught_air_m3) == ("low A-B", pytest.approx(0.8))
    assert (filled["C"].filled_m3, filled["C"].reached, filled["C"].dry) == (0.0, False, False)
    assert tank.caught_air_m3 == pytest.approx(0.8)
    assert tank.capacity_m3 == pytest.approx(1.0)


def test_a_one_way_flap_that_air_cannot_pass_back_keeps_the_fuel_behind_it(build: Any) -> None:
    cells = build.row_of_boxes(2)

    def openings(**flap: Any) -> tuple[Any, ...]:
        return (
            build.slot("outlet", "A outlet", 0.0, 0.0),
            build.slot("flap", "A B", 0.0, 0.9, at=(0.5, 1.0), one_way="A", **flap),
            build.slot("filler", "B filler", 0.9, 0.9),
            build.slot("vent", "A vent", 1.0, 1.0),
        )

    shut = build.report(cells, openings()).tanks[0]
    assert (build.kept(shut, "B").trapped_by, build.kept(shut, "B").trapped_m3) == ("no air", 1.0)
    breathing = build.report(cells, openings(air_both=True)).tanks[0]
    assert build.kept(breathing, "B").trapped_m3 == 0.0
    stiff = build.report(cells, openings(air_both=True, opens_at_m=0.03)).tanks[0]
    assert build.kept(stiff, "B").trapped_m3 == pytest.approx(0.03)
    assert build.kept(stiff, "B").trapped_by == "flap"


@pytest.mark.parametrize(("join", "left"), [(Join.TEE, 0.30 + 0.15), (Join.SELECT, 0.05 + 0.15)])
def test_two_floor_outlets_on_a_tee_stop_at_the_higher_and_on_a_selector_each_at_its_own(
    build: Any, join: Join, left: float
) -> None:
    cells = {
        "A": build.box((0.0, 0.0, 0.0), (1.0, 1.0, 1.0)),
        "B": build.box((0.0, 1.0, 0.15), (1.0, 2.0, 1.0)),
    }
    openings = (
        build.slot("out A", "A outlet", 0.0, 0.05),
        build.slot("out B", "B outlet", 0.15, 0.30, at=(0.0, 1.5)),
        build.slot("join", "A B", 0.3, 1.0, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.95, 0.95),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    feeds = (Feed(name="engine", outlets=("out A", "out B"), join=join),)
    report = build.report(cells, openings, feeds=feeds)
    assert build.at(report.tanks[0]).trapped_m3 == pytest.approx(left, rel=1e-12)
    assert report.feeds[0].usable_m3 == pytest.approx(report.tanks[0].usable_m3, rel=1e-12)


def test_a_bay_that_no_way_joins_is_dry_and_traps_nothing(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("filler", "A filler", 0.9, 0.9),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tank = build.report(cells, openings).tanks[0]
    kept = build.kept(tank, "B")
    assert (kept.trapped_m3, kept.trapped_by, kept.level_m) == (0.0, "dry", None)
    assert [cell.dry for cell in tank.cells] == [False, True]
    assert tank.usable_m3 == pytest.approx(0.9)


def test_two_bays_each_vented_for_itself_at_half_height_hold_half(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("low", "A B", 0.0, 0.2, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 1.0),
        build.slot("vent A", "A vent", 0.5, 0.5),
        build.slot("vent B", "B vent", 0.5, 0.5, at=(0.0, 1.5)),
    )
    tank = build.report(cells, openings, expansion=0.5).tanks[0]
    assert (tank.capacity_m3, tank.capacity_limit, tank.caught_air_m3) == (pytest.approx(1.0), "vent", 0.0)
    assert build.at(tank).trapped_m3 == pytest.approx(0.0, abs=1e-15)


def test_two_bays_each_with_a_vent_pipe_that_ends_at_half_height_are_full_by_half(build: Any) -> None:
    cells = build.row_of_boxes(2)

    def dipped(name: str, cell: str, y: float) -> Any:
        """From half height up to the lid: fuel never spills from it, and shuts it off at half height."""
        return build.pipe(name, f"{cell} vent", ((0.5, y, 0.5), (0.5, y, 1.0)), 0.0)

    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("low", "A B", 0.0, 0.2, at=(0.5, 1.0)),
        # Its rim stands high and its throat reaches down: what it lets in, it does not let out.
        build.pipe("filler", "A filler", ((0.5, 0.2, 0.5), (0.5, 0.2, 0.9)), 0.0),
        dipped("vent A", "A", 0.5),
        dipped("vent B", "B", 1.5),
    )
    tank = build.report(cells, openings, expansion=0.02).tanks[0]
    assert [cell.filled_m3 for cell in tank.cells] == pytest.approx([0.5, 0.5])
    # Caught is what stands between half height and the filler's rim.
    assert [cell.caught_air_m3 for cell in tank.cells] == pytest.approx([0.4, 0.4])
    assert [cell.air_caught_by for cell in tank.cells] in (["vent A", "vent B"], ["filler", "vent B"])
    # Shut-in air is no room to expand into.
    assert tank.expansion_missing_m3 == pytest.approx(0.04)
    assert (tank.capacity_m3, tank.capacity_limit) == (pytest.approx(0.96), "expansion")
    assert build.at(tank).trapped_m3 == pytest.approx(0.0, abs=1e-15)
