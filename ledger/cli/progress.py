"""How far long work is, on one line that is written over, and how Ctrl-C ends it between two steps."""

from __future__ import annotations

import contextlib
import shutil
import signal
import sys
import threading
import time
from collections.abc import Callable, Iterator
from types import FrameType

from ledger.errors import Stopped
from ledger.model.progress import Progress

STOPPED = "stopped; nothing was written"

_QUIET_S = 0.5
_EVERY_S = 0.1
_BAR = 20
_LEAST_WIDTH = 20


class _Line:
    """The line on standard error. It takes itself away before anything else is printed there."""

    def __init__(self, clock: Callable[[], float]) -> None:
        self._clock = clock
        self._watched = sys.stderr.isatty()
        self._due = clock() + _QUIET_S
        self._wide = 0

    def tell(self, what: str, done: int, of: int) -> None:
        if not self._watched or self._clock() < self._due:
            return
        self._due = self._clock() + _EVERY_S
        width = max(_LEAST_WIDTH, shutil.get_terminal_size().columns - 1)
        words = line_of(what, done, of)[:width]
        sys.stderr.write("\r" + words.ljust(self._wide))
        sys.stderr.flush()
        self._wide = len(words)

    def take_away(self) -> None:
        if self._wide:
            sys.stderr.write("\r" + " " * self._wide + "\r")
            sys.stderr.flush()
            self._wide = 0


def line_of(what: str, done: int, of: int) -> str:
    """A plain bar, the count, and the words."""
    from ledger.reports.plain import clean

    full = round(_BAR * done / of) if of > 0 else 0
    bar = "#" * full + "." * (_BAR - full)
    return f"[{bar}] {done} of {of}  {clean(what)}"


@contextlib.contextmanager
def watched(*, clock: Callable[[], float] = time.monotonic) -> Iterator[Progress]:
    """The progress to give to long work. The first Ctrl-C ends the work between steps, a second at once.

    Raises
        Stopped: out of the work, where Ctrl-C was pressed in time.
    """
    line = _Line(clock)
    pressed = threading.Event()

    def tell(what: str, done: int, of: int) -> None:
        if pressed.is_set():
            raise Stopped(STOPPED)
        line.tell(what, done, of)

    with _listening_for_ctrl_c(pressed):
        try:
            yield tell
        finally:
            line.take_away()
    if pressed.is_set():
        from ledger.cli.say import print_words

        print_words(("it was done before it could be stopped",))


@contextlib.contextmanager
def _listening_for_ctrl_c(pressed: threading.Event) -> Iterator[None]:
    before = signal.getsignal(signal.SIGINT)
    # A shell starts what runs in the background with Ctrl-C ignored; that stays as it is.
    if threading.current_thread() is not threading.main_thread() or before in (signal.SIG_IGN, None):
        yield
        return

    def press(number: int, frame: FrameType | None) -> None:  # noqa: ARG001
        pressed.set()
        signal.signal(signal.SIGINT, before)

    signal.signal(signal.SIGINT, press)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
