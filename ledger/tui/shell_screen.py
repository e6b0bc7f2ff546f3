"""What every working screen shows: plate, body, message lines, scan line; and how it asks a thread.

A screen gathers input, calls one operation in a thread, and shows the frozen result.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from datetime import datetime
from typing import Any, ClassVar, Generic, TypeVar

from rich.text import Text
from textual import work
from textual.app import ComposeResult
from textual.containers import Vertical
from textual.timer import Timer
from textual.worker import Worker, get_current_worker

from ledger.errors import FindingsError, LedgerError
from ledger.operations.open_build import Build
from ledger.tui.area import Area
from ledger.tui.large_print import large_text
from ledger.tui.listening import ListeningScreen
from ledger.tui.long_work import LongWork, progress_row
from ledger.tui.messages import Message, Messages
from ledger.tui.plate import plate_rows
from ledger.tui.themes import SIGNS, Lines, Signs
from ledger.units import Display

View = TypeVar("View")
Result = TypeVar("Result")

_WIDE = (160, 48)
_BEAT_S = 0.2
_READING_S = 0.5


class ShellScreen(ListeningScreen[None], Generic[View]):
    """The frame of a screen and what it draws. What is heard is dealt with in `ShellScreen`."""

    WORD: ClassVar[str] = ""
    AREAS: ClassVar[tuple[str, ...]] = ()

    DEFAULT_CSS = """
    ShellScreen { layout: vertical; background: $background; color: $foreground; overflow: hidden; }
    ShellScreen #plate-1, ShellScreen #plate-2, ShellScreen #scan-line { height: 1; }
    ShellScreen #messages { height: 2; }
    ShellScreen #body { height: 1fr; }
    ShellScreen #large { height: 1fr; display: none; }
    ShellScreen.-large #body { display: none; }
    ShellScreen.-large #large { display: block; }
    """

    def __init__(self) -> None:
        super().__init__()
        self.view: View | None = None
        self.messages = Messages()
        self._area_index = 0
        self._looking = False
        self._looking_since_s = 0.0
        self._look_again = False
        self._newest_thread: dict[str, int] = {}
        self.long = LongWork(self)
        self._beat: Timer | None = None

    # -- what a screen adds

    def compose_body(self) -> ComposeResult:
        """The widgets between the plate and the message lines."""
        yield Area(id="body-area")

    def look(self, build: Build, now: datetime) -> View:  # noqa: ARG002
        """In a thread: call one operation and give back its frozen view."""
        raise TypeError(f"{type(self).__name__} has no look of its own")

    def show(self, view: View) -> None:
        """Put the view on the areas."""

    def area_changed(self) -> None:
        """Tab moved to another area."""

    def large_lines(self) -> tuple[str, ...]:
        """Up to four short lines for large print."""
        plate = self.ledger_app.plate
        if plate is None:
            return ()
        return (self.WORD, f"{plate.best_kg:.1f} kg", f"stop {plate.stops}", f"look {plate.looks}")

    def tick(self) -> None:
        """Some seconds have passed: clocks on the screen go on."""
        self.draw_plate()

    def prompt(self) -> str:
        """What stands before the text in the scan line."""
        return "scan or type: "

    # -- what a screen may use

    @property
    def area(self) -> str:
        """The area Tab is on."""
        return self.AREAS[self._area_index] if self.AREAS else ""

    @property
    def wide(self) -> bool:
        """Whether there is room for the areas of the large layout."""
        return self.app.size.width >= _WIDE[0] and self.app.size.height >= _WIDE[1]

    @property
    def signs(self) -> Signs:
        """Styles by what they mean, in the theme of the moment."""
        return SIGNS[self.app.theme]

    @property
    def lines(self) -> Lines:
        """Characters to rule with."""
        return self.ledger_app.lines

    @property
    def plain(self) -> bool:
        """Whether only plain ASCII can be shown."""
        return self.ledger_app.plain

    @property
    def units(self) -> Display:
        """The build's own units."""
        plate = self.ledger_app.plate
        return Display.METRIC if plate is None else plate.display

    def now(self) -> datetime:
        """The computer's time, with its offset."""
        return self.ledger_app.now()

    def say(self, sign: str, text: str) -> None:
        """Put a line on the message lines; the newest two stand. `sign` is ok, LOOK, STOP or empty."""
        self.messages = self.messages.with_one(Message(sign=sign, text=text))
        self.draw_messages()

    def ring(self, times: int) -> None:
        """One for ok, two for refused, three for a clock."""
        self.ledger_app.ring(times)

    def refuse(self, text: str, sign: str = "LOOK") -> None:
        """Say why nothing happened, and ring twice."""
        self.say(sign, text)
        self.ring(2)

    def go_to_area(self, name: str) -> None:
        """Make this area the one Tab is on."""
        if name in self.AREAS and name != self.area:
            self._area_index = self.AREAS.index(name)
            self.area_changed()
            self.draw_line()

    def ask_again(self) -> None:
        """Look at the book again in a thread, then show. Asking while a look runs means one more look."""
        if self._looking:
            self._look_again = True
            return
        self._looking = True
        self._looking_since_s = time.monotonic()
        self._go_on_beating()
        self._look_in_thread()

    def in_thread(
        self, function: Callable[[], Result], then: Callable[[Result], None], *, about: str = "screen"
    ) -> None:
        """Run `function` in a thread and `then` with its result here; a newer call drops an older one."""
        turn = self._newest_thread[about] = self._newest_thread.get(about, 0) + 1
        self._run_in_thread(function, then, about, turn)

    # -- the shell's part

    def compose(self) -> ComposeResult:
        """Plate above, scan line below, the screen's own areas between."""
        yield Area(id="plate-1")
        yield Area(id="plate-2")
        with Vertical(id="body"):
            yield from self.compose_body()
        yield Area(id="large")
        yield Area(id="messages")
        yield Area(id="scan-line")

    def on_mount(self) -> None:
        """Draw what is known at once, then look."""
        self.set_class(self.wide, "-wide")
        self.draw_shell()
        self.ask_again()

    def on_resize(self) -> None:
        """At 160 x 48 areas are added; nothing that stood is moved about below that."""
        self.set_class(self.wide, "-wide")
        self.draw_shell()
        if self.view is not None:
            self.show(self.view)

    def on_screen_resume(self) -> None:
        """Back on this screen: what was logged meanwhile must show."""
        self.ledger_app.line.lone_keys = True
        self.draw_shell()
        self.ask_again()

    def draw_shell(self) -> None:
        """Redraw plate, message lines and scan line."""
        if not self.is_mounted:
            return
        self.draw_plate()
        self.draw_messages()
        self.draw_line()
        self.set_class(self.ledger_app.large, "-large")
        if self.ledger_app.large:
            self.query_one("#large", Area).draw(
                large_text(self.large_lines(), self.app.size.width, self.app.size.height - 5)
            )

    def draw_plate(self) -> None:
        """Redraw rows 1 and 2."""
        program = self.ledger_app
        rows = plate_rows(
            self.WORD, program.plate, program.crew, program.now(), width=self.app.size.width, signs=self.signs
        )
        for number, row in enumerate(rows, start=1):
            self.query_one(f"#plate-{number}", Area).draw(row)

    def draw_messages(self) -> None:
        """Redraw the message lines."""
        if not self.is_mounted:
            return
        width = self.app.size.width
        working = self._working()
        shown = self.messages.drawn(width, self.signs, 1 if working else 2)
        if working is not None:
            shown = Text("\n").join([shown, working])
        self.query_one("#messages", Area).draw(shown)

    def draw_line(self) -> None:
        """Redraw the scan line; of a long text its end is what shows."""
        if not self.is_mounted:
            return
        prompt, text = self.prompt(), self.ledger_app.line.text
        room = max(4, self.app.size.width - len(prompt) - 1)
        row = Text(prompt, style=self.signs.head)
        row.append(text if len(text) <= room else f"..{text[-(room - 2) :]}")
        row.append("_", style="bold")
        self.query_one("#scan-line", Area).draw(row)

    # -- long work

    def run_job(self, work: Callable[[], None]) -> Worker[None]:
        """In a thread of its own; its line is drawn as long as it runs."""
        self._go_on_beating()
        return self.run_worker(work, thread=True, group="long", exit_on_error=True)

    def call_here(self, function: Callable[..., None], *words: Any) -> None:
        """From a thread: call a function where screens may be touched."""
        self.app.call_from_thread(function, *words)

    def draw_progress(self) -> None:
        """The line anew, again and again while the work goes on."""
        self.draw_messages()
        if self.long.running is None and not self._looking and self._beat is not None:
            self._beat.stop()
            self._beat = None

    def _go_on_beating(self) -> None:
        if self._beat is None:
            self._beat = self.set_interval(_BEAT_S, self.draw_progress)

    def _working(self) -> Text | None:
        """The line of the work that runs: of this screen, else of the book being read."""
        width = self.app.size.width
        row = self.long.drawn(width, self.signs)
        reading = self.ledger_app.reading
        waited = time.monotonic() - self._looking_since_s
        if row is None and self._looking and reading is not None and waited > _READING_S:
            row = progress_row(reading, width, self.signs, end="reading the book")
        return row

    @work(thread=True, group="look", exit_on_error=True)
    def _look_in_thread(self) -> None:
        worker = get_current_worker()
        try:
            stock = self.ledger_app.stock_now()
            view = self.look(stock.build, self.now())
        except LedgerError as error:
            if not worker.is_cancelled:
                self.app.call_from_thread(self._could_not_look, error)
            return
        if not worker.is_cancelled:
            self.app.call_from_thread(self._looked, view)

    def _looked(self, view: View) -> None:
        self._looking = False
        self.view = view
        if self.is_mounted:
            self.draw_shell()
            self.show(view)
            self.ledger_app.follow_tour()
        self._look_on()

    def _could_not_look(self, error: LedgerError) -> None:
        self._looking = False
        self.say("STOP", first_words(error))
        self._look_on()

    def _look_on(self) -> None:
        if self._look_again:
            self._look_again = False
            self.ask_again()

    @work(thread=True, group="ask", exit_on_error=True)
    def _run_in_thread(
        self, function: Callable[[], Any], then: Callable[[Any], None], about: str, turn: int
    ) -> None:
        if self._newest_thread[about] != turn:
            return
        try:
            result = function()
        except LedgerError as error:
            self.app.call_from_thread(self.refuse, first_words(error), "STOP")
            return
        if self._newest_thread[about] == turn:
            self.app.call_from_thread(then, result)


def first_words(error: LedgerError) -> str:
    """An error in one line."""
    if isinstance(error, FindingsError) and error.findings:
        first = error.findings[0]
        more = f" (and {len(error.findings) - 1} more)" if len(error.findings) > 1 else ""
        place = str(first.where)
        return f"{place + ': ' if place else ''}{first.what}; {first.do}{more}"
    return str(error).splitlines()[0] if str(error) else type(error).__name__
