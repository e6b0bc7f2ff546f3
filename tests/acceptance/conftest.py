"""Commands run as a user runs them, and a small wing to run them on.

The wing: a six-ply skin, a rib from a sheet, two clips, a joint, a weight, and a box of a tank.
"""

from __future__ import annotations

import contextlib
import io
import json
import shutil
import sqlite3
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.cli.app import run_command

SCHEMAS = Path(__file__).resolve().parents[2] / "schemas"
PLAN = """format = "plan-1"
name = "r1"
title = "as drawn"
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
MATERIALS = """\
material,kind,areal_mass [g/m2],density [kg/m3],linear_mass [g/m],ratio,ratio_tolerance [%],pot_life [min]
twill,fabric,200,,,,,
lam resin,resin,,1150,,100:27,3,25
lam hardener,hardener,,950,,,,
bead,paste,,,40,,,
paint,finish,,1300,,,,
"""
LAMINATES = """laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]
SHEET,2000,,,,
SIX,,1,twill,0,50
SIX,,2,twill,45,50
SIX,,3,twill,90,50
SIX,,4,twill,90,50
SIX,,5,twill,45,50
SIX,,6,twill,0,50
"""
PARTS = """\
part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin,across,up_axis,quantity,\
planned_mass [g]
SKIN-L,skin,skin,L,WING/LEFT,skin,SIX,geometry/skin.obj,m,,,,,
RIB-L,rib,rib,L,WING/LEFT,panel,SHEET,geometry/rib.dxf,m,0 0 0,1 0 0,0 0 1,,
CLIP-L,clip,fitting,L,WING/LEFT,panel,SHEET,geometry/clip.dxf,m,0 0.2 0,1 0 0,0 0 1,2,
JOINT-L,joint,joint,L,WING/LEFT,run,bead,geometry/joint.obj,m,,,,,
TIP-L,tip weight,fitting,L,WING/LEFT,item,,,m,0.5 0.5 0.1,,,,250
"""
TANKS = """length_unit = "m"
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
CORNERS = "".join(f"v {x} {y} {z}\n" for z in (0, 0.2) for x, y in ((0, 0), (1, 0), (1, 0.5), (0, 0.5)))
FACES = "f 1 4 3 2\nf 5 6 7 8\nf 1 2 6 5\nf 2 3 7 6\nf 3 4 8 7\nf 4 1 5 8\n"
FILES = {
    "plan.toml": PLAN,
    "materials.csv": MATERIALS,
    "laminates.csv": LAMINATES,
    "parts.csv": PARTS,
    "tanks.toml": TANKS,
    "geometry/box.obj": CORNERS + FACES,
    "geometry/skin.obj": CORNERS + "f 5 6 7 8\n",
    "geometry/joint.obj": "v 0 0.1 0\nv 1 0.1 0\nl 1 2\n",
}
# What is in stock before anything is built.
STOCK = """\
kind,instrument,what,resolution,accuracy,material,quantity,lot,laminate,sheet,length [mm],width [mm],mass [g]
instrument,W1,scale,1 g,1 g,,,,,,,,
receive,,,,,twill,50 m2,CLOTH,,,,,
receive,,,,,lam resin,5 kg,RESIN,,,,,
receive,,,,,lam hardener,2 kg,HARD,,,,,
receive,,,,,paint,1 kg,GREY,,,,,
sheet,,,,,,,,SHEET,BIG,2000,1000,4000
"""


@dataclass(frozen=True, slots=True, kw_only=True)
class Ran:
    """How a command ended and what it said where."""

    code: int
    out: str
    err: str

    @property
    def read(self) -> Any:
        """What it printed with --json."""
        assert self.code == 0, self.err
        return json.loads(self.out)


Run = Callable[..., Ran]


def run_words(*words: object) -> Ran:
    """Run one command in this process; opening the screens does nothing."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = run_command([str(word) for word in words], lambda _book: None)
    return Ran(code=code, out=out.getvalue(), err=err.getvalue())


@pytest.fixture(scope="session")
def run() -> Iterator[Run]:
    """One command, for fixtures of any scope."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WINGLEDGER_BY", "JK")
        patch.delenv("WINGLEDGER_DEBUG", raising=False)
        yield run_words


def _rectangle(path: Path, width: float, height: float) -> None:
    import ezdxf

    drawing = ezdxf.new(units=6)
    corners = [(0, 0), (width, 0), (width, height), (0, height)]
    drawing.modelspace().add_lwpolyline(corners, close=True)
    drawing.saveas(path)


@pytest.fixture(scope="session")
def plan(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The plan's folder: to be copied, never changed."""
    folder = tmp_path_factory.mktemp("acceptance") / "plan"
    (folder / "geometry").mkdir(parents=True)
    for name, text in FILES.items():
        (folder / name).write_text(text, encoding="utf-8")
    _rectangle(folder / "geometry" / "rib.dxf", 1.0, 0.2)
    _rectangle(folder / "geometry" / "clip.dxf", 0.1, 0.1)
    return folder


@pytest.fixture(scope="session")
def stocked(run: Any, plan: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book with the stock in it: to be copied, never written to."""
    folder = tmp_path_factory.mktemp("acceptance-books")
    book, stock = folder / "wing.wingledger", folder / "stock.csv"
    stock.write_text(STOCK, encoding="utf-8")
    assert run("start", book, plan).code == 0
    ran = run("enter", book, "--from", stock)
    assert ran.err == ""
    return book


@dataclass(frozen=True, slots=True, kw_only=True)
class Bench:
    """One book and the commands on it. Every output with --json is held against its published schema."""

    book: Path
    run: Callable[..., Any]

    def figures(self, command: str, *words: object) -> Any:
        """What a command prints with --json."""
        ran = self.run(command, self.book, *words, "--json")
        name = {"withdraw": "enter", "correct": "enter"}.get(command, command)
        read = json.loads(ran.out)
        jsonschema.validate(read, json.loads((SCHEMAS / "output" / f"{name}.json").read_text()))
        assert ran.code == 0 or command == "check", ran.err
        return read

    def enter(self, kind: str, **fields: str) -> Any:
        """One entry."""
        return self.figures("enter", kind, *(f"{word}={text}" for word, text in fields.items()))

    def part(self, name: str) -> Any:
        """One part's row in the weights."""
        return next(part for part in self.figures("weights")["parts"] if part["part"] == name)

    def causes_g(self) -> dict[str, float]:
        """Off plan by cause, grams, those that are not nothing."""
        read = self.figures("weights")
        causes = {one["cause"]: one["mass_kg"] for one in read["off_plan"]}
        off = read["total"]["best_kg"] - read["total"]["estimated_kg"]
        assert sum(causes.values()) == pytest.approx(off, abs=1e-9)
        return {cause: mass * 1000 for cause, mass in causes.items() if abs(mass) > 1e-9}

    def rows(self) -> list[dict[str, Any]]:
        """The table of entries, as any program reads it."""
        connection = sqlite3.connect(self.book)
        connection.row_factory = sqlite3.Row
        try:
            return [dict(row) for row in connection.execute("SELECT * FROM entry ORDER BY seq")]
        finally:
            connection.close()


@pytest.fixture
def bench(run: Any, stocked: Path, tmp_path: Path) -> Bench:
    """A book of one's own with the stock in it."""
    return Bench(book=Path(shutil.copy(stocked, tmp_path / "wing.wingledger")), run=run)
