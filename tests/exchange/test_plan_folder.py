"""A plan read whole: the five forms, mirrors, faces, the cache, and paths that may not leave the folder."""

from __future__ import annotations

import io
import math
import sys
from collections.abc import Callable
from pathlib import Path

import ezdxf
import numpy as np
import pytest

from ledger.errors import Severity
from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.plan_cells import read_cells, read_displaced
from ledger.exchange.plan_drawings import read_outline
from ledger.exchange.plan_folder import ReadPlan, read_plan, read_plan_files
from ledger.model.plan import Face, Plan, Shape
from ledger.units import Display

Read = Callable[..., ReadPlan]
Told = Callable[[ReadPlan], list[str]]
Box = Callable[..., str]


def outline(*points: tuple[float, float], circle: tuple[float, float, float] | None = None) -> bytes:
    """A drawing in mm of one closed polyline, with a round hole."""
    document = ezdxf.new("R2010")
    document.header["$INSUNITS"] = 4
    document.modelspace().add_lwpolyline(points, close=True, dxfattribs={"layer": "CUT"})
    if circle is not None:
        document.modelspace().add_circle(circle[:2], circle[2], dxfattribs={"layer": "CUT"})
    stream = io.StringIO()
    document.write(stream)
    return stream.getvalue().encode()


RIB = outline((0, 0), (400, 0), (400, 100), (0, 100), circle=(300, 50, 20))
RIB_AREA = 0.4 * 0.1 - math.pi * 0.02**2


def shape_of(read: ReadPlan, part: str) -> Shape:
    assert read.plan is not None, [str(finding) for finding in read.findings]
    return next(s for p, s in zip(read.plan.parts, read.plan.shapes, strict=True) if p.name == part)


def plan_of(read: ReadPlan) -> Plan:
    assert read.plan is not None, [str(finding) for finding in read.findings]
    return read.plan


def test_a_panel_lies_where_its_axes_put_it(read_with: Read) -> None:
    row = "RIB,rib,rib,R,WING,panel,PLATE,g/rib.dxf#CUT,mm,2 1.5 0.1,1 0 0,0 0 1,,1,,"
    shape = shape_of(read_with({"g/rib.dxf": RIB}, parts=[row]), "RIB")
    hole = math.pi * 0.02**2
    x = (0.04 * 0.2 - hole * 0.3) / RIB_AREA
    assert shape.measure == pytest.approx(RIB_AREA, rel=1e-13)
    assert shape.centroid_m == pytest.approx((2 + x, 1.5, 0.15), rel=1e-13)
    about = 0.1 * 0.4**3 / 12 + 0.04 * (0.2 - x) ** 2 - math.pi * 0.02**4 / 4 - hole * (0.3 - x) ** 2
    assert shape.second_m2[0][0] == pytest.approx(about / RIB_AREA, rel=1e-12)
    assert shape.second_m2[1][1] == 0.0


@pytest.mark.parametrize(("face", "shift"), [("", 0.0), ("mid", 0.0), ("+normal", -1.0), ("-normal", 1.0)])
def test_the_face_of_an_outline_says_on_which_side_the_panel_lies(
    read_with: Read, face: str, shift: float
) -> None:
    # Foam 10 mm and two cloths of 0.4 mm; across x up_axis of (1,0,0) and (0,0,1) is (0,-1,0).
    head = "material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm]\n"
    cloth = head + "cloth,fabric,200,,0.4\nfoam,core,,80,10\n"
    files = {"g/rib.dxf": RIB, "materials.csv": cloth}
    row = f"RIB,rib,rib,R,WING,panel,SANDWICH,g/rib.dxf,mm,0 1 0,1 0 0,0 0 1,{face},1,,"
    read = read_with(files, parts=[row])
    assert shape_of(read, "RIB").centroid_m[1] == pytest.approx(1.0 - shift * 0.0054, rel=1e-14)
    assert read.findings == ()


def test_a_face_with_a_ply_of_unknown_thickness_is_told(read_with: Read, told: Told) -> None:
    row = "RIB,rib,rib,R,WING,panel,SANDWICH,g/rib.dxf,mm,0 1 0,1 0 0,0 0 1,+normal,1,,"
    read = read_with({"g/rib.dxf": RIB}, parts=[row])
    assert shape_of(read, "RIB").centroid_m[1] == pytest.approx(1.005)
    assert [finding.severity for finding in read.findings] == [Severity.LOOK]
    assert told(read)[0].startswith(
        "parts.csv:2:face  the outline lies on one face of 'SANDWICH', of which step 1, step 3 is not known"
    )


def test_the_other_forms(read_with: Read, box: Box) -> None:
    files = {
        "g/skin.obj": "v 0 0 0\nv 2000 0 0\nv 2000 1000 0\nv 0 1000 0\nf 1 2 3 4\n",
        "g/block.obj": box((0.0, 0.0, 0.0), (0.1, 0.2, 0.3)),
        "g/seam.obj": "v 0 0 0\nv 0 3 4\nl 1 2\n",
    }
    parts = [
        "SKIN,skin,skin,R,WING,skin,PLATE,g/skin.obj,mm,,,,,1,,",
        "BLOCK,block,closeout,R,WING,solid,alloy,g/block.obj,m,,,,,1,,",
        "SEAM,seam,joint,R,WING,run,bead,g/seam.obj,m,,,,,1,,",
        "PIN,pin,fitting,R,WING,item,,,,1 2 3,,,,2,120,",
    ]
    read = read_with(files, parts=parts)
    assert shape_of(read, "SKIN").measure == pytest.approx(2.0)
    assert shape_of(read, "SKIN").centroid_m == pytest.approx((1.0, 0.5, 0.0))
    assert shape_of(read, "BLOCK").measure == pytest.approx(0.006)
    assert shape_of(read, "BLOCK").second_m2[2][2] == pytest.approx(0.3**2 / 12)
    assert shape_of(read, "SEAM").measure == pytest.approx(5.0)
    pin = shape_of(read, "PIN")
    assert (pin.measure, pin.centroid_m) == (1.0, (1.0, 2.0, 3.0))
    part = plan_of(read).part("PIN")
    assert part is not None
    assert (part.quantity, part.planned_mass_kg) == (2, 0.12)


def test_a_mesh_is_placed_by_its_three_axes(read_with: Read, box: Box) -> None:
    row = "BLOCK,block,closeout,R,WING,solid,alloy,g/block.obj,m,10 20 30,0 1 0,0 0 1,,1,,"
    shape = shape_of(read_with({"g/block.obj": box((0, 0, 0), (1, 2, 4))}, parts=[row]), "BLOCK")
    # Local X runs along y, Y along z and Z along across x up_axis, which is x.
    assert shape.centroid_m == pytest.approx((10 + 2.0, 20 + 0.5, 30 + 1.0))
    assert [shape.second_m2[i][i] for i in range(3)] == pytest.approx([16 / 12, 1 / 12, 4 / 12])


def test_a_skin_on_one_face_of_its_mesh_lies_half_its_thickness_off(read_with: Read) -> None:
    files = {
        "g/skin.obj": "v 0 0 0\nv 2 0 0\nv 2 1 0\nv 0 1 0\nf 1 2 3 4\n",
        "materials.csv": "material,kind,density [kg/m3],thickness [mm]\nfoam,core,80,10\n",
        "laminates.csv": "laminate,step,material\nSHELL,1,foam\n",
    }
    rows = ["SKIN,s,skin,R,WING,skin,SHELL,g/skin.obj,m,,,,+normal,1,,"]
    assert shape_of(read_with(files, parts=rows), "SKIN").centroid_m == pytest.approx((1.0, 0.5, -0.005))


MIRRORED = [
    "RIB-R,rib,rib,R,WING/RIGHT,panel,SANDWICH,g/rib.dxf#CUT,mm,2 1.5 0.1,1 0.2 0,0 0 1,+normal,1,,",
    "RIB-L,rib,rib,L,WING/LEFT,panel,,,,,,,,1,,RIB-R",
    "PIN-R,pin,fitting,R,WING/RIGHT,item,,,,1 2 3,,,,1,120,PIN-L",
    "PIN-L,pin,fitting,L,WING/LEFT,item,,,,,,,,1,120,pin-r",
]


def test_a_mirror_takes_the_other_sides_geometry_seen_in_the_plane_of_symmetry(read_with: Read) -> None:
    read = read_with({"g/rib.dxf": RIB}, parts=MIRRORED)
    right, left = shape_of(read, "RIB-R"), shape_of(read, "RIB-L")
    flip = np.diag([1.0, -1.0, 1.0])
    assert left.measure == right.measure
    assert np.array(left.centroid_m) == pytest.approx(flip @ right.centroid_m)
    assert np.array(left.second_m2) == pytest.approx(flip @ np.array(right.second_m2) @ flip)
    assert left.second_m2[0][1] == -right.second_m2[0][1] != 0.0
    assert shape_of(read, "PIN-L").centroid_m == (1.0, -2.0, 3.0)
    assert left.digest != right.digest


def test_a_mirrored_panel_lies_on_the_other_face_of_the_same_outline(read_with: Read) -> None:
    read = read_with({"g/rib.dxf": RIB}, parts=MIRRORED)
    right, left = plan_of(read).part("RIB-R"), plan_of(read).part("RIB-L")
    assert right is not None
    assert left is not None
    assert left.placement is not None
    assert (right.face, left.face) == (Face.PLUS, Face.MINUS)
    assert left.placement.origin_m == (2.0, -1.5, 0.1)
    assert left.placement.across == pytest.approx((1 / math.hypot(1, 0.2), -0.2 / math.hypot(1, 0.2), 0.0))
    assert left.made_of == "SANDWICH"
    assert left.mirror_of == "RIB-R"
    # Drawn again by hand with that placement and face, it is the same panel.
    row = "RIB-L,rib,rib,L,WING/LEFT,panel,SANDWICH,g/rib.dxf#CUT,mm,2 -1.5 0.1,1 -0.2 0,0 0 1,-normal,1,,"
    drawn = shape_of(read_with({"g/rib.dxf": RIB}, parts=[row], name="drawn"), "RIB-L")
    mirrored = shape_of(read, "RIB-L")
    assert drawn.centroid_m == pytest.approx(mirrored.centroid_m, abs=1e-15)
    assert np.array(drawn.second_m2) == pytest.approx(np.array(mirrored.second_m2), abs=1e-15)


def test_a_part_with_geometry_of_its_own_keeps_it_beside_its_mirror(read_with: Read) -> None:
    rows = [
        MIRRORED[0].replace(",,1,,", ",,1,,RIB-L"),
        "RIB-L,rib,rib,L,WING/LEFT,panel,PLATE,g/left.dxf,mm,2 -1.5 0.1,1 0 0,0 0 1,,1,,RIB-R",
    ]
    small = outline((0, 0), (10, 0), (10, 10), (0, 10))
    read = read_with({"g/rib.dxf": RIB, "g/left.dxf": small}, parts=rows)
    assert shape_of(read, "RIB-L").measure == pytest.approx(1e-4)


def test_an_origin_without_a_unit_of_its_own_is_in_the_units_of_the_geometry(read_with: Read) -> None:
    head = "part,class,assembly,form,made_of,geometry,geometry_unit,origin,across,up_axis\n"
    files = {"g/rib.dxf": RIB}
    for unit in ("mm", ""):
        table = head + f"RIB,rib,WING,panel,PLATE,g/rib.dxf,{unit},2000 1500 100,1 0 0,0 0 1\n"
        shape = shape_of(read_with({**files, "parts.csv": table}, name=f"in{unit}"), "RIB")
        assert shape.centroid_m[1:] == pytest.approx((1.5, 0.15))
    table = head + "RIB,rib,WING,panel,PLATE,g/rib.dxf,mm,2 1.5 0.1 m,1 0 0,0 0 1\n"
    assert shape_of(read_with({**files, "parts.csv": table}, name="own"), "RIB").centroid_m[1] == 1.5


def test_columns_come_in_any_order_with_any_unit_and_may_be_left_out(read_with: Read) -> None:
    table = "planned_mass [oz],form,origin [in],class,assembly,part\n4,item,10 0 0,fitting,WING,PIN\n"
    read = read_with({"parts.csv": "\ufeff" + table})
    part = plan_of(read).part("PIN")
    assert part is not None
    assert part.planned_mass_kg == pytest.approx(4 * 0.45359237 / 16, rel=1e-15)
    assert shape_of(read, "PIN").centroid_m[0] == 0.254


def test_us_display_is_kept(read_with: Read) -> None:
    text = 'format = "plan-1"\nname = "r1"\ntitle = "x"\ndisplay = "us"\n'
    assert plan_of(read_with({"plan.toml": text})).display is Display.US


def test_files_used_are_given_with_their_content_and_read_again_the_same(
    write_plan: Callable[..., Path], tank_files: dict[str, str]
) -> None:
    files = {**tank_files, "g/rib.dxf": RIB, "loading.toml": 'arm_unit = "mm"\n', "notes.txt": "mine"}
    folder = write_plan(files, parts=MIRRORED)
    read = read_plan(folder)
    assert set(read.files) == {
        "plan.toml",
        "materials.csv",
        "laminates.csv",
        "parts.csv",
        "tanks.toml",
        "loading.toml",
        "g/rib.dxf",
        "geometry/near.obj",
        "geometry/far.obj",
    }
    assert read.files["loading.toml"] == b'arm_unit = "mm"\n'
    again = read_plan_files(read.files)
    assert again.plan is not None
    assert again.plan == read.plan
    assert again.files == read.files


def test_a_second_reading_opens_no_drawing_and_no_mesh(
    write_plan: Callable[..., Path], tank_files: dict[str, str], monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = write_plan({**tank_files, "g/rib.dxf": RIB}, parts=MIRRORED)
    cache = MemoryCache()
    first = read_plan(folder, cache)

    def opened(*_: object) -> None:
        raise RuntimeError("opened again")

    monkeypatch.setattr("ledger.exchange.dxf_drawing.read_drawing", opened)
    monkeypatch.setattr("ledger.exchange.mesh_files.read_mesh_file", opened)
    monkeypatch.setattr("ledger.geometry.closed_cell.ClosedCell.from_mesh", opened)
    assert read_plan(folder, cache) == first
    cells = read_cells(plan_of(first), first.files, cache)
    assert {name: cell.volume_m3 for name, cell in cells.items()} == pytest.approx({"L1": 0.2, "L2": 0.2})
    assert tuple(cell.digest for cell in cells.values()) == plan_of(first).cell_digests
    with pytest.raises(RuntimeError, match="opened again"):
        read_plan(folder, MemoryCache())


def test_a_damaged_cache_is_computed_again(
    write_plan: Callable[..., Path], tank_files: dict[str, str]
) -> None:
    class Damaged(MemoryCache):
        def get(self, key: str) -> bytes | None:
            kept = super().get(key)
            return None if kept is None else kept[: len(kept) // 2].replace(b'"', b"?", 1)

    folder = write_plan({**tank_files, "g/rib.dxf": RIB}, parts=MIRRORED)
    cache = Damaged()
    first = read_plan(folder, cache)
    assert read_plan(folder, cache) == first
    assert set(read_cells(plan_of(first), first.files, cache)) == {"L1", "L2"}


def test_the_cells_are_proved_from_the_files_without_a_cache(
    read_with: Read, tank_files: dict[str, str], box: Box
) -> None:
    inside = box((0.2, 0.2, 0.05), (0.4, 0.4, 0.15))
    tanks = tank_files["tanks.toml"].replace(
        'mesh = "geometry/near.obj"', 'mesh = "geometry/near.obj"\ndisplaced_mesh = "geometry/pump.obj"'
    )
    read = read_with({**tank_files, "tanks.toml": tanks, "geometry/pump.obj": inside})
    assert list(read_cells(plan_of(read), read.files)) == ["L1", "L2"]
    displaced = read_displaced(plan_of(read), read.files)
    assert {name: solid.volume_m3 for name, solid in displaced.items()} == pytest.approx({"L1": 0.004})


def test_an_outline_for_the_screen_is_the_one_of_the_mirror_too(read_with: Read) -> None:
    read = read_with({"g/rib.dxf": RIB}, parts=MIRRORED)
    plan = plan_of(read)
    loops = [read_outline(plan, read.files, part) for part in plan.parts]
    assert [len(each) for each in loops] == [2, 2, 0, 0]
    assert loops[0] == loops[1]
    assert sorted(loops[0], key=len)[0] == ((0.0, 0.0), (0.4, 0.0), (0.4, 0.1), (0.0, 0.1))


def test_a_moved_or_changed_part_has_another_name_and_a_kept_one_the_same(read_with: Read) -> None:
    digest = shape_of(read_with({"g/rib.dxf": RIB}, parts=MIRRORED), "RIB-R").digest
    other = outline((0, 0), (400, 0), (400, 100), (0, 101), circle=(300, 50, 20))
    moved = [MIRRORED[0].replace("2 1.5 0.1", "2.04 1.5 0.1"), *MIRRORED[1:]]
    again = outline((0, 100), (0, 0), (400, 0), (400, 100), circle=(300, 50, 20))
    same = read_with({"g/rib.dxf": again}, parts=MIRRORED, name="same")
    assert shape_of(same, "RIB-R").digest == digest
    assert shape_of(read_with({"g/rib.dxf": other}, parts=MIRRORED, name="b"), "RIB-R").digest != digest
    assert shape_of(read_with({"g/rib.dxf": RIB}, parts=moved, name="c"), "RIB-R").digest != digest


@pytest.mark.parametrize(
    ("path", "code", "words"),
    [
        ("../rib.dxf", "path-outside", "leads out of the plan folder"),
        ("g/../../rib.dxf", "path-outside", "leads out of the plan folder"),
        ("/etc/rib.dxf", "path-outside", "does not begin in the plan folder"),
        ("C:\\rib.dxf", "path-outside", "does not begin in the plan folder"),
        ("\\rib.dxf", "path-outside", "does not begin in the plan folder"),
        ("~/rib.dxf", "path-outside", "does not begin in the plan folder"),
        ("g/none.dxf", "file-missing", "there is no file 'g/none.dxf' in the plan"),
        ("g", "file-missing", "there is no file 'g' in the plan"),
        ("g/link.dxf", "path-outside", "leads out of the plan folder"),
        ("#CUT", "path-wrong", "'' is not a path"),
    ],
)
def test_no_path_leaves_the_folder(
    write_plan: Callable[..., Path], tmp_path: Path, path: str, code: str, words: str
) -> None:
    (tmp_path / "rib.dxf").write_bytes(RIB)
    row = f"RIB,rib,rib,R,WING,panel,PLATE,{path},mm,0 0 0,1 0 0,0 0 1,,1,,"
    folder = write_plan({"g/rib.dxf": RIB}, parts=[row])
    (folder / "g" / "link.dxf").symlink_to(tmp_path / "rib.dxf")
    read = read_plan(folder)
    assert read.plan is None
    (finding,) = read.findings
    assert (finding.code, str(finding.where)) == (code, "parts.csv:2:geometry")
    assert words in finding.what


def test_a_link_inside_the_folder_is_followed(write_plan: Callable[..., Path]) -> None:
    row = "RIB,rib,rib,R,WING,panel,PLATE,g/link.dxf,mm,0 0 0,1 0 0,0 0 1,,1,,"
    folder = write_plan({"g/rib.dxf": RIB}, parts=[row])
    (folder / "g" / "link.dxf").symlink_to("rib.dxf")
    assert read_plan(folder).plan is not None


def test_reading_a_plan_without_geometry_loads_no_heavy_library(write_plan: Callable[..., Path]) -> None:
    import subprocess

    folder = write_plan(parts=["PIN,pin,fitting,R,WING,item,,,,1 2 3,,,,2,120,"])
    code = (
        "import sys; from pathlib import Path; from ledger.exchange.plan_folder import read_plan;"
        f"assert read_plan(Path({str(folder)!r})).plan is not None;"
        "print([m for m in ('numpy','ezdxf','trimesh','manifold3d','pandas','shapely') if m in sys.modules])"
    )
    ran = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=_root()
    )
    assert ran.stdout.strip() == "[]"


def _root() -> Path:
    return Path(__file__).resolve().parents[2]
