"""A small plan, and a small layout, each with any of its files changed; drawings and meshes."""

from __future__ import annotations

import shutil
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path
from typing import Any

import pytest

from ledger.exchange.layout_toml import ReadLayout, read_layout
from ledger.exchange.plan_folder import ReadPlan, read_plan

SMALL_WING = Path(__file__).resolve().parents[2] / "sample_builds" / "small_wing"
PLAN = """format = "plan-1"
name = "r1"
title = "First"
[fuel]
grade = "avgas"
density_15C = "715 kg/m3"
[[attitude]]
name = "ground"
fill = true
flight = false
[[attitude]]
name = "climb"
pitch_deg = 10.0
"""
MATERIALS = """material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm],linear_mass [g/m]
cloth,fabric,200,,,
foam,core,,80,10,
alloy,solid,,2700,,
bead,paste,,,,34
"""
LAMINATES = """laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]
PLATE,2000,,,,
SANDWICH,,1,cloth,45,50
SANDWICH,,2,foam,,
SANDWICH,,3,cloth,45,50
"""
PARTS_HEAD = (
    "part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin [m],across,up_axis,"
    "face,quantity,planned_mass [g],mirror_of"
)
TANKS = """length_unit = "m"
[[tank]]
name = "left"
cells = ["L1", "L2"]
[[cell]]
name = "L1"
mesh = "geometry/near.obj"
[[cell]]
name = "L2"
mesh = "geometry/far.obj"
[[opening]]
name = "drain"
between = ["L1", "L2"]
shape = "circle"
centre = [0.5, 1.0, 0.05]
diameter = 0.02
normal = [0, 1, 0]
[[opening]]
name = "out"
between = ["L1", "outlet"]
shape = "circle"
centre = [0.5, 0.5, 0.0]
diameter = 0.01
normal = [0, 0, 1]
[[opening]]
name = "cap"
between = ["L2", "filler"]
shape = "circle"
centre = [0.5, 1.5, 0.2]
diameter = 0.04
normal = [0, 0, 1]
[[opening]]
name = "air"
between = ["L2", "vent"]
shape = "pipe"
points = [[0.5, 1.6, 0.19], [0.5, 1.6, 0.3]]
bore = 0.006
"""
BOX_FACES = ((0, 3, 2, 1), (4, 5, 6, 7), (0, 1, 5, 4), (1, 2, 6, 5), (2, 3, 7, 6), (3, 0, 4, 7))


def box_obj(low: tuple[float, float, float], high: tuple[float, float, float], *, skip: int = 0) -> str:
    """A box as quads that look outward; the last `skip` faces are left out."""
    (x0, y0, z0), (x1, y1, z1) = low, high
    corners = [(x, y, z) for z in (z0, z1) for x, y in ((x0, y0), (x1, y0), (x1, y1), (x0, y1))]
    lines = [f"v {x!r} {y!r} {z!r}" for x, y, z in corners]
    faces = BOX_FACES[: len(BOX_FACES) - skip]
    lines += ["f " + " ".join(str(corner + 1) for corner in face) for face in faces]
    return "\n".join(lines) + "\n"


Files = Mapping[str, str | bytes | None]
Written = Callable[..., Path]


@pytest.fixture
def write_plan(tmp_path: Path) -> Written:
    """Write the plan with files replaced, added, or left out where None; returns its folder."""

    def write(files: Files | None = None, *, parts: Iterable[str] = (), name: str = "plan") -> Path:
        whole: dict[str, str | bytes | None] = {
            "plan.toml": PLAN,
            "materials.csv": MATERIALS,
            "laminates.csv": LAMINATES,
            "parts.csv": "\n".join([PARTS_HEAD, *parts]) + "\n",
            **(files or {}),
        }
        folder = tmp_path / name
        for path, content in whole.items():
            if content is None:
                continue
            file = folder / path
            file.parent.mkdir(parents=True, exist_ok=True)
            file.write_bytes(content.encode() if isinstance(content, str) else content)
        return folder

    return write


@pytest.fixture
def read_with(write_plan: Written) -> Callable[..., ReadPlan]:
    """Write the plan with changes and read it."""

    def read(files: Files | None = None, *, parts: Iterable[str] = (), **more: Any) -> ReadPlan:
        return read_plan(write_plan(files, parts=parts, **more))

    return read


@pytest.fixture
def tank_files() -> dict[str, str]:
    """tanks.toml with two boxes side by side, one metre each way and 0.2 m deep."""
    return {
        "tanks.toml": TANKS,
        "geometry/near.obj": box_obj((0.0, 0.0, 0.0), (1.0, 1.0, 0.2)),
        "geometry/far.obj": box_obj((0.0, 1.0, 0.0), (1.0, 2.0, 0.2)),
    }


@pytest.fixture
def box() -> Callable[..., str]:
    """A box as OBJ text."""
    return box_obj


@pytest.fixture
def told() -> Callable[[ReadPlan], list[str]]:
    """Findings as a person reads them."""
    return lambda read: [str(finding) for finding in read.findings]


@pytest.fixture
def read(tmp_path: Path) -> Callable[..., ReadLayout]:
    """Reads a layout, by default the small wing, with texts in it replaced and files beside it added.

    Files are named as `root__dat`.
    """

    def read_with(*changes: tuple[str, str], text: str | None = None, **files: str) -> ReadLayout:
        content = (SMALL_WING / "layout.toml").read_text(encoding="utf-8") if text is None else text
        for was, becomes in changes:
            assert was in content, was
            content = content.replace(was, becomes, 1)
        for name in ("materials.csv", "laminates.csv"):
            shutil.copy(SMALL_WING / name, tmp_path)
        for name, other in files.items():
            (tmp_path / name.replace("__", ".")).write_text(other, encoding="utf-8")
        (tmp_path / "layout.toml").write_text(content, encoding="utf-8")
        return read_layout(tmp_path / "layout.toml")

    return read_with
