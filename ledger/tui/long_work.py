"""Work that takes more than a moment: one piece at a time, in a thread, with a line that Esc ends."""

from __future__ import annotations

import threading
import time
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, Protocol

from rich.text import Text
from textual.worker import Worker, get_current_worker

from ledger.errors import LedgerError, Stopped
from ledger.model.progress import Progress
from ledger.reports.plain import clean
from ledger.tui.themes import Signs

_QUIET_S = 0.3
_BAR = 20
_LEAST_WORDS = 12
_HOW = "Esc ends it"

Then = Callable[[Any], None]


@dataclass(slots=True, kw_only=True, eq=False)
class Job:
    """Something long to do. `about` names what it is for; `gives_way` to a newer one where it only reads.

    `told` is what its work said last: what, how many steps done, of how many. `undone` is called where
    a person ended it or it failed, and not where a newer one took its place.
    """

    about: str
    do: Callable[[Progress], Any]
    then: Then
    gives_way: bool = True
    undone: Callable[[], None] | None = None
    told: tuple[str, int, int] = ("", 0, 0)
    begun_s: float = 0.0
    stop: threading.Event = field(default_factory=threading.Event)
    by_hand: bool = False


class Runs(Protocol):
    """What long work needs from the screen it is done for."""

    def run_job(self, work: Callable[[], None]) -> Worker[None]:
        """Run this in a thread."""

    def call_here(self, function: Callable[..., None], *words: Any) -> None:
        """From a thread: call a function where screens may be touched."""

    def draw_progress(self) -> None:
        """The line may have changed."""

    def refuse(self, text: str, sign: str = "LOOK") -> None:
        """Say why nothing happened, and ring twice."""

    def say(self, sign: str, text: str) -> None:
        """Put a line on the message lines."""


class LongWork:
    """What a screen has running, and what waits for it.

    A newer piece of work replaces one that only reads: that one is ended between two of its steps. Work
    that writes is never ended by another: the newer one waits. Of two that wait the newer is done.
    """

    def __init__(self, screen: Runs, *, clock: Callable[[], float] = time.monotonic) -> None:
        self._screen = screen
        self._clock = clock
        self.running: Job | None = None
        self.waiting: Job | None = None

    def begin(self, job: Job) -> None:
        """Do this now, or as soon as what runs has ended."""
        if self.running is None:
            self._start(job)
            return
        self.waiting = job
        if self.running.gives_way:
            self.running.stop.set()
        else:
            self._screen.say("", f"{job.about} waits until {self.running.about} is done")

    def end_by_hand(self) -> bool:
        """Esc: end what runs, and let nothing follow. False where nothing runs."""
        if self.running is None:
            return False
        self.waiting = None
        self.running.by_hand = True
        self.running.stop.set()
        return True

    def drawn(self, width: int, signs: Signs) -> Text | None:
        """The line, once the work takes longer than a moment."""
        job = self.running
        if job is None or self._clock() - job.begun_s < _QUIET_S:
            return None
        what, done, of = job.told
        end = "ending between two steps" if job.stop.is_set() else _HOW
        return progress_row((what or job.about, done, of), width, signs, end=end)

    def _start(self, job: Job) -> None:
        self.running = job
        job.begun_s = self._clock()
        self._screen.run_job(lambda: self._run(job))

    def _run(self, job: Job) -> None:
        worker = get_current_worker()

        def tell(what: str, done: int, of: int) -> None:
            # A program that is left cancels its threads: nothing may be written after that.
            if job.stop.is_set() or worker.is_cancelled:
                raise Stopped(f"{job.about}: stopped; nothing was written")
            job.told = (what, done, of)

        result, trouble = None, None
        try:
            tell("", 0, 0)
            result = job.do(tell)
        except (LedgerError, OSError) as error:
            trouble = error
        if not worker.is_cancelled:
            self._screen.call_here(self._ended, job, result, trouble)

    def _ended(self, job: Job, result: Any, trouble: Exception | None) -> None:
        self.running = None
        waiting, self.waiting = self.waiting, None
        if trouble is None:
            job.then(result)
        elif not isinstance(trouble, Stopped):
            self._screen.refuse(_words_of(trouble), "STOP")
        elif job.by_hand:
            self._screen.say("LOOK", str(trouble))
        if trouble is not None and job.undone is not None and (job.by_hand or waiting is None):
            job.undone()
        if waiting is not None and self.running is None:
            self._start(waiting)
        elif waiting is not None:
            self.begin(waiting)
        self._screen.draw_progress()


def progress_row(told: tuple[str, int, int], width: int, signs: Signs, *, end: str = "") -> Text:
    """A plain bar, the count and the words, cut so that what ends the line stays in sight."""
    what, done, of = told
    full = round(_BAR * min(1.0, done / of)) if of > 0 else 0
    count = f"  {done} of {of}" if of > 0 else ""
    row = Text(f"[{'#' * full}{'.' * (_BAR - full)}]{count}  ", style=signs.head)
    room = max(_LEAST_WORDS, width - len(row.plain) - len(end) - 3)
    words = clean(what)
    row.append(words if len(words) <= room else f"{words[: room - 2]}..", style="")
    row.append(f"   {end}" if end else "", style=signs.quiet)
    row.truncate(width)
    return row


def _words_of(trouble: Exception) -> str:
    from ledger.tui.shell_screen import first_words

    if isinstance(trouble, OSError):
        place = f"{trouble.filename}: " if trouble.filename else ""
        return f"{place}{trouble.strerror or trouble}; look whether the path is right and can be used"
    return first_words(trouble) if isinstance(trouble, LedgerError) else str(trouble)
