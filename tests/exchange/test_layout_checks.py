"""What the tables of a layout must agree on: skins along the span, rows, tanks, holes, joints, materials."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from ledger.errors import Severity
from ledger.exchange.layout_toml import ReadLayout
from ledger.loft.layout import Layout

SMALL_WING = Path(__file__).resolve().parents[2] / "sample_builds" / "small_wing"
LAYOUT = (SMALL_WING / "layout.toml").read_text(encoding="utf-8")
MATERIALS = (SMALL_WING / "materials.csv").read_text(encoding="utf-8")

Read = Callable[..., ReadLayout]


def whole(read: ReadLayout) -> Layout:
    assert [str(one) for one in read.findings] == []
    assert read.layout is not None
    return read.layout


def told(read: ReadLayout) -> list[tuple[str, int | None]]:
    assert read.layout is None
    return [(one.code, one.where.row) for one in read.findings]


def test_skins_may_change_along_the_span(read: Read) -> None:
    upper = LAYOUT[LAYOUT.index('[[skin]]\npart = "SKIN.UPR"') : LAYOUT.index('[[skin]]\npart = "SKIN.LWR"')]
    inboard = upper.replace('finish = "PAINT"\nfinish_part = "FIN.UPR"\n', "between = [300, 900]\n")
    outboard = inboard.replace("SKIN.UPR", "SKIN.OUT").replace("[300, 900]", "[900, 1500]")
    assert len(whole(read((upper, inboard + outboard))).skins) == 4
    late = outboard.replace("[900", "[950")
    found = read((upper, inboard + late))
    assert told(found) == [("skin-missing", 51)]
    assert "between BL 900 and 950 mm" in found.findings[0].what
    early = outboard.replace("[900", "[850")
    found = read((upper, inboard + early))
    assert [one.code for one in found.findings] == ["skins-overlap"]
    assert "SKIN.OUT" in found.findings[0].what


def test_a_rear_web_that_lies_ahead_of_the_front_one_is_told(read: Read) -> None:
    ahead = (
        '[[web]]\nname = "R"\nfrom = [2200, 300]\nto = [2200, 1500]\nsheet = "PANEL"\n\n[[row]]\nname = "T"'
    )
    found = read(('[[row]]\nname = "T"', ahead), ('webs = ["S", "tail"]', 'webs = ["S", "R"]'))
    assert [one.code for one in found.findings] == ["row-out-of-order"]


SECOND_TANK = '[[tank]]\nname = "aft"\nrows = ["T"]\nribs = ["2", "3"]\n\n[[hole]]\nname = "drain"'
AFT_PORTS = "".join(
    f'[[{word}]]\nname = "aft {word}"\nbay = "T2"\ndiameter = 8\nheight = 0.5\nchord = 0.2\nspan = 0.5\n\n'
    for word in ("outlet", "filler", "vent")
)


def test_two_tanks_are_two_networks_that_no_hole_may_join(read: Read) -> None:
    second = ('[[hole]]\nname = "drain"', SECOND_TANK), ("[[feed]]", AFT_PORTS + "[[feed]]")
    dry = ('walls = ["T2", "T3"]', 'walls = ["T1"]'), ('leaving_out = ["T2"]\n', "")
    assert [tank.name for tank in whole(read(*second, *dry)).tanks] == ["main", "aft"]
    joined = read(*second, *dry, ('walls = ["L2"]', 'walls = ["S2"]'))
    assert [one.code for one in joined.findings] == ["hole-joins-tanks"]
    across = read(*second, *dry, ('name = "drain"\nwalls = "ribs"', 'name = "drain"\nwalls = "webs"'))
    assert [one.code for one in across.findings] == ["hole-in-no-wall"]
    opened = read(*second)
    assert [one.code for one in opened.findings] == ["hole-opens-tank"]


def test_tanks_of_the_same_bays_or_of_rows_apart_are_told(read: Read) -> None:
    twice = read(('[[hole]]\nname = "drain"', SECOND_TANK.replace('"T"', '"L"')))
    assert [one.code for one in twice.findings] == ["bay-twice"]
    unnamed = LAYOUT.replace('name = "main"\n', "")
    both = read(('[[hole]]\nname = "drain"', SECOND_TANK.replace('name = "aft"\n', "")), text=unnamed)
    assert "name-twice" in [one.code for one in both.findings]


def test_all_webs_of_one_row_part_no_tank_and_that_is_looked_at(read: Read) -> None:
    found = read(('name = "drain"\nwalls = "ribs"', 'name = "drain"\nwalls = "webs"'))
    assert found.layout is not None
    assert [(one.code, one.severity, one.where.row) for one in found.findings] == [
        ("hole-in-no-wall", Severity.LOOK, 149)
    ]


def test_two_holes_of_one_name_in_one_wall_are_told(read: Read) -> None:
    assert told(read(('name = "air"', 'name = "Drain"'))) == [("hole-twice", 156)]


def test_a_joint_without_gap_and_fillet_holds_no_paste(read: Read) -> None:
    assert told(read(("gap = 0.5", "gap = 0"), ("fillet = 4\nfillet_shape", "fillet_shape"))) == [
        ("joint-without-paste", 122)
    ]


def test_a_material_without_a_density_makes_no_part(read: Read) -> None:
    materials = MATERIALS.replace("block foam,solid,,80", "block foam,solid,900,")
    assert told(read(materials__csv=materials)) == [
        ("material-without-density", 204),
        ("material-without-density", 213),
    ]


def test_a_cap_let_into_the_skin_is_weighed_by_its_length(read: Read) -> None:
    let_in = ("thickness = 4\n", "thickness = 4\nlet_in = true\n")
    found = read(let_in)
    assert told(found) == [("material-without-linear-mass", 118)]
    rows = [line.split(",") for line in MATERIALS.splitlines()]
    added = ["linear_mass [g/m]", *("150" if row[0] == "strip 5 x 4" else "" for row in rows[1:])]
    with_length = "\n".join(",".join([*row, more]) for row, more in zip(rows, added, strict=True))
    (cap,) = whole(read(let_in, materials__csv=with_length)).caps
    assert cap.let_in is True


def test_a_wing_in_the_wrong_unit_is_one_to_look_at_and_no_more(read: Read) -> None:
    found = read(('length_unit = "mm"', 'length_unit = "m"'), ('"PANEL" = 5.2', '"PANEL" = "5.2 mm"'))
    assert found.layout is not None
    (look,) = found.findings
    assert (look.code, look.severity, look.where.column) == ("unit-doubtful", Severity.LOOK, "length_unit")
    assert look.what == "a half span of 1500 m: check length_unit"
    chord = read(("chord = 800", "chord = 15001"))
    assert [one.what for one in chord.findings] == ["a chord of 15.001 m: check length_unit"]
    assert read(("chord = 800", "chord = 15000")).findings == ()
    assert read(("butt_line = 1500", "butt_line = 40000")).findings == ()
