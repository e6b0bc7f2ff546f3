"""Geometry that means nothing is refused by the commands: a place, a remedy, exit 1, and nothing written."""

from __future__ import annotations

import json
import re
import shutil
from itertools import combinations
from pathlib import Path
from typing import Any

import pytest

SOUND = Path(__file__).resolve().parents[2] / "sample_builds" / "one_cell_box" / "plan"

Corner = tuple[float, float, float]
Face = tuple[int, ...]
Mesh = tuple[list[Corner], list[Face]]


def box(low: Corner = (2000, 100, 0), high: Corner = (3000, 600, 200)) -> Mesh:
    """The sample's own cell, outward, millimetres."""
    (x0, y0, z0), (x1, y1, z1) = low, high
    corners = [(x, y, z) for z in (z0, z1) for x, y in ((x0, y0), (x1, y0), (x1, y1), (x0, y1))]
    faces: list[Face] = [(1, 4, 3, 2), (5, 6, 7, 8), (1, 2, 6, 5), (2, 3, 7, 6), (3, 4, 8, 7), (4, 1, 5, 8)]
    return corners, faces


def joined(*meshes: Mesh) -> Mesh:
    corners: list[Corner] = []
    faces: list[Face] = []
    for own, rows in meshes:
        faces += [tuple(at + len(corners) for at in row) for row in rows]
        corners += own
    return corners, faces


def turned(mesh: Mesh, *which: int) -> Mesh:
    """Some faces, all where none is named, looking the other way."""
    corners, faces = mesh
    return corners, [row[::-1] if not which or at in which else row for at, row in enumerate(faces)]


def obj(mesh: Mesh) -> bytes:
    lines = [f"v {x} {y} {z}" for x, y, z in mesh[0]] + ["f " + " ".join(map(str, row)) for row in mesh[1]]
    return ("o B1\n" + "\n".join(lines) + "\n").encode()


CORNERS, FACES = box()
BAD_SOLIDS = {
    "a face missing": (obj((CORNERS, FACES[:-1])), "is not closed at 4 edges"),
    "a triangle hanging on it": (obj((CORNERS, [*FACES, (1, 2, 7)])), "is not closed at 3 edges"),
    "one face flipped": (obj(turned(box(), 1)), "face opposite ways across 4 edges"),
    "inside out": (obj(turned(box())), "every face of the mesh looks inward"),
    "two bodies that cross": (
        obj(joined(box(), box((2500, 300, 100), (3500, 900, 300)))),
        "runs through itself",
    ),
    "the same body twice": (
        obj(joined(box(), box())),
        "counted twice|runs through itself|face opposite ways",
    ),
    "a body inside another": (obj(joined(box(), box((2100, 200, 50), (2200, 300, 90)))), "is counted twice"),
    "no thickness": (obj(box(high=(3000, 600, 0))), "encloses no volume"),
    "no faces": (obj((CORNERS, [])), "has no face"),
    "faces of one corner": (
        obj((CORNERS, [(1, 1, 1), (2, 2, 2)])),
        "every triangle of the mesh is a point|has no area",
    ),
    "no bytes": (b"", "the file is empty"),
    "a corner that is not finite": (
        obj(box()).replace(b"v 3000 600 200", b"v nan 600 200"),
        "not a number|not finite",
    ),
}
BAD_OUTLINES = {
    "open": ([(0, 0), (1000, 0), (1000, 500), (0, 500)], False, "the outline is open"),
    "crossing itself": ([(0, 0), (1000, 500), (1000, 0), (0, 500)], True, "crosses or touches itself"),
    "without area": ([(0, 0), (1000, 0), (500, 0)], True, "encloses no area"),
}


@pytest.fixture
def plan(tmp_path: Path) -> Path:
    """A copy of the one-cell box, to be spoilt."""
    return Path(shutil.copytree(SOUND, tmp_path / "plan"))


@pytest.fixture
def book(run: Any, tmp_path: Path) -> Path:
    """A sound book, whose next iteration will be the spoilt plan."""
    path = tmp_path / "box.wingledger"
    assert run("start", path, SOUND).code == 0
    return path


def contents(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir() if path.is_file()}


def assert_refused(run: Any, plan: Path, book: Path, what: str, place: str) -> None:
    """By `start`, `adopt` and its preview: one line a finding, and every file as it was."""
    before = contents(book.parent)
    for words in (
        ("start", book.parent / "new.wingledger", plan),
        ("adopt", book, plan),
        ("adopt", book, plan, "--preview"),
    ):
        ran = run(*words)
        assert (ran.code, ran.out) == (1, ""), (words, ran.err)
        assert "Traceback" not in ran.err
        # Where, what is wrong, a semicolon, and what to do about it.
        assert re.match(rf"STOP  {re.escape(place)}.*({what}).*; \w", ran.err), ran.err
        assert contents(book.parent) == before


@pytest.mark.parametrize("damage", BAD_SOLIDS)
def test_a_cell_that_encloses_nothing_sure_is_refused(run: Any, plan: Path, book: Path, damage: str) -> None:
    content, what = BAD_SOLIDS[damage]
    (plan / "geometry" / "B1.obj").write_bytes(content)
    assert_refused(run, plan, book, what, "tanks.toml:10:mesh  cell 'B1': ")


@pytest.mark.parametrize("damage", BAD_SOLIDS)
def test_a_solid_part_that_encloses_nothing_sure_is_refused(
    run: Any, plan: Path, book: Path, damage: str
) -> None:
    content, what = BAD_SOLIDS[damage]
    (plan / "geometry" / "block.obj").write_bytes(content)
    materials = (plan / "materials.csv").read_text().splitlines()
    assert "density" not in materials[0]
    rows = [f"{materials[0]},density [kg/m3]", *(f"{row}," for row in materials[1:])]
    rows.append("oak,solid," + "," * (rows[0].count(",") - 2) + "700")
    (plan / "materials.csv").write_text("\n".join(rows) + "\n")
    with (plan / "parts.csv").open("a") as lines:
        lines.write("BLOCK,block,fitting,C,BOX,solid,oak,geometry/block.obj,mm,,,\n")
    assert_refused(run, plan, book, what, "parts.csv:8:geometry  ")


@pytest.mark.parametrize("damage", ["no faces", "faces of one corner", "no bytes"])
def test_a_skin_of_nothing_is_refused(run: Any, plan: Path, book: Path, damage: str) -> None:
    content, what = BAD_SOLIDS[damage]
    (plan / "geometry" / "skin.obj").write_bytes(content)
    with (plan / "parts.csv").open("a") as lines:
        lines.write("SKIN,skin,skin,C,BOX,skin,WALL 2000,geometry/skin.obj,mm,,,\n")
    assert_refused(run, plan, book, what, "parts.csv:8:geometry  ")


@pytest.mark.parametrize("damage", BAD_OUTLINES)
def test_an_outline_that_encloses_nothing_sure_is_refused(
    run: Any, plan: Path, book: Path, damage: str
) -> None:
    import ezdxf

    points, close, what = BAD_OUTLINES[damage]
    drawing = ezdxf.new(units=4)
    drawing.layers.add("FLOOR")
    drawing.modelspace().add_lwpolyline(points, close=close, dxfattribs={"layer": "FLOOR"})
    drawing.saveas(plan / "geometry" / "floor.dxf")
    parts = plan / "parts.csv"
    parts.write_text(parts.read_text().replace("geometry/panels.dxf#FLOOR", "geometry/floor.dxf#FLOOR", 1))
    assert_refused(run, plan, book, what, "parts.csv:2:geometry  ")


def test_every_bad_cell_and_outline_of_a_plan_is_told_at_once(run: Any, plan: Path, tmp_path: Path) -> None:
    tanks = plan / "tanks.toml"
    names = [f"X{at}" for at in range(len(BAD_SOLIDS))]
    text = tanks.read_text().replace('cells = ["B1"]', f"cells = {json.dumps(['B1', *names])}")
    for name, (content, _) in zip(names, BAD_SOLIDS.values(), strict=True):
        (plan / "geometry" / f"{name}.obj").write_bytes(content)
        text += f'[[cell]]\nname = "{name}"\nmesh = "geometry/{name}.obj"\n'
    tanks.write_text(text)
    ran = run("start", tmp_path / "new.wingledger", plan)
    assert ran.code == 1
    told = {name: [line for line in ran.err.splitlines() if f"'{name}'" in line] for name in names}
    assert {name: len(lines) for name, lines in told.items()} == dict.fromkeys(names, 1)
    places = [lines[0].split()[1] for lines in told.values()]
    assert all(one != two for one, two in combinations(places, 2))
    assert not (tmp_path / "new.wingledger").exists()
