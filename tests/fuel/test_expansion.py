"""Room for the fuel to expand into: what is vented, what is wanted, and what is cut from capacity."""

from __future__ import annotations

from typing import Any

import pytest


def test_a_bay_that_fuel_does_not_reach_wants_no_room_to_expand(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("too high", "A B", 0.95, 1.0, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.9, 1.0),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    tank = build.report(cells, openings, expansion=0.12).tanks[0]
    assert [cell.reached for cell in tank.cells] == [True, False]
    # Of A alone 0.12 is wanted, and 0.10 is left above the fuel.
    assert tank.expansion_missing_m3 == pytest.approx(0.02)
    assert tank.capacity_m3 == pytest.approx(0.88)


def test_an_open_filler_is_no_vent_to_expand_into(build: Any) -> None:
    cells = build.row_of_boxes(1)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("filler", "A filler", 0.9, 1.0),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    assert build.report(cells, openings, expansion=0.05).tanks[0].expansion_missing_m3 == 0.0
    unvented = build.report(cells, openings[:2], expansion=0.05).tanks[0]
    assert unvented.expansion_missing_m3 == pytest.approx(0.05)
    assert (unvented.capacity_m3, unvented.capacity_limit) == (pytest.approx(0.85), "expansion")


def test_too_little_vented_space_is_cut_from_capacity(build: Any) -> None:
    cells = build.row_of_boxes(2)
    openings = (
        build.slot("outlet", "A outlet", 0.0, 0.0),
        build.slot("low", "A B", 0.0, 0.2, at=(0.5, 1.0)),
        build.slot("high", "A B", 0.85, 0.95, at=(0.5, 1.0)),
        build.slot("filler", "A filler", 0.96, 1.0),
        build.slot("vent", "A vent", 1.0, 1.0),
    )
    # The air of B leaves under 0.95: B's space is then shut off, and only A's 0.04 is vented.
    tank = build.report(cells, openings, expansion=0.03).tanks[0]
    full = 0.96 + 0.95
    assert tank.expansion_missing_m3 == pytest.approx(0.03 * 2.0 - 0.04, rel=1e-9)
    assert tank.capacity_m3 == pytest.approx(full - 0.02, rel=1e-12)
    assert tank.capacity_limit == "expansion"
    assert build.report(cells, openings, expansion=0.02).tanks[0].capacity_limit == "filler"
