"""A screen that listens: every key goes through the one scan line of the program."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar, cast

from textual import events
from textual.screen import Screen

from ledger.tui.scan import Entered, Heard, Pressed, Scanned, Typed

if TYPE_CHECKING:
    from ledger.tui.app import LedgerApp

_Result = TypeVar("_Result")

# A key pressed just before the silence ended may still be on its way through the queues.
_GRACE_S = 0.02


class ListeningScreen(Screen[_Result], inherit_bindings=False):
    """Turns keys into what was meant by them, and calls one `hear_...` for each."""

    AUTO_FOCUS = ""

    @property
    def ledger_app(self) -> LedgerApp:
        """The program, by its own type."""
        return cast("LedgerApp", self.app)

    def on_key(self, event: events.Key) -> None:
        """Take a key at the moment it was pressed, which may be long before its turn comes."""
        event.stop()
        event.prevent_default()
        program = self.ledger_app
        program.someone_is_here()
        self._hear_all(program.line.press(event.key, event.character, program.moment_of(event)))

    def on_paste(self, event: events.Paste) -> None:
        """Pasted text is typed text, whatever line ends it holds."""
        event.stop()
        self.ledger_app.line.paste(event.text)
        self.hear_typing()

    def let_silence_speak(self) -> None:
        """Ask the line what the silence since the last key has decided."""
        program = self.ledger_app
        self._hear_all(program.line.wait(program.clock()))

    def _hear_all(self, heard: tuple[Heard, ...]) -> None:
        for one in heard:
            # What comes first may have changed the screen: the rest is for the one that is up now.
            up = self.app.screen
            (up if isinstance(up, ListeningScreen) else self).hear(one)
        program = self.ledger_app
        due = program.line.due_at()
        if due is not None:
            # On the program, not on this screen: a screen that is put away takes its timers with it.
            program.set_timer(max(0.0, due - program.clock()) + _GRACE_S, program.let_silence_speak)

    def hear(self, one: Heard) -> None:
        """Call what belongs to what was heard."""
        match one:
            case Typed():
                self.hear_typing()
            case Scanned(text):
                self.hear_scan(text)
            case Entered(text):
                self.hear_line(text)
            case Pressed(key):
                self.hear_key(key)

    def hear_typing(self) -> None:
        """The line's text changed."""

    def hear_scan(self, text: str) -> None:
        """A reader sent this."""

    def hear_line(self, text: str) -> None:
        """Enter by hand, on this text or on none."""

    def hear_key(self, key: str) -> None:
        """A key that means a key."""
