"""A part of a screen that shows ready text and takes no keys of its own."""

from __future__ import annotations

from rich.text import Text
from textual.widgets import Static


class Area(Static, can_focus=False):
    """Shows what it is given. Words of the user come inside a `Text`, so no bracket is ever markup."""

    DEFAULT_CSS = "Area { width: 1fr; height: 1fr; }"

    def __init__(self, *, id: str | None = None, classes: str | None = None) -> None:
        super().__init__("", id=id, classes=classes, markup=False)
        self.drawn = Text()

    def draw(self, text: Text | str) -> None:
        """Put ready text in place; long lines are cut, never wrapped."""
        ready = Text(text) if isinstance(text, str) else text
        ready.no_wrap = True
        ready.overflow = "crop"
        if ready != self.drawn or ready.spans != self.drawn.spans:
            self.drawn = ready
            # Its size never depends on what it shows, so nothing has to be laid out anew at a key.
            self.update(ready, layout=False)

    @property
    def words(self) -> str:
        """What it shows, without style."""
        return self.drawn.plain
