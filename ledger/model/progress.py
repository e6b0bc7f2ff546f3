"""How long work says how far it is, and how it is stopped."""

from __future__ import annotations

from collections.abc import Callable

# What is being done, how many steps of it are done, of how many. Work calls it between two steps; a
# front end that wants the work to end raises `Stopped` from it, and nothing has been written then.
Progress = Callable[[str, int, int], None]


def unwatched(what: str, done: int, of: int) -> None:
    """The progress that nobody looks at."""
