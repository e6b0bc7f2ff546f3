"""What every working screen is made of: plate, body, message lines, scan line, and one table of actions.

A screen gathers input, calls one operation in a thread, and shows the frozen result.
"""

from __future__ import annotations

import inspect
from collections.abc import Callable
from datetime import datetime
from typing import Any, ClassVar, Generic, TypeVar

from rich.text import Text
from textual import work
from textual.app import ComposeResult
from textual.containers import Vertical
from textual.worker import get_current_worker

from ledger.errors import FindingsError, LedgerError
from ledger.operations.find_thing import FoundThing
from ledger.operations.open_build import Build
from ledger.tui.actions import BENCH as BENCH_ACTIONS
from ledger.tui.actions import (
    SHELL,
    Action,
    action_for_key,
    action_for_tag,
    action_for_word,
    kind_actions,
)
from ledger.tui.area import Area
from ledger.tui.crew import read_badge
from ledger.tui.large_print import large_text
from ledger.tui.listening import ListeningScreen
from ledger.tui.messages import Message, Messages
from ledger.tui.plate import plate_rows
from ledger.tui.themes import SIGNS, Lines, Signs
from ledger.units import Display

View = TypeVar("View")
Result = TypeVar("Result")

_KIND_ACTIONS = kind_actions()
_WIDE = (160, 48)
# Words that log or confirm count only from a hand; their printed tags say TAG first.
_BY_HAND_ONLY = frozenset({"log", "keep", "looked", "leave", "throw_away"})


class WorkScreen(ListeningScreen[None], Generic[View]):
    """One of the program's screens. See the words of each method for what a screen adds."""

    WORD: ClassVar[str] = ""
    AREAS: ClassVar[tuple[str, ...]] = ()
    ACTIONS: ClassVar[tuple[Action, ...]] = ()

    DEFAULT_CSS = """
    WorkScreen { layout: vertical; background: $background; color: $foreground; overflow: hidden; }
    WorkScreen #plate-1, WorkScreen #plate-2, WorkScreen #scan-line { height: 1; }
    WorkScreen #messages { height: 2; }
    WorkScreen #body { height: 1fr; }
    WorkScreen #large { height: 1fr; display: none; }
    WorkScreen.-large #body { display: none; }
    WorkScreen.-large #large { display: block; }
    """

    def __init__(self) -> None:
        super().__init__()
        self.view: View | None = None
        self.messages = Messages()
        self._area_index = 0
        self._looking = False
        self._look_again = False
        self._newest_thread: dict[str, int] = {}

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

    def take_thing(self, thing: FoundThing) -> bool:  # noqa: ARG002  a screen of its own uses it
        """A number that exists was scanned or typed. True where this screen used it."""
        return False

    def take_line(self, text: str) -> bool:  # noqa: ARG002
        """Enter by hand on text that is no word and no number. True where this screen used it."""
        return False

    def take_enter(self) -> None:
        """Enter by hand on an empty line."""

    def field_takes(self, text: str, *, scanned: bool) -> bool:  # noqa: ARG002
        """Text for the field in hand, before anything else looks at it. True where it was dealt with."""
        return False

    def thing_in_hand(self) -> FoundThing | None:
        """What the screen is about, so that a word opens its slip with it."""
        return None

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
        self._look_in_thread()

    def in_thread(
        self, function: Callable[[], Result], then: Callable[[Result], None], *, about: str = "screen"
    ) -> None:
        """Run `function` in a thread and `then` with its result here; a newer call drops an older one."""
        turn = self._newest_thread[about] = self._newest_thread.get(about, 0) + 1
        self._run_in_thread(function, then, about, turn)

    @property
    def table(self) -> tuple[Action, ...]:
        """Every action that applies here, the screen's own first."""
        shell = (action for action in SHELL if self.ledger_app.has(action))
        return (*self.ACTIONS, *shell, *_KIND_ACTIONS)

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
        if self.is_mounted:
            self.query_one("#messages", Area).draw(self.messages.drawn(self.app.size.width, self.signs))

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

    def hear_typing(self) -> None:
        """The line's text changed."""
        self.draw_line()

    def hear_scan(self, text: str) -> None:
        """A scan: a badge, an action's tag, the field in hand, a word, or a number, in that order."""
        self.draw_line()
        tagged = action_for_tag(text, BENCH_ACTIONS)
        if tagged is not None:
            self.perform(tagged)
        elif not self.field_takes(text, scanned=True):
            self._hear_elsewhere(text, scanned=True)
        self.draw_line()

    def hear_line(self, text: str) -> None:
        """Enter by hand."""
        tagged = action_for_tag(text, BENCH_ACTIONS)
        if tagged is not None:
            self.perform(tagged)
        elif not self.field_takes(text, scanned=False):
            if text.strip():
                self._hear_elsewhere(text, scanned=False)
            else:
                self.take_enter()
        self.draw_line()

    def hear_key(self, key: str) -> None:
        """A key: the screen's own action in this area, else the shell's."""
        action = action_for_key(key, self.area, self.table)
        if action is not None:
            self.perform(action)
        self.draw_line()

    def perform(self, action: Action) -> None:
        """Do one action: by the screen's own method, else the program's, else at the bench."""
        if action.name.startswith("open_") and hasattr(self.ledger_app, "open_slip"):
            kind = action.name.removeprefix("open_")
            if not hasattr(self, f"do_{action.name}"):
                self.ledger_app.open_slip(kind, self.thing_in_hand())
                return
        method = getattr(self, f"do_{action.name}", None) or getattr(
            self.ledger_app, f"do_{action.name}", None
        )
        if method is None:
            self.refuse(f"{action.word} is done on the bench screen: type bench")
            return
        result = method()
        if inspect.isawaitable(result):
            self.run_worker(_awaited(result), exit_on_error=True)

    def do_next_area(self) -> None:
        """Tab."""
        self._step_area(1)

    def do_area_before(self) -> None:
        """Shift-Tab."""
        self._step_area(-1)

    def do_leave_slip(self) -> None:
        """Esc on a screen with nothing open leaves nothing."""
        self.ledger_app.line.put("")
        self.draw_line()

    def _step_area(self, step: int) -> None:
        if len(self.AREAS) > 1:
            self.go_to_area(self.AREAS[(self._area_index + step) % len(self.AREAS)])

    def _hear_elsewhere(self, text: str, *, scanned: bool) -> None:
        badge = read_badge(text)
        action = action_for_word(text, self.table)
        if badge is not None:
            self.ledger_app.badge(badge)
        elif action is not None and not (scanned and action.name in _BY_HAND_ONLY):
            self.perform(action)
        elif self.ledger_app.take_words(text):
            return
        else:
            self._take_number(text, scanned=scanned)

    def _take_number(self, text: str, *, scanned: bool) -> None:
        if not scanned and self.take_line(text):
            return
        thing = self.ledger_app.find(text)
        if thing is None:
            said = "scanned" if scanned else "typed"
            self.refuse(f"{said} {text}: no word and no number known here; actions lists the words")
        elif not self.take_thing(thing):
            self.ledger_app.offer_thing(thing)

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


async def _awaited(result: Any) -> None:
    await result
