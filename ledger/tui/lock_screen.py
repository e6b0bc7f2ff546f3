"""The lock: gloves and cloths may touch every key, and only a badge is heard."""

from __future__ import annotations

from rich.text import Text
from textual.app import ComposeResult

from ledger.tui.area import Area
from ledger.tui.crew import read_badge
from ledger.tui.listening import ListeningScreen


class LockScreen(ListeningScreen[None]):
    """Everything but a badge is dropped."""

    DEFAULT_CSS = "LockScreen { background: $background; color: $foreground; }"

    def compose(self) -> ComposeResult:
        """Two lines, and the line that listens."""
        yield Area(id="locked")

    def on_mount(self) -> None:
        """Say how to come back."""
        words = Text("\n\n  LOCKED for wiping\n\n", style="bold")
        words.append("  scan a badge, or type badge and your initials and press Enter", style="")
        self.query_one("#locked", Area).draw(words)

    def hear_scan(self, text: str) -> None:
        """A badge opens; nothing else does anything."""
        self._open_for(text)

    def hear_line(self, text: str) -> None:
        """A badge typed by hand opens too."""
        self._open_for(text)

    def _open_for(self, text: str) -> None:
        initials = read_badge(text)
        if initials is None:
            self.ledger_app.ring(2)
            return
        self.ledger_app.pop_screen()
        self.ledger_app.badge(initials)
