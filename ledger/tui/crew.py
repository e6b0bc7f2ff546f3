"""Who logs, who is with them, and when a badge is wanted again."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from datetime import datetime, timedelta

IDLE = timedelta(minutes=30)

# A printed badge says `BADGE JK`; by hand `+JK` will do.
_BADGE = re.compile(r"(?:\+|BADGE[ -]+)([A-Z]{1,5}[0-9]?)", re.IGNORECASE)


@dataclass(frozen=True, slots=True, kw_only=True)
class Crew:
    """`by` is None until a badge says who it is. `active_at` is the last moment anyone did anything."""

    by: str | None = None
    others: tuple[str, ...] = ()
    active_at: datetime | None = None

    def badged(self, initials: str, now: datetime) -> Crew:
        """The crew once these initials log; they are no longer among those who are with them."""
        others = tuple(other for other in self.others if other != initials)
        return replace(self, by=initials, others=others, active_at=now)

    def joined_by(self, others: tuple[str, ...]) -> Crew:
        """The crew with these present."""
        kept = dict.fromkeys(other for other in others if other != self.by)
        return replace(self, others=tuple(kept))

    def seen_active(self, now: datetime) -> Crew:
        """Somebody pressed a key. Past the idle time only a badge counts."""
        return self if self.needs_badge(now) else replace(self, active_at=now)

    def needs_badge(self, now: datetime) -> bool:
        """Whether the next log asks for a badge."""
        if self.by is None or self.active_at is None:
            return True
        return now - self.active_at >= IDLE


def read_badge(text: str) -> str | None:
    """The initials on a badge, or None where this is no badge."""
    match = _BADGE.fullmatch(" ".join(text.split()))
    return None if match is None else match.group(1).upper()
