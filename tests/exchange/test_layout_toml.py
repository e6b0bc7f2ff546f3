"""A layout file read: figures in SI, names looked up, thicknesses told or reckoned, never an exception."""

from __future__ import annotations

import math
import shutil
import tempfile
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.errors import Severity, WrongUse
from ledger.exchange.layout_toml import ReadLayout, read_layout
from ledger.exchange.layout_values import read_some
from ledger.exchange.plan_toml import ATTITUDE_KEYS, FUEL_KEYS, GRADES
from ledger.exchange.problems import Problems
from ledger.exchange.toml_text import read_toml
from ledger.loft.keys import TableKeys
from ledger.loft.layout import Along, Axis, Edge, FilletShape, Height, Layout, Surface, Walls
from ledger.loft.layout_keys import ATTITUDE, FUEL, GROWTH, TABLES, TOLERANCE, TOP
from ledger.loft.section import naca_section
from ledger.model.plan import PartClass
from ledger.model.tanks import Join, Outside

SMALL_WING = Path(__file__).resolve().parents[2] / "sample_builds" / "small_wing"
LAYOUT = (SMALL_WING / "layout.toml").read_text(encoding="utf-8")
TABLES_BESIDE = {
    name: (SMALL_WING / name).read_text(encoding="utf-8") for name in ("materials.csv", "laminates.csv")
}

Read = Callable[..., ReadLayout]


def whole(read: ReadLayout) -> Layout:
    assert [str(one) for one in read.findings] == []
    assert read.layout is not None
    return read.layout


def told(read: ReadLayout) -> list[tuple[str, int | None]]:
    assert read.layout is None
    return [(one.code, one.where.row) for one in read.findings]


def test_sections_and_skins_are_in_metres_and_shares(read: Read) -> None:
    layout = whole(read())
    root, tip = layout.sections
    assert (root.butt_line_m, root.leading_edge_m, root.water_line_m, root.chord_m) == (0.3, 2.0, 0.0, 0.8)
    assert (tip.profile, tip.twist_deg, tip.coordinates, tip.place.row) == ("2412", 0.0, (), 43)
    nose, upper, _ = layout.skins
    assert (nose.surface, nose.from_chord, nose.to_chord) == (Surface.BOTH, 0.0, 0.1)
    assert (upper.finish, upper.finish_part, nose.finish) == ("PAINT", "FIN.UPR", None)
    assert (layout.corners, layout.mirrored, layout.gap_m) == (32, True, 0.0005)
    assert layout.gap_place is not None
    assert (layout.gap_place.row, layout.gap_place.column) == (120, "gap")
    assert layout.planned_kg == (("RIB.L1", 0.04),)


def test_walls_say_where_they_run_and_what_they_are_cut_from(read: Read) -> None:
    layout = whole(read())
    (web,) = layout.webs
    assert (web.chord_shares, web.points_m, web.splices_m, web.lengths) == (
        (0.35, 0.35),
        None,
        (0.9,),
        ("IN", "OUT"),
    )
    assert (web.laminate, web.thickness_m) == ("PANEL", 0.0052)
    assert [(row.front, row.rear) for row in layout.rows] == [("nose", "S"), ("S", "tail")]
    assert [(rib.name, rib.butt_line_m, rib.rows, rib.lean_deg) for rib in layout.ribs] == [
        ("1", 0.31, ("L", "T"), 0.0),
        ("2", 0.9, ("L", "T"), 0.0),
        ("3", 1.49, ("L", "T"), 0.0),
    ]
    (cap,) = layout.caps
    assert (cap.web, cap.surface, cap.width_m, cap.thickness_m) == ("S", Surface.UPPER, 0.005, 0.004)


def test_tanks_holes_and_ports_say_where_they_are(read: Read) -> None:
    layout = whole(read())
    (tank,) = layout.tanks
    assert (tank.rows, tank.ribs, tank.expansion, tank.sealant_thickness_m) == (
        ("L",),
        ("1", "3"),
        0.02,
        0.0004,
    )
    drain, air, lightening = layout.holes
    assert (drain.walls, drain.along, drain.height) == (
        Walls.RIBS,
        Along(share=0.7),
        Height(above_lower_m=0.003),
    )
    assert (air.walls, air.along, air.height) == (
        ("L2",),
        Along(from_end_m=0.07),
        Height(below_upper_m=0.003),
    )
    assert (lightening.height, lightening.leaving_out) == (Height(share=0.5), ("T2",))
    assert [(port.outside, port.bay, port.axis) for port in layout.ports] == [
        (Outside.OUTLET, "L1", Axis.FORE_AFT),
        (Outside.FILLER, "L2", Axis.UP),
        (Outside.VENT, "L2", Axis.UP),
    ]
    outlet, _, vent = layout.ports
    assert (outlet.along_chord, outlet.along_span) == (Along(share=0.9), Along(from_start_m=0.03))
    assert vent.pipe_m == ((0.0, 0.08, 0.012),)
    assert [(feed.join, feed.outlets) for feed in layout.feeds] == [(Join.SELECT, ("outlet",))]


def test_joints_fills_blocks_and_items_are_read(read: Read) -> None:
    layout = whole(read())
    web, rib = layout.joints
    assert (web.walls, web.edges, web.fillet_m) == (Walls.WEBS, (Edge.UPPER, Edge.LOWER), 0.004)
    assert (web.fillet_shape, rib.fillet_shape) == (FilletShape.FLAT, FilletShape.CONCAVE)
    assert [(one.part_class, one.rows, one.ribs) for one in layout.fills] == [
        (PartClass.CLOSEOUT, ("T",), ("1", "2"))
    ]
    assert [(one.at_tip, one.length_m) for one in layout.closeouts] == [(True, 0.05)]
    assert [(one.corner_m, one.size_m) for one in layout.blocks] == [
        ((2.29, 0.22, -0.02), (0.01, 0.07, 0.04))
    ]
    assert [(one.mass_kg, one.at_m, one.quantity) for one in layout.items] == [(0.036, (2.6, 0.9, 0.03), 2)]


def test_the_head_is_that_of_a_plan_and_the_tables_beside_it_go_along(read: Read) -> None:
    found = read()
    assert found.head is not None
    assert (found.head.name, found.head.title) == ("s1", "Small wing, one web")
    assert [attitude.name for attitude in found.head.attitudes] == ["ground", "climb"]
    assert found.head.tolerances == ((PartClass.RIB, 0.05),)
    assert found.head.growths == ((PartClass.RIB, 0.02),)
    assert {name: content.decode() for name, content in found.sources.items()} == TABLES_BESIDE
    assert set(found.laminates) == {"PANEL", "SKIN", "PAINT"}
    assert found.materials["foam 5"].density_kg_m3 == 75.0


def test_a_text_carries_its_own_unit_beside_bare_lengths(read: Read) -> None:
    layout = whole(
        read(
            ("chord = 800", 'chord = "0.8 m"'),
            ("butt_line = 310", 'butt_line = "31 cm"'),
            ("corner = [2290, 220, -20]", 'corner = ["2.29 m", 220, "-2 cm"]'),
            ("expansion_percent = 2.0", 'expansion_percent = "3 %"'),
        )
    )
    assert (layout.sections[0].chord_m, layout.ribs[0].butt_line_m) == pytest.approx((0.8, 0.31))
    assert layout.blocks[0].corner_m == pytest.approx((2.29, 0.22, -0.02))
    assert layout.tanks[0].expansion == 0.03


def test_inches_are_read_as_such(read: Read) -> None:
    found = read(('length_unit = "mm"', 'length_unit = "in"'), ('"PANEL" = 5.2', '"PANEL" = "5.2 mm"'))
    assert found.layout is not None
    assert found.layout.sections[0].chord_m == pytest.approx(800 * 0.0254)
    # A wing this large is one to look at.
    assert [(one.code, one.severity) for one in found.findings] == [("unit-doubtful", Severity.LOOK)]


def test_a_laminate_of_whole_plies_is_as_thick_as_its_constituents(read: Read) -> None:
    # Constituents with no voids, by hand: areal mass of fibre over fibre density, and of resin over resin's.
    ply = 0.200 / 1770.0 + 0.200 * (0.45 / 0.55) / 1150.0
    assert [skin.thickness_m for skin in whole(read()).skins] == pytest.approx([2.0 * ply] * 3, rel=1e-12)


def test_a_ply_over_a_part_of_the_area_asks_for_a_stated_thickness(read: Read) -> None:
    part = TABLES_BESIDE["laminates.csv"].replace("SKIN,,2,twill 200,0,100,45", "SKIN,,2,twill 200,0,30,45")
    found = read(laminates__csv=part)
    assert told(found) == [("thickness-unknown", 56)]
    assert "step 2 covers 30 % of it" in found.findings[0].what
    stated = read(('"PANEL" = 5.2', '"PANEL" = 5.2\n"SKIN" = 0.4'), laminates__csv=part)
    assert whole(stated).skins[0].thickness_m == 0.0004


@pytest.mark.parametrize(
    ("row", "why"),
    [
        ("other resin,resin,,1100,,,,", "2 resins have a density"),
        (None, "no resin has a density"),
    ],
)
def test_the_resin_of_a_laminate_is_never_guessed(read: Read, row: str | None, why: str) -> None:
    materials = TABLES_BESIDE["materials.csv"]
    changed = (
        materials + f"{row}\n" if row else materials.replace("lam resin,resin,,1150", "lam resin,resin,,")
    )
    found = read(materials__csv=changed)
    assert told(found) == [("thickness-unknown", 56)]
    assert why in found.findings[0].what


@pytest.mark.parametrize(
    ("stated", "looks"), [(5.48 * 1.14, 0), (5.48 * 1.16, 1), (5.48 * 0.86, 0), (5.48 * 0.84, 1)]
)
def test_a_stated_thickness_far_from_its_constituents_is_looked_at(
    read: Read, stated: float, looks: int
) -> None:
    found = read(('"PANEL" = 5.2', f'"PANEL" = {stated}'))
    assert found.layout is not None
    assert [(one.code, one.severity) for one in found.findings] == [
        ("thickness-differs", Severity.LOOK)
    ] * looks
    assert found.layout.webs[0].thickness_m == pytest.approx(stated / 1000.0)


def test_a_profile_file_is_read_beside_the_layout_and_named_in_the_section(read: Read) -> None:
    outline = naca_section("2412", 60)
    text = "\n".join(f"{x:.9f} {z:.9f}" for x, z in outline)
    layout = whole(read(('naca = "2412"', 'coordinates = "root.dat"'), root__dat=text))
    assert layout.sections[0].profile == "root.dat"
    assert [value for point in layout.sections[0].coordinates for value in point] == pytest.approx(
        list(outline.ravel()), abs=1e-9
    )
    assert layout.sections[1].coordinates == ()


def test_a_bad_profile_is_told_with_its_own_file_and_line_once(read: Read) -> None:
    found = read(
        ('naca = "2412"', 'coordinates = "root.dat"'),
        ('naca = "2412"', 'coordinates = "root.dat"'),
        root__dat="0 0\n0 nought\n",
    )
    assert [str(one.where) for one in found.findings] == ["root.dat:2"]


def test_webs_and_ribs_may_run_through_two_points(read: Read) -> None:
    layout = whole(
        read(
            ("chord = [0.35, 0.35]", "from = [2280, 300]\nto = [2250, 1500]\nbetween = [300, 1500]"),
            ("butt_line = 900", 'from = [2000, 890]\nto = [2700, 910]\nlean_deg = -4\nthrough = ["S"]'),
        )
    )
    assert layout.webs[0].points_m == ((2.28, 0.3), (2.25, 1.5))
    rib = layout.ribs[1]
    assert (rib.butt_line_m, rib.points_m, rib.lean_deg, rib.through) == (
        None,
        ((2.0, 0.89), (2.7, 0.91)),
        -4.0,
        ("S",),
    )


def test_a_rib_through_a_web_is_one_part_and_each_stretch_of_that_web_may_have_a_planned_mass(
    read: Read,
) -> None:
    through = ('butt_line = 900\nrows = ["L", "T"]', 'butt_line = 900\nrows = ["L", "T"]\nthrough = ["S"]')
    planned = whole(
        read(through, ('"RIB.L1" = "40 g"', '"RIB.LT2" = "80 g"\n"WEB.S.IN.1" = "90 g"'))
    ).planned_kg
    assert planned == (("RIB.LT2", 0.08), ("WEB.S.IN.1", 0.09))
    assert told(read(through, ('"RIB.L1"', '"RIB.L2"'))) == [("part-unknown", 34)]


def test_a_bad_row_of_a_table_is_told_there_and_not_at_every_name(read: Read) -> None:
    materials = TABLES_BESIDE["materials.csv"].replace("block foam,solid", "block foam,solidd")
    found = read(materials__csv=materials)
    assert [str(one.where) for one in found.findings] == ["materials.csv:7:kind"]
    laminates = TABLES_BESIDE["laminates.csv"].replace(
        "SKIN,,2,twill 200,0,100,45", "SKIN,,2,twill 200,0,100,"
    )
    found = read(laminates__csv=laminates)
    assert [str(one.where) for one in found.findings] == ["laminates.csv:6:resin_fraction"]


def test_tables_of_another_name_are_told_by_it(read: Read) -> None:
    materials = TABLES_BESIDE["materials.csv"].replace("block foam,solid", "block foam,solidd")
    found = read(("corners = 32", 'corners = 32\nmaterials = "shop.csv"'), shop__csv=materials)
    assert [str(one.where) for one in found.findings] == ["shop.csv:7:kind"]
    assert set(found.sources) == {"materials.csv", "laminates.csv"}


CORE = """format = "layout-1"
name = "c1"
length_unit = "mm"
mirror = false
[[section]]
butt_line = 0
leading_edge = 0
water_line = 0
chord = 500
naca = "0015"
[[section]]
butt_line = 1000
leading_edge = 0
water_line = 0
chord = 500
twist_deg = -2.5
naca = "0015"
[[skin]]
part = "SKIN"
surface = "both"
chord = [0, 1]
laminate = "SKIN"
[[row]]
name = "C"
webs = ["nose", "tail"]
[[fill]]
part = "CORE"
class = "closeout"
material = "block foam"
rows = ["C"]
"""


def test_a_foam_core_with_skins_needs_neither_webs_nor_ribs(read: Read) -> None:
    layout = whole(read(text=CORE))
    assert (layout.webs, layout.ribs, layout.tanks, layout.joints, layout.gap_m) == ((), (), (), (), 0.0)
    assert (layout.mirrored, layout.corners) == (False, 48)
    assert (layout.fills[0].rows, layout.fills[0].ribs, layout.fills[0].title) == (("C",), None, "CORE")
    assert layout.sections[1].twist_deg == -2.5


def test_a_file_that_is_not_there_is_wrong_use(tmp_path: Path) -> None:
    with pytest.raises(WrongUse, match="the layout cannot be read: no such file"):
        read_layout(tmp_path / "none.toml")
    with pytest.raises(WrongUse, match="the layout cannot be read: is a folder"):
        read_layout(tmp_path)


def test_a_file_that_is_no_toml_is_a_finding(tmp_path: Path) -> None:
    (tmp_path / "layout.toml").write_bytes(b"format = \xff")
    found = read_layout(tmp_path / "layout.toml")
    assert (found.layout, found.head) == (None, None)
    assert [one.code for one in found.findings] == ["file-not-utf8"]


def test_the_declared_keys_of_what_a_plan_says_too_are_those_of_its_reader() -> None:
    assert FUEL.words == FUEL_KEYS
    assert FUEL.keys[0].choices == GRADES
    assert ATTITUDE.words == ATTITUDE_KEYS
    assert TOLERANCE.words == GROWTH.words == tuple(PartClass)


DECLARED = {
    f"{table.word}.{key.word}": key
    for table in (TOP, *TABLES)
    for key in (*table.keys, *((table.each,) if table.each is not None else ()))
}


@pytest.mark.parametrize("name", sorted(DECLARED))
def test_every_example_that_a_person_is_told_to_write_can_be_read(name: str) -> None:
    key, problems = DECLARED[name], Problems()
    table = read_toml("layout.toml", f"{key.word} = {key.example}".encode(), problems)
    assert table is not None
    assert set(read_some(table, TableKeys(word="", tip="", keys=(key,)), "mm", (key.word,))) == {key.word}
    assert problems.findings() == ()


JUNK = st.one_of(
    st.floats(allow_nan=True, allow_infinity=True).map(lambda one: repr(one).replace("e+", "e")),
    st.integers(-(10**20), 10**20).map(str),
    st.sampled_from(
        (
            *('""', '" "', '"x"', "[]", "{}", "[[]]", "[{}]", "true", "1979-05-27", "[nan, nan]", "1e308"),
            *('["S", "S"]', '["nose", "tail"]', '["tail", "nose"]', '["T"]', '["2"]', '["T3", "L1", "S0"]'),
            *('"3 kg"', '"-3 mm"', "{ share = {} }", '"both"', '"webs"', '"L2"', '["3", "1"]'),
            *("[0.5, 0.2]", "[[1, 2, 3]]"),
        )
    ),
    st.text(max_size=6).map(lambda text: repr(text).replace("\\x", "\\u00")),
)
EDITABLE = [number for number, line in enumerate(LAYOUT.splitlines()) if line and not line.startswith("#")]


@given(st.sampled_from(EDITABLE), JUNK)
def test_any_single_edit_gives_a_layout_or_says_why_not(number: int, junk: str) -> None:
    lines = LAYOUT.splitlines()
    key, equals, _ = lines[number].partition("=")
    lines[number] = f"{key}= {junk}" if equals else junk
    with tempfile.TemporaryDirectory() as folder:
        for name in TABLES_BESIDE:
            shutil.copy(SMALL_WING / name, folder)
        path = Path(folder) / "layout.toml"
        path.write_text("\n".join(lines), encoding="utf-8", errors="replace")
        found = read_layout(path)
    stops = [one for one in found.findings if one.severity is Severity.STOP]
    assert (found.layout is None) is bool(stops)
    if found.layout is not None:
        assert all(
            math.isfinite(section.chord_m) and section.chord_m > 0.0 for section in found.layout.sections
        )
        assert all(rib.thickness_m > 0.0 for rib in found.layout.ribs)
