"""Going from screen to screen, and to the bench with something in hand."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import ClassVar

from textual.app import App

from ledger.model.comparison import EntryToMake
from ledger.operations.find_thing import FoundThing
from ledger.tui.actions import SCREENS, Action
from ledger.tui.bench_screen import BenchScreen
from ledger.tui.fuel_screen import FuelScreen
from ledger.tui.iterations_screen import IterationsScreen
from ledger.tui.list_screen import ListScreen
from ledger.tui.scan import ScanLine
from ledger.tui.trace_screen import TraceScreen
from ledger.tui.weights_screen import WeightsScreen
from ledger.tui.work_screen import WorkScreen


class Going(App[None], inherit_bindings=False):
    """The modes of the program, one for each screen, and what brings each of them up."""

    MODES: ClassVar[dict[str, Callable[[], WorkScreen]]] = {  # type: ignore[assignment, type-arg]
        "bench": BenchScreen,
        "weights": WeightsScreen,
        "fuel": FuelScreen,
        "trace": TraceScreen,
        "iterations": IterationsScreen,
    }
    DEFAULT_MODE = "bench"

    def __init__(self) -> None:
        super().__init__()
        self.line = ScanLine()
        self.toured: set[str] = set()

    @property
    def work_screen(self) -> WorkScreen | None:  # type: ignore[type-arg]
        """The working screen, also when a list or the lock lies over it."""
        return next((screen for screen in self.screen_stack if isinstance(screen, WorkScreen)), None)

    @property
    def bench(self) -> BenchScreen | None:
        """The bench, where it is the screen that is up."""
        screen = self.work_screen
        return screen if isinstance(screen, BenchScreen) else None

    def has(self, action: Action) -> bool:
        """Whether this release has the screen of this action."""
        return action not in SCREENS or action.word in self.MODES

    async def go(self, word: str) -> None:
        """Bring a screen up; a list that lies over the one left is put away."""
        while isinstance(self.screen, ListScreen):
            await self.pop_screen()
        self.toured.add(word)
        if self.current_mode != word:
            self.line.forget_typed()
            await self.switch_mode(word)

    async def do_go_bench(self) -> None:
        """Word or key."""
        await self.go("bench")

    async def do_go_weights(self) -> None:
        """Word or key."""
        await self.go("weights")

    async def do_go_fuel(self) -> None:
        """Word or key."""
        await self.go("fuel")

    async def do_go_trace(self) -> None:
        """Word or key."""
        await self.go("trace")

    async def do_go_iterations(self) -> None:
        """Word or key."""
        await self.go("iterations")

    def open_slip(self, kind: str, about: FoundThing | None) -> None:
        """Open a slip at the bench, from whichever screen."""
        self.run_worker(self._open_slip(kind, about))

    async def _open_slip(self, kind: str, about: FoundThing | None) -> None:
        await self.go("bench")
        bench = self.bench
        if bench is not None:
            bench.open_kind(kind, about)

    def offer_thing(self, thing: FoundThing) -> None:
        """A number that the screen had no use for: the bench says what can be done with it."""
        self.run_worker(self._offer_thing(thing))

    async def _offer_thing(self, thing: FoundThing) -> None:
        await self.go("bench")
        bench = self.bench
        if bench is not None:
            bench.take_thing(thing)

    def open_entries(self, entries: Sequence[EntryToMake]) -> None:
        """Slips at the bench for entries that belong together: the first open, the others as drafts."""
        self.run_worker(self._open_entries(tuple(entries)))

    async def _open_entries(self, entries: tuple[EntryToMake, ...]) -> None:
        await self.go("bench")
        bench = self.bench
        if bench is not None:
            bench.open_entries(entries)
