"""plan.toml and tanks.toml: records, and every name in them looked up."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from ledger.exchange.plan_folder import ReadPlan
from ledger.model.attitude import Seen
from ledger.model.plan import PartClass, Plan
from ledger.model.tanks import Circle, Feed, Join, Outside, Pipe, Polygon

Read = Callable[..., ReadPlan]
Told = Callable[[ReadPlan], list[str]]
Box = Callable[..., str]


def plan_of(read: ReadPlan) -> Plan:
    assert read.plan is not None, [str(finding) for finding in read.findings]
    return read.plan


def test_tanks_cells_and_openings(read_with: Read, tank_files: dict[str, str]) -> None:
    tanks = plan_of(read_with(tank_files)).tanks
    assert [(tank.name, tank.cells, tank.expansion) for tank in tanks.tanks] == [("left", ("L1", "L2"), None)]
    assert [cell.name for cell in tanks.cells] == ["L1", "L2"]
    drain, out, cap, air = tanks.openings
    assert drain.rim == Circle(centre_m=(0.5, 1.0, 0.05), diameter_m=0.02, normal=(0.0, 1.0, 0.0))
    assert (drain.cells, drain.outside, drain.depth_m, drain.dam_m) == (("L1", "L2"), None, None, 0.0)
    assert (out.cells, out.outside) == (("L1",), Outside.OUTLET)
    assert (cap.outside, air.outside) == (Outside.FILLER, Outside.VENT)
    assert air.rim == Pipe(points_m=((0.5, 1.6, 0.19), (0.5, 1.6, 0.3)), bore_m=0.006)


def test_lengths_are_in_the_files_unit_or_in_their_own(
    read_with: Read, tank_files: dict[str, str], box: Box
) -> None:
    text = tank_files["tanks.toml"].replace('length_unit = "m"', 'length_unit = "mm"')
    text = text.replace(
        'mesh = "geometry/near.obj"', 'mesh = "geometry/near.obj"\nmesh_unit = "m"\nsealant = 0.4'
    )
    text = text.replace(
        "centre = [0.5, 1.0, 0.05]\ndiameter = 0.02", 'centre = ["0.5 m", 1000, 50.0]\ndiameter = "2 cm"'
    )
    text += 'depth = "0.25 in"\n'
    files = {**tank_files, "tanks.toml": text, "geometry/far.obj": box((0, 1000, 0), (1000, 2000, 200))}
    tanks = plan_of(read_with(files)).tanks
    assert tanks.openings[0].rim == Circle(centre_m=(0.5, 1.0, 0.05), diameter_m=0.02, normal=(0.0, 1.0, 0.0))
    assert tanks.openings[3].depth_m == 0.00635
    assert tanks.cells[0].sealant_thickness_m == 0.0004
    assert (tanks.cells[0].mesh_unit, tanks.cells[1].mesh_unit) == ("m", "mm")


def test_every_key_of_cells_and_openings(read_with: Read, tank_files: dict[str, str]) -> None:
    text = tank_files["tanks.toml"].replace(
        'cells = ["L1", "L2"]', 'cells = ["L1", "L2"]\nexpansion_percent = 2.5'
    )
    text = text.replace(
        'mesh = "geometry/near.obj"',
        'mesh = "geometry/near.obj"\ndisplaced = "1.2 L"\nsealant = "0.4 mm"\nsealant_fillet = "6 mm"\n'
        'sealant_material = "bead"',
    )
    text = text.replace(
        "diameter = 0.02\n",
        'diameter = 0.02\ndepth = 0.008\ndam = 0.001\none_way = "L1"\nair = "both"\nopens_at = 0.002\n',
    )
    text = text.replace("diameter = 0.04\n", "diameter = 0.04\nfill_here = true\n")
    text += '[[feed]]\nname = "engine"\noutlets = ["out"]\njoin = "select"\n'
    tanks = plan_of(read_with({**tank_files, "tanks.toml": text})).tanks
    cell, opening = tanks.cells[0], tanks.openings[0]
    assert tanks.tanks[0].expansion == 0.025
    assert (cell.displaced_m3, cell.sealant_thickness_m) == (0.0012, 0.0004)
    assert (cell.sealant_fillet_m, cell.sealant_material) == (0.006, "bead")
    assert (opening.depth_m, opening.dam_m, opening.opens_at_m) == (0.008, 0.001, 0.002)
    assert (opening.one_way, opening.air_both) == ("L1", True)
    assert tanks.openings[2].fill_here
    assert tanks.feeds == (Feed(name="engine", outlets=("out",), join=Join.SELECT),)


def test_a_polygon_and_a_crossfeed(read_with: Read, tank_files: dict[str, str]) -> None:
    text = tank_files["tanks.toml"].replace(
        'cells = ["L1", "L2"]', 'cells = ["L1"]\n[[tank]]\nname = "right"\ncells = ["L2"]'
    )
    circle = 'shape = "circle"\ncentre = [0.5, 1.0, 0.05]\ndiameter = 0.02\nnormal = [0, 1, 0]\n'
    polygon = 'crossfeed = true\nshape = "polygon"\npoints = [[0.4, 1, 0], [0.6, 1, 0], [0.5, 1, 0.1]]\n'
    tanks = plan_of(read_with({**tank_files, "tanks.toml": text.replace(circle, polygon)})).tanks
    assert tanks.openings[0].crossfeed
    assert tanks.openings[0].rim == Polygon(points_m=((0.4, 1.0, 0.0), (0.6, 1.0, 0.0), (0.5, 1.0, 0.1)))


@pytest.mark.parametrize(
    ("old", "new", "lines"),
    [
        ('between = ["L1", "L2"]', 'between = ["L1", "L1"]', ["between  it joins 'L1' with itself"]),
        (
            'between = ["L1", "L2"]',
            'between = ["vent", "drain"]',
            ["between  vent or drain are both outside"],
        ),
        ('between = ["L1", "L2"]', 'between = ["L1"]', ["between  ['L1'] is not two names"]),
        ('between = ["L1", "L2"]\n', "", ["between  between is missing"]),
        ('between = ["L1", "L2"]', 'between = ["L1", "outside"]', ["between  there is no cell 'outside'"]),
        ('shape = "circle"\n', "", ["shape  shape is missing"]),
        ('shape = "circle"', 'shape = "square"', ["shape  'square' is not a shape"]),
        ("normal = [0, 1, 0]", "normal = [0, 0, 0]", ["normal  [0, 0, 0] has no direction"]),
        ("normal = [0, 1, 0]", 'normal = "up"', ["normal  up is not a direction"]),
        ("centre = [0.5, 1.0, 0.05]", "centre = [0.5, 1.0]", ["centre  [0.5, 1.0] is not a point"]),
        ("centre = [0.5, 1.0, 0.05]", "centre = [0.5, inf, 0]", ["centre  inf is not a finite number"]),
        ("diameter = 0.02", "diameter = 0", ["diameter  0 is zero"]),
        ("diameter = 0.02", "diameter = -2", ["diameter  -2 is below zero"]),
        ("diameter = 0.02", "diameter = true", ["diameter  true is not a number"]),
        ("diameter = 0.02", 'diameter = "2 kg"', ["diameter  'kg' is not a unit of length"]),
        ("diameter = 0.02", "diameter = 0.02\nbore = 2", ["bore  'bore' is not known here"]),
        ("diameter = 0.02", "diameter = 0.02\ndepth = -1", ["depth  -1 is below zero"]),
        ("diameter = 0.02", 'diameter = 0.02\nair = "both"', ["air  air is given without one_way"]),
        ("diameter = 0.02", 'diameter = 0.02\none_way = "L3"', ["one_way  the opening does not join 'L3'"]),
        ("diameter = 0.02", "diameter = 0.02\ncrossfeed = true", ["crossfeed  it joins no two tanks"]),
        ("diameter = 0.01", "diameter = 0.01\nfill_here = true", ["fill_here  outlet is no filler"]),
        ("bore = 0.006", "bore = 0", ["bore  0 is zero"]),
        (
            "points = [[0.5, 1.6, 0.19], [0.5, 1.6, 0.3]]",
            "points = [[0, 0, 0]]",
            ["points  points are fewer than 2"],
        ),
        (
            "points = [[0.5, 1.6, 0.19], [0.5, 1.6, 0.3]]",
            "points = [[0, 0, 0], [0, 0, 0]]",
            ["points  a point is there twice in a row"],
        ),
        (
            'shape = "pipe"\npoints = [[0.5, 1.6, 0.19], [0.5, 1.6, 0.3]]\nbore = 0.006',
            'shape = "polygon"\npoints = [[0, 0, 0], [1, 0, 0], [1, 1, 0], [0, 1, 0.1]]',
            ["points  a corner lies 24.9 mm out of the plane of the others"],
        ),
        (
            'shape = "pipe"\npoints = [[0.5, 1.6, 0.19], [0.5, 1.6, 0.3]]\nbore = 0.006',
            'shape = "polygon"\npoints = [[0, 0, 0], [1, 0, 0], [2, 0, 0]]',
            ["points  the points enclose no area"],
        ),
        ('name = "air"', 'name = "Drain"', ["name  opening 'Drain' is there twice"]),
        ('cells = ["L1", "L2"]', 'cells = ["L1", "L2", "L9"]', ["cells  there is no cell 'L9'"]),
        ('cells = ["L1", "L2"]', 'cells = ["L1", "L2", "L1"]', ["cells  cell 'L1' is twice here"]),
        (
            'cells = ["L1", "L2"]',
            "cells = []",
            [
                "cells  [] is not a list of names",
                "name  cell 'L1' is in no tank",
                "name  cell 'L2' is in no tank",
            ],
        ),
        (
            'cells = ["L1", "L2"]',
            'cells = ["L1", "L2"]\nexpansion_percent = 100',
            ["expansion_percent  100 is not a share of the tank"],
        ),
        (
            'cells = ["L1", "L2"]',
            'cells = ["L1"]\n[[tank]]\nname = "right"\ncells = ["L2"]',
            ["between  it joins tanks 'left' and 'right'"],
        ),
        (
            'mesh = "geometry/near.obj"',
            'mesh = "geometry/none.obj"',
            ["mesh  cell 'L1': there is no file 'geometry/none.obj' in the plan"],
        ),
        (
            'mesh = "geometry/near.obj"',
            'mesh = "geometry/near.obj"\ndisplaced = "1 L"\ndisplaced_mesh = "geometry/far.obj"',
            ["displaced_mesh  displaced is given as a volume and as a mesh"],
        ),
        (
            'mesh = "geometry/near.obj"',
            'mesh = "geometry/near.obj"\ndisplaced_mesh = "geometry/far.obj"',
            ["displaced_mesh  200 L is displaced in cell 'L1', which holds 200 L"],
        ),
        (
            'mesh = "geometry/near.obj"',
            'mesh = "geometry/near.obj"\nsealant_material = "tar"',
            ["sealant_material  there is no material 'tar' in materials.csv"],
        ),
        ('mesh = "geometry/near.obj"\n', "", ["mesh  mesh is missing"]),
    ],
)
def test_tanks_that_cannot_be(
    read_with: Read, told: Told, tank_files: dict[str, str], *, old: str, new: str, lines: list[str]
) -> None:
    text = tank_files["tanks.toml"]
    assert old in text
    read = read_with({**tank_files, "tanks.toml": text.replace(old, new, 1)})
    assert read.plan is None
    found = [line.split(":", 2)[2].split(";")[0] for line in told(read)]
    assert found == lines


def test_a_feed_names_outlets_only(read_with: Read, told: Told, tank_files: dict[str, str]) -> None:
    for feed, line in (
        ('outlets = ["out", "out"]', "outlets  an outlet is named twice"),
        ('outlets = ["cap"]', "outlets  there is no outlet 'cap'"),
        ('outlets = ["out"]\njoin = "both"', "join  'both' is not a join"),
    ):
        text = tank_files["tanks.toml"] + f'[[feed]]\nname = "engine"\n{feed}\n'
        found = told(read_with({**tank_files, "tanks.toml": text}, name=feed[12:16].strip('"')))
        assert [one.split(":", 2)[2].split(";")[0] for one in found] == [line]


PLAN = """format = "plan-1"
name = "r2"
title = "Second web moved"
display = "us"
[fuel]
grade = "jet"
density_15C = "6.7 lb/US gal"
feed_flow = "40 L/h"
[[attitude]]
name = "ground"
pitch_deg = 3
fill = true
flight = false
[[attitude]]
name = "run"
ax_g = 0.3
[[attitude]]
name = "turn"
seen = "apparent"
roll_deg = 2.5
[tolerance]
rib = "5 %"
[growth]
skin = "3 %"
"""


def test_the_head_of_a_plan(read_with: Read) -> None:
    plan = plan_of(read_with({"plan.toml": PLAN}))
    assert (plan.name, plan.title, plan.display) == ("r2", "Second web moved", "us")
    assert plan.fuel is not None
    assert plan.fuel.grade == "jet"
    assert plan.fuel.density_15c_kg_m3 == pytest.approx(6.7 * 119.82643, rel=1e-7)
    assert plan.fuel.feed_flow_m3_s == pytest.approx(0.04 / 3600)
    ground, run, turn = plan.attitudes
    assert (ground.pitch_deg, ground.fill, ground.flight) == (3.0, True, False)
    assert (run.ax_g, run.flight, run.seen) == (0.3, True, Seen.TRUE)
    assert (turn.roll_deg, turn.seen) == (2.5, Seen.APPARENT)
    assert plan.tolerances == ((PartClass.RIB, 0.05),)
    assert plan.growths == ((PartClass.SKIN, 0.03),)


@pytest.mark.parametrize(
    ("old", "new", "line"),
    [
        ('format = "plan-1"\n', "", 'plan.toml:format  format is missing; write format = "plan-1"'),
        (
            'display = "us"',
            'display = "imperial"',
            "plan.toml:4:display  'imperial' is not a display; write one of metric, us",
        ),
        ('grade = "jet"', 'grade = "avgass"', "plan.toml:6:grade  'avgass' is not a grade; write avgas"),
        ("[fuel]\n", "[fuels]\n", "plan.toml:5:fuels  'fuels' is not known here; write fuel"),
        (
            'density_15C = "6.7 lb/US gal"',
            'density_15C = "6.7 lb"',
            "plan.toml:7:density_15C  'lb' is not a unit of density; write one "
            "of kg/m3, g/cm3, g/mL, kg/L, lb/ft3, lb/in3, lb/US gal, lb/imp gal",
        ),
        ("ax_g = 0.3", "ax_gee = 0.3", "plan.toml:16:ax_gee  'ax_gee' is not known here; write ax_g"),
        (
            'name = "run"',
            'name = "Ground"',
            "plan.toml:15:name  attitude 'Ground' is there twice; give each its own name",
        ),
        (
            'name = "run"',
            'name = "asked"',
            "plan.toml:15:name  'asked' is kept for an attitude asked by its angles; give it another name",
        ),
        (
            "roll_deg = 2.5",
            "roll_deg = 89",
            "plan.toml:17  attitude 'turn': up does not point to the "
            "upper side of the aircraft; check its angles and accelerations",
        ),
        (
            "roll_deg = 2.5",
            'roll_deg = "2.5 deg"',
            "plan.toml:20:roll_deg  '2.5 deg' is not a number; write for example roll_deg = 2.5",
        ),
        ('rib = "5 %"', "rib = 5", "plan.toml:22:rib  '5' has no unit; write rib = \"5 %\""),
        ('rib = "5 %"', 'ribs = "5 %"', "plan.toml:22:ribs  'ribs' is not known here; write rib"),
        (
            'name = "r2"',
            'name = "r 2/b"',
            "plan.toml:2:name  'r 2/b' is not a plain word; "
            "write letters, digits, dots and dashes, for example r2",
        ),
    ],
)
def test_heads_that_cannot_be(read_with: Read, told: Told, old: str, new: str, line: str) -> None:
    assert old in PLAN
    assert told(read_with({"plan.toml": PLAN.replace(old, new, 1)})) == [line]
