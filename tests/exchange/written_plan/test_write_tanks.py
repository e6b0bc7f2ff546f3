"""The tanks of a small lofted wing written as a plan, and read back: cells, openings, feeds."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ledger.errors import Where
from ledger.exchange.plan_cells import read_cells
from ledger.loft.layout import LayoutFeed
from ledger.loft.lofted import LoftedOpening
from ledger.model.plan import Plan
from ledger.model.tanks import Circle, Join, Pipe


def test_tanks_have_their_cells_sealed_and_with_what_fillets_take_up(plan: Plan) -> None:
    tanks = plan.tanks
    assert [(tank.name, tank.cells, tank.expansion) for tank in tanks.tanks] == [
        ("left", ("L1", "L2"), 0.02),
        ("right", ("R1", "R2"), 0.02),
    ]
    assert [
        (cell.name, cell.displaced_m3, cell.sealant_thickness_m, cell.sealant_material)
        for cell in tanks.cells
    ] == [
        ("L1", 2.5e-5, 0.0004, "sealant"),
        ("L2", None, 0.0004, "sealant"),
        ("R1", 2.5e-5, 0.0004, "sealant"),
        ("R2", None, 0.0004, "sealant"),
    ]
    assert [(feed.name, feed.outlets, feed.join) for feed in tanks.feeds] == [
        ("engine", ("outlet left", "outlet right"), Join.SELECT)
    ]


def test_cells_are_proved_and_the_left_ones_mirrored(wing: Any) -> None:
    found = wing.read()
    assert found.plan is not None
    cells = read_cells(found.plan, found.files)
    for name, sign in (("R2", 1.0), ("L2", -1.0)):
        assert cells[name].volume_m3 == pytest.approx(0.48 * 0.98 * 0.19, rel=1e-12)
        assert cells[name].centroid_m == pytest.approx((1.25, sign * 1.5, 0.095), rel=1e-12)


def test_openings_have_names_of_their_side_and_are_mirrored(wing: Any, plan: Plan) -> None:
    openings = {opening.name: opening for opening in plan.tanks.openings}
    assert list(openings) == [
        *("drain L1-L2", "outlet left", "filler left", "vent left"),
        *("drain R1-R2", "outlet right", "filler right", "vent right"),
    ]
    for side, sign in (("R", 1.0), ("L", -1.0)):
        hole = openings[f"drain {side}1-{side}2"]
        assert hole.cells == (f"{side}1", f"{side}2")
        assert hole.depth_m == 0.0066
        assert isinstance(hole.rim, Circle)
        assert hole.rim.centre_m == (1.2, sign * 1.0, 0.03)
        assert hole.rim.diameter_m == 0.016
        assert hole.rim.normal == pytest.approx((wing.ACROSS[1], sign * wing.ACROSS[0], 0.0), abs=1e-15)
    pipe = openings["vent left"].rim
    assert pipe == Pipe(points_m=((1.3, -1.9, 0.15), (1.3, -1.95, 0.3)), bore_m=0.006)
    assert openings["vent left"].depth_m is None


def test_tanks_with_names_keep_them(wing: Any) -> None:
    main, tip = replace(wing.TANK, name="main"), replace(wing.TANK, name="tip", expansion=None)
    cells = (replace(wing.CELLS[0], tank=main), replace(wing.CELLS[1], tank=tip))
    plan = wing.plan(replace(wing.LOFTED, cells=cells, openings=wing.OPENINGS[1:]))
    assert [(tank.name, tank.cells, tank.expansion) for tank in plan.tanks.tanks] == [
        ("left main", ("L1",), 0.02),
        ("left tip", ("L2",), None),
        ("right main", ("R1",), 0.02),
        ("right tip", ("R2",), None),
    ]


def names_of(wing: Any, *openings: LoftedOpening) -> list[str]:
    plan = wing.plan(replace(wing.LOFTED, openings=openings, feeds=()), replace(wing.LAYOUT, mirrored=False))
    return [opening.name for opening in plan.tanks.openings]


def test_two_ports_or_holes_of_one_name_are_told_apart(wing: Any) -> None:
    vents = (replace(wing.OPENINGS[3], cells=(1,)), wing.OPENINGS[3])
    assert names_of(wing, *vents, wing.OPENINGS[0], wing.OPENINGS[0]) == [
        "vent right R1",
        "vent right R2",
        "drain R1-R2",
        "drain R1-R2 2",
    ]


def test_a_feed_takes_the_ports_it_names_of_both_sides(wing: Any) -> None:
    other = replace(wing.OPENINGS[1], name="header outlet", cells=(2,))
    feeds = (
        LayoutFeed(place=Where(), name="engine", join=Join.TEE, outlets=("header outlet",)),
        LayoutFeed(place=Where(), name="all", join=Join.TEE),
    )
    plan = wing.plan(replace(wing.LOFTED, openings=(*wing.OPENINGS, other), feeds=feeds))
    assert [feed.outlets for feed in plan.tanks.feeds] == [
        ("header outlet left", "header outlet right"),
        ("outlet left", "header outlet left", "outlet right", "header outlet right"),
    ]


def test_a_wing_without_cells_has_no_tanks(wing: Any) -> None:
    files = wing.files(replace(wing.LOFTED, cells=(), openings=(), feeds=()))
    assert "tanks.toml" not in files
    assert not any(path.startswith("geometry/L1") for path in files)
