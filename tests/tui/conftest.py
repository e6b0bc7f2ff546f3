"""A small invented plan with its book, the sample's book, and screens opened on either."""

from __future__ import annotations

import json
import shutil
from collections.abc import AsyncIterator, Callable
from contextlib import AbstractAsyncContextManager, asynccontextmanager
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest
from textual import events
from textual.pilot import Pilot

from ledger.cli.app import run_command
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.find_thing import FoundThing, find_thing
from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book
from ledger.tui.app import LedgerApp
from ledger.tui.area import Area
from ledger.tui.iterations_screen import IterationsScreen
from ledger.tui.listening import ListeningScreen
from ledger.tui.work_screen import WorkScreen

START = datetime(2026, 11, 3, 9, 0, tzinfo=UTC)

PLAN = {
    "plan.toml": """
format = "plan-1"
name = "r1"
title = "Small wing for tests"
display = "metric"
""",
    "materials.csv": (
        "material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm],"
        "resin_uptake [g/m2],ratio,ratio_tolerance [%],pot_life [min]"
        """
twill,fabric,200,,,,,,
glass,fabric,80,,,,,,
foam,core,,75,3,90,,,
peel,process,85,,,,,,
lam resin,resin,,1150,,,100:27,4,25
lam hardener,hardener,,980,,,,,
bond base,paste,,1150,,,100:44,5,40
bond hardener,hardener,,1020,,,,,
"""
    ),
    "laminates.csv": (
        "laminate,areal_mass [g/m2],step,material,orientation [deg],coverage [%],resin_fraction [%]"
        """
SKIN,,1,glass,0,100,50
SKIN,,2,twill,45,100,45
SKIN,,3,twill,45,100,45
SKIN,,4,foam,,70,
SKIN,,5,twill,45,100,45
SKIN,,6,twill,0,30,45
SKIN,,7,peel,,100,
PANEL,900,,,,,
"""
    ),
    "parts.csv": (
        "part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin [m],"
        "quantity,planned_mass [g],mirror_of"
        """
SKIN.UPR-L,upper skin,skin,L,WING/LEFT/skins,skin,SKIN,geometry/skin.obj,mm,,1,,
SKIN.UPR-R,upper skin,skin,R,WING/RIGHT/skins,skin,SKIN,,,,1,,SKIN.UPR-L
RIB.01-L,rib,rib,L,WING/LEFT/ribs,item,,,,2.5 -0.5 0,1,312,
RIB.01-R,rib,rib,R,WING/RIGHT/ribs,item,,,,2.5 0.5 0,1,350,RIB.01-L
FIT.MAIN-L,fitting,fitting,L,WING/LEFT,item,,,,2.4 -0.3 0,1,640,
"""
    ),
    "geometry/skin.obj": """v 2000 -200 0
v 3000 -200 0
v 3000 -1200 0
v 2000 -1200 0
f 1 2 3
f 1 3 4
""",
}


class Clock:
    """Time that stands still until it is told to go on: the wall's and the keyboard's."""

    def __init__(self) -> None:
        self.wall = START + timedelta(hours=1, minutes=42)
        self.keys = 1000.0

    def now(self) -> datetime:
        return self.wall

    def pressed(self) -> float:
        return self.keys

    def go_on(self, **span: float) -> None:
        passed = timedelta(**span)
        self.wall += passed
        self.keys += passed.total_seconds()


@pytest.fixture(scope="session")
def small_plan(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("plan")
    for name, text in PLAN.items():
        path = folder / name
        path.parent.mkdir(exist_ok=True)
        path.write_text(text.lstrip("\n"), encoding="utf-8")
    return folder


@pytest.fixture(scope="session")
def _small_book(small_plan: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    book = tmp_path_factory.mktemp("book") / "small.wingledger"
    start_book(book, small_plan, by="JK", now=START)
    rows: list[tuple[str, dict[str, str]]] = [
        ("instrument", {"instrument": "W1", "what": "scale", "resolution": "0.1 g", "accuracy": "0.3 g"}),
        ("receive", {"material": "twill", "quantity": "40 m2", "lot": "TWILL-A"}),
        ("receive", {"material": "glass", "quantity": "20 m2", "lot": "GLASS-A"}),
        ("receive", {"material": "foam", "quantity": "6 m2", "lot": "FOAM-A"}),
        ("receive", {"material": "peel", "quantity": "30 m2", "lot": "PEEL-A"}),
        ("receive", {"material": "lam resin", "quantity": "5 kg", "lot": "RESIN-A"}),
        ("receive", {"material": "lam hardener", "quantity": "2 kg", "lot": "HARD-A"}),
        ("receive", {"material": "bond base", "quantity": "2 kg", "lot": "BOND-A"}),
        ("receive", {"material": "bond hardener", "quantity": "1 kg", "lot": "BOND-H"}),
        (
            "sheet",
            {
                "laminate": "PANEL",
                "length": "1200 mm",
                "width": "800 mm",
                "mass": "870 g",
                "sheet": "SHEET-A",
            },
        ),
    ]
    for minute, (kind, fields) in enumerate(rows, start=1):
        log_entry(book, kind, fields, by="JK", now=START + timedelta(minutes=minute))
    return book


@pytest.fixture
def small_book(_small_book: Path, tmp_path: Path) -> Path:
    book = tmp_path / "small.wingledger"
    shutil.copy(_small_book, book)
    return book


@pytest.fixture(scope="session")
def _demo_book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    from ledger.operations.lay_out_demo import lay_out_demo

    return lay_out_demo(tmp_path_factory.mktemp("demo") / "demo")


@pytest.fixture
def demo_book(_demo_book: Path, tmp_path: Path) -> Path:
    """A copy of the sample's book, half built."""
    book = tmp_path / "demo.wingledger"
    shutil.copy(_demo_book, book)
    return book


@pytest.fixture
def at_minute() -> Callable[[int], datetime]:
    """A moment so many minutes after the books were begun."""
    return lambda minute: START + timedelta(minutes=minute)


@pytest.fixture(scope="session")
def _one_cell_book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    book = tmp_path_factory.mktemp("box") / "box.wingledger"
    plan = Path(__file__).resolve().parents[2] / "sample_builds" / "one_cell_box" / "plan"
    start_book(book, plan, by="JK")
    return book


@pytest.fixture
def one_cell_book(_one_cell_book: Path, tmp_path: Path) -> Path:
    """One cell, 1 m along, 0.5 m across, 0.2 m high."""
    return Path(shutil.copy(_one_cell_book, tmp_path / "box.wingledger"))


@pytest.fixture
def less_fuel(box_plan: Callable[..., Path]) -> Callable[[str], Path]:
    """The plan of the one-cell box under a name, with room for expansion of 40 % instead of 2 %."""
    return lambda name: box_plan(
        name, {"tanks.toml": ("expansion_percent = 2.0", "expansion_percent = 40.0")}
    )


@pytest.fixture
def box_book(tmp_path: Path, box_plan: Callable[..., Path], at_minute: Callable[[int], datetime]) -> Path:
    """r1 with floor and outboard wall weighed, then r2, which changes both and so fits neither."""
    book = tmp_path / "box.book"
    start_book(book, box_plan("r1"), by="JK", now=START)
    for minute, (what, reading) in enumerate((("FLOOR", "2.85 kg"), ("WALL.OUT", "410 g")), start=1):
        log_entry(book, "weigh", {"what": what, "reading": reading}, by="JK", now=at_minute(minute))
    # The outboard wall 50 mm inboard and a floor of 5.0 instead of 5.6 kg/m2.
    moved = {
        "parts.csv": ("mm,2 0.6 0,", "mm,2 0.55 0,"),
        "laminates.csv": ("FLOOR 5600,5600", "FLOOR 5600,5000"),
    }
    adopt_plan(book, box_plan("r2", moved), by="AB", now=at_minute(10))
    return book


@pytest.fixture(autouse=True)
def _own_state(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("WINGLEDGER_STATE", str(tmp_path / "state"))
    monkeypatch.setenv("WINGLEDGER_BY", "JK")


@pytest.fixture
def clock() -> Clock:
    return Clock()


Opened = Callable[..., AbstractAsyncContextManager[Pilot[None]]]


@pytest.fixture
def open_screen() -> Opened:
    """Open the program on a book with one screen up: `async with open_screen(book, FuelScreen) as pilot`."""

    @asynccontextmanager
    async def opened(
        book: Path,
        screen: type[WorkScreen] | None = None,  # type: ignore[type-arg]
        *,
        size: tuple[int, int] = (80, 24),
        clock: Clock | None = None,
        plain: bool | None = None,
    ) -> AsyncIterator[Pilot[None]]:
        app = (
            LedgerApp(book, plain=plain)
            if clock is None
            else LedgerApp(book, now=clock.now, clock=clock.pressed, plain=plain)
        )
        async with app.run_test(size=size) as pilot:
            if screen is not None and screen.WORD != "bench":
                await app.go(screen.WORD)
            await settled(pilot)
            yield pilot

    return opened


async def settled(pilot: Pilot[None]) -> None:
    """Wait until every thread has answered and every message was dealt with."""
    await pilot.app.workers.wait_for_complete(
        [worker for worker in pilot.app.workers if worker.group in ("look", "ask", "default")]
    )
    await pilot.pause()


class Bench:
    """Hands, a reader and eyes at an open bench, with a clock that tests move."""

    def __init__(self, pilot: Pilot[None], clock: Clock) -> None:
        self.pilot = pilot
        self.clock = clock
        self.only_scans = False

    @property
    def app(self) -> LedgerApp:
        assert isinstance(self.pilot.app, LedgerApp)
        return self.pilot.app

    async def scan(self, code: str, end: str = "enter") -> None:
        """A reader: all characters at once and its own Enter, then silence."""
        keys = [("space" if char == " " else char, char) for char in code]
        for key, char in (*keys, *(() if end == "silence" else ((end, None),))):
            screen = self.app.screen
            assert isinstance(screen, ListeningScreen)
            # Straight to the screen: through the pilot's queue every key of a scan waits for a redraw.
            screen.on_key(events.Key(key, char))
        self.clock.go_on(seconds=0.5)
        self.app.let_silence_speak()
        self.clock.go_on(seconds=1)
        await settled(self.pilot)

    async def type(self, text: str, *, enter: bool = True) -> None:
        """Hands: a fifth of a second between keys."""
        assert not self.only_scans
        for char in text:
            await self._press(char)
            self.clock.go_on(milliseconds=200)
        if enter:
            await self.key("enter")

    async def settle(self) -> None:
        await settled(self.pilot)
        await self.pilot.pause()

    async def reckoned(self) -> None:
        """Wait until all that was asked for is compared and drawn."""
        for _ in range(3):
            await self.app.workers.wait_for_complete()
            await self.pilot.pause()

    async def key(self, *keys: str) -> None:
        assert not self.only_scans
        for key in keys:
            self.clock.go_on(milliseconds=900)
            await self.pilot.press(key)
            await settled(self.pilot)
            await self.pilot.pause()

    async def _press(self, char: str) -> None:
        await self.pilot.press("space" if char == " " else char)

    @property
    def shown(self) -> str:
        """Every word on the screen."""
        lines = self.app.screen._compositor.render_strips()
        return "\n".join("".join(segment.text for segment in strip) for strip in lines)

    def words(self, area: str) -> list[str]:
        """The rows of one area of the screen as they are drawn."""
        screen = self.app.work_screen
        assert screen is not None
        drawn = screen.query_one(f"#{screen.WORD}-{area}", Area).words
        return [line.rstrip() for line in drawn.split("\n")]

    @property
    def said(self) -> list[str]:
        screen = self.app.work_screen
        assert screen is not None
        return [f"{message.sign} {message.text}".strip() for message in screen.messages.said]


@pytest.fixture
def open_bench(open_screen: Opened, clock: Clock) -> Callable[..., AbstractAsyncContextManager[Bench]]:
    """Open the bench on a book with a standing clock."""

    @asynccontextmanager
    async def opened(book: Path, **more: object) -> AsyncIterator[Bench]:
        async with open_screen(book, clock=clock, **more) as pilot:
            yield Bench(pilot, clock)

    return opened


@pytest.fixture
def at_iterations(open_bench: Callable[..., Any]) -> Callable[..., AbstractAsyncContextManager[Bench]]:
    """The Iterations screen up and its comparison done."""

    @asynccontextmanager
    async def opened(book: Path, **more: object) -> AsyncIterator[Bench]:
        async with open_bench(book, screen=IterationsScreen, **more) as bench:
            await bench.reckoned()
            yield bench

    return opened


@pytest.fixture
def at_nine_thirty() -> datetime:
    """A moment between the last entry of the small book and the clock of the bench."""
    return START + timedelta(minutes=30)


@pytest.fixture
def cup_of_600(small_book: Path) -> str:
    """The number of a cup of 600 g of resin, ten minutes old."""
    logged = log_entry(
        small_book,
        "mix",
        {"resin_lot": "RESIN-A", "resin": "600 g", "hardener_lot": "HARD-A", "hardener": "162 g"},
        by="MT",
        now=START + timedelta(minutes=92),
    )
    return logged.minted[0].number


@pytest.fixture
def find(small_book: Path) -> Callable[[str], FoundThing | None]:
    """Look-up in the small book."""
    return lambda text: find_thing(small_book, text)


@pytest.fixture
def printed(capsys: pytest.CaptureFixture[str]) -> Callable[..., Any]:
    """What a command prints with --json, read."""

    def run(command: str, *words: object) -> Any:
        capsys.readouterr()
        assert run_command([command, *map(str, words), "--json"], lambda _book: None) == 0
        return json.loads(capsys.readouterr().out)

    return run
