"""Steps of long work, counted over everything that takes part in it."""

from __future__ import annotations

from ledger.model.progress import Progress


class Steps:
    """Counts up to `of`, telling `progress` before each step what comes next."""

    def __init__(self, of: int, progress: Progress) -> None:
        self.of = of
        self.done = 0
        self._progress = progress

    def take(self, what: str) -> None:
        """Begin the next step."""
        self._progress(what, min(self.done, self.of), self.of)
        self.done += 1

    def end(self, what: str) -> None:
        """All of them are done."""
        self._progress(what, self.of, self.of)
