"""What is typed on the Iterations screen, read."""

from __future__ import annotations

import shlex
from pathlib import Path

from ledger.operations.look_at_iterations import Wanted
from ledger.reports.plain import clean


def about_wanted(wanted: Wanted) -> str:
    """What long work is about, in words."""
    newer = wanted.folder.name if wanted.folder is not None else wanted.b
    return "the history" if newer is None else f"comparing {clean(newer)} with {clean(wanted.a)}"


def path_typed(text: str) -> Path:
    """A path as typed, with or without quotes."""
    try:
        words = shlex.split(text)
    except ValueError:
        words = []
    return Path(words[0] if len(words) == 1 else text).expanduser()


def same_words(one: str, other: str) -> bool:
    """Whether they are the same but for capitals and blanks."""
    return " ".join(one.split()).casefold() == " ".join(other.split()).casefold()
