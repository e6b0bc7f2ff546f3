"""The open benchmark wing box read as a plan: its published masses, and its 22 cells as one tank."""

from __future__ import annotations

import time
from pathlib import Path

import pytest

from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.mesh_files import MeshFile
from ledger.exchange.plan_cells import read_cells
from ledger.exchange.plan_folder import read_plan
from ledger.model.plan import Plan

CLASSES = {"RIB": "rib", "SPAR": "web", "U_SKIN": "skin", "L_SKIN": "skin"}


def write_wing_box(folder: Path, data: Path) -> None:
    """A plan of 111 skins from one mesh file, and one tank of 22 cells."""
    (folder / "geometry").mkdir(parents=True)
    mesh = (data / "panels.obj").read_bytes()
    (folder / "geometry" / "panels.obj").write_bytes(mesh)
    names = [line[2:].decode().strip() for line in mesh.splitlines() if line.startswith(b"o ")]
    rows = ["part,class,assembly,form,made_of,geometry,geometry_unit"]
    for name in names:
        kind = CLASSES[name.split(".")[0]]
        rows.append(f"{name},{kind},WING,skin,SMEARED,geometry/panels.obj#{name},m")
    cells = sorted(path.name for path in (data / "cells").glob("*.obj"))
    tanks = ['length_unit = "m"', "[[tank]]", 'name = "box"']
    tanks.append(f"cells = [{', '.join(repr(cell[:-4]) for cell in cells)}]")
    for cell in cells:
        (folder / "geometry" / cell).write_bytes((data / "cells" / cell).read_bytes())
        tanks += ["[[cell]]", f'name = "{cell[:-4]}"', f'mesh = "geometry/{cell}"']
    texts = {
        "plan.toml": 'format = "plan-1"\nname = "box"\n[[attitude]]\nname = "level"\nfill = true\n',
        # Published with the mesh: 1550 kg/m3 x (0.0065 + 2 x 0.050 x 0.006 / 0.150) m (read).
        "laminates.csv": "laminate,areal_mass [kg/m2]\nSMEARED,16.275\n",
        "parts.csv": "\n".join(rows) + "\n",
        "tanks.toml": "\n".join(tanks) + "\n",
    }
    for name, text in texts.items():
        (folder / name).write_text(text)


@pytest.fixture(scope="module")
def plan(wing_box: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wing") / "plan"
    write_wing_box(folder, wing_box)
    return folder


def mass_kg(read: Plan, *starts: str) -> float:
    areas = [
        shape.measure
        for part, shape in zip(read.parts, read.shapes, strict=True)
        if part.name.startswith(starts)
    ]
    assert areas
    return 16.275 * sum(areas)


def test_areas_times_areal_mass_are_the_published_masses(
    plan: Path, wing_box_figures: dict[str, float]
) -> None:
    begin = time.perf_counter()
    read = read_plan(plan, cache := MemoryCache())
    first = time.perf_counter() - begin
    box = read.plan
    assert box is not None, read.findings
    assert (len(box.parts), len(box.tanks.cells)) == (111, 22)
    # The published masses integrate bilinear quads; two flat triangles a quad leave about 1e-6 (read).
    starts = {
        "all panels": ("RIB", "SPAR", "U_SKIN", "L_SKIN"),
        "lower skin": ("L_SKIN",),
        "upper skin": ("U_SKIN",),
        "spars": ("SPAR",),
        "ribs": ("RIB",),
    }
    for name, prefixes in starts.items():
        assert mass_kg(box, *prefixes) == pytest.approx(wing_box_figures[f"mass, {name}"], rel=2e-6), name
    begin = time.perf_counter()
    assert read_plan(plan, cache) == read
    # As a share of the first reading, so that a busy machine does not decide.
    assert time.perf_counter() - begin < 0.5 * first


def test_the_mesh_of_111_parts_is_parsed_once(
    plan: Path, wing_box: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    from ledger.exchange import obj_mesh

    parsed: list[int] = []
    whole = obj_mesh.read_obj

    def counted(content: bytes) -> MeshFile:
        parsed.append(len(content))
        return whole(content)

    monkeypatch.setattr(obj_mesh, "read_obj", counted)
    assert read_plan(plan).plan is not None
    assert parsed.count((wing_box / "panels.obj").stat().st_size) == 1
    assert len(parsed) == 23


def test_the_bays_hold_what_general_mesh_libraries_say(
    plan: Path, wing_box_figures: dict[str, float]
) -> None:
    read = read_plan(plan)
    assert read.plan is not None
    cells = read_cells(read.plan, read.files)
    assert len(cells) == 22
    for name, cell in cells.items():
        assert cell.volume_m3 == pytest.approx(wing_box_figures[f"volume, {name}"], rel=1e-9)
