"""A small lofted wing written as a plan folder, and what the reader of plans finds in it."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.errors import Severity, Where
from ledger.exchange.plan_cells import read_cells
from ledger.exchange.plan_folder import ReadPlan, read_plan_files
from ledger.exchange.plan_toml import PlanHead, read_plan_head
from ledger.exchange.problems import Problems
from ledger.exchange.toml_lines import toml_text, toml_value
from ledger.exchange.write_plan import head_file, plan_files
from ledger.loft.layout import Edge, Item, Joint, Layout, LayoutFeed, TankBays, Walls
from ledger.loft.lofted import (
    Account,
    BondRun,
    Lofted,
    LoftedCell,
    LoftedOpening,
    LoftedSkin,
    Mesh,
    Panel,
    RoundHole,
    Solid,
    Strip,
)
from ledger.model.attitude import Attitude, Seen
from ledger.model.plan import Face, Form, FuelGrade, Part, PartClass, Placement, Plan, Shape, Side
from ledger.model.tanks import Circle, Join, Outside, Pipe
from ledger.units import Display

MATERIALS = b"""material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm],linear_mass [g/m]
glass,fabric,200,,,
foam,solid,,80,,
strip,solid,,,,288
bond base,paste,,1150,,
sealant,sealant,,1550,,
"""
LAMINATES = b"""laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]
PANEL,2000,,,,
SKIN,1500,,,,
PAINT,150,,,,
"""
LEAN = math.radians(7.0)
ACROSS = (math.cos(LEAN), math.sin(LEAN), 0.0)
HOLE = RoundHole(x_m=0.2, y_m=0.03, diameter_m=0.016)
TANK = TankBays(
    place=Where(),
    name="",
    rows=("F",),
    ribs=("1", "3"),
    expansion=0.02,
    sealant_thickness_m=0.0004,
    sealant_material="sealant",
)
DRAIN = Circle(centre_m=(1.2, 1.0, 0.03), diameter_m=0.016, normal=(ACROSS[1], ACROSS[0], 0.0))
PIPE = Pipe(points_m=((1.3, 1.9, 0.15), (1.3, 1.95, 0.3)), bore_m=0.006)


def box(low: tuple[float, float, float], high: tuple[float, float, float]) -> Mesh:
    (x0, y0, z0), (x1, y1, z1) = low, high
    corners = [(x, y, z) for z in (z0, z1) for x, y in ((x0, y0), (x1, y0), (x1, y1), (x0, y1))]
    quads = ((0, 3, 2, 1), (4, 5, 6, 7), (0, 1, 5, 4), (1, 2, 6, 5), (2, 3, 7, 6), (3, 0, 4, 7))
    faces = [triangle for a, b, c, d in quads for triangle in ((a, b, c), (a, c, d))]
    return Mesh(vertices_m=np.array(corners), faces=np.array(faces))


def rib(part: str, butt_line_m: float) -> Panel:
    """A rib of 0.5 x 0.2 m turned 7 degrees in plan, with one hole."""
    return Panel(
        part=part,
        title=f'rib, "at" {butt_line_m}',
        part_class=PartClass.RIB,
        laminate="PANEL",
        thickness_m=0.0066,
        placement=Placement(origin_m=(1.0, butt_line_m, -0.01), across=ACROSS, up_axis=(0.0, 0.0, 1.0)),
        outline_m=np.array([(0.0, 0.0), (0.5, 0.0), (0.5, 0.2), (0.0, 0.2)]),
        holes=(HOLE,),
        edges=(),
    )


SKIN = LoftedSkin(
    part="SKIN.UPR",
    title="upper skin",
    laminate="SKIN",
    surface=Mesh(
        vertices_m=np.array([(1.0, 0.5, 0.2), (1.5, 0.5, 0.2), (1.5, 2.0, 0.2), (1.0, 2.0, 0.2)]),
        faces=np.array([(0, 1, 2), (0, 2, 3)]),
    ),
    finish="PAINT",
    finish_part="FIN.UPR",
)
ITEM = Item(
    place=Where(),
    part="FIT.PIN",
    title="pin",
    part_class=PartClass.FITTING,
    mass_kg=0.148,
    at_m=(1.1, 0.55, 1e-20),
    quantity=3,
)
JOINT = Joint(
    place=Where(),
    part="JNT.RIB",
    title="ribs",
    walls=Walls.RIBS,
    edges=(Edge.UPPER,),
    paste="bond base",
    fillet_m=0.004,
)
SECTION = 0.0066 * 0.0005 + 2.0 * (1.0 - math.pi / 4.0) * 0.004**2


def opening(name: str, cells: tuple[int, ...], outside: Outside | None, rim: Any) -> LoftedOpening:
    return LoftedOpening(
        name=name, cells=cells, outside=outside, rim=rim, depth_m=0.0066 if not outside else None
    )


OPENINGS = (
    opening("drain", (1, 2), None, DRAIN),
    opening(
        "outlet", (1,), Outside.OUTLET, Circle(centre_m=(1.1, 0.6, 0.008), diameter_m=0.012, normal=(1, 0, 0))
    ),
    opening(
        "filler", (2,), Outside.FILLER, Circle(centre_m=(1.3, 1.8, 0.19), diameter_m=0.04, normal=(0, 0, 1))
    ),
    opening("vent", (2,), Outside.VENT, PIPE),
)
CELLS = (
    LoftedCell(
        number=1, bay="F1", tank=TANK, mesh=box((1.01, 0.51, 0.0), (1.49, 0.99, 0.19)), displaced_m3=2.5e-5
    ),
    LoftedCell(
        number=2, bay="F2", tank=TANK, mesh=box((1.01, 1.01, 0.0), (1.49, 1.99, 0.19)), displaced_m3=0.0
    ),
)
LOFTED = Lofted(
    panels=(rib("RIB.F1", 0.5), rib("RIB.F2", 1.0)),
    skins=(SKIN,),
    solids=(
        Solid(
            part="CLO.TIP",
            title="tip block",
            part_class=PartClass.CLOSEOUT,
            material="foam",
            mesh=box((1.0, 2.0, 0.0), (1.5, 2.06, 0.2)),
        ),
    ),
    bonds=(
        BondRun(
            part="JNT.RIB",
            title="ribs",
            paste="bond base",
            section_m2=SECTION,
            lines_m=(
                np.array([(1.0, 0.5, 0.0), (1.5, 0.5, 0.0)]),
                np.array([(1.0, 1.0, 0.0), (1.5, 1.0, 0.0)]),
            ),
        ),
    ),
    strips=(
        Strip(
            part="CAP.UPR",
            title="upper cap",
            material="strip",
            line_m=np.array([(1.2, 0.5, 0.19), (1.2, 1.2, 0.19), (1.2, 2.0, 0.19)]),
        ),
    ),
    cells=CELLS,
    openings=OPENINGS,
    items=(ITEM,),
    feeds=(LayoutFeed(place=Where(), name="engine", join=Join.SELECT),),
    account=Account(
        box_m3=1.0,
        skins_m3=0.1,
        panels_m3=0.1,
        paste_m3=0.1,
        solids_m3=0.1,
        cells_m3=0.3,
        dry_m3=0.3,
        apart_m3=0.0,
        shared_m3=0.0,
    ),
)
LAYOUT = Layout(
    place=Where(file="wing.toml"),
    sections=(),
    skins=(),
    joints=(JOINT,),
    planned_kg=(("SKIN.UPR", 1.1234), ("RIB.F2", 0.0275)),
    gap_m=0.0005,
)
HEAD = PlanHead(
    name="r1",
    title="a box of a wing",
    display=Display.METRIC,
    attitudes=(Attitude(name="ground", pitch_deg=3.0, fill=True, flight=False),),
    fuel=FuelGrade(grade="avgas", density_15c_kg_m3=715.0),
    tolerances=((PartClass.RIB, 0.08),),
    growths=((PartClass.RIB, 0.02),),
    says_where_filled=True,
)


def files_of(lofted: Lofted = LOFTED, layout: Layout = LAYOUT, head: PlanHead = HEAD) -> dict[str, bytes]:
    problems = Problems()
    files = plan_files(head, layout, lofted, materials=MATERIALS, laminates=LAMINATES, problems=problems)
    assert problems.findings() == ()
    return dict(files)


def read(lofted: Lofted = LOFTED, layout: Layout = LAYOUT, head: PlanHead = HEAD) -> ReadPlan:
    return read_plan_files(files_of(lofted, layout, head))


def plan_of(lofted: Lofted = LOFTED, layout: Layout = LAYOUT, head: PlanHead = HEAD) -> Plan:
    found = read(lofted, layout, head)
    assert [str(each) for each in found.findings if each.severity is Severity.STOP] == []
    assert found.plan is not None
    return found.plan


def named(plan: Plan, name: str) -> tuple[Part, Shape]:
    return next(
        (part, shape) for part, shape in zip(plan.parts, plan.shapes, strict=True) if part.name == name
    )


@pytest.fixture(scope="module")
def plan() -> Plan:
    return plan_of()


def test_every_part_is_there_on_both_sides_in_its_assembly(plan: Plan) -> None:
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
    assert named(plan, "RIB.F1-L")[0].title == 'rib, "at" 0.5'


def test_every_shape_of_the_left_wing_is_the_right_one_mirrored(plan: Plan) -> None:
    for part in plan.parts:
        if part.side is Side.LEFT:
            assert part.mirror_of is not None
            shape, other = named(plan, part.name)[1], named(plan, part.mirror_of)[1]
            x, y, z = other.centroid_m
            assert shape.measure == other.measure
            assert shape.centroid_m == (x, -y, z)


def test_a_panel_has_its_outline_less_the_hole_where_it_stands(plan: Plan) -> None:
    part, shape = named(plan, "RIB.F2-R")
    bored = math.pi * 0.008**2
    assert shape.measure == pytest.approx(0.1 - bored, rel=1e-13)
    x = (0.25 * 0.1 - HOLE.x_m * bored) / (0.1 - bored)
    y = (0.10 * 0.1 - HOLE.y_m * bored) / (0.1 - bored)
    assert shape.centroid_m == pytest.approx((1.0 + x * ACROSS[0], 1.0 + x * ACROSS[1], -0.01 + y), abs=1e-11)
    assert (part.form, part.made_of, part.geometry) == (Form.PANEL, "PANEL", "geometry/RIB.F2.dxf#CUT")
    assert part.placement is not None
    assert part.placement.across == pytest.approx(ACROSS, abs=1e-12)


def test_a_skin_lies_behind_its_outer_face_and_its_finish_on_it(plan: Plan) -> None:
    skin, shape = named(plan, "SKIN.UPR-R")
    finish, painted = named(plan, "FIN.UPR-R")
    assert shape.measure == painted.measure == pytest.approx(0.75, rel=1e-14)
    assert (skin.geometry, skin.face, skin.made_of) == ("geometry/SKIN.UPR.obj", Face.MINUS, "SKIN")
    assert (finish.geometry, finish.made_of, finish.title) == (
        "geometry/SKIN.UPR.obj",
        "PAINT",
        "PAINT on upper skin",
    )


def test_the_middle_of_a_skin_of_known_thickness_is_half_of_it_inward() -> None:
    materials = MATERIALS + b"core,core,,75,3,\n"
    laminates = LAMINATES.replace(b"SKIN,1500,,,,", b"SKIN,,1,core,,")
    files = plan_files(HEAD, LAYOUT, LOFTED, materials=materials, laminates=laminates, problems=Problems())
    found = read_plan_files(files)
    assert found.findings == ()
    assert found.plan is not None
    for name, sign in (("SKIN.UPR-R", 1.0), ("SKIN.UPR-L", -1.0)):
        assert named(found.plan, name)[1].centroid_m == pytest.approx(
            (1.25, sign * 1.25, 0.2 - 0.0015), abs=1e-14
        )


def test_a_bond_is_a_run_of_its_bead(plan: Plan) -> None:
    part, shape = named(plan, "JNT.RIB-R")
    assert (part.form, part.made_of) == (Form.RUN, "bond base, 6.6 x 0.5 gap, fillet 4")
    assert shape.measure == pytest.approx(1.0, rel=1e-14)
    material = plan.material(str(part.made_of))
    assert material is not None
    assert material.linear_mass_kg_m == pytest.approx(1150.0 * SECTION, rel=5e-6)


def test_a_strip_is_a_run_of_its_material(plan: Plan) -> None:
    part, shape = named(plan, "CAP.UPR-R")
    assert (part.form, part.made_of) == (Form.RUN, "strip")
    assert shape.measure == pytest.approx(1.5, rel=1e-14)


def test_a_solid_has_its_volume_and_an_item_its_place_mass_and_count(plan: Plan) -> None:
    solid, shape = named(plan, "CLO.TIP-R")
    assert (solid.form, solid.made_of) == (Form.SOLID, "foam")
    assert shape.measure == pytest.approx(0.5 * 0.06 * 0.2, rel=1e-13)
    item, place = named(plan, "FIT.PIN-R")
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


def test_cells_are_proved_and_the_left_ones_mirrored() -> None:
    found = read()
    assert found.plan is not None
    cells = read_cells(found.plan, found.files)
    for name, sign in (("R2", 1.0), ("L2", -1.0)):
        assert cells[name].volume_m3 == pytest.approx(0.48 * 0.98 * 0.19, rel=1e-12)
        assert cells[name].centroid_m == pytest.approx((1.25, sign * 1.5, 0.095), rel=1e-12)


def test_openings_have_names_of_their_side_and_are_mirrored(plan: Plan) -> None:
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
        assert hole.rim.normal == pytest.approx((ACROSS[1], sign * ACROSS[0], 0.0), abs=1e-15)
    pipe = openings["vent left"].rim
    assert pipe == Pipe(points_m=((1.3, -1.9, 0.15), (1.3, -1.95, 0.3)), bore_m=0.006)
    assert openings["vent left"].depth_m is None


def test_a_wing_that_is_not_mirrored_has_a_right_side_only() -> None:
    plan = plan_of(layout=replace(LAYOUT, mirrored=False))
    assert {part.side for part in plan.parts} == {Side.RIGHT}
    assert [tank.name for tank in plan.tanks.tanks] == ["right"]
    assert plan.tanks.feeds[0].outlets == ("outlet right",)


def test_tanks_with_names_keep_them() -> None:
    main, tip = replace(TANK, name="main"), replace(TANK, name="tip", expansion=None)
    cells = (replace(CELLS[0], tank=main), replace(CELLS[1], tank=tip))
    plan = plan_of(replace(LOFTED, cells=cells, openings=OPENINGS[1:]))
    assert [(tank.name, tank.cells, tank.expansion) for tank in plan.tanks.tanks] == [
        ("left main", ("L1",), 0.02),
        ("left tip", ("L2",), None),
        ("right main", ("R1",), 0.02),
        ("right tip", ("R2",), None),
    ]


def names_of(*openings: LoftedOpening) -> list[str]:
    plan = plan_of(replace(LOFTED, openings=openings, feeds=()), replace(LAYOUT, mirrored=False))
    return [opening.name for opening in plan.tanks.openings]


def test_two_ports_or_holes_of_one_name_are_told_apart() -> None:
    vents = (replace(OPENINGS[3], cells=(1,)), OPENINGS[3])
    assert names_of(*vents, OPENINGS[0], OPENINGS[0]) == [
        "vent right R1",
        "vent right R2",
        "drain R1-R2",
        "drain R1-R2 2",
    ]


def test_a_feed_takes_the_ports_it_names_of_both_sides() -> None:
    other = replace(OPENINGS[1], name="header outlet", cells=(2,))
    feeds = (
        LayoutFeed(place=Where(), name="engine", join=Join.TEE, outlets=("header outlet",)),
        LayoutFeed(place=Where(), name="all", join=Join.TEE),
    )
    plan = plan_of(replace(LOFTED, openings=(*OPENINGS, other), feeds=feeds))
    assert [feed.outlets for feed in plan.tanks.feeds] == [
        ("header outlet left", "header outlet right"),
        ("outlet left", "header outlet left", "outlet right", "header outlet right"),
    ]


def test_a_wing_without_cells_has_no_tanks() -> None:
    files = files_of(replace(LOFTED, cells=(), openings=(), feeds=()))
    assert "tanks.toml" not in files
    assert not any(path.startswith("geometry/L1") for path in files)


def test_the_same_wing_gives_the_same_bytes() -> None:
    assert files_of() == files_of()


def test_parts_whose_names_make_one_file_have_a_file_each() -> None:
    panels = (rib("RIB:1", 0.5), rib("rib*1", 1.0), rib("R1", 1.5))
    plan = plan_of(replace(LOFTED, panels=panels), replace(LAYOUT, mirrored=False, planned_kg=()))
    paths = [part.geometry for part in plan.parts[:3]]
    assert paths == ["geometry/RIB_1.dxf#CUT", "geometry/rib_1_2.dxf#CUT", "geometry/R1.dxf#CUT"]
    assert {cell.mesh for cell in plan.tanks.cells} == {"geometry/R1.obj", "geometry/R2.obj"}


def test_a_bond_whose_paste_has_no_density_stops() -> None:
    problems = Problems()
    materials = MATERIALS.replace(b"1150", b"")
    plan_files(HEAD, LAYOUT, LOFTED, materials=materials, laminates=LAMINATES, problems=problems)
    assert [finding.code for finding in problems.findings()] == ["paste-without-density"]


def test_a_planned_mass_of_a_part_that_was_not_lofted_stops() -> None:
    problems = Problems()
    layout = replace(LAYOUT, planned_kg=(("RIB.F9", 0.1), ("FIT.PIN", 0.2)))
    files = plan_files(HEAD, layout, LOFTED, materials=MATERIALS, laminates=LAMINATES, problems=problems)
    assert [str(finding) for finding in problems.findings()] == [
        "wing.toml:RIB.F9:planned  a mass is planned for RIB.F9, and the lofted wing has no such part;"
        " correct its number, or leave it out"
    ]
    found = read_plan_files(files).plan
    assert found is not None
    assert named(found, "FIT.PIN-R")[0].planned_mass_kg == 0.2


def test_progress_is_told_each_drawing_once() -> None:
    told: list[tuple[str, int, int]] = []
    plan_files(
        HEAD,
        LAYOUT,
        LOFTED,
        materials=MATERIALS,
        laminates=LAMINATES,
        problems=Problems(),
        progress=lambda what, done, of: told.append((what, done, of)),
    )
    assert told == [("drawings", done, 10) for done in range(10)]


# --- plan.toml -----------------------------------------------------------------------------------

FULL = """format = "plan-1"
name = "r1"
title = "a \\"box\\" of a wing"
display = "us"

[fuel]
grade = "avgas"
density_15C = "6 lb/US gal"
feed_flow = "12.5 US gal/h"

[[attitude]]
name = "ground"
pitch_deg = 3.0
roll_deg = 0.0
fill = true
flight = false

[[attitude]]
name = "slip"
pitch_deg = 1.5
roll_deg = -2.0
ay_g = 0.1
seen = "true"

[[attitude]]
name = "bubble"
pitch_deg = 1.5
roll_deg = -2.0
seen = "apparent"

[tolerance]
rib = "8 %"

[growth]
rib = "2.5 %"
"""


def head_of(content: bytes) -> PlanHead:
    problems = Problems()
    head = read_plan_head(content, problems)
    assert problems.findings() == ()
    assert head is not None
    return head


def test_plan_toml_is_written_as_a_person_writes_it() -> None:
    assert head_file(head_of(FULL.encode())).decode() == FULL.replace(
        'ay_g = 0.1\nseen = "true"', "ay_g = 0.1"
    )


ANGLE = st.floats(-60.0, 60.0, allow_subnormal=False)
NAMES = st.text(st.characters(exclude_categories=["Cs"]), min_size=1, max_size=30).map(str.strip).filter(bool)
ATTITUDES = st.builds(
    Attitude,
    name=NAMES.filter(lambda name: name.casefold() != "asked"),
    pitch_deg=ANGLE,
    roll_deg=ANGLE,
    ax_g=st.floats(-0.2, 0.2, allow_subnormal=False),
    fill=st.just(False),
    flight=st.booleans(),
)
SHARE = st.integers(1, 500).map(lambda tenths: tenths / 1000.0)


@given(
    title=NAMES,
    display=st.sampled_from(Display),
    attitudes=st.lists(ATTITUDES, max_size=4, unique_by=lambda attitude: attitude.name.casefold()),
    density=st.one_of(st.none(), st.integers(6000, 9000).map(lambda tenths: tenths / 10.0)),
    tolerance=SHARE,
)
def test_a_head_of_any_names_and_figures_reads_back(
    title: str, display: Display, attitudes: list[Attitude], density: float | None, tolerance: float
) -> None:
    head = replace(
        HEAD,
        title=title,
        display=display,
        attitudes=tuple(attitudes),
        fuel=FuelGrade(grade="jet", density_15c_kg_m3=density),
        tolerances=((PartClass.WEB, tolerance),),
        says_where_filled=False,
    )
    again = head_of(head_file(head))
    assert again.fuel is not None
    assert again.fuel.density_15c_kg_m3 == (None if density is None else pytest.approx(density, rel=1e-11))
    assert again.tolerances[0][1] == pytest.approx(tolerance, rel=1e-15)
    assert replace(again, fuel=head.fuel, tolerances=head.tolerances) == head


@given(st.text(st.characters(exclude_categories=["Cs"])))
def test_any_text_reads_back_from_toml(text: str) -> None:
    import tomllib

    written = toml_text(text)
    assert tomllib.loads(f"a = {written}") == {"a": text}
    assert len(written.splitlines()) == 1


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_any_number_reads_back_from_toml_as_the_same_float(number: float) -> None:
    import tomllib

    (again,) = tomllib.loads(f"a = {toml_value(number)}").values()
    assert isinstance(again, float)
    assert again == number


def test_an_apparent_attitude_stays_apparent() -> None:
    bubble = Attitude(name="bubble", pitch_deg=2.0, seen=Seen.APPARENT)
    assert head_of(head_file(replace(HEAD, attitudes=(*HEAD.attitudes, bubble)))).attitudes[1] == bubble
