"""A small invented build: two ribs, a clip made four times, a skin of three plies and a bolt."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.model.comparison import Comparison, Pair
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.compare_iterations import compare_iterations
from ledger.operations.log_entry import LoggedEntry, log_entry
from ledger.operations.start_book import start_book

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
FILES = {
    "plan.toml": 'format = "plan-1"\nname = "r1"\ntitle = "first"\ndisplay = "metric"\n',
    "materials.csv": (
        "material,kind,areal_mass [g/m2],density [kg/m3]\n"
        "carbon 200,fabric,200,\nepoxy,resin,,1150\nslow,hardener,,950\n"
    ),
    "laminates.csv": (
        "laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]\n"
        "SANDWICH,1500,,,,\n"
        "PLIES,,1,carbon 200,0,40\nPLIES,,2,carbon 200,45,40\nPLIES,,3,carbon 200,-45,40\n"
    ),
    "parts.csv": (
        "part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin,planned_mass,quantity\n"
        "RIB.01-L,Rib.01-L,rib,L,WING/LEFT/ribs,skin,SANDWICH,geometry/rib.obj,m,,,1\n"
        "RIB.01-R,Rib.01-R,rib,R,WING/RIGHT/ribs,skin,SANDWICH,geometry/rib.obj,m,,,1\n"
        "CLIP,Clip,rib,L,WING/LEFT/ribs,skin,SANDWICH,geometry/rib.obj,m,,,4\n"
        "SKIN-L,Skin-L,skin,L,WING/LEFT/skins,skin,PLIES,geometry/skin.obj,m,,,1\n"
        "BOLT,Bolt,fitting,L,WING,item,,,m,0 0 0,12 g,1\n"
    ),
    "geometry/rib.obj": "v 0 0 0\nv 0.4 0 0\nv 0.4 0 0.2\nv 0 0 0.2\nf 1 2 3\nf 1 3 4\n",
    "geometry/skin.obj": "v 0 0 0\nv 0.5 0 0\nv 0.5 1 0\nv 0 1 0\nf 1 2 3\nf 1 3 4\n",
}


TANK = """length_unit = "m"
[[tank]]
name = "{tank}"
cells = ["B1"]
[[cell]]
name = "B1"
mesh = "geometry/box.obj"
[[opening]]
name = "outlet"
between = ["B1", "outlet"]
shape = "circle"
centre = [0.0, 0.25, {low}]
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


def write_plan(folder: Path, name: str) -> Path:
    """The plan as a folder, under a name."""
    for path, text in FILES.items():
        file = folder / path
        file.parent.mkdir(parents=True, exist_ok=True)
        file.write_text(text.replace('name = "r1"', f'name = "{name}"'))
    return folder


class Shop:
    """A book, a clock that goes on a minute an entry, and the way to log."""

    def __init__(self, book: Path) -> None:
        self.book = book
        self.now = NOON

    def log(self, kind: str, **fields: str) -> LoggedEntry:
        """Log an entry; a trailing underscore frees words the language keeps for itself."""
        self.now += timedelta(minutes=1)
        named = {word.rstrip("_"): text for word, text in fields.items()}
        return log_entry(self.book, kind, named, by="JK", now=self.now)

    def adopt(self, name: str) -> None:
        """Adopt the same plan under another name."""
        folder = write_plan(self.book.with_name(f"plan {name}"), name)
        adopt_plan(self.book, folder, by="JK", now=self.now)
        shutil.rmtree(folder)


@pytest.fixture(scope="session")
def begun(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book with nothing in it but the plan, to be copied."""
    folder = tmp_path_factory.mktemp("begun")
    start_book(folder / "begun.book", write_plan(folder / "plan", "r1"), by="JK", now=NOON)
    return folder / "begun.book"


@pytest.fixture
def make_shop(tmp_path: Path, begun: Path) -> Callable[[str], Any]:
    """A fresh book under a name, begun with the plan."""

    def make(name: str) -> Shop:
        shutil.copyfile(begun, tmp_path / name)
        return Shop(tmp_path / name)

    return make


@pytest.fixture(scope="session")
def stocked(begun: Path) -> Shop:
    """Such a book with lots CLOTH, RESIN and HARD, sheet PLATE and scale W2, to be copied."""
    book = begun.with_name("stocked.book")
    shutil.copyfile(begun, book)
    made = Shop(book)
    made.log("receive", material="carbon 200", quantity="20 m2", lot="CLOTH")
    made.log("receive", material="epoxy", quantity="5 kg", lot="RESIN")
    made.log("receive", material="slow", quantity="2 kg", lot="HARD")
    made.log("sheet", laminate="SANDWICH", length="1200 mm", width="600 mm", sheet="PLATE", mass="1.1 kg")
    made.log("instrument", instrument="W2", what="scale", resolution="1 g")
    return made


@pytest.fixture
def shop(tmp_path: Path, stocked: Shop) -> Any:
    """The usual book: a copy of the stocked one."""
    shutil.copyfile(stocked.book, tmp_path / "wing.book")
    made = Shop(tmp_path / "wing.book")
    made.now = stocked.now
    return made


class Drawing:
    """Small plans written row by row: ribs of 0.1 m2, a skin of two plies on 1 m2, items, a box of a tank."""

    HEADS = (
        "part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin,across,up_axis,quantity,"
        "planned_mass"
    )
    GROUND = '[[attitude]]\nname = "ground"\nfill = true\nflight = false\n'
    CRUISE = '[[attitude]]\nname = "cruise"\n'
    PLIES = "PLIES,plies,skin,L,WING,skin,SKIN,geometry/skin.obj,m,,,,,"

    @staticmethod
    def rib(
        name: str = "RIB", *, file: str = "rib", x: float = 0.0, quantity: int = 1, made_of: str = "SHEET"
    ) -> str:
        """A rib's row; `long` is a file of one a tenth longer."""
        return f"{name},a rib,rib,L,WING,skin,{made_of},geometry/{file}.obj,m,{x} 0 0,1 0 0,0 0 1,{quantity},"

    @staticmethod
    def item(name: str, mass: str, x: float = 0.0, y: float = 0.0) -> str:
        """An item's row."""
        return f"{name},a thing,fitting,L,WING,item,,,m,{x} {y} 0,,,,{mass}"

    @staticmethod
    def climb(pitch_deg: float) -> str:
        """An attitude of flight, nose up."""
        return f'[[attitude]]\nname = "climb"\npitch_deg = {pitch_deg}\n'

    @staticmethod
    def fuel(density: str) -> str:
        """The fuel of a plan."""
        return f'[fuel]\ngrade = "avgas"\ndensity_15C = "{density}"\n'

    @staticmethod
    def tank(name: str, low: float) -> str:
        """tanks.toml of a tank of one box, whose outlet stands so many metres above the floor."""
        return TANK.format(tank=name, low=low)

    @staticmethod
    def box(length: float, width: float) -> str:
        """A closed box 0.2 m high, as OBJ in metres."""
        corners = "".join(
            f"v {x} {y} {z}\n"
            for z in (0, 0.2)
            for x, y in ((0, 0), (length, 0), (length, width), (0, width))
        )
        return corners + "f 1 4 3 2\nf 5 6 7 8\nf 1 2 6 5\nf 2 3 7 6\nf 3 4 8 7\nf 4 1 5 8\n"

    @staticmethod
    def write(
        folder: Path,
        name: str,
        rows: list[str],
        *,
        files: dict[str, str] | None = None,
        tank: str | None = None,
        head: str = "",
        steps: tuple[int, ...] = (0, 45),
    ) -> Path:
        """A plan folder of these rows of parts."""
        (folder / "geometry").mkdir(parents=True, exist_ok=True)
        title = f'format = "plan-1"\nname = "{name}"\ntitle = "T {name}"\n'
        (folder / "plan.toml").write_text(title + head)
        materials = "material,kind,areal_mass [g/m2]\ncloth,fabric,200\nepoxy,resin,\n"
        (folder / "materials.csv").write_text(materials)
        plies = "".join(f"SKIN,,{number},cloth,{turn},50\n" for number, turn in enumerate(steps, start=1))
        (folder / "laminates.csv").write_text(
            "laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]\n"
            f"SHEET,1500,,,,\nTHICK,3000,,,,\n{plies}"
        )
        (folder / "parts.csv").write_text("\n".join([Drawing.HEADS, *rows]) + "\n")
        shapes = {"rib": _sheet(0.5, 0.2), "long": _sheet(0.55, 0.2), "skin": _sheet(1.0, 1.0)}
        for file, text in (shapes | (files or {})).items():
            (folder / "geometry" / f"{file}.obj").write_text(text)
        if tank is not None:
            (folder / "tanks.toml").write_text(tank)
        return folder


def _sheet(length: float, height: float) -> str:
    return f"v 0 0 0\nv {length} 0 0\nv {length} {height} 0\nv 0 {height} 0\nf 1 2 3 4\n"


@pytest.fixture(scope="session")
def drawing() -> type[Drawing]:
    """The writer of small plans."""
    return Drawing


@pytest.fixture
def two(drawing: type[Drawing], tmp_path: Path) -> Callable[..., Comparison]:
    """A book begun with one plan, and the second adopted or only compared with."""

    def compare(first: dict[str, Any], second: dict[str, Any], *, adopted: bool = True) -> Comparison:
        book = tmp_path / "wing.book"
        start_book(book, drawing.write(tmp_path / "one", "r1", **first), by="JK", now=NOON)
        folder = drawing.write(tmp_path / "two", "r2", **second)
        if adopted:
            adopt_plan(book, folder, by="JK", now=NOON)
        return compare_iterations(book, "r1", "r2" if adopted else str(folder))

    return compare


@pytest.fixture(scope="session")
def close() -> Callable[..., bool]:
    """Whether a pair and its change are these: `close(mass.now_kg, 4.0, 3.0)`."""

    def is_close(pair: Pair, a: float, b: float, tolerance: float = 1e-12) -> bool:
        assert (pair.a, pair.b, pair.change) == pytest.approx((a, b, b - a), abs=tolerance)
        return True

    return is_close
