"""The terminal program: its modes, what its actions do, its themes. Screens do the rest."""

from __future__ import annotations

import os
import threading
import time
from collections.abc import Callable
from datetime import datetime
from pathlib import Path

from textual import events, work

from ledger.errors import LedgerError
from ledger.operations.find_thing import FoundThing, find_thing, why_unknown
from ledger.operations.open_build import Build, newest_entry
from ledger.operations.take_stock import Plate, Stock, take_stock
from ledger.tui.crew import Crew, read_badge
from ledger.tui.going import Going
from ledger.tui.list_screen import ListScreen, actions_listed, findings_listed, help_listed
from ledger.tui.listening import ListeningScreen
from ledger.tui.lock_screen import LockScreen
from ledger.tui.themes import DRAWN, PLAIN, THEMES, is_plain
from ledger.tui.tour import Act, act_now, leads, line_of, words_on
from ledger.tui.wall_clock import WallClock, read_told_time
from ledger.tui.work_screen import first_words

_POLL_S = 0.7
_CLOCK_S = 5.0
_BELL_GAP_S = 0.18


class LedgerApp(Going, inherit_bindings=False):
    """One book, one scan line, one crew; a mode for each screen."""

    ENABLE_COMMAND_PALETTE = False

    def __init__(
        self,
        book: Path,
        *,
        now: Callable[[], datetime] | None = None,
        clock: Callable[[], float] | None = None,
        plain: bool | None = None,
        poll_s: float = _POLL_S,
    ) -> None:
        super().__init__()
        for name in tuple(self.available_themes):
            self.unregister_theme(name)
        for theme in THEMES:
            self.register_theme(theme)
        self.theme = "none" if self.no_color else "dark"
        self.book = book
        self.crew = Crew(by=os.environ.get("WINGLEDGER_BY") or None)
        self.large = False
        self.plain = is_plain() if plain is None else plain
        self.lines = PLAIN if self.plain else DRAWN
        self.stock: Stock | None = None
        self.reading: tuple[str, int, int] | None = None
        self._stale = True
        self._stock_lock = threading.Lock()
        self.wall = WallClock(now if now is not None else _computers_time)
        self._tour_said: tuple[str, str] | None = None
        self._clock = clock
        self._poll_s = poll_s
        self._seen: tuple[int, str] | None = None
        self.rung: list[int] = []

    # -- time

    def now(self) -> datetime:
        """The time of day with its offset: the computer's, or what a person said where that is doubted."""
        return self.wall.now()

    def clock(self) -> float:
        """A clock that only goes on, on the same scale as `moment_of`."""
        return time.monotonic() if self._clock is None else self._clock()

    def moment_of(self, event: events.Key) -> float:
        """When the key was pressed, not when its turn came."""
        return event.time if self._clock is None else self._clock()

    # -- the book

    def stock_now(self) -> Stock:
        """The build as last read, read anew where the book has changed. Called in threads."""
        with self._stock_lock:
            if self.stock is None or self._stale:
                self._stale = False
                self.stock = take_stock(self.book, self.stock, progress=self._reads)
                self.reading = None
            return self.stock

    def _reads(self, what: str, done: int, of: int) -> None:
        self.reading = (what, done, of)

    @property
    def build(self) -> Build | None:
        """The build as last read."""
        return None if self.stock is None else self.stock.build

    @property
    def plate(self) -> Plate | None:
        """The figures of the plate."""
        return None if self.stock is None else self.stock.plate

    def book_changed(self) -> None:
        """Something was logged, here or elsewhere: read again and show."""
        self._stale = True
        screen = self.work_screen
        if screen is not None:
            screen.ask_again()

    def find(self, text: str) -> FoundThing | None:
        """What a number or name stands for."""
        try:
            found = find_thing(self.book, text)
        except LedgerError:
            return None
        if found is not None and self.current_mode == "trace":
            self.toured.add(found.number or found.name)
        return found

    def why_unknown(self, text: str) -> str:
        """What is wrong with a number that is not known; nothing where nothing can be said."""
        try:
            return why_unknown(self.book, text)
        except LedgerError:
            return ""

    @property
    def last_logged_at(self) -> datetime | None:
        """When the newest entry was written, by the clock of whoever wrote it."""
        build = self.build
        return build.logged[-1].logged_at if build is not None and build.logged else None

    @property
    def tour_line(self) -> str | None:
        """What to try next in the sample build; None in any other."""
        build = self.build
        return line_of(self._act_now()) if build is not None and leads(build.snapshot) else None

    def _act_now(self) -> Act | None:
        build = self.build
        return None if build is None else act_now(build.snapshot.logged, self.toured)

    def follow_tour(self) -> None:
        """Say the act once on each screen; the bench has a line for it."""
        line, screen = self.tour_line, self.work_screen
        if line is None or screen is None:
            return
        if self.crew.by is None:
            # The sample opens in the middle of a job, and somebody does that job.
            self.crew = self.crew.badged("JK", self.now()).joined_by(("AB",))
            screen.draw_plate()
        if screen.WORD != "bench" and self._tour_said != (screen.WORD, line):
            self._tour_said = (screen.WORD, line)
            screen.say("", words_on(screen.WORD, self._act_now()))

    # -- keys and silence

    def on_mount(self) -> None:
        """Begin to watch the book and the clocks."""
        self.crew = self.crew.badged(self.crew.by, self.now()) if self.crew.by else self.crew
        self.set_interval(self._poll_s, self._poll)
        self.set_interval(_CLOCK_S, self._tick)

    def someone_is_here(self) -> None:
        """A key was pressed: the idle time begins anew, unless it has run out."""
        self.crew = self.crew.seen_active(self.now())

    def let_silence_speak(self) -> None:
        """Silence has decided something; the screen that is up hears it."""
        # The timer may fall due while the program ends, when no screen is left.
        up = self.screen_stack[-1] if self.screen_stack else None
        if isinstance(up, ListeningScreen):
            up.let_silence_speak()

    def is_about_crew(self, text: str) -> bool:
        """Whether the text says who is present: `with AB MT`."""
        words = text.split()
        return len(words) > 1 and words[0].casefold() == "with"

    def take_words(self, text: str) -> bool:
        """`with AB MT` and `with nobody`; True where the text was one of these."""
        if not self.is_about_crew(text):
            return False
        others = tuple(read_badge(word) or word.strip(",;").upper() for word in text.split()[1:])
        self.crew = self.crew.joined_by(() if others == ("NOBODY",) else others)
        self._say("ok", f"with {' '.join(self.crew.others) or 'nobody'}")
        return True

    def take_time(self, text: str) -> bool:
        """`10:42`, while the computer's clock is doubted; True where the text was one."""
        told = None if self.wall.doubt is None else read_told_time(text, self.now())
        if told is None:
            return False
        away = self.crew.needs_badge(self.now())
        self.wall.set_right(told)
        if not away and self.crew.by is not None:
            # The leap is the clock's; nobody was idle that long.
            self.crew = self.crew.badged(self.crew.by, self.now())
        self._say("ok", f"it is {told:%d %b %H:%M}; log again, the entry is marked 'clock doubted'")
        self.ring(1)
        return True

    # -- what actions do

    def do_clock_right(self) -> None:
        """The doubted clock is right after all: somebody has looked."""
        if self.wall.doubt is None:
            self._say("", "the clock is not doubted")
        else:
            self.take_time(f"{self.now():%Y-%m-%d %H:%M}")

    def badge(self, initials: str) -> None:
        """Whoever's badge this is logs from now on."""
        self.crew = self.crew.badged(initials, self.now())
        self._say("ok", f"{initials} logs")
        self.ring(1)

    def do_set_with(self) -> None:
        """The word alone says what to write."""
        self._say("LOOK", "write who is present, for example: with AB MT; or: with nobody")

    def do_large_print(self) -> None:
        """Large print on or off."""
        self.large = not self.large
        self._redraw()

    def do_change_theme(self) -> None:
        """The next of our three."""
        names = [theme.name for theme in THEMES]
        self.theme = names[(names.index(self.theme) + 1) % len(names)]
        self._say("ok", f"theme {self.theme}")
        screen = self.work_screen
        if screen is not None and screen.view is not None:
            screen.show(screen.view)

    def do_lock(self) -> None:
        """Nothing is heard but a badge until the screen is wiped."""
        self.line.put("")
        self.push_screen(LockScreen())

    def do_leave(self) -> None:
        """End. Drafts are on disk already."""
        self.exit()

    def do_show_actions(self) -> None:
        """Every word, key and tag with its tip."""
        screen = self.work_screen
        if screen is not None:
            self.push_screen(ListScreen("ACTIONS", actions_listed(screen.table)))

    def do_show_help(self) -> None:
        """How this screen is used."""
        screen = self.work_screen
        if screen is not None:
            self.push_screen(ListScreen("HELP", help_listed(screen.WORD, screen.table)))

    def do_show_findings(self) -> None:
        """Every finding with what to do."""
        findings = () if self.stock is None else self.stock.findings
        self.push_screen(ListScreen("FINDINGS", findings_listed(findings)))

    async def do_correct_last(self) -> None:
        """F9 from anywhere."""
        await self.go("bench")
        bench = self.bench
        if bench is not None:
            bench.open_correction()

    def ring(self, times: int) -> None:
        """One for ok, two for refused, three for a clock."""
        self.rung.append(times)
        self.bell()
        for after in range(1, times):
            self.set_timer(after * _BELL_GAP_S, self.bell)

    # -- watching

    @work(thread=True, group="poll", exit_on_error=False)
    def _poll(self) -> None:
        try:
            newest = newest_entry(self.book)
        except LedgerError as error:
            self.call_from_thread(self._say, "STOP", first_words(error))
            return
        if self._seen is None:
            self._seen = newest
        elif newest != self._seen:
            self._seen = newest
            self.call_from_thread(self.book_changed)

    def _tick(self) -> None:
        self.wall.look(self.last_logged_at)
        self._keep_clock()
        screen = self.work_screen
        if screen is not None:
            screen.tick()

    @work(thread=True, group="clock", exclusive=True, exit_on_error=False)
    def _keep_clock(self) -> None:
        self.wall.keep()

    def _say(self, sign: str, text: str) -> None:
        screen = self.work_screen
        if screen is not None:
            screen.say(sign, text)
            screen.draw_shell()

    def _redraw(self) -> None:
        screen = self.work_screen
        if screen is not None:
            screen.draw_shell()


def _computers_time() -> datetime:
    return datetime.now().astimezone()


def run(book: Path) -> None:
    """Open the screens on a book and come back when they are left.

    Raises
        BookUnusable: the book cannot be opened; said before the terminal is taken.
    """
    newest_entry(book)
    LedgerApp(book).run()
