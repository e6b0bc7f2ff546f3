"""Mesh files of every format, as written by a mesh library or by hand."""

from __future__ import annotations

import io
import struct
import zipfile
from collections.abc import Callable

import numpy as np
import pytest
import trimesh

from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.mesh_files import MeshFileRefused, pick_object, read_mesh_file, triangles_of
from ledger.exchange.plan_files import StoredFiles

Box = Callable[..., str]
CLOSED = trimesh.creation.box(extents=(2.0, 1.0, 0.5))


def area(path: str, content: bytes, picked: str | None = None) -> float:
    """Area of an object, by the mesh library."""
    mesh = pick_object(read_mesh_file(path, content), picked)
    return float(trimesh.Trimesh(mesh.vertices, mesh.faces, process=False).area)


def volume_m3(path: str, content: bytes, unit: str | None = "m", picked: str = "") -> float:
    return (
        GeometryFiles(StoredFiles({path: content}), MemoryCache())
        .figures("solid", path + picked, unit)
        .measure
    )


@pytest.mark.parametrize(
    ("path", "form"),
    [("a.stl", "stl"), ("a.STL", "stl_ascii"), ("a.ply", "ply"), ("a.obj", "obj"), ("a.3mf", "3mf")],
)
def test_every_format_gives_the_same_solid(path: str, form: str) -> None:
    content = CLOSED.export(file_type=form)
    unit = None if form == "3mf" else "mm"
    measured = volume_m3(path, content if isinstance(content, bytes) else content.encode(), unit)
    assert measured == pytest.approx(1e-9, rel=1e-6)


def test_ply_as_text_is_read() -> None:
    content = trimesh.exchange.ply.export_ply(CLOSED, encoding="ascii")
    assert volume_m3("a.ply", content) == pytest.approx(1.0, rel=1e-6)


def test_obj_quads_polygons_and_indices_that_count_back(box: Box) -> None:
    assert volume_m3("a.obj", box((0, 0, 0), (2, 1, 0.5)).encode()) == pytest.approx(1.0, rel=1e-14)
    back = "v 0 0 0\nv 4 0 0\nv 4 2 0\nv 2 3 0\nv 0 2 0\nf -5//1 -4//1 -3/7/1 -2 -1\n"
    assert area("a.obj", back.encode()) == pytest.approx(10.0, rel=1e-14)


def test_a_face_that_is_not_convex_keeps_its_area() -> None:
    # An L of area 3 and an arrow of area 2: a fan from their first corner would cover more.
    ell = "v 0 0 0\nv 2 0 0\nv 2 1 0\nv 1 1 0\nv 1 2 0\nv 0 2 0\nf 3 4 5 6 1 2\n"
    assert area("a.obj", ell.encode()) == pytest.approx(3.0, rel=1e-14)
    arrow = "v 0 0 0\nv 2 1 0\nv 0 2 0\nv 1 1 0\nf 1 2 3 4\n"
    for turn in range(4):
        corners = [1, 2, 3, 4][turn:] + [1, 2, 3, 4][:turn]
        turned = arrow.replace("f 1 2 3 4", "f " + " ".join(map(str, corners)))
        assert area("a.obj", turned.encode()) == pytest.approx(1.0, rel=1e-14)


def test_triangles_of_a_polygon_keep_its_sense() -> None:
    corners = np.array([(0, 0, 0), (2, 0, 0), (2, 1, 0), (1, 1, 0), (1, 2, 0), (0, 2, 0)], dtype=float)
    for polygon in ([0, 1, 2, 3, 4, 5], [5, 4, 3, 2, 1, 0]):
        normals = [
            np.cross(corners[b] - corners[a], corners[c] - corners[a])[2]
            for a, b, c in triangles_of(corners, polygon)
        ]
        assert 0.5 * sum(normals) == pytest.approx(3.0 if polygon[0] == 0 else -3.0)


TWO = "v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\no upper skin\nf 1 2 3\ng part of it\nf 1 3 4\no lower\nf 1 2 4\n"


def test_an_object_is_picked_by_its_name() -> None:
    assert area("a.obj", TWO.encode(), "upper skin") == pytest.approx(1.0)
    assert area("a.obj", TWO.encode(), "lower") == pytest.approx(0.5)


def test_several_objects_and_none_picked_names_them() -> None:
    with pytest.raises(MeshFileRefused) as refused:
        area("a.obj", TWO.encode())
    assert refused.value.code == "object-not-picked"
    assert str(refused.value) == (
        "the file has 2 objects: upper skin, lower; pick one with #, for example #upper skin"
    )
    with pytest.raises(MeshFileRefused, match="no object 'middle' with a face; it has upper skin, lower"):
        area("a.obj", TWO.encode(), "middle")


def test_groups_are_objects_only_where_there_is_no_object() -> None:
    groups = TWO.replace("o upper skin", "g one").replace("g part of it", "g two").replace("o lower", "g two")
    assert area("a.obj", groups.encode(), "two") == pytest.approx(1.0)
    one = "v 0 0 0\nv 1 0 0\nv 1 1 0\no whole\ng a\nf 1 2 3\ng b\nf 1 3 2\n"
    assert len(read_mesh_file("a.obj", one.encode()).objects) == 1


def test_obj_lines_are_runs() -> None:
    content = b"v 0 0 0\nv 3 4 0\nv 3 4 12\nv 0 0 1\nl 1 2 3\nl 1 4\n"
    figures = GeometryFiles(StoredFiles({"a.obj": content}), MemoryCache()).figures("run", "a.obj", "m")
    assert figures.measure == pytest.approx(18.0, rel=1e-14)


@pytest.mark.parametrize(
    ("line", "what"),
    [
        ("f 1 2 9", "line 4 of the file: corner 9 does not exist (3 so far)"),
        ("f 1 2 0", "line 4 of the file: corner 0 does not exist (3 so far)"),
        ("f 1 2 -4", "line 4 of the file: corner -4 does not exist (3 so far)"),
        ("f 1 2", "line 4 of the file: a face or line has only 2 corners"),
        ("v 1 x 2", "line 4 of the file: the line 'v 1 x 2' cannot be read"),
    ],
)
def test_a_broken_obj_names_the_line(line: str, what: str) -> None:
    content = f"v 0 0 0\nv 1 0 0\nv 1 1 0\n{line}\nf 1 2 3\n".encode()
    files = GeometryFiles(StoredFiles({"a.obj": content}), MemoryCache())
    with pytest.raises(GeometryRefused) as refused:
        files.figures("skin", "a.obj", "m")
    assert (refused.value.code, refused.value.what) == ("mesh-broken", what)


def test_a_corner_that_is_not_finite_is_refused() -> None:
    content = b"v 0 0 0\nv 1 0 nan\nv 1 1 0\nf 1 2 3\n"
    with pytest.raises(GeometryRefused) as refused:
        GeometryFiles(StoredFiles({"a.obj": content}), MemoryCache()).figures("skin", "a.obj", "m")
    assert refused.value.code == "mesh-not-finite"


def test_an_stl_that_begins_with_solid_but_is_bytes_is_read_as_bytes() -> None:
    content = b"solid facet" + CLOSED.export(file_type="stl")[11:]
    assert volume_m3("a.stl", content) == pytest.approx(1.0, rel=1e-6)


def test_an_stl_with_several_solids_wants_one_picked() -> None:
    one = trimesh.exchange.stl.export_stl_ascii(CLOSED)
    lines = one.strip().splitlines()
    both = "\n".join(
        ["solid a", *lines[1:-1], "endsolid a", "solid b", *lines[1:-1], "endsolid b", ""]
    ).encode()
    assert volume_m3("a.stl", both, picked="#b") == pytest.approx(1.0, rel=1e-6)
    with pytest.raises(GeometryRefused, match="the file has 2 objects: a, b"):
        volume_m3("a.stl", both)


@pytest.mark.parametrize(
    ("path", "content"),
    [
        ("a.stl", CLOSED.export(file_type="stl")[:-10]),
        ("a.stl", b"solid x\nfacet normal 0 0 1\nouter loop\nvertex 0 0 0\n"),
        ("a.ply", CLOSED.export(file_type="ply")[:200]),
        ("a.3mf", CLOSED.export(file_type="3mf")[:200]),
        ("a.ply", b"solid x"),
        ("a.3mf", b"PK"),
        ("a.obj", b"   \n"),
        ("a.obj", b"# nothing\n"),
    ],
)
def test_files_cut_short_or_something_else_are_refused(path: str, content: bytes) -> None:
    with pytest.raises(GeometryRefused) as refused:
        volume_m3(path, content, None if path.endswith("3mf") else "m")
    assert refused.value.code in {"mesh-broken", "mesh-empty"}


def test_another_ending_says_what_is_read() -> None:
    with pytest.raises(GeometryRefused, match="export it as OBJ, STL, PLY or 3MF"):
        volume_m3("a.step", b"x")


MODEL = """<?xml version="1.0"?>{doctype}
<model unit="{unit}" xmlns="http://schemas.microsoft.com/3dmanufacturing/core/2015/02">
<resources>
<object id="1" name="wedge" type="model"><mesh><vertices>
<vertex x="0" y="0" z="0"/><vertex x="6" y="0" z="0"/><vertex x="0" y="1" z="0"/><vertex x="0" y="0" z="1"/>
</vertices><triangles>
<triangle v1="0" v2="2" v3="1"/><triangle v1="0" v2="1" v3="3"/>
<triangle v1="1" v2="2" v3="3"/><triangle v1="0" v2="3" v3="2"/>
</triangles></mesh></object>
<object id="2" name="pair" type="model"><components>
<component objectid="1"/><component objectid="1" transform="{transform}"/>
</components></object>
</resources><build>{build}</build></model>"""


def threemf(
    build: str = '<item objectid="2"/>',
    unit: str = "inch",
    transform: str = "2 0 0 0 1 0 0 0 1 10 0 0",
    doctype: str = "",
) -> bytes:
    """An archive with a tetrahedron of volume 1 and a pair of it, one twice as long."""
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        xml = MODEL.format(unit=unit, build=build, transform=transform, doctype=doctype)
        archive.writestr("3D/3dmodel.model", xml)
    return stream.getvalue()


def test_3mf_components_are_placed_and_its_unit_counts() -> None:
    inch3 = 0.0254**3
    assert volume_m3("a.3mf", threemf(), None) == pytest.approx(3 * inch3, rel=1e-12)
    mirrored = threemf(transform="-2 0 0 0 1 0 0 0 1 -10 0 0")
    assert volume_m3("a.3mf", mirrored, None) == pytest.approx(3 * inch3, rel=1e-12)
    placed = threemf('<item objectid="1" transform="1 0 0 0 1 0 0 0 2 5 5 5"/>')
    assert volume_m3("a.3mf", placed, "in") == pytest.approx(2 * inch3, rel=1e-12)


def test_a_component_is_moved_first_by_its_own_place_and_then_by_that_of_its_item() -> None:
    # The tetrahedron's centroid is at (1.5, 0.25, 0.25); the second one is twice as long and 10 along.
    content = threemf('<item objectid="2" transform="2 0 0 0 1 0 0 0 1 0 0 100"/>')
    figures = GeometryFiles(StoredFiles({"a.3mf": content}), MemoryCache()).figures("solid", "a.3mf", None)
    x = (1 * 2 * 1.5 + 2 * 2 * (2 * 1.5 + 10)) / 3
    assert [value / 0.0254 for value in figures.centroid] == pytest.approx([x, 0.25, 100.25])


def test_3mf_objects_are_picked_by_name() -> None:
    both = threemf('<item objectid="1"/><item objectid="2" transform="1 0 0 0 1 0 0 0 1 50 0 0"/>')
    assert volume_m3("a.3mf", both, None, "#pair") == pytest.approx(3 * 0.0254**3, rel=1e-12)
    with pytest.raises(GeometryRefused, match="the file has 2 objects: wedge, pair"):
        volume_m3("a.3mf", both, None)


def test_a_3mf_unit_that_contradicts_the_plan_is_refused() -> None:
    with pytest.raises(GeometryRefused, match="says its unit is in and the plan says mm"):
        volume_m3("a.3mf", threemf(), "mm")


def test_a_3mf_with_components_in_a_ring_is_refused() -> None:
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        xml = MODEL.format(unit="inch", build="", transform="1 0 0 0 1 0 0 0 1 0 0 0", doctype="")
        archive.writestr(
            "3D/3dmodel.model", xml.replace('<component objectid="1"/>', '<component objectid="2"/>')
        )
    with pytest.raises(GeometryRefused, match="nested without end"):
        volume_m3("a.3mf", stream.getvalue(), None, "#pair")


def with_entities(entities: str, used: str) -> bytes:
    """The archive of one tetrahedron whose model declares entities and uses one."""
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        xml = MODEL.format(
            unit="inch", build='<item objectid="1"/>', transform="", doctype=f"<!DOCTYPE model [{entities}]>"
        )
        archive.writestr("3D/3dmodel.model", xml.replace("<resources>", f"<resources>{used}", 1))
    return stream.getvalue()


def test_entities_in_a_3mf_read_no_file_and_do_not_swell() -> None:
    outside = with_entities('<!ENTITY f SYSTEM "file:///nowhere/at/all">', "&f;")
    assert volume_m3("a.3mf", outside, None) == pytest.approx(0.0254**3, rel=1e-12)
    each = [f'<!ENTITY e{n} "{f"&e{n - 1};" * 10 if n else "ha"}">' for n in range(12)]
    with pytest.raises(GeometryRefused, match="the model is no XML"):
        volume_m3("a.3mf", with_entities("".join(each), "&e11;"), None)


@pytest.mark.parametrize(("skip", "code"), [(1, "mesh-open"), (6, "mesh-empty")])
def test_a_solid_that_is_not_closed_is_refused(box: Box, skip: int, code: str) -> None:
    with pytest.raises(GeometryRefused) as refused:
        volume_m3("a.obj", box((0, 0, 0), (1, 1, 1), skip=skip).encode())
    assert refused.value.code == code


def test_a_flipped_flat_or_doubled_solid_is_refused(box: Box) -> None:
    whole = box((0, 0, 0), (1, 1, 1))
    flipped = whole.replace("f 1 4 3 2", "f 1 2 3 4")
    flat = box((0, 0, 0), (1, 1, 0))
    doubled = whole + box((0.2, 0.2, 0.2), (1.5, 0.8, 0.8)).replace("f ", "f -")
    shifted = "".join(
        line
        if not line.startswith("f -")
        else "f " + " ".join(str(int(w) + 8) for w in line[3:].split()) + "\n"
        for line in doubled.splitlines(keepends=True)
    )
    codes = []
    for content in (flipped, flat, shifted):
        with pytest.raises(GeometryRefused) as refused:
            volume_m3("a.obj", content.encode())
        codes.append(refused.value.code)
    assert codes == ["mesh-flipped", "mesh-flat", "mesh-overlaps"]


def test_a_count_in_an_stl_that_does_not_fit_its_length_is_refused() -> None:
    content = bytearray(CLOSED.export(file_type="stl"))
    content[80:84] = struct.pack("<I", 4_000_000_000)
    with pytest.raises(GeometryRefused):
        volume_m3("a.stl", bytes(content))
