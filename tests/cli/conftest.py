"""A small plan and its book: one tank that is a box, one rib, one skin and a tip weight."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import pytest

from ledger.cli.app import run_command

PLAN = """
format = "plan-1"
name = "r1"
title = "a box of a wing"
display = "metric"

[fuel]
grade = "avgas"
density_15C = "715 kg/m3"

[[attitude]]
name = "ground"
fill = true
flight = false

[[attitude]]
name = "climb"
pitch_deg = 5.0
"""

MATERIALS = """material,kind,areal_mass [g/m2],density [kg/m3],ratio,ratio_tolerance [%],pot_life [min]
twill,fabric,200,,,,
lam resin,resin,,1150,100:27,3,25
lam hardener,hardener,,950,,,
"""

LAMINATES = """laminate,areal_mass [g/m2],step,material,orientation [deg],coverage [%],resin_fraction [%]
SHEET,2000,,,,,
WET,,1,twill,0,,50
WET,,2,twill,45,,50
"""

PARTS = """\
part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin,across,up_axis,planned_mass
SKIN-L,skin,skin,L,WING/LEFT,skin,WET,geometry/skin.obj,m,,,,
RIB-L,front rib,rib,L,WING/LEFT,panel,SHEET,geometry/rib.dxf,m,0 0 0,1 0 0,0 0 1,
TIP-L,tip weight,fitting,L,WING/LEFT,item,,,m,0.5 0.5 0.1,,,250 g
"""

TANKS = """
length_unit = "m"
[[tank]]
name = "box"
cells = ["B1"]
[[cell]]
name = "B1"
mesh = "geometry/box.obj"
[[opening]]
name = "outlet"
between = ["B1", "outlet"]
shape = "circle"
centre = [0.0, 0.25, 0.0]
diameter = 1e-6
normal = [1, 0, 0]
[[opening]]
name = "cap"
between = ["B1", "filler"]
shape = "circle"
centre = [0.5, 0.25, 0.2]
diameter = 0.05
normal = [0, 0, 1]
[[opening]]
name = "breather"
between = ["B1", "vent"]
shape = "circle"
centre = [0.4, 0.25, 0.2]
diameter = 0.01
normal = [0, 0, 1]
"""

BOX = """v 0 0 0
v 1 0 0
v 1 0.5 0
v 0 0.5 0
v 0 0 0.2
v 1 0 0.2
v 1 0.5 0.2
v 0 0.5 0.2
f 1 4 3
f 1 3 2
f 5 6 7
f 5 7 8
f 1 2 6
f 1 6 5
f 2 3 7
f 2 7 6
f 3 4 8
f 3 8 7
f 4 1 5
f 4 5 8
"""

SKIN = """v 0 0 0.2
v 1 0 0.2
v 1 0.5 0.2
v 0 0.5 0.2
f 1 2 3
f 1 3 4
"""


def write_rib(path: Path) -> None:
    """A rectangle of 1 m by 0.2 m as a closed outline."""
    import ezdxf

    drawing = ezdxf.new(units=6)
    drawing.modelspace().add_lwpolyline([(0, 0), (1, 0), (1, 0.2), (0, 0.2)], close=True)
    drawing.saveas(path)


@pytest.fixture(scope="session")
def plan(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The plan's folder."""
    folder = tmp_path_factory.mktemp("plans") / "r1"
    (folder / "geometry").mkdir(parents=True)
    for name, text in (
        ("plan.toml", PLAN),
        ("materials.csv", MATERIALS),
        ("laminates.csv", LAMINATES),
        ("parts.csv", PARTS),
        ("tanks.toml", TANKS),
        ("geometry/box.obj", BOX),
        ("geometry/skin.obj", SKIN),
    ):
        (folder / name).write_text(text, encoding="utf-8")
    write_rib(folder / "geometry" / "rib.dxf")
    return folder


@dataclass(frozen=True, slots=True, kw_only=True)
class Ran:
    """How a command ended and what it said where."""

    code: int
    out: str
    err: str


Run = Callable[..., Ran]


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Run:
    """Run one command in this process, as JK; opening the screens only says which book."""
    monkeypatch.setenv("WINGLEDGER_BY", "JK")
    monkeypatch.delenv("WINGLEDGER_DEBUG", raising=False)

    def ran(*words: object) -> Ran:
        capsys.readouterr()
        code = run_command([str(word) for word in words], lambda book: print(f"SCREENS {book}"))
        said = capsys.readouterr()
        return Ran(code=code, out=said.out, err=said.err)

    return ran


@pytest.fixture(scope="session")
def begun(plan: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book just started, to be copied and never written to."""
    from ledger.operations.start_book import start_book

    book = tmp_path_factory.mktemp("books") / "wing.wingledger"
    start_book(book, plan, by="JK")
    return book


@pytest.fixture
def book(begun: Path, tmp_path: Path) -> Path:
    """A book of one's own, just started."""
    return Path(shutil.copy(begun, tmp_path / "wing.wingledger"))
