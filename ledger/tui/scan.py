"""Tells a reader that types like a keyboard from a person, by time alone.

Pure: every press comes with its moment and nothing here reads a clock, so a test can be exact.
"""

from __future__ import annotations

from dataclasses import dataclass

SCAN_GAP_S = 0.050
SCAN_LEAST = 4
SCAN_SILENCE_S = 0.100
LONE_KEY_SILENCE_S = 0.250
LONE_KEYS = "123456 "
LONGEST_LINE = 400

# Readers can be set to pause before their Enter; a person's Enter never follows a scan this soon.
ENTER_AFTER_SCAN_S = 0.250
# Keyboards repeat 10 to 40 times a second once they begin.
ENTER_REPEAT_S = 0.110

_ENTERS = frozenset({"enter", "ctrl+j", "ctrl+m"})


@dataclass(frozen=True, slots=True)
class Typed:
    """The line changed under a person's hands."""


@dataclass(frozen=True, slots=True)
class Scanned:
    """A reader sent this. Its Enter or Tab is already swallowed."""

    text: str


@dataclass(frozen=True, slots=True)
class Entered:
    """A person pressed Enter on this text, which has left the line."""

    text: str


@dataclass(frozen=True, slots=True)
class Pressed:
    """A key that means a key."""

    key: str


Heard = Typed | Scanned | Entered | Pressed


class ScanLine:
    """The line that always listens. `lone_keys` is off while a field waits for text.

    Press by press it keeps `_settled`, what a person typed, and `_run`, characters so close together
    that they may yet turn out to be a scan.
    """

    def __init__(self) -> None:
        self.lone_keys = True
        self._settled = ""
        self._run = ""
        self._last_at = 0.0
        self._deaf_until: float | None = None
        self._last_enter_at: float | None = None
        self._refused = False

    @property
    def text(self) -> str:
        """What stands in the line now."""
        return self._settled + self._run

    def put(self, text: str) -> None:
        """Replace what stands in the line, as by completion."""
        self._settled = text[:LONGEST_LINE]
        self._run = ""
        self._refused = False

    def put_refused(self, text: str) -> None:
        """Leave in sight what was refused: the next character begins anew, Backspace or Right mends it."""
        self.put(text)
        self._refused = True

    def forget_typed(self) -> None:
        """Empty the line but for what a reader may be sending at this moment."""
        self._settled = ""
        self._refused = False

    def paste(self, text: str) -> None:
        """Add pasted text: its first line, as typed, so that pasting never presses Enter."""
        if self._refused:
            self.put("")
        first = next(iter(text.splitlines()), "")
        self.put(self.text + "".join(char for char in first if char.isprintable()))

    def due_at(self) -> float | None:
        """When `wait` will next have something to say, if nothing is pressed before."""
        if len(self._run) >= SCAN_LEAST:
            return self._last_at + SCAN_SILENCE_S
        if self._is_lone():
            return self._last_at + LONE_KEY_SILENCE_S
        return None

    def wait(self, at: float) -> tuple[Heard, ...]:
        """What silence until `at` has decided."""
        due = self.due_at()
        if due is None or at < due:
            return ()
        run, self._run = self._run, ""
        if len(run) >= SCAN_LEAST:
            self._deaf_until = due + ENTER_AFTER_SCAN_S
            return (Scanned(run),)
        return (Pressed("space" if run == " " else run),)

    def press(self, key: str, character: str | None, at: float) -> tuple[Heard, ...]:
        """Take one key at moment `at`; keys come in order of time."""
        before = self.wait(at)
        if key in _ENTERS or key == "tab":
            return before + self._end(key, at)
        if character is not None and character.isprintable():
            if self._refused:
                self.put("")
            self._deaf_until = None
            self._add(character, at)
            return (*before, Typed())
        if len(self._run) >= 2 and at - self._last_at <= SCAN_GAP_S:
            # A separator inside a code; no hand follows two characters with a key this fast.
            return before
        self._settle()
        self._refused = False
        if key in ("backspace", "ctrl+h"):
            self._settled = self._settled[:-1]
            return (*before, Typed())
        if key == "ctrl+u":
            self._settled = ""
            return (*before, Typed())
        return (*before, Pressed(key))

    def _add(self, character: str, at: float) -> None:
        if self._run and at - self._last_at > SCAN_GAP_S:
            self._settle()
        if len(self.text) < LONGEST_LINE:
            self._run += character
        self._last_at = at

    def _end(self, key: str, at: float) -> tuple[Heard, ...]:
        if len(self._run) >= SCAN_LEAST:
            run, self._run = self._run, ""
            self._deaf_until = at + ENTER_AFTER_SCAN_S
            return (Scanned(run),)
        if self._deaf_until is not None and at <= self._deaf_until:
            self._deaf_until = at + ENTER_AFTER_SCAN_S
            return ()
        self._settle()
        if key == "tab":
            return (Pressed("tab"),)
        last, self._last_enter_at = self._last_enter_at, at
        if last is not None and at - last <= ENTER_REPEAT_S:
            return ()
        text, self._settled, self._refused = self._settled, "", False
        return (Entered(text),)

    def _settle(self) -> None:
        self._settled = (self._settled + self._run)[:LONGEST_LINE]
        self._run = ""

    def _is_lone(self) -> bool:
        return self.lone_keys and not self._settled and len(self._run) == 1 and self._run in LONE_KEYS
