"""The time that entries get: the computer's, or, where that is doubted, what a person says it is."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import datetime, timedelta

from ledger.operations.watch_clock import clock_seen_at, doubt_of, see_clock

DOUBTED = "clock doubted"

_AGREES = timedelta(minutes=5)
_TOLD = re.compile(r"(?:time\s+)?(?:(\d{4}-\d{2}-\d{2})[ T])?(\d{1,2}):(\d{2})", re.IGNORECASE)


class WallClock:
    """`doubt` stands from the moment something is wrong until a person has said what time it is."""

    def __init__(self, read: Callable[[], datetime]) -> None:
        self._read = read
        self._offset = timedelta(0)
        self._seen_at = clock_seen_at()
        self._told = False
        self._mark_next = False
        self.doubt: str | None = None

    def now(self) -> datetime:
        """The time to show and to log."""
        return self._read() + self._offset

    def look(self, last_entry_at: datetime | None) -> None:
        """Hold the clock against the last entry and against when it was last seen."""
        now = self.now()
        found = doubt_of(now, None if self._told else last_entry_at, self._seen_at)
        self.doubt = self.doubt or found
        self._seen_at = now if self._seen_at is None else max(now, self._seen_at)

    def keep(self) -> None:
        """Remember on the disk when the clock was seen. Called in a thread."""
        if self.doubt is None and not self._offset:
            see_clock(self._read())

    def set_right(self, told: datetime) -> None:
        """A person said what time it is; entries get that time from now on."""
        offset = told - self._read()
        self._offset = timedelta(0) if abs(offset) <= _AGREES else offset
        self._seen_at = self.now()
        self.doubt = None
        self._told = True
        self._mark_next = True

    def mark(self, last_entry_at: datetime | None) -> str | None:
        """What an entry written now carries in its remark, if anything."""
        before_last = self._told and doubt_of(self.now(), last_entry_at, None) is not None
        return DOUBTED if self._mark_next or self._offset or before_last else None

    def marked(self) -> None:
        """An entry was written. The one that had to ask is marked even where the clock was right."""
        self._mark_next = False


def read_told_time(text: str, now: datetime) -> datetime | None:
    """`10:42`, `time 10:42` or `2026-12-01 10:42`; without a day it is the one nearest to the clock's."""
    match = _TOLD.fullmatch(" ".join(text.split()))
    if match is None:
        return None
    day, hour, minute = match.group(1), int(match.group(2)), int(match.group(3))
    try:
        date = now.date() if day is None else datetime.fromisoformat(day).date()
        return datetime(date.year, date.month, date.day, hour, minute, tzinfo=now.tzinfo)
    except ValueError:
        return None
