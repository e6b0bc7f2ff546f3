"""A small lofted wing written as a plan folder, and what the reader of plans finds in it."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from ledger.exchange.plan_folder import read_plan_files
from ledger.exchange.problems import Problems
from ledger.exchange.write_plan import plan_files
from ledger.model.plan import Face, Form, Plan, Side


def test_every_part_is_there_on_both_sides_in_its_assembly(wing: Any, plan: Plan) -> None:
    right = [
        (part.name, part.assembly, part.part_class.value) for part in plan.parts if part.side is Side.RIGHT
    ]
    assert right == [
        ("RIB.F1-R", "WING/RIGHT/ribs", "rib"),
        ("RIB.F2-R", "WING/RIGHT/ribs", "rib"),
        ("SKIN.UPR-R", "WING/RIGHT/skins", "skin"),
        ("FIN.UPR-R", "WING/RIGHT/finish", "finish"),
        ("JNT.RIB-R", "WING/RIGHT/joints", "joint"),
        ("CAP.UPR-R", "WING/RIGHT/caps", "cap"),
        ("CLO.TIP-R", "WING/RIGHT/closeouts", "closeout"),
        ("FIT.PIN-R", "WING/RIGHT/fittings", "fitting"),
    ]
    left = [(part.name, part.mirror_of) for part in plan.parts if part.side is Side.LEFT]
    assert left == [(name.replace("-R", "-L"), name) for name, _, _ in right]
    assert wing.named(plan, "RIB.F1-L")[0].title == 'rib, "at" 0.5'


def test_every_shape_of_the_left_wing_is_the_right_one_mirrored(wing: Any, plan: Plan) -> None:
    for part in plan.parts:
        if part.side is Side.LEFT:
            assert part.mirror_of is not None
            shape, other = wing.named(plan, part.name)[1], wing.named(plan, part.mirror_of)[1]
            x, y, z = other.centroid_m
            assert shape.measure == other.measure
            assert shape.centroid_m == (x, -y, z)


def test_a_panel_has_its_outline_less_the_hole_where_it_stands(wing: Any, plan: Plan) -> None:
    part, shape = wing.named(plan, "RIB.F2-R")
    bored = math.pi * 0.008**2
    assert shape.measure == pytest.approx(0.1 - bored, rel=1e-13)
    x = (0.25 * 0.1 - wing.HOLE.x_m * bored) / (0.1 - bored)
    y = (0.10 * 0.1 - wing.HOLE.y_m * bored) / (0.1 - bored)
    assert shape.centroid_m == pytest.approx(
        (1.0 + x * wing.ACROSS[0], 1.0 + x * wing.ACROSS[1], -0.01 + y), abs=1e-11
    )
    assert (part.form, part.made_of, part.geometry) == (Form.PANEL, "PANEL", "geometry/RIB.F2.dxf#CUT")
    assert part.placement is not None
    assert part.placement.across == pytest.approx(wing.ACROSS, abs=1e-12)


def test_a_skin_lies_behind_its_outer_face_and_its_finish_on_it(wing: Any, plan: Plan) -> None:
    skin, shape = wing.named(plan, "SKIN.UPR-R")
    finish, painted = wing.named(plan, "FIN.UPR-R")
    assert shape.measure == painted.measure == pytest.approx(0.75, rel=1e-14)
    assert (skin.geometry, skin.face, skin.made_of) == ("geometry/SKIN.UPR.obj", Face.MINUS, "SKIN")
    assert (finish.geometry, finish.made_of, finish.title) == (
        "geometry/SKIN.UPR.obj",
        "PAINT",
        "PAINT on upper skin",
    )


def test_the_middle_of_a_skin_of_known_thickness_is_half_of_it_inward(wing: Any) -> None:
    materials = wing.MATERIALS + b"core,core,,75,3,\n"
    laminates = wing.LAMINATES.replace(b"SKIN,1500,,,,", b"SKIN,,1,core,,")
    files = plan_files(
        wing.HEAD, wing.LAYOUT, wing.LOFTED, materials=materials, laminates=laminates, problems=Problems()
    )
    found = read_plan_files(files)
    assert found.findings == ()
    assert found.plan is not None
    for name, sign in (("SKIN.UPR-R", 1.0), ("SKIN.UPR-L", -1.0)):
        assert wing.named(found.plan, name)[1].centroid_m == pytest.approx(
            (1.25, sign * 1.25, 0.2 - 0.0015), abs=1e-14
        )


def test_a_bond_is_a_run_of_its_bead(wing: Any, plan: Plan) -> None:
    part, shape = wing.named(plan, "JNT.RIB-R")
    assert (part.form, part.made_of) == (Form.RUN, "bond base, 6.6 x 0.5 gap, fillet 4")
    assert shape.measure == pytest.approx(1.0, rel=1e-14)
    material = plan.material(str(part.made_of))
    assert material is not None
    assert material.linear_mass_kg_m == pytest.approx(1150.0 * wing.SECTION_M2, rel=5e-6)


def test_a_strip_is_a_run_of_its_material(wing: Any, plan: Plan) -> None:
    part, shape = wing.named(plan, "CAP.UPR-R")
    assert (part.form, part.made_of) == (Form.RUN, "strip")
    assert shape.measure == pytest.approx(1.5, rel=1e-14)


def test_a_solid_has_its_volume_and_an_item_its_place_mass_and_count(wing: Any, plan: Plan) -> None:
    solid, shape = wing.named(plan, "CLO.TIP-R")
    assert (solid.form, solid.made_of) == (Form.SOLID, "foam")
    assert shape.measure == pytest.approx(0.5 * 0.06 * 0.2, rel=1e-13)
    item, place = wing.named(plan, "FIT.PIN-R")
    assert (item.form, item.planned_mass_kg, item.quantity) == (Form.ITEM, 0.148, 3)
    assert place.centroid_m == (1.1, 0.55, 0.0)


def test_planned_masses_go_to_both_sides(plan: Plan) -> None:
    planned = {part.name: part.planned_mass_kg for part in plan.parts if part.form is not Form.ITEM}
    assert {name: mass for name, mass in planned.items() if mass is not None} == {
        "RIB.F2-L": 0.0275,
        "RIB.F2-R": 0.0275,
        "SKIN.UPR-L": 1.1234,
        "SKIN.UPR-R": 1.1234,
    }


def test_a_wing_that_is_not_mirrored_has_a_right_side_only(wing: Any) -> None:
    plan = wing.plan(layout=replace(wing.LAYOUT, mirrored=False))
    assert {part.side for part in plan.parts} == {Side.RIGHT}
    assert [tank.name for tank in plan.tanks.tanks] == ["right"]
    assert plan.tanks.feeds[0].outlets == ("outlet right",)


def test_the_same_wing_gives_the_same_bytes(wing: Any) -> None:
    assert wing.files() == wing.files()


def test_parts_whose_names_make_one_file_have_a_file_each(wing: Any) -> None:
    panels = (wing.rib("RIB:1", 0.5), wing.rib("rib*1", 1.0), wing.rib("R1", 1.5))
    plan = wing.plan(replace(wing.LOFTED, panels=panels), replace(wing.LAYOUT, mirrored=False, planned_kg=()))
    paths = [part.geometry for part in plan.parts[:3]]
    assert paths == ["geometry/RIB_1.dxf#CUT", "geometry/rib_1_2.dxf#CUT", "geometry/R1.dxf#CUT"]
    assert {cell.mesh for cell in plan.tanks.cells} == {"geometry/R1.obj", "geometry/R2.obj"}


def test_a_bond_whose_paste_has_no_density_stops(wing: Any) -> None:
    problems = Problems()
    materials = wing.MATERIALS.replace(b"1150", b"")
    plan_files(
        wing.HEAD, wing.LAYOUT, wing.LOFTED, materials=materials, laminates=wing.LAMINATES, problems=problems
    )
    assert [finding.code for finding in problems.findings()] == ["paste-without-density"]


def test_a_planned_mass_of_a_part_that_was_not_lofted_stops(wing: Any) -> None:
    problems = Problems()
    layout = replace(wing.LAYOUT, planned_kg=(("RIB.F9", 0.1), ("FIT.PIN", 0.2)))
    files = plan_files(
        wing.HEAD, layout, wing.LOFTED, materials=wing.MATERIALS, laminates=wing.LAMINATES, problems=problems
    )
    assert [str(finding) for finding in problems.findings()] == [
        "wing.toml:RIB.F9:planned  a mass is planned for RIB.F9, and the lofted wing has no such part;"
        " correct its number, or leave it out"
    ]
    found = read_plan_files(files).plan
    assert found is not None
    assert wing.named(found, "FIT.PIN-R")[0].planned_mass_kg == 0.2


def test_progress_is_told_each_drawing_once(wing: Any) -> None:
    told: list[tuple[str, int, int]] = []
    plan_files(
        wing.HEAD,
        wing.LAYOUT,
        wing.LOFTED,
        materials=wing.MATERIALS,
        laminates=wing.LAMINATES,
        problems=Problems(),
        progress=lambda what, done, of: told.append((what, done, of)),
    )
    assert told == [("drawings", done, 10) for done in range(10)]
